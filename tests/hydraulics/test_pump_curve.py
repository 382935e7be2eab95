"""Pump curves: rows kept, shape kept, best efficiency, power, refusals.

Sources
    Demo     demo/closed_zone.md section 5: parabola through the top row and its neighbours
    gives
             17.66 L/s at 72.0 % and 7.86 L/s at 63.0 %; rise to shut-off 25 % over the row of
             18.0 L/s.
    EDL      Hydraulic Institute, Engineering Data Library, section 1: shaft powers of a pump
    table
             (1000 gal/min, 140 ft, 76 %: 46.5 hp), read in checks/pumps.md, row F6.
    scipy    PchipInterpolator, for the head between rows.
"""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.interpolate import PchipInterpolator

from server.hydraulics.errors import CurveRefused
from server.hydraulics.pump_curve import COLD_WATER_DENSITY, pump_curve
from tests.hydraulics.demo_pumps import jockey_pump, main_pump

RHO = 999.2
Q = [0.0, 0.01, 0.02, 0.03, 0.04]
H = [50.0, 48.0, 44.0, 37.0, 27.0]


def humped():
    return pump_curve(Q, head=[50.0, 52.0, 48.0, 40.0, 28.0], tested_speed=1450)


def test_every_row_is_met():
    pump = main_pump()

    assert pump.head(pump.rows.flow) == pytest.approx(pump.rows.head, rel=1e-13)
    assert pump.efficiency(pump.rows.flow) == pytest.approx(pump.rows.efficiency, rel=1e-13)
    assert pump.npsh_required(pump.rows.flow) == pytest.approx(
        pump.rows.npsh_required, rel=1e-13
    )


def test_head_between_rows_is_the_monotone_cubic():
    pump = main_pump()
    flows = np.linspace(0, pump.last_flow, 200)
    expected = PchipInterpolator(pump.rows.flow, pump.rows.head)(flows)

    assert pump.head(flows) == pytest.approx(expected, rel=1e-13)


@settings(max_examples=60, deadline=None)
@given(st.lists(st.floats(0.05, 5.0), min_size=4, max_size=8), st.data())
def test_a_falling_curve_falls_between_its_rows_too(falls, data):
    steps = data.draw(
        st.lists(st.floats(0.001, 0.02), min_size=len(falls), max_size=len(falls))
    )
    flow = np.concatenate([[0.0], np.cumsum(steps)])
    head = 60.0 - np.concatenate([[0.0], np.cumsum(falls)])
    pump = pump_curve(flow, head=head, tested_speed=1450)
    between = pump.head(np.linspace(0, flow[-1], 400))

    assert np.all(np.diff(between) <= 1e-12)
    assert pump.falls_throughout


def test_a_humped_curve_keeps_its_peak_on_the_row():
    pump = humped()
    between = pump.head(np.linspace(0, 0.04, 401))

    assert between.max() == pytest.approx(52.0, rel=1e-15)
    assert not pump.falls_throughout
    assert pump.hump == 2.0


def test_nothing_is_read_outside_the_rows():
    pump = main_pump()
    outside = [-1e-6, pump.last_flow + 1e-6]

    assert np.isnan(pump.head(outside)).all()
    assert np.isnan(pump.efficiency(outside)).all()
    assert np.isnan(pump.npsh_required(outside)).all()
    assert np.isnan(pump.shaft_power(outside, density=RHO)).all()


@pytest.mark.parametrize(
    ("pump", "flow", "efficiency"),
    [(main_pump(), 17.66e-3, 0.720), (jockey_pump(), 7.86e-3, 0.630)],
)
def test_best_efficiency_is_the_vertex_through_the_top_row_and_its_neighbours(
    pump, flow, efficiency
):
    assert pump.best.flow == pytest.approx(flow, abs=5e-6)
    assert pump.best.efficiency == pytest.approx(efficiency, abs=5e-4)


efficiency_rows = st.lists(st.floats(0.05, 0.9), min_size=4, max_size=8)


