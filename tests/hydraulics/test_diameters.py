"""Trim of one diameter, and curves between several tested ones.

Sources
    EDL      Hydraulic Institute, Engineering Data Library, section 1, eq. (1.B.7) and worked
             example 2: 10.625 in, 2000 gpm, 80 to 67 ft gives 9.72 in; with 9.75 in 1835 gpm.
    A8, A9   own cases of checks/pumps.md: a cut of a tenth, and 60 - 0.002 Q^2 (m, m3/h)
             brought to 100 m3/h at 35 m: 0.95743.
"""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.hydraulics.diameters import curve_for_diameter
from server.hydraulics.errors import CurveRefused
from server.hydraulics.pump_curve import pump_curve
from server.hydraulics.smoothed_curve import smoothed
from server.hydraulics.trim import trim_for_duty, trimmed
from tests.hydraulics.demo_pumps import jockey_pump, main_pump

MAIN = main_pump()
RHO = 998.0


def parabola(last=140.0, rows=281):
    flow = np.linspace(0, last, rows)
    return pump_curve(flow / 3600, head=60 - 0.002 * flow**2, tested_speed=1450)


def test_a_cut_of_a_tenth_takes_flow_head_and_power_by_their_powers():
    cut = trimmed(MAIN, ratio=0.9)
    flow = np.linspace(0.001, MAIN.last_flow, 40)

    assert cut.curve.head(0.9 * flow) == pytest.approx(0.81 * MAIN.head(flow), rel=1e-12)
    assert cut.curve.efficiency(0.9 * flow) == pytest.approx(MAIN.efficiency(flow), rel=1e-12)
    assert cut.curve.shaft_power(0.9 * flow, density=RHO) == pytest.approx(
        0.729 * MAIN.shaft_power(flow, density=RHO), rel=1e-12
    )
    assert cut.curve.shutoff_power == pytest.approx(0.729 * MAIN.shutoff_power)
    assert cut.curve.best.flow == pytest.approx(0.9 * MAIN.best.flow, rel=1e-12)
    assert not cut.beyond_limit


def test_specific_speed_rises_by_the_inverse_of_the_ratio():
    """A8: conv. A changes the specific speed, so it is no similarity."""
    assert trimmed(MAIN, ratio=0.9).curve.specific_speed == pytest.approx(
        MAIN.specific_speed / 0.9, rel=1e-12
    )


def test_npsh_required_is_that_of_the_same_flow():
    cut = trimmed(MAIN, ratio=0.92).curve
    assert cut.npsh_required(cut.rows.flow) == pytest.approx(
        MAIN.npsh_required(cut.rows.flow), rel=1e-12
    )


def test_the_data_book_pump_is_cut_to_its_head():
    """A4: 9.72 in on the similar point of 80 ft, ordered as 9.75 in."""
    gpm, foot = 6.30902e-5, 0.3048
    flow = np.array([0, 1000, 2000, 2500]) * gpm
    pump = pump_curve(flow, head=np.array([100, 95, 80, 66]) * foot, tested_speed=1750)
    cut = trimmed(pump, ratio=9.75 / 10.625)

    assert float(cut.curve.rows.flow[2]) / gpm == pytest.approx(1835.3, rel=1e-4)
    assert cut.beyond_limit is False
    similar = pump_curve(flow, head=np.array([80.2, 80.1, 80, 79.9]) * foot, tested_speed=1750)
    ratio = trim_for_duty(similar, flow=2000 * gpm * (67 / 80) ** 0.5, head=67 * foot)
    assert 10.625 * ratio == pytest.approx(9.72, abs=0.005)


def test_the_trim_for_a_duty_follows_the_similar_point_and_not_the_square_root_of_head():
    """A9: 0.95743; the root of head over head at the same flow would be 0.93541."""
    ratio = trim_for_duty(parabola(), flow=100 / 3600, head=35.0)

    assert ratio == pytest.approx(0.95743, rel=1e-4)
    assert float(trimmed(parabola(), ratio=ratio).curve.head(100 / 3600)) == pytest.approx(
        35.0, rel=1e-6
    )


def test_a_smoothed_pump_stays_smoothed_when_cut():
    drawn = smoothed(MAIN, degree=3)
    cut = trimmed(drawn, ratio=0.88)

    assert cut.beyond_limit
    assert cut.curve.smoothing.degree == 3
    assert cut.curve.head(0.88 * 0.015) == pytest.approx(0.88**2 * drawn.head(0.015), rel=1e-11)


def test_a_stated_best_efficiency_is_cut_with_the_impeller():
    stated = pump_curve(
        MAIN.rows.flow, head=MAIN.rows.head, efficiency=MAIN.rows.efficiency,
        bep_flow=0.018, bep_efficiency=0.72, tested_speed=2950,
    )  # fmt: skip
    best = trimmed(stated, ratio=0.95).curve.best
    assert (best.flow, best.efficiency) == (pytest.approx(0.0171), 0.72)


