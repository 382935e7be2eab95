"""Reducing valve, flow-compensated set point, level stages and the states of a supply tank.

Sources
    P-1, P-3, P-4, P-5   checks/hydraulics.md section 9: wasted power, and a Kv of 160 at 100
             m3/h: 0.390625 bar.
    Demo     demo/tank_filling.md: stages of the reservoir, tank levels, submergence.
    HI 9.8   S = D (1 + 2.3 Fr).
"""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.hydraulics.errors import InputRefused, SupplyRefused
from server.hydraulics.fittings import k_from_kv, minor_head_loss
from server.hydraulics.level_control import possible_counts, stages_running
from server.hydraulics.reducing_valve import reduced_head, wasted_power
from server.hydraulics.set_point import compensated_pressure
from server.hydraulics.tank_levels import TankState, tank_levels

G = 9.80665
STAGES = {"start": [181.60, 181.00], "stop": [182.50, 182.20]}
TANK = {"cut_out": 121.0, "low": 121.6, "normal": 123.2, "top": 124.4}


@pytest.mark.parametrize(
    ("flow", "pressure", "watts"),
    [
        (0.060, 150e3, 9000.0),
        (60 / 3600, 2.5e5, 4166.67),
        (1000 * 6.30902e-5, 30 * 6894.757, 13049.75),
    ],
)
def test_wasted_power_is_pressure_times_flow(flow, pressure, watts):
    found = wasted_power(flow, head=pressure / (998.0 * G), density=998.0)
    assert float(found) == pytest.approx(watts, rel=1e-5)


def test_a_valve_with_head_to_spare_leaves_the_set_head():
    found = reduced_head([60.0, 45.0], set_head=40.0, open_loss=2.0)

    assert found.head.tolist() == [40.0, 40.0]
    assert found.lost.tolist() == [20.0, 5.0]
    assert found.throttled.tolist() == [18.0, 3.0]
    assert found.shortfall.tolist() == [0.0, 0.0]
    assert found.throttles.all()


def test_a_valve_short_of_head_stands_open_and_loses_its_least():
    found = reduced_head(41.0, set_head=40.0, open_loss=2.0)
    assert (float(found.head), float(found.shortfall), float(found.throttled)) == (
        39.0,
        1.0,
        0.0,
    )
    assert not found.throttles


def test_the_least_loss_comes_from_the_flow_coefficient():
    loss = minor_head_loss(100 / 3600, bore=0.1, k=k_from_kv(160.0, bore=0.1))
    assert float(loss) * 1000 * G == pytest.approx(39062.5, rel=1e-12)


@given(st.floats(0, 100), st.floats(0, 80), st.floats(0, 5))
def test_a_valve_never_adds_head(before, wanted, loss):
    found = reduced_head(before, set_head=wanted, open_loss=loss)
    assert found.head <= before
    assert found.lost >= loss - 1e-12
    assert found.head == pytest.approx(before - found.lost, abs=1e-12)
    assert found.shortfall >= 0


def test_a_valve_passes_what_is_not_known():
    assert np.isnan(reduced_head(np.nan, set_head=40.0, open_loss=1.0).head)


def test_the_set_point_rises_with_the_square_of_flow_and_then_stays():
    held = compensated_pressure(
        [0.0, 0.02, 0.04, 0.05], at_no_flow=200e3, at_full_flow=300e3, full_flow=0.04
    )
    assert held.tolist() == [200e3, 225e3, 300e3, 300e3]


@given(st.floats(0, 0.1), st.floats(0, 0.1), st.floats(1, 2))
def test_more_flow_never_lowers_the_set_point(flow, more, exponent):
    held = compensated_pressure(
        [flow, flow + more], at_no_flow=2e5, at_full_flow=3e5, full_flow=0.05, exponent=exponent
    )
    assert 2e5 <= held[0] <= held[1] <= 3e5


