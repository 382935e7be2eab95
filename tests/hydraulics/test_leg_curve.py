"""A leg's curve and its largest flow: brute force, inverse, humps, ends.

Sources
    scipy    brentq, one root at a time, on the same head curve.
"""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq

from server.hydraulics.leg_curve import leg_curve
from server.hydraulics.pump_curve import pump_curve
from tests.hydraulics.demo_pumps import main_pump

MAIN = leg_curve(main_pump(), loss=1700.0)
SADDLE = leg_curve(
    pump_curve(
        [0, 0.01, 0.02, 0.03, 0.04, 0.05], head=[50, 52, 47, 48.5, 40, 28], tested_speed=1450
    ),
    loss=100.0,
)
LATE = leg_curve(pump_curve([0.01, 0.02, 0.03], head=[50, 45, 30], tested_speed=1450), loss=0.0)


def test_the_leg_loses_its_branch_losses():
    flow = np.linspace(0, MAIN.last_flow, 50)

    assert MAIN.head(flow) == pytest.approx(MAIN.pump.head(flow) - 1700.0 * flow**2, rel=1e-13)
    assert MAIN.last_head == pytest.approx(51.7 - 1700.0 * 0.0252**2, rel=1e-13)
    assert MAIN.shutoff_head == MAIN.peak_head == 85.0


@given(st.floats(50.7, 84.999))
def test_the_largest_flow_is_the_root_found_one_at_a_time(head):
    expected = brentq(lambda q: float(MAIN.head(q)) - head, 0.0, MAIN.last_flow, xtol=1e-15)

    assert float(MAIN.largest_flow(head)) == pytest.approx(expected, rel=1e-11, abs=1e-14)


@settings(max_examples=50, deadline=None)
@given(st.floats(20.0, 54.0))
def test_on_a_saddle_the_largest_of_several_flows_is_taken(head):
    flows = np.linspace(0, 0.05, 20001)
    enough = SADDLE.head(flows) >= head
    largest = flows[enough].max() if enough.any() else 0.0

    assert float(SADDLE.largest_flow(head)) == pytest.approx(largest, abs=3e-6)


@given(st.floats(20.0, 54.0), st.floats(0.01, 5.0))
def test_more_head_never_passes_more_flow(head, more):
    assert SADDLE.largest_flow(head + more) <= SADDLE.largest_flow(head)


@given(st.floats(51.0, 84.9))
def test_the_slope_given_with_the_flow_is_that_of_the_flow(head):
    _, gain = MAIN.invert(head)
    near = MAIN.largest_flow([head - 1e-5, head + 1e-5])

    assert float(gain) == pytest.approx(float(np.diff(near)[0]) / 2e-5, rel=2e-2)


def test_above_the_peak_a_leg_is_held_shut():
    assert SADDLE.held_shut([51.0, 53.0]).tolist() == [False, True]
    assert SADDLE.largest_flow(53.0) == 0.0


def test_between_shutoff_and_peak_a_leg_cannot_start():
    assert SADDLE.cannot_start([49.0, 51.0, 53.0]).tolist() == [False, True, False]
    assert not MAIN.cannot_start([80.0, 85.0, 86.0]).any()


def test_below_the_head_of_the_last_row_a_leg_is_past_its_end():
    assert MAIN.past_end(
        [MAIN.last_head + 0.1, MAIN.last_head, MAIN.last_head - 0.1]
    ).tolist() == [
        False,
        False,
        True,
    ]


def test_branch_losses_can_turn_a_level_curve_into_a_falling_one():
    pump = pump_curve([0, 0.01, 0.02, 0.03], head=[50, 50, 45, 30], tested_speed=1450)

    assert not leg_curve(pump, loss=0.0).falls_throughout
    assert leg_curve(pump, loss=500.0).falls_throughout


def test_a_rising_piece_with_losses_turns_inside_and_keeps_that_peak():
    flows = np.linspace(0, 0.05, 200001)

    assert SADDLE.peak_head == pytest.approx(SADDLE.head(flows).max(), abs=1e-8)
    assert 0 < SADDLE.peak_flow < 0.01


def test_before_a_first_row_above_zero_flow_nothing_is_known():
    assert LATE.shutoff_head is None
    assert LATE.before_start([49.0, 51.0]).tolist() == [False, True]


@pytest.mark.parametrize("wrong", [-1.0, np.nan])
def test_losses_below_zero_are_refused(wrong):
    with pytest.raises(ValueError, match="loss must not be below zero"):
        leg_curve(main_pump(), loss=wrong)
