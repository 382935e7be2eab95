"""A common speed that holds a head: laws, limits, states, and the demonstration station.

Sources
    Demo     demo/closed_zone.md section 6, computed one root at a time by an independent scalar
             calculator: speeds to 0.001, per cent of best efficiency to 0.1.
"""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.hydraulics import water
from server.hydraulics.conduit import FrictionLaw, conduit
from server.hydraulics.control import hold_head, opening_speed
from server.hydraulics.fittings import quadratic_coefficient
from server.hydraulics.leg_curve import leg_curve
from server.hydraulics.pump_curve import pump_curve
from server.hydraulics.states import State
from server.hydraulics.supply import FlowTestSupply
from tests.hydraulics.demo_pumps import jockey_pump, main_pump


def branches(suction, discharge):
    """Losses of a leg of the demonstration, sum K 1.1 and 4.6."""
    suction_loss = quadratic_coefficient(1.1, bore=suction)
    return float(suction_loss + quadratic_coefficient(4.6, bore=discharge))


MAIN = leg_curve(main_pump(), loss=branches(0.150, 0.125))
JOCKEY = leg_curve(jockey_pump(), loss=branches(0.100, 0.080))
HUMPED = leg_curve(
    pump_curve([0, 0.01, 0.02, 0.03, 0.04], head=[50, 52, 48, 40, 28], tested_speed=1450),
    loss=0.0,
)
ROWS = np.linspace(0, 0.03, 301)
LEVEL = leg_curve(pump_curve(ROWS, head=60 - 2e4 * ROWS**2, tested_speed=1450), loss=500.0)
LIMITS = {"lowest_speed": 0.55, "highest_speed": 1.0}
ONE_TO_THREE = [[True, False, False], [True, True, False], [True, True, True]]


def held(flow, head, legs, combinations=None, **limits):
    """Hold one head with all legs, unless combinations are given."""
    chosen = [[True] * len(legs)] if combinations is None else combinations
    return hold_head([flow], head=[head], legs=legs, combinations=chosen, **(LIMITS | limits))


@settings(max_examples=80, deadline=None)
@given(st.floats(0.0, 0.09), st.floats(-5.0, 90.0))
def test_energy_and_mass_balance_in_every_combination_with_a_duty(flow, head):
    combinations = np.array([[1, 0, 0], [1, 1, 0], [0, 0, 1], [1, 0, 1], [1, 1, 1]], dtype=bool)
    legs = [MAIN, MAIN, JOCKEY]
    result = held(flow, head, legs, combinations)

    for k, runs in enumerate(combinations):
        if result.state[0, k] == State.END_OF_CURVE:
            assert np.isnan(result.speed[0, k])
            continue
        s, q = result.speed[0, k], result.leg_flow[0, k]
        assert q.sum() == pytest.approx(flow, abs=1e-12)
        assert 0.55 <= s <= 1.0
        for n in np.flatnonzero(runs):
            gives = s**2 * float(legs[n].head(q[n] / s))
            if q[n] > 0:
                assert gives == pytest.approx(result.head[0, k], abs=1e-9)
            else:
                assert gives <= result.head[0, k] + 1e-9
        limit = result.speed_limit[0, k]
        if limit == State.SOLVED:
            assert result.head[0, k] == head
        elif limit == State.TOP_SPEED:
            assert s == 1.0
            assert result.head[0, k] <= head
        else:
            assert s == 0.55
            assert result.head[0, k] >= head


@settings(max_examples=60, deadline=None)
@given(st.integers(2, 5), st.floats(0.001, 0.02), st.floats(30.0, 60.0))
def test_k_equal_pumps_at_a_flow_are_one_at_its_kth_part(count, each, head):
    one = held(each, head, [MAIN])
    many = held(each * count, head, [MAIN] * count)

    assert many.state[0, 0] == one.state[0, 0]
    assert many.speed[0, 0] == pytest.approx(one.speed[0, 0], rel=1e-12, nan_ok=True)
    assert many.head[0, 0] == pytest.approx(one.head[0, 0], rel=1e-12, nan_ok=True)


@settings(max_examples=60, deadline=None)
@given(st.floats(0.0, 0.03), st.floats(28.0, 55.0))
def test_more_head_or_more_flow_needs_more_speed(flow, head):
    base = held(flow, head, [MAIN, MAIN]).speed[0, 0]

    assert held(flow, head + 0.5, [MAIN, MAIN]).speed[0, 0] > base
    assert held(flow + 0.001, head, [MAIN, MAIN]).speed[0, 0] >= base


@settings(max_examples=60, deadline=None)
@given(st.floats(0.001, 0.02), st.floats(0.6, 0.9))
def test_homologous_points_need_homologous_speeds(flow, ratio):
    """Flow by s and head by s squared is the same point of the curve."""
    full = held(flow, 70.0, [MAIN], highest_speed=1.5)
    part = held(flow * ratio, 70.0 * ratio**2, [MAIN], lowest_speed=0.1)

    assert part.speed[0, 0] == pytest.approx(full.speed[0, 0] * ratio, rel=1e-11)