@settings(max_examples=100, deadline=None)
@given(efficiency_rows)
def test_no_flow_is_more_efficient_than_the_best_efficiency_point(rows):
    flow = np.linspace(0.01, 0.04, len(rows))
    try:
        pump = pump_curve(
            flow, head=np.linspace(50, 30, len(rows)), efficiency=rows, tested_speed=1450
        )
    except CurveRefused as refused:
        # A steep three-row top can carry the parabola over 1: refused, not clipped.
        assert refused.reason == "efficiency_above_one"  # noqa: PT017
        return
    at = np.linspace(0.01, 0.04, 997)
    highest = pump.efficiency(at).max()

    assert np.all(pump.efficiency(at) >= min(rows) - 1e-12)
    if pump.best is None:
        assert max(rows) in (rows[0], rows[-1])
        assert highest <= max(rows) + 1e-12
    else:
        assert highest <= pump.best.efficiency + 1e-12


def test_the_efficiency_curve_has_no_step_and_no_kink_at_the_demo_rows():
    pump = main_pump()
    rows = pump.rows.flow[1:-1]
    left, right = pump.efficiency(rows - 1e-10), pump.efficiency(rows + 1e-10)
    slopes = (
        pump.efficiency_curve.slope(rows - 1e-10),
        pump.efficiency_curve.slope(rows + 1e-10),
    )

    assert left == pytest.approx(right, abs=1e-6)
    assert slopes[0] == pytest.approx(slopes[1], rel=1e-4)


@pytest.mark.parametrize("rows", [[0.7, 0.6, 0.5, 0.4, 0.3], [0.3, 0.4, 0.5, 0.6, 0.7]])
def test_best_efficiency_at_an_end_row_is_unknown(rows):
    pump = pump_curve(Q, head=H, efficiency=rows, tested_speed=1450)

    assert pump.best is None
    assert pump.rise_to_shutoff is None
    assert pump.specific_speed is None
    assert pump.steepness is None


def test_the_makers_point_overrides_and_is_compared():
    pump = pump_curve(
        Q, head=H, efficiency=[0, 0.5, 0.7, 0.6, 0.4], bep_flow=0.024, tested_speed=1450
    )

    assert pump.best.flow == 0.024
    assert pump.bep_disagreement == pytest.approx(0.024 / pump.fitted_best.flow - 1)


def test_rise_to_shutoff_is_told_over_the_head_at_best_efficiency():
    rows = main_pump().rows
    pump = pump_curve(rows.flow, head=rows.head, bep_flow=0.018, tested_speed=2950)

    assert pump.rise_to_shutoff == pytest.approx(85.0 / 68.0 - 1)


def test_a_curve_whose_first_row_is_above_zero_has_no_shutoff_head():
    pump = pump_curve(Q[1:], head=H[1:], tested_speed=1450)

    assert pump.shutoff_head is None
    assert np.isnan(pump.head(0.0))


def test_shaft_power_is_water_power_over_efficiency():
    gpm, ft, horsepower = 6.30901964e-5, 0.3048, 745.699872
    pump = pump_curve(
        np.array([100, 500, 1000]) * gpm,
        head=np.array([199, 186, 140]) * ft,
        efficiency=[0.25, 0.65, 0.76],
        tested_speed=1780,
    )
    power = pump.shaft_power(pump.rows.flow, density=999.0) / horsepower

    assert power == pytest.approx([20.1, 36.1, 46.5], abs=0.06)


def test_an_efficiency_that_starts_flat_gives_no_power_without_end():
    flow, head = [0, 0.004, 0.008, 0.012, 0.016], [60, 58, 54, 48, 40]
    # the second row is so low that the cubic starts level: power would go as one over the flow
    flat = pump_curve(
        flow, head=head, efficiency=[0, 0.05, 0.45, 0.62, 0.58], tested_speed=2900
    )
    assert float(flat.efficiency_curve.slope(0.0)) == pytest.approx(0.0, abs=1e-9)

    power = flat.shaft_power(np.linspace(1e-7, 0.016, 500), density=1000)
    first = float(flat.shaft_power(0.004, density=1000))

    assert np.nanmax(power) <= first * 60 / 58 * (1 + 1e-9)
    assert float(flat.shaft_power(1e-9, density=1000)) == pytest.approx(
        first * 60 / 58, rel=1e-6
    )


def test_an_efficiency_that_starts_steep_gives_the_power_of_its_own_curve():
    pump = main_pump()
    flow = np.linspace(1e-4, 0.0045, 50)
    water_power = 1000 * 9.80665 * flow * pump.head(flow)

    assert pump.shaft_power(flow, density=1000) == pytest.approx(
        water_power / pump.efficiency(flow), rel=1e-12
    )


