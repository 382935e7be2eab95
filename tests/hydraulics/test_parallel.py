"""Legs in parallel on a system: closed forms, laws, every state, wrong input.

Sources
    Closed form   parabola pumps H0 - a q^2 on Hs + k Q^2: Q_n = sqrt((H0 - Hs)/(a/n^2 + k)).
    scipy         brentq in the manifold head with brentq for each pump inside (tests/bench).
"""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.hydraulics.leg_curve import leg_curve
from server.hydraulics.parallel import leg_flows, solve_parallel
from server.hydraulics.pump_curve import pump_curve
from server.hydraulics.states import State
from server.hydraulics.system_curve import FunctionSystem, PowerSystem
from tests.hydraulics.demo_pumps import jockey_pump, main_pump

MAIN = leg_curve(main_pump(), loss=1700.0)
JOCKEY = leg_curve(jockey_pump(), loss=10000.0)
HUMPED = leg_curve(
    pump_curve([0, 0.01, 0.02, 0.03, 0.04], head=[50, 52, 48, 40, 28], tested_speed=1450),
    loss=0.0,
)


def parabola(shutoff_head, a, last):
    """Make a leg of many rows on a parabola, so that the cubic between them hardly matters."""
    flow = np.linspace(0, last, 400)
    return leg_curve(
        pump_curve(flow, head=shutoff_head - a * flow**2, tested_speed=1450), loss=0.0
    )


@pytest.mark.parametrize("count", [1, 2, 3])
def test_equal_parabola_pumps_meet_the_closed_form(count):
    pump = parabola(80.0, 4000.0, 0.12)
    system = PowerSystem(static_head=np.array([50.0]), coefficient=np.array([1000.0]))
    result = solve_parallel([pump] * count, system=system)

    assert result.flow[0] == pytest.approx(
        np.sqrt(30.0 / (4000.0 / count**2 + 1000.0)), rel=1e-5
    )


def test_a_lossless_parabola_in_four_rows_is_met_by_legs_with_all_the_loss():
    """With a level pump curve the leg's loss is the whole parabola: exact to rounding."""
    pump = pump_curve([0, 0.05, 0.1, 0.2], head=[80, 80, 80, 79], tested_speed=1450)
    system = PowerSystem(static_head=np.array([50.0]), coefficient=np.array([1000.0]))
    result = solve_parallel([leg_curve(pump, loss=4000.0)] * 2, system=system)

    assert result.flow[0] == pytest.approx(np.sqrt(30.0 / 2000.0), rel=1e-13)


speeds = st.floats(0.6, 1.0)
LEVEL = parabola(60.0, 20000.0, 0.03)
STRONG = leg_curve(main_pump(), loss=0.0)


@settings(max_examples=80, deadline=None)
@given(
    st.lists(speeds, min_size=3, max_size=3),
    st.floats(0.0, 75.0),
    st.floats(500.0, 60000.0),
)
def test_energy_and_mass_balance_at_every_operating_point(ratios, static, coefficient):
    legs = [MAIN, MAIN, JOCKEY]
    system = PowerSystem(static_head=np.array([static]), coefficient=np.array([coefficient]))
    result = solve_parallel(legs, system=system, speeds=ratios)
    if result.state[0] == State.END_OF_CURVE:
        assert np.isnan(result.flow[0])
        assert result.last_row_surplus[0] > 0
        return
    flow = result.flow[0]
    asked = static + coefficient * flow**2

    assert result.leg_flow[0].sum() == pytest.approx(flow, abs=1e-12)
    if result.state[0] == State.BELOW_STATIC:
        assert flow == 0.0
        assert result.static_shortfall[0] >= 0
    for leg, q, s, state in zip(
        legs, result.leg_flow[0], ratios, result.leg_state[0], strict=True
    ):
        if state == State.SOLVED:
            assert s**2 * float(leg.head(q / s)) == pytest.approx(asked, abs=1e-9)
        else:
            assert state == State.HELD_SHUT
            assert q == 0.0
            assert s**2 * leg.shutoff_head <= asked + 1e-9


@settings(max_examples=40, deadline=None)
@given(st.integers(2, 5), st.floats(20.0, 60.0))
def test_equal_legs_share_the_flow_equally(count, static):
    system = PowerSystem(static_head=np.array([static]), coefficient=np.array([30000.0]))
    result = solve_parallel([MAIN] * count, system=system)

    assert np.ptp(result.leg_flow[0]) == 0.0


@settings(max_examples=40, deadline=None)
@given(st.floats(40.0, 70.0), st.floats(0.75, 0.98))
def test_more_speed_gives_more_flow(static, ratio):
    system = PowerSystem(static_head=np.full(2, static), coefficient=np.full(2, 40000.0))
    result = solve_parallel([MAIN] * 2, system=system, speeds=[[ratio] * 2, [ratio + 0.02] * 2])

    assert result.flow[1] >= result.flow[0]


