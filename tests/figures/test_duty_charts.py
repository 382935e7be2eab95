"""The duty figure: its points lie on its curves, in the numbers of the demo.

Sources
    demo    seed_demo/closed_zone.json, whose duties an independent scalar calculator gave:
            design fire 60.0 L/s at 63.3 m and 113.2 % of best efficiency, design peak hour 36.0
            L/s at 50.3 m, both at low supply.
"""

import numpy as np
import pytest

from server.figures.chart import Role


def marker(chart, scenario, panel=0):
    return next(m for m in chart.markers if m.key == scenario and m.panel == panel)


def series(chart, key):
    return next(s for s in chart.series if s.key == key)


def test_points_stand_where_the_duty_is(duty):
    peak, fire = marker(duty, "sc-p2kh2h"), marker(duty, "sc-f2re9k")

    assert peak.x * 1000 == pytest.approx(36.0, abs=0.05)
    assert peak.y == pytest.approx(50.3, abs=0.05)
    assert fire.y == pytest.approx(63.3, abs=0.05)


def test_a_held_point_lies_on_the_head_that_is_asked(duty):
    peak, asked = marker(duty, "sc-p2kh2h"), series(duty, "required-low")

    assert np.interp(peak.x, asked.x, asked.y) == pytest.approx(peak.y, abs=0.02)


def test_a_point_at_top_speed_lies_on_the_curve_of_its_pumps(duty, judged):
    fire = marker(duty, "sc-f2re9k")
    top = [s for s in duty.series if s.role is Role.SET_CURVE and s.panel == 0]
    longest = max(top, key=lambda s: s.x[-1])

    assert np.interp(fire.x, longest.x, longest.y) == pytest.approx(fire.y, abs=0.02)
    assert longest.x[-1] * 1000 == pytest.approx(3 * 25.2, abs=0.1)


def test_lower_panels_hold_the_same_scenarios(duty):
    keys = {m.panel: {p.key for p in duty.markers if p.panel == m.panel} for m in duty.markers}

    assert len(duty.panels) == 4
    assert keys[0] == keys[1] == keys[2] == keys[3]
    assert marker(duty, "sc-p2kh2h", 2).y == pytest.approx(25.3e3, rel=0.005)


def test_lines_along_the_control_pass_through_points_of_their_state(duty, judged):
    peak = marker(duty, "sc-p2kh2h", 2)
    lines = [s for s in duty.series if s.panel == 2 and s.x[0] <= peak.x <= s.x[-1]]

    assert min(abs(np.interp(peak.x, s.x, s.y) - peak.y) for s in lines) < 0.002 * peak.y


def test_a_point_outside_its_region_differs_by_marker_not_by_colour_alone(duty):
    from server.figures.look import LOOKS

    night = marker(duty, "sc-n1gh7a")
    assert night.role is Role.DUTY_OUTSIDE
    assert LOOKS[night.role].marker != LOOKS[Role.DUTY_INSIDE].marker


def test_the_numbers_of_running_pumps_differ_by_dash(duty):
    dashes = [s.dash for s in duty.series if s.panel == 0 and s.role is Role.SET_CURVE]

    assert dashes == [0, 1, 2]


def test_the_alternative_text_tells_every_duty(duty):
    for title in (
        "Minimum night, opening",
        "Peak hour, design",
        "Maximum day and fire, design",
    ):
        assert title in duty.alt
    assert "33\u00a0%, outside" in duty.alt


def test_the_hatched_outline_has_the_region_s_ends(curves, judged):
    main = next(s for s in curves.sets if s.units == 1 and not s.small)
    best = judged.result.slots[0].best_efficiency_flow

    assert main.preferred_flow.max() == pytest.approx(1.2 * best, rel=1e-6)
    assert main.preferred_flow.min() == pytest.approx(
        0.7 * best * judged.result.lowest_speed, rel=1e-6
    )
