"""All operating points: humps, sharing that is not unique, limits; and laws of random sets.

Sources
    Closed form   humped 50 + 400 q - 20000 q^2 (m, m3/s): two roots of a quadratic.
"""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.hydraulics.branches import branches
from server.hydraulics.combinations import most_flow, solve_combinations
from server.hydraulics.leg_curve import leg_curve
from server.hydraulics.operating_points import Answer, all_operating_points
from server.hydraulics.parallel import solve_parallel
from server.hydraulics.pump_curve import pump_curve
from server.hydraulics.states import State
from tests.hydraulics.demo_pumps import jockey_pump, main_pump
from tests.hydraulics.duty_problems import formula, on

MAIN = leg_curve(main_pump(), loss=1700.0)
JOCKEY = leg_curve(jockey_pump(), loss=10000.0)
HUMPED = formula(50.0, 400.0, -20000.0, 0.045)


def test_a_humped_leg_has_a_rising_a_falling_and_a_shut_branch():
    rising, falling, shut = branches(HUMPED, speed=0.9)

    assert rising.high == pytest.approx(0.81 * 52.0)
    assert rising.right == pytest.approx(0.01, rel=1e-3)
    assert falling.low == pytest.approx(0.81 * 27.5)
    assert shut.shut
    assert shut.low == pytest.approx(0.81 * 50.0)
    head = np.array([0.81 * 51.5])
    for branch in (rising, falling):
        assert branch.head(float(branch.flow(head)[0])) == pytest.approx(head[0], abs=1e-11)


def test_two_flows_and_none_are_told_with_which_can_be_started():
    found = all_operating_points([HUMPED], system=on(51.0, 4000.0))
    flows = [one.flow for one in found.points]
    root = np.sqrt(400.0**2 - 4 * 24000.0)

    assert found.answer == Answer.SEVERAL
    assert flows == pytest.approx([(400 + root) / 48000, (400 - root) / 48000, 0.0], abs=1e-9)
    assert [one.stable for one in found.points] == [True, False, True]
    assert [one.startable for one in found.points] == [False, False, True]
    assert found.best is None
    assert found.head_missing == pytest.approx(1.0)


def test_humped_pumps_in_parallel_can_share_unequally():
    found = all_operating_points([HUMPED] * 2, system=on(51.5, 100.0))
    uneven = [one for one in found.points if np.ptp(one.leg_flow) > 1e-4]

    assert found.answer == Answer.SEVERAL
    assert uneven
    assert any(one.leg_flow.min() > 0 for one in uneven)
    assert not any(one.stable for one in uneven if one.leg_flow.min() > 0)


def test_roots_that_nearly_touch_are_both_found():
    # the system just cuts the hump: 52 - 20000 (q - 0.01)^2 against a level head
    found = all_operating_points([HUMPED], system=on(51.99999, 0.0))
    apart = np.sqrt(1e-5 / 20000)

    assert [one.flow for one in found.points] == pytest.approx(
        [0.01 + apart, 0.01 - apart, 0.0], abs=1e-7
    )


def test_pumps_of_several_kinds_give_every_choice_of_branches():
    legs, speeds, system = [HUMPED, MAIN, JOCKEY], [1.0, 0.9, 1.0], on(40.0, 3000.0)
    found = all_operating_points(legs, system=system, speeds=speeds)
    array = solve_parallel(legs, system=system, speeds=speeds)

    assert array.state[0] == State.SOLVED
    assert all(one.energy_residual < 1e-9 for one in found.points)
    assert array.flow[0] in [pytest.approx(one.flow) for one in found.points]


def test_a_run_out_states_the_nearest_state_and_the_head_to_take_away():
    found = all_operating_points([MAIN] * 2, system=on(10.0, 100.0), speeds=[0.9, 0.9])

    assert found.answer == Answer.RUN_OUT
    assert found.points == ()
    assert found.last_row_flow == pytest.approx(2 * 0.9 * MAIN.last_flow)
    asked = 10.0 + 100.0 * found.last_row_flow**2
    assert found.last_row_surplus == pytest.approx(0.81 * MAIN.last_head - asked)
    # with that head taken away the set stands there
    held = all_operating_points(
        [MAIN] * 2, system=on(10.0 + found.last_row_surplus, 100.0), speeds=[0.9, 0.9]
    )
    assert held.points[0].flow == pytest.approx(found.last_row_flow, rel=1e-9)


def test_a_static_head_out_of_reach_is_told_by_how_much():
    found = all_operating_points([MAIN, JOCKEY], system=on(90.0, 100.0))
    assert found.answer == Answer.BELOW_STATIC
    assert found.head_missing == pytest.approx(90.0 - MAIN.shutoff_head)
    assert found.highest_head == pytest.approx(MAIN.peak_head)