@settings(max_examples=40, deadline=None)
@given(st.floats(0.0, 1e-6))
def test_beside_shutoff_the_balance_still_holds(below):
    """A level curve at shut-off, where rounding in the head is a large step in flow."""
    head = 60.0 - below
    flow = float(STRONG.largest_flow(head)) + float(LEVEL.largest_flow(head))
    coefficient = (head - 20.0) / flow**2
    system = PowerSystem(static_head=np.array([20.0]), coefficient=np.array([coefficient]))
    result = solve_parallel([STRONG, LEVEL], system=system)

    assert result.energy_residual[0] < 1e-9
    assert result.mass_residual[0] < 1e-9


def test_without_friction_the_flow_is_that_at_the_static_head():
    system = PowerSystem(static_head=np.array([60.0]), coefficient=np.array([0.0]))
    result = solve_parallel([MAIN, MAIN], system=system)

    assert result.flow[0] == pytest.approx(2 * float(MAIN.largest_flow(60.0)), rel=1e-12)


def test_every_state_is_told():
    system = PowerSystem(
        static_head=np.array([60.0, 60.0, 90.0, 5.0, 60.0]),
        coefficient=np.full(5, 10000.0),
    )
    on = [[True, False], [True, True], [True, True], [True, False], [False, False]]
    result = solve_parallel([MAIN, JOCKEY], system=system, on=on)

    assert result.state.tolist() == [
        State.SOLVED,
        State.HELD_SHUT,
        State.BELOW_STATIC,
        State.END_OF_CURVE,
        State.NOT_AVAILABLE,
    ]
    assert result.leg_flow[1, 1] == 0.0
    assert result.static_shortfall[2] == pytest.approx(5.0)
    assert result.last_row_flow[3] == pytest.approx(MAIN.last_flow)
    assert np.isnan(result.flow[3:]).all()


def test_a_held_shut_pump_changes_nothing_for_the_others():
    system = PowerSystem(static_head=np.array([60.0]), coefficient=np.array([10000.0]))
    alone = solve_parallel([MAIN], system=system)
    both = solve_parallel([MAIN, JOCKEY], system=system)

    assert both.flow[0] == alone.flow[0]


def test_between_shutoff_and_peak_a_running_pump_is_marked_as_unable_to_start():
    system = PowerSystem(static_head=np.array([50.5]), coefficient=np.array([100.0]))
    result = solve_parallel([HUMPED], system=system)

    assert result.state[0] == State.SOLVED
    assert result.cannot_start[0, 0]
    assert not result.unique[0]


def test_a_system_given_as_a_function_is_the_same_as_its_coefficients():
    static, factor = np.array([30.0, 55.0]), np.array([8000.0, 12000.0])
    power = PowerSystem(static_head=static, coefficient=factor, exponent=1.852)
    function = FunctionSystem(
        function=lambda flow, case: static[case] + factor[case] * flow**1.852, case_count=2
    )
    one = solve_parallel([MAIN, MAIN], system=power)
    other = solve_parallel([MAIN, MAIN], system=function)

    assert one.manifold_head == pytest.approx(other.manifold_head, abs=1e-9)


def test_many_cases_give_what_one_at_a_time_gives():
    static = np.linspace(10.0, 70.0, 25)
    whole = solve_parallel(
        [MAIN, JOCKEY], system=PowerSystem(static_head=static, coefficient=np.full(25, 3e4))
    )
    single = [
        solve_parallel(
            [MAIN, JOCKEY],
            system=PowerSystem(static_head=np.array([h]), coefficient=np.array([3e4])),
        )
        for h in static
    ]

    assert whole.state.tolist() == [int(r.state[0]) for r in single]
    assert whole.flow == pytest.approx([r.flow[0] for r in single], abs=1e-12, nan_ok=True)


def test_the_flow_of_each_leg_at_a_head_comes_with_its_state():
    flows = leg_flows([40.0, 52.0, 90.0], legs=[MAIN, JOCKEY], on=[True, True])

    assert flows.state.tolist() == [
        [State.END_OF_CURVE, State.SOLVED],
        [State.SOLVED, State.SOLVED],
        [State.HELD_SHUT, State.HELD_SHUT],
    ]
    assert flows.flow[0, 0] == MAIN.last_flow
    assert flows.flow[2].tolist() == [0.0, 0.0]


@pytest.mark.parametrize("wrong", [0.0, -0.5])
def test_a_speed_that_is_not_above_zero_is_refused(wrong):
    with pytest.raises(ValueError, match="speeds must be above zero"):
        leg_flows(40.0, legs=[MAIN], speeds=wrong)


def test_a_falling_system_coefficient_is_refused():
    with pytest.raises(ValueError, match="coefficient must not be below zero"):
        PowerSystem(static_head=np.array([10.0]), coefficient=np.array([-1.0]))
