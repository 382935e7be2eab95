"""Fixed pumps beside variable ones, and a held flow.

Sources
    Method   section 9: the fixed unit delivers at the held head, the variable ones take the
             rest; above the demand: "fixed alone exceeds the set point".
"""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.hydraulics.combinations import solve_combinations
from server.hydraulics.held_flow import hold_flow
from server.hydraulics.imposed_flow import impose_flow
from server.hydraulics.leg_curve import leg_curve
from server.hydraulics.mixed_control import hold_head_mixed
from server.hydraulics.states import State
from server.hydraulics.system_curve import PowerSystem
from tests.hydraulics.demo_pumps import jockey_pump, main_pump
from tests.hydraulics.demo_tank import leg_t, tank_station

MAIN = leg_curve(main_pump(), loss=1700.0)
JOCKEY = leg_curve(jockey_pump(), loss=10000.0)
LEGS = [MAIN, MAIN, JOCKEY]
FIRST_FIXED = [False, True, True]
LOW, TOP = 0.5, 1.0


def mixed(flow, head, combinations=((1, 1, 0),), variable=FIRST_FIXED):
    return hold_head_mixed(
        np.atleast_1d(flow), head=np.atleast_1d(head), legs=LEGS, combinations=combinations,
        variable=variable, fixed_speeds=1.0, lowest_speed=LOW, highest_speed=TOP,
    )  # fmt: skip


def test_the_fixed_pump_delivers_at_the_held_head_and_the_variable_one_takes_the_rest():
    result = mixed(0.030, 66.0)
    fixed = float(MAIN.largest_flow(66.0))

    assert result.held[0, 0]
    assert result.state[0, 0] == State.SOLVED
    assert result.head[0, 0] == 66.0
    assert result.leg_flow[0, 0, 0] == pytest.approx(fixed)
    assert result.leg_flow[0, 0, 1] == pytest.approx(0.030 - fixed)
    assert result.speed[0, 0, 0] == 1.0
    s = result.speed[0, 0, 1]
    assert s < 1
    assert s**2 * float(MAIN.head((0.030 - fixed) / s)) == pytest.approx(66.0, abs=1e-9)


def test_a_fixed_pump_that_exceeds_the_demand_alone_is_told_with_its_head():
    result = mixed(0.010, 66.0)

    assert result.fixed_exceeds[0, 0]
    assert not result.held[0, 0]
    assert result.state[0, 0] == State.LOW_SPEED
    assert result.head[0, 0] == pytest.approx(float(MAIN.head(0.010)))
    assert result.held_shut[0, 0].tolist() == [False, True, False]


def test_too_much_demand_stands_at_top_speed_with_less_head():
    result = mixed(0.044, 66.0)

    assert result.state[0, 0] == State.TOP_SPEED
    assert result.head[0, 0] == pytest.approx(float(MAIN.head(0.022)))
    assert result.head[0, 0] < 66.0
    assert not result.fixed_exceeds[0, 0]


def test_past_every_last_row_nothing_is_stated():
    result = mixed(0.080, 66.0)
    assert result.state[0, 0] == State.END_OF_CURVE
    assert np.isnan(result.head[0, 0])
    assert np.isnan(result.leg_flow[0, 0]).all()


def test_fixed_pumps_alone_give_the_head_of_the_imposed_flow():
    result = mixed([0.010, 0.020], [66.0, 66.0], combinations=[[1, 0, 0]])
    alone = impose_flow([0.010, 0.020], legs=LEGS, combinations=[[1, 0, 0]])

    assert result.head == pytest.approx(alone.head)
    assert result.state[:, 0].tolist() == [State.LOW_SPEED, State.TOP_SPEED]
    assert not result.held.any()


def test_variable_pumps_alone_hold_as_without_fixed_ones():
    result = mixed(0.02, 60.0, combinations=[[0, 1, 0]])
    assert result.held[0, 0]
    assert np.isnan(result.speed[0, 0, [0, 2]]).all()


def test_a_combination_of_no_pump_is_not_available():
    assert mixed(0.02, 60.0, combinations=[[0, 0, 0]]).state[0, 0] == State.NOT_AVAILABLE


masks = [[bool(m >> n & 1) for n in range(3)] for m in range(1, 8)]