@settings(max_examples=60, deadline=None)
@given(st.floats(0.002, 0.035), st.floats(32.0, 55.0))
def test_the_change_of_head_for_one_per_cent_of_speed_is_that_of_a_small_step(flow, head):
    legs = [MAIN, MAIN, JOCKEY]
    here = held(flow, head, legs)
    s = here.speed[0, 0]
    near = [
        held(flow, 200.0, legs, lowest_speed=0.1, highest_speed=s * (1 + d)).head[0, 0]
        for d in (-1e-5, 1e-5)
    ]

    assert here.head_per_per_cent[0, 0] == pytest.approx((near[1] - near[0]) / 2e-3, rel=1e-2)


@settings(max_examples=40, deadline=None)
@given(st.floats(1e-9, 1e-5))
def test_at_the_smallest_flows_the_balance_still_holds(flow):
    result = held(flow, 40.0, [LEVEL, LEVEL])

    assert result.state[0, 0] == State.SOLVED
    assert result.leg_flow[0, 0].sum() == pytest.approx(flow, rel=1e-9)
    assert result.energy_residual[0, 0] < 1e-9


def test_at_no_flow_the_head_is_held_by_the_opening_speed():
    result = held(0.0, 40.0, [MAIN, MAIN])

    assert result.state[0, 0] == State.SOLVED
    assert result.speed[0, 0] == pytest.approx(float(opening_speed(40.0, leg=MAIN)), rel=1e-14)
    assert result.leg_flow[0, 0].tolist() == [0.0, 0.0]


def test_a_head_out_of_reach_is_answered_with_the_state_at_top_speed():
    result = held(0.02, 80.0, [MAIN])

    assert result.state[0, 0] == State.TOP_SPEED
    assert result.speed[0, 0] == 1.0
    assert result.head[0, 0] == pytest.approx(float(MAIN.head(0.02)), rel=1e-13)


@pytest.mark.parametrize("head", [20.0, 0.0, -3.0])
def test_a_head_below_the_lowest_speed_is_answered_with_the_state_there(head):
    result = held(0.005, head, [MAIN])

    assert result.state[0, 0] == State.LOW_SPEED
    assert result.head[0, 0] == pytest.approx(
        0.55**2 * float(MAIN.head(0.005 / 0.55)), rel=1e-13
    )


def test_past_the_last_row_no_duty_is_stated_but_the_flow_at_the_last_row_is():
    result = held(0.030, 60.0, [MAIN])

    assert result.state[0, 0] == State.END_OF_CURVE
    assert np.isnan(result.speed[0, 0])
    assert np.isnan(result.leg_flow[0, 0]).all()
    assert result.last_row_speed[0, 0] == 1.0
    assert result.last_row_flow[0, 0] == pytest.approx(0.0252)
    assert result.last_row_excess[0, 0] == pytest.approx(0.0048)


def test_past_the_last_row_below_top_speed_is_past_it_all_the_same():
    """Holding a low head at a large flow, the pump slows down and runs off its curve."""
    result = held(0.022, 30.0, [MAIN])
    s = np.sqrt(30.0 / MAIN.last_head)

    assert result.state[0, 0] == State.END_OF_CURVE
    assert result.last_row_speed[0, 0] == pytest.approx(s)
    assert result.last_row_flow[0, 0] == pytest.approx(s * 0.0252)


def test_at_one_speed_the_small_pump_is_held_shut_and_passes_nothing():
    """55 x 0.72^2 = 28.5 m against 34 m."""
    result = held(0.0099, 34.0, [MAIN, JOCKEY], [[True, True], [True, False]])

    assert result.state[0].tolist() == [State.HELD_SHUT, State.SOLVED]
    assert result.held_shut[0, 0].tolist() == [False, True]
    assert result.leg_flow[0, 0, 1] == 0.0
    assert result.speed[0, 0] == pytest.approx(result.speed[0, 1], rel=1e-13)


def test_a_combination_of_nothing_is_not_available():
    assert held(0.01, 40.0, [MAIN], [[False]]).state[0, 0] == State.NOT_AVAILABLE


def test_equal_humped_pumps_share_on_the_rising_side_and_are_marked():
    result = held(0.008, 45.0, [HUMPED, HUMPED])
    s = result.speed[0, 0]

    assert result.state[0, 0] == State.SOLVED
    assert result.rising_branch[0, 0]
    assert s**2 * float(HUMPED.head(0.004 / s)) == pytest.approx(45.0, abs=1e-9)


def test_unlike_humped_pumps_without_a_unique_share_have_no_stated_duty():
    result = held(0.004, 45.0, [HUMPED, JOCKEY])

    assert result.state[0, 0] == State.NOT_AVAILABLE
    assert np.isnan(result.speed[0, 0])