@pytest.mark.parametrize(
    ("ratio", "least", "reason"),
    [
        (0.74, None, "trim_below_least"),
        (0.84, 0.85, "trim_below_least"),
        (0.74, 0.5, "trim_below_least"),
        (1.01, None, "trim_ratio_above_one"),
        (float("nan"), None, "trim_ratio_above_one"),
    ],
)
def test_a_trim_outside_its_range_is_refused(ratio, least, reason):
    with pytest.raises(CurveRefused) as refused:
        trimmed(MAIN, ratio=ratio, least_ratio=least)
    assert refused.value.reason == reason


@pytest.mark.parametrize(
    ("flow", "head", "reason"),
    [
        (100.0, 41.0, "duty_above_full_diameter"),
        (100.0, 5.0, "trim_below_least"),
        (141.0, 10.0, "duty_past_last_row"),
        (130.0, 10.0, "duty_past_last_row"),
    ],
)
def test_a_duty_out_of_reach_of_a_trim_is_refused(flow, head, reason):
    with pytest.raises(CurveRefused) as refused:
        trim_for_duty(parabola(), flow=flow / 3600, head=head)
    assert refused.value.reason == reason


@settings(max_examples=40, deadline=None)
@given(st.floats(0.8, 0.999))
def test_between_curves_of_the_trim_rule_that_rule_is_met(ratio):
    # the parabola's head goes through zero; the demo's rows do not
    small = trimmed(MAIN, ratio=0.8).curve
    read = curve_for_diameter([MAIN, small], diameters=[0.2, 0.16], diameter=0.2 * ratio)
    cut = trimmed(MAIN, ratio=ratio).curve
    flow = np.linspace(0, cut.last_flow, 30)

    assert read.head(flow) == pytest.approx(cut.head(flow), rel=1e-9)
    assert read.efficiency(flow) == pytest.approx(cut.efficiency(flow), abs=1e-9)
    assert read.best.flow == pytest.approx(cut.best.flow, rel=1e-12)
    assert read.shutoff_power == pytest.approx(cut.shutoff_power, rel=1e-12)


def test_a_tested_diameter_is_its_own_curve():
    pair = [jockey_pump(), MAIN]
    assert curve_for_diameter(pair, diameters=[0.174, 0.212], diameter=0.174) is pair[0]
    assert curve_for_diameter(pair, diameters=[0.174, 0.212], diameter=0.212) is pair[1]


def test_a_diameter_among_three_is_read_between_its_neighbours():
    three = [MAIN, trimmed(MAIN, ratio=0.9).curve, trimmed(MAIN, ratio=0.8).curve]
    read = curve_for_diameter(three, diameters=[0.20, 0.18, 0.16], diameter=0.17)
    low, high = three[2], three[1]

    assert low.best.flow < read.best.flow < high.best.flow
    assert low.shutoff_head < read.shutoff_head < high.shutoff_head


def test_between_unlike_tested_curves_head_lies_between():
    read = curve_for_diameter([jockey_pump(), MAIN], diameters=[0.174, 0.212], diameter=0.19)
    fraction = read.rows.flow / read.best.flow
    low = jockey_pump().head(fraction * jockey_pump().best.flow)
    high = MAIN.head(np.minimum(fraction * MAIN.best.flow, MAIN.last_flow))

    assert np.all(read.rows.head >= low - 1e-9)
    assert np.all(read.rows.head <= high + 1e-9)
    assert read.falls_throughout


@pytest.mark.parametrize(
    ("sizes", "wanted", "reason"),
    [
        ([0.174, 0.212], 0.16, "diameter_outside_tested"),
        ([0.174, 0.212], 0.22, "diameter_outside_tested"),
        ([0.2, 0.2], 0.2, "diameters_uneven"),
        ([0.0, 0.2], 0.1, "diameters_uneven"),
    ],
)
def test_diameters_that_cannot_be_read_between_are_refused(sizes, wanted, reason):
    with pytest.raises(CurveRefused) as refused:
        curve_for_diameter([jockey_pump(), MAIN], diameters=sizes, diameter=wanted)
    assert refused.value.reason == reason


def test_without_best_efficiency_nothing_is_read_between():
    bare = pump_curve(MAIN.rows.flow, head=MAIN.rows.head, tested_speed=2950)
    with pytest.raises(CurveRefused) as refused:
        curve_for_diameter([jockey_pump(), bare], diameters=[0.174, 0.212], diameter=0.2)
    assert refused.value.reason == "best_efficiency_unknown_between_diameters"


def test_curves_of_two_speeds_are_not_read_between():
    slow = pump_curve(MAIN.rows.flow, head=MAIN.rows.head, tested_speed=1450)
    with pytest.raises(CurveRefused) as refused:
        curve_for_diameter([jockey_pump(), slow], diameters=[0.174, 0.212], diameter=0.2)
    assert refused.value.reason == "tested_speeds_differ"