def test_before_a_late_first_row_nothing_is_known():
    late = leg_curve(
        pump_curve([0.005, 0.01, 0.02], head=[60, 55, 40], tested_speed=1450), loss=0.0
    )
    assert all_operating_points([late], system=on(62.0, 0.0)).answer == Answer.NOT_KNOWN
    assert all_operating_points([MAIN], system=on(62.0, 0.0), on=[False]).answer == (
        Answer.NOT_KNOWN
    )


def test_a_speed_that_cannot_be_is_refused():
    with pytest.raises(ValueError, match="speeds must be above zero"):
        all_operating_points([MAIN], system=on(50.0, 0.0), speeds=[0.0])


falling_sets = st.lists(
    st.tuples(st.sampled_from([MAIN, JOCKEY]), st.floats(0.6, 1.1)), min_size=1, max_size=4
)


@settings(max_examples=40, deadline=None)
@given(falling_sets, st.floats(0, 80), st.floats(100, 6e4))
def test_falling_pumps_have_one_operating_point_and_it_is_that_of_the_arrays(
    running, static, coefficient
):
    legs, speeds = zip(*running, strict=True)
    system = on(static, coefficient)
    array = solve_parallel(legs, system=system, speeds=speeds)
    found = all_operating_points(legs, system=system, speeds=speeds)

    if array.state[0] == State.END_OF_CURVE:
        assert found.answer == Answer.RUN_OUT
        return
    assert len(found.points) == 1
    assert found.points[0].flow == pytest.approx(array.flow[0], rel=1e-8, abs=1e-6)
    assert found.points[0].stable
    assert found.points[0].startable


sets = st.lists(st.floats(0.6, 1.1), min_size=3, max_size=3)
LEGS = [MAIN, JOCKEY, MAIN]
ALL = [[bool(m >> n & 1) for n in range(3)] for m in range(1, 8)]


def flow_or_last(result):
    """Return the flow; past the end of a curve that of the last row, which it exceeds."""
    ended = result.state == State.END_OF_CURVE
    return np.where(ended, result.last_row_flow, result.flow)


@settings(max_examples=60, deadline=None)
@given(sets, st.floats(0, 70), st.floats(100, 5e4), st.floats(0, 5e4), st.floats(0, 10))
def test_adding_loss_never_adds_flow(speeds, static, coefficient, more, lift):
    first, second = (
        solve_combinations(LEGS, system=system, combinations=ALL, speeds=speeds)
        for system in (on(static, coefficient), on(static + lift, coefficient + more))
    )
    # a set past its end passes at least its last row's flow, so its bound is on the safe side
    ended = first.state == State.END_OF_CURVE
    solved = np.isfinite(second.flow) & ~ended
    assert np.all(flow_or_last(second)[solved] <= first.flow[solved] + 1e-12)
    assert np.all(np.isfinite(second.flow[~ended]))


@settings(max_examples=40, deadline=None)
@given(sets, st.floats(20, 70), st.floats(1e4, 8e4))
def test_firm_capacity_is_never_more_than_all_running(speeds, static, coefficient):
    result = solve_combinations(
        LEGS, system=on(static, coefficient), combinations=ALL, speeds=speeds
    )
    everything = most_flow(result, ALL, allowed=np.ones(3, dtype=bool))[0]
    firm = min(most_flow(result, ALL, allowed=np.arange(3) != out)[0] for out in range(3))
    assert firm <= everything
    if np.isfinite(result.flow[0, -1]):
        # one more pump never takes flow away, check valves being what they are
        assert np.nanmax(result.flow[0]) <= result.flow[0, -1] + 1e-12


@settings(max_examples=40, deadline=None)
@given(sets, st.permutations(range(3)), st.floats(0, 70), st.floats(1e3, 8e4))
def test_slots_in_another_order_give_the_same(speeds, order, static, coefficient):
    system = on(static, coefficient)
    first = solve_combinations(LEGS, system=system, combinations=ALL, speeds=speeds)
    other = solve_combinations(
        [LEGS[i] for i in order],
        system=system,
        combinations=np.array(ALL)[:, list(order)],
        speeds=np.array(speeds)[list(order)],
    )
    assert np.array_equal(first.state, other.state)
    assert other.flow == pytest.approx(first.flow, rel=1e-9, abs=1e-12, nan_ok=True)
    assert other.leg_flow == pytest.approx(
        first.leg_flow[..., list(order)], rel=1e-8, abs=1e-10, nan_ok=True
    )