def test_power_at_zero_flow_comes_from_a_row_only():
    stated = main_pump()
    silent = pump_curve(Q, head=H, efficiency=[0, 0.5, 0.7, 0.6, 0.4], tested_speed=1450)

    assert stated.shaft_power(0.0, density=RHO) == 9000.0
    assert np.isnan(silent.shaft_power(0.0, density=RHO))


def test_a_power_table_is_used_and_gives_the_efficiency():
    power = [3000.0, 6000.0, 9500.0, 13000.0, 16000.0]
    pump = pump_curve(Q, head=H, shaft_power=power, tested_speed=1450)
    efficiency = COLD_WATER_DENSITY * 9.80665 * np.array(Q) * np.array(H) / np.array(power)

    assert pump.shaft_power(Q, density=RHO) == pytest.approx(power, rel=1e-13)
    assert pump.efficiency(Q) == pytest.approx(efficiency, rel=1e-13)
    assert pump.best is not None


def test_power_and_efficiency_that_do_not_agree_are_shown_row_by_row():
    flow, head, eta = np.array(Q[1:4]), np.array(H[1:4]), np.array([0.5, 0.7, 0.6])
    right = COLD_WATER_DENSITY * 9.80665 * flow * head / eta
    pump = pump_curve(
        flow, head=head, efficiency=eta, shaft_power=right * [1.0, 1.05, 1.0], tested_speed=1450
    )

    assert pump.power_disagreement() == pytest.approx([0.0, 0.05, 0.0], abs=1e-12)


@pytest.mark.parametrize(
    ("change", "reason", "row"),
    [
        ({"flow": [0.0, 0.01], "head": [50.0, 40.0]}, "too_few_rows", None),
        ({"head": [50.0, 40.0]}, "rows_uneven", None),
        ({"flow": [0.0, 0.01, 0.01, 0.03, 0.04]}, "flows_equal", 2),
        ({"flow": [0.0, 0.02, 0.01, 0.03, 0.04]}, "flows_not_rising", 2),
        ({"flow": [-0.01, 0.01, 0.02, 0.03, 0.04]}, "flow_below_zero", 0),
        ({"flow": [0.0, None, 0.02, 0.03, 0.04]}, "flow_missing", 1),
        ({"head": [50.0, 48.0, None, 37.0, 27.0]}, "head_missing", 2),
        ({"head": [50.0, 48.0, np.inf, 37.0, 27.0]}, "not_finite", 2),
        ({"head": [30.0, 31.0, 32.0, 33.0, 34.0]}, "head_rising_throughout", None),
        ({"head": [50.0, 40.0, 45.0, 51.0, 52.0]}, "head_highest_at_last_row", 4),
        ({"head": [-1.0, -2.0, -3.0, -4.0, -5.0]}, "head_not_above_zero", None),
        ({"efficiency": [0, 0.5, 72.0, 0.6, 0.4]}, "efficiency_above_one", 2),
        ({"efficiency": [0, 0.5, -0.1, 0.6, 0.4]}, "efficiency_below_zero", 2),
        ({"shaft_power": [0.0, 1e3, 2e3, 3e3, 4e3]}, "power_not_above_zero", 0),
        ({"shaft_power": [3e3, 1e3, 2e3, 3e3, 4e3]}, "power_below_water_power", 1),
        ({"npsh_required": [2.0, 0.0, 2.0, 2.0, 2.0]}, "npsh_not_above_zero", 1),
        ({"tested_speed": 0.0}, "tested_speed_not_above_zero", None),
        ({"bep_flow": 0.05}, "bep_outside_rows", None),
        ({"bep_flow": 0.02, "bep_efficiency": 72.0}, "efficiency_above_one", None),
    ],
)
def test_rows_that_cannot_be_a_pump_are_refused_with_reason_and_row(change, reason, row):
    given_rows = {"flow": Q, "head": H, "tested_speed": 1450.0} | change
    flow = given_rows.pop("flow")
    with pytest.raises(CurveRefused) as refused:
        pump_curve(flow, **given_rows)

    assert refused.value.reason == reason
    assert refused.value.row == row
