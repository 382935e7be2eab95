"""Given speeds at an imposed demand: the head follows, for every combination.

Sources
    None: the head is read off the curves, or the sum of the flows at that head is.
"""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.hydraulics.control import hold_head
from server.hydraulics.imposed_flow import impose_flow
from server.hydraulics.leg_curve import leg_curve
from server.hydraulics.parallel import leg_flows
from server.hydraulics.pump_curve import pump_curve
from server.hydraulics.states import State
from tests.hydraulics.demo_pumps import jockey_pump, main_pump

MAIN = leg_curve(main_pump(), loss=1700.0)
JOCKEY = leg_curve(jockey_pump(), loss=10000.0)
HUMPED = leg_curve(
    pump_curve([0, 0.01, 0.02, 0.03, 0.04], head=[50, 52, 48, 40, 28], tested_speed=1450),
    loss=0.0,
)
LATE = leg_curve(
    pump_curve([0.005, 0.01, 0.02], head=[60, 55, 40], tested_speed=1450), loss=0.0
)


def test_equal_pumps_stand_at_their_share():
    result = impose_flow([0.03], legs=[MAIN] * 3, combinations=[[1, 1, 0], [1, 1, 1]])

    assert result.head[0] == pytest.approx([float(MAIN.head(q)) for q in (0.015, 0.01)])
    assert result.leg_flow[0, 1].tolist() == [0.01] * 3
    assert result.leg_flow[0, 0].tolist() == [0.015, 0.015, 0.0]


@settings(max_examples=60, deadline=None)
@given(st.floats(0, 0.06), st.lists(st.floats(0.7, 1.1), min_size=3, max_size=3))
def test_unlike_pumps_pass_the_demand_together_or_say_why_not(flow, ratios):
    legs = [MAIN, MAIN, JOCKEY]
    result = impose_flow([flow], legs=legs, combinations=[[1, 1, 1]], speeds=ratios)
    if result.state[0, 0] == State.END_OF_CURVE:
        assert result.last_row_excess[0, 0] > 0
        assert np.isnan(result.head[0, 0])
        return
    assert result.state[0, 0] in (State.SOLVED, State.HELD_SHUT)
    assert result.leg_flow[0, 0].sum() == pytest.approx(flow, rel=1e-9, abs=1e-12)
    assert result.energy_residual[0, 0] < 1e-9
    head = result.head[0, 0]
    for leg, s, q in zip(legs, ratios, result.leg_flow[0, 0], strict=True):
        if q == 0:
            assert s**2 * leg.shutoff_head <= head * (1 + 1e-9)
        else:
            assert s**2 * float(leg.head(q / s)) == pytest.approx(head, abs=1e-8)


@settings(max_examples=40, deadline=None)
@given(st.floats(1e-4, 0.05), st.floats(0.6, 1.0))
def test_one_speed_for_all_is_the_held_head_at_its_limit(flow, speed):
    combinations = [[1, 0, 0], [1, 1, 0], [1, 1, 1]]
    legs = [MAIN, MAIN, JOCKEY]
    ours = impose_flow([flow], legs=legs, combinations=combinations, speeds=speed)
    held = hold_head(
        [flow], head=[0.0], legs=legs, combinations=combinations,
        lowest_speed=speed, highest_speed=speed,
    )  # fmt: skip
    both = np.isfinite(ours.head) & np.isfinite(held.head)

    assert np.array_equal(np.isfinite(ours.head), np.isfinite(held.head))
    assert ours.head[both] == pytest.approx(held.head[both], abs=1e-8)
    assert ours.leg_flow[both] == pytest.approx(held.leg_flow[both], abs=1e-9)


@settings(max_examples=40, deadline=None)
@given(st.floats(0.001, 0.04), st.floats(0.0005, 0.01))
def test_more_demand_leaves_less_head(flow, more):
    result = impose_flow([flow, flow + more], legs=[MAIN, JOCKEY], combinations=[[1, 1]])
    head = result.head[:, 0]
    assert np.isnan(head[1]) or head[1] < head[0]