@pytest.mark.parametrize(
    ("changed", "said"),
    [
        ({"at_full_flow": 1e5}, "at_full_flow must not be below at_no_flow"),
        ({"full_flow": 0.0}, "full_flow must be above zero"),
        ({"exponent": 3.0}, "exponent must be between 1 and 2"),
        ({"flow": -1.0}, "flow must not be below zero"),
    ],
)
def test_a_set_point_that_cannot_be_is_refused(changed, said):
    given_ = {
        "flow": 0.01,
        "at_no_flow": 2e5,
        "at_full_flow": 3e5,
        "full_flow": 0.04,
        **changed,
    }
    with pytest.raises(ValueError, match=said):
        compensated_pressure(given_.pop("flow"), **given_)


def test_a_stage_starts_low_stops_high_and_keeps_its_state_between():
    running, seen = np.array([False, False]), []
    for level in (182.0, 181.6, 181.3, 181.0, 181.9, 182.2, 182.4, 182.5, 182.0):
        running = stages_running(level, running=running, **STAGES)
        seen.append(running.tolist())
    no, one, both = [False, False], [True, False], [True, True]
    assert seen == [no, one, one, both, both, one, one, no, no]


def test_stages_of_many_levels_at_once_are_those_of_each():
    levels = np.array([180.5, 181.3, 182.3, 182.6])
    before = np.array([[False, False], [True, True], [True, True], [True, True]])
    together = stages_running(levels, running=before, **STAGES)
    for level, ran, found in zip(levels, before, together, strict=True):
        assert stages_running(level, running=ran, **STAGES).tolist() == found.tolist()


@given(st.floats(179, 184), st.lists(st.booleans(), min_size=2, max_size=2))
def test_what_runs_is_a_count_that_the_level_allows(level, before):
    found = stages_running(level, running=before, **STAGES)
    assert possible_counts(level, **STAGES)[found.sum()]
    assert stages_running(level, running=found, **STAGES).tolist() == found.tolist()


@pytest.mark.parametrize(
    ("start", "stop", "reason"),
    [
        ([181.0], [181.0], "stage_stop_not_above_start"),
        ([181.0, 181.5], [182.0, 182.0], "stage_starts_not_falling"),
        ([181.0, 180.5], [182.0], "stages_uneven"),
    ],
)
def test_stages_out_of_order_are_refused(start, stop, reason):
    with pytest.raises(InputRefused) as refused:
        stages_running(181.0, running=[False] * len(start), start=start, stop=stop)
    assert refused.value.reason == reason


def test_the_four_states_give_their_grades_and_depths():
    tank = tank_levels(**TANK, outlet_level=119.90, outlet_bore=0.55)
    assert tank.grade(list(TankState)).tolist() == [121.0, 121.6, 123.2, 124.4]
    assert tank.depth(TankState.CUT_OUT) == pytest.approx(1.10)
    # demo: 0.75 m needed at 86.5 L/s, 1.10 m there at the cut-out
    assert tank.submergence_spare(0.0865, state=TankState.CUT_OUT) == pytest.approx(
        0.35, abs=0.005
    )


def test_more_flow_leaves_less_submergence():
    tank = tank_levels(**TANK, outlet_level=119.90, outlet_bore=0.55)
    spare = tank.submergence_spare([0.0, 0.1, 0.3, np.nan], state=TankState.CUT_OUT)
    assert spare[0] == pytest.approx(1.10 - 0.55)
    assert np.all(np.diff(spare[:3]) < 0)
    assert spare[2] < 0
    assert np.isnan(spare[3])


def test_a_state_or_outlet_that_is_not_given_is_not_known():
    tank = tank_levels(cut_out=None, low=121.6, normal=None, top=124.4)
    assert np.isnan(tank.grade([0, 2])).all()
    assert np.isnan(tank.depth(1))
    assert np.isnan(tank.submergence_spare([0.1, 0.2], state=1)).all()


@pytest.mark.parametrize(
    ("changed", "reason"),
    [
        ({"low": 125.0}, "tank_levels_out_of_order"),
        ({"cut_out": 121.7}, "tank_levels_out_of_order"),
        ({"outlet_level": 121.0}, "tank_level_not_above_outlet"),
    ],
)
def test_levels_out_of_order_are_refused(changed, reason):
    with pytest.raises(SupplyRefused) as refused:
        tank_levels(**{**TANK, "outlet_level": 119.9, **changed})
    assert refused.value.reason == reason