def test_below_a_first_row_above_zero_flow_no_duty_is_stated():
    late = leg_curve(
        pump_curve([0.01, 0.02, 0.03], head=[50, 45, 30], tested_speed=1450), loss=0.0
    )
    states = [held(q, 40.0, [late]).state[0, 0] for q in (0.0, 0.005, 0.015)]

    assert states == [State.NOT_AVAILABLE, State.NOT_AVAILABLE, State.SOLVED]


def test_heads_and_limits_may_differ_from_combination_to_combination():
    result = hold_head(
        [0.01, 0.02],
        head=np.array([[40.0, 41.0, 42.0], [43.0, 44.0, 45.0]]),
        legs=[MAIN] * 3,
        combinations=ONE_TO_THREE,
        lowest_speed=[0.5, 0.6],
        highest_speed=1.0,
    )
    alone = held(0.02, 44.0, [MAIN] * 2)

    assert result.head.tolist() == [[40.0, 41.0, 42.0], [43.0, 44.0, 45.0]]
    assert result.speed[1, 1] == pytest.approx(alone.speed[0, 0], rel=1e-13)


def test_the_demonstration_station_is_met_in_all_three_supply_states():
    temperature = 14.0
    density, viscosity = water.density(temperature), water.kinematic_viscosity(temperature)
    weight = density * water.GRAVITY
    law = FrictionLaw.DARCY_WEISBACH
    main = conduit(law, length=[820, 330], bore=[0.3, 0.246], resistance=[6e-4, 1e-4], k=[6, 4])
    suction = conduit(law, length=24, bore=0.25, resistance=5e-4, k=3.2)
    street = FlowTestSupply(
        gauge_level=112.0, static_pressure=350e3, residual_pressure=260e3, test_flow=0.040
    )
    flow = np.repeat([2.2, 9.9, 20.0, 36.0, 49.9, 60.0], 3) / 1000
    shift = np.tile([-40e3, 0.0, 40e3], 6)
    grade = street.grade(flow, density=density, shift_pressure=shift)
    grade = grade - suction.head_loss(flow, kinematic_viscosity=viscosity)
    loss = main.head_loss(flow, kinematic_viscosity=viscosity) + 3.5 * (flow / 0.040) ** 1.852
    result = hold_head(
        flow,
        head=156.0 + 250e3 / weight + loss - grade,
        legs=[MAIN] * 3 + [JOCKEY],
        combinations=[[0, 0, 0, 1], [1, 0, 0, 0], [1, 1, 0, 0], [1, 1, 1, 0]],
        **LIMITS,
    )
    at = np.arange(18), np.repeat([0, 1, 2, 3, 3, 3], 3)
    expected_speed = [0.840, 0.795, 0.747, 0.722, 0.688, 0.652, 0.747, 0.714, 0.680]
    expected_speed += [0.827, 0.797, 0.766, 0.944, 0.918, 0.891, 1.000, 1.000, 0.992]
    expected_share = [33.3, 35.2, 37.5, 77.6, 81.5, 85.9, 75.8, 79.2, 83.3]
    expected_share += [82.2, 85.2, 88.6, 99.8, 102.6, 105.6, 113.2, 113.2, 114.2]
    best = np.repeat([JOCKEY.pump.best.flow, MAIN.pump.best.flow], [3, 15])
    share = 100 * result.leg_flow[at].max(axis=1) / result.speed[at] / best
    critical = (grade + result.head[at] - loss - 156.0) * weight / 1e3

    assert result.speed[at] == pytest.approx(expected_speed, abs=5.5e-4)
    assert share == pytest.approx(expected_share, abs=0.06)
    assert result.state[at].tolist() == [0] * 15 + [1, 1, 0]
    assert critical == pytest.approx([250.0] * 15 + [183, 223, 250], abs=0.6)


def test_opening_speed_is_unknown_without_a_shutoff_head_and_zero_without_a_head():
    late = leg_curve(
        pump_curve([0.01, 0.02, 0.03], head=[50, 45, 30], tested_speed=1450), loss=0.0
    )

    assert np.isnan(opening_speed(40.0, leg=late))
    assert opening_speed(-2.0, leg=MAIN) == 0.0


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        ({"lowest_speed": 0.0}, "lowest_speed must be above zero"),
        ({"lowest_speed": 1.1}, "not above highest_speed"),
    ],
)
def test_speed_limits_that_cannot_be_are_refused(change, sentence):
    with pytest.raises(ValueError, match=sentence):
        held(0.01, 40.0, [MAIN], **change)


def test_a_negative_demand_is_refused():
    with pytest.raises(ValueError, match="flow must not be below zero; got -0.01"):
        held(-0.01, 40.0, [MAIN])


def test_cases_that_do_not_fit_together_are_refused():
    with pytest.raises(ValueError, match="flow and head must have the same cases"):
        hold_head([0.01, 0.02], head=[40.0] * 3, legs=[MAIN], combinations=[[True]], **LIMITS)