@settings(max_examples=40, deadline=None)
@given(st.floats(0.0, 0.05), st.permutations(range(4)))
def test_slots_in_another_order_stand_the_same(flow, order):
    legs, ratios = [MAIN, JOCKEY, MAIN, MAIN], np.array([1.0, 1.05, 0.9, 0.95])
    first = impose_flow([flow], legs=legs, combinations=[[1] * 4], speeds=ratios)
    other = impose_flow(
        [flow],
        legs=[legs[i] for i in order],
        combinations=[[1] * 4],
        speeds=ratios[list(order)],
    )
    assert np.array_equal(first.state, other.state)
    assert other.head == pytest.approx(first.head, abs=1e-8, nan_ok=True)
    assert other.leg_flow[0, 0] == pytest.approx(
        first.leg_flow[0, 0][list(order)], abs=1e-10, nan_ok=True
    )


def test_at_no_flow_the_strongest_pump_sets_the_head_and_the_weak_one_is_shut():
    result = impose_flow(
        [0.0], legs=[MAIN, JOCKEY, HUMPED], combinations=[[1, 1, 0], [0, 1, 1]]
    )

    assert result.head[0] == pytest.approx([MAIN.shutoff_head, JOCKEY.shutoff_head])
    assert result.state[0].tolist() == [State.HELD_SHUT] * 2
    assert result.leg_state[0, 0, :2].tolist() == [State.SOLVED, State.HELD_SHUT]
    assert np.all(result.leg_flow == 0)


def test_equal_humped_pumps_are_known_left_of_their_peak_and_marked():
    result = impose_flow([0.01], legs=[HUMPED] * 2, combinations=[[1, 1]])

    assert result.head[0, 0] == pytest.approx(float(HUMPED.head(0.005)))
    assert result.rising_branch[0, 0]
    assert result.cannot_start[0, 0].all()


def test_past_the_last_row_nothing_is_stated_but_by_how_much():
    result = impose_flow([0.06], legs=[MAIN] * 2, combinations=[[1, 1]])

    assert result.state[0, 0] == State.END_OF_CURVE
    assert np.isnan(result.head[0, 0])
    assert result.last_row_flow[0, 0] == pytest.approx(2 * MAIN.last_flow)
    assert result.last_row_excess[0, 0] == pytest.approx(0.06 - 2 * MAIN.last_flow)


def test_before_a_late_first_row_nothing_is_known():
    result = impose_flow([0.001, 0.01], legs=[LATE], combinations=[[1]])
    assert result.state[:, 0].tolist() == [State.NOT_AVAILABLE, State.SOLVED]


def test_a_combination_of_no_pump_is_not_available():
    result = impose_flow([0.01], legs=[MAIN], combinations=[[0], [1]])
    assert result.state[0].tolist() == [State.NOT_AVAILABLE, State.SOLVED]


@pytest.mark.parametrize(
    ("flow", "speed", "said"),
    [(-0.01, 1.0, "flow must not be below zero"), (0.01, 0.0, "speeds must be above zero"),
     (np.nan, 1.0, "flow must be a finite number")],
)  # fmt: skip
def test_what_cannot_be_is_refused(flow, speed, said):
    with pytest.raises(ValueError, match=said):
        impose_flow([flow], legs=[MAIN], combinations=[[1]], speeds=speed)


@pytest.mark.parametrize("seed", range(8))
def test_odd_curves_balance_or_say_why_not(seed):
    draw = np.random.default_rng(100 + seed)
    legs = [MAIN, HUMPED, HUMPED, LATE, JOCKEY]
    result = impose_flow(
        draw.uniform(0, 0.1, 20), legs=legs, speeds=draw.choice([0.8, 0.95, 1.0], 5),
        combinations=draw.random((12, 5)) < 0.5,
    )  # fmt: skip
    known = np.isin(result.state, [State.SOLVED, State.HELD_SHUT])
    at = leg_flows(result.head[known], legs=legs)

    assert at.flow.shape[-1] == 5
    assert np.all(result.energy_residual[known] < 1e-9)
    assert np.all(result.mass_residual[known] < 1e-9)
    assert np.isnan(result.head[~known]).all()