@settings(max_examples=60, deadline=None)
@given(
    st.floats(0, 0.08),
    st.floats(10, 85),
    st.lists(st.booleans(), min_size=3, max_size=3),
)
def test_every_mixture_balances_and_stands_on_its_side_or_says_why_not(flow, head, variable):
    result = mixed(flow, head, combinations=masks, variable=variable)
    known = np.isfinite(result.head)
    silent = np.isin(result.state, (State.END_OF_CURVE, State.NOT_AVAILABLE))

    assert np.array_equal(known, ~silent)
    assert np.all(result.mass_residual[known] < 1e-9)
    assert np.all(result.energy_residual[known] < 1e-9)
    assert np.all(result.head[result.held] == head)
    assert np.all(result.head[result.state == State.TOP_SPEED] <= head + 1e-9)
    assert np.all(result.head[result.state == State.LOW_SPEED] >= head - 1e-9)
    ran = np.isfinite(result.speed)
    assert np.all((result.speed[ran] >= LOW - 1e-12) & (result.speed[ran] <= TOP + 1e-12))


T = leg_t()
HARDEST = tank_station([121.6], [182.6], ["aged"]).system


def test_a_flow_is_held_against_a_tank_by_speed():
    result = hold_flow(
        0.070, system=HARDEST, legs=[T] * 3, combinations=[[1, 1, 0]],
        lowest_speed=0.5, highest_speed=1.0,
    )  # fmt: skip
    back = solve_combinations(
        [T] * 3, system=HARDEST, combinations=[[1, 1, 0]], speeds=[result.speed[0, 0, 0]] * 3
    )
    assert result.held[0, 0]
    assert result.flow[0, 0] == pytest.approx(0.070)
    assert back.flow[0, 0] == pytest.approx(0.070, rel=1e-9)


def test_a_flow_out_of_reach_is_the_operating_point_at_top_speed():
    result = hold_flow(
        0.100, system=HARDEST, legs=[T] * 3, combinations=[[1, 1, 0], [1, 1, 1]],
        lowest_speed=0.5, highest_speed=1.0,
    )  # fmt: skip
    assert result.state[0].tolist() == [State.TOP_SPEED, State.SOLVED]
    assert result.flow[0] * 1000 == pytest.approx([86.47, 100.0], abs=0.01)


def test_a_flow_under_that_of_the_lowest_speed_is_the_operating_point_there():
    result = hold_flow(
        0.010, system=HARDEST, legs=[T] * 3, combinations=[[1, 1, 1]],
        lowest_speed=0.95, highest_speed=1.0,
    )  # fmt: skip
    low = solve_combinations([T] * 3, system=HARDEST, combinations=[[1, 1, 1]], speeds=0.95)
    assert result.state[0, 0] == State.LOW_SPEED
    assert result.flow[0, 0] == low.flow[0, 0] > 0.010


def test_a_tank_out_of_reach_passes_nothing_and_says_so():
    system = PowerSystem(static_head=np.array([95.0]), coefficient=np.array([1000.0]))
    result = hold_flow(
        0.05, system=system, legs=[T], combinations=[[1]], lowest_speed=0.5, highest_speed=1.0
    )
    assert result.state[0, 0] == State.BELOW_STATIC
    assert result.flow[0, 0] == 0.0


def test_a_fixed_pump_that_passes_more_alone_is_told():
    result = hold_flow(
        0.030, system=HARDEST, legs=[T] * 2, combinations=[[1, 1]], variable=[False, True],
        lowest_speed=0.5, highest_speed=1.0,
    )  # fmt: skip
    assert result.fixed_exceeds[0, 0]
    assert result.flow[0, 0] * 1000 == pytest.approx(52.17, abs=0.01)
    assert result.held_shut[0, 0].tolist() == [False, True]


@settings(max_examples=40, deadline=None)
@given(st.floats(0.0, 0.15), st.floats(20, 90), st.floats(0, 5000))
def test_a_held_flow_balances_or_says_why_not(flow, static, coefficient):
    system = PowerSystem(static_head=np.array([static]), coefficient=np.array([coefficient]))
    result = hold_flow(
        flow, system=system, legs=[T, T, MAIN], combinations=masks,
        variable=[True, True, False], lowest_speed=0.5, highest_speed=1.0,
    )  # fmt: skip
    known = np.isfinite(result.flow)
    asked = static + coefficient * result.flow[known] ** 2

    assert np.all(result.energy_residual[known] < 1e-9)
    assert np.all(result.mass_residual[known] < 1e-9)
    moving = known & (result.flow > 0)
    assert result.head[moving] == pytest.approx(
        static + coefficient * result.flow[moving] ** 2, abs=1e-8
    )
    assert asked.size == known.sum()
    assert np.all(result.flow[result.held] == flow)
    assert np.all(result.flow[result.state == State.TOP_SPEED] <= flow + 1e-12)
    assert np.all(result.flow[result.state == State.LOW_SPEED] >= flow - 1e-12)
