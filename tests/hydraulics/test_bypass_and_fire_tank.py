"""A bypass with check valve, and a tank that feeds only when the grade would fall below it.

Sources
    Closed form   bypass k q^2 against a static -h + c Q^2: q = sqrt(h / (k + c)).
    Complementarity   tank flow >= 0, grade >= level less loss, one of them with equality.
"""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.hydraulics.bypass import (
    bypass_flow_at,
    bypass_head,
    bypass_on_system,
    bypass_share,
)
from server.hydraulics.fire_tank import TANK_LOSS_EXPONENT, fire_tank
from server.hydraulics.imposed_flow import impose_flow
from server.hydraulics.leg_curve import leg_curve
from server.hydraulics.states import State
from server.hydraulics.system_curve import PowerSystem
from tests.hydraulics.demo_pumps import main_pump

MAIN = leg_curve(main_pump(), loss=1700.0)
MASKS = [[True, False, False], [True, True, False], [True, True, True]]
SUCTION = 130.0
RISE = 3000.0  # of the losses on the way, m/(m3/s)2


def lift(flow, case):
    return RISE * flow**2 - SUCTION + 0.0 * case


def test_a_bypass_flows_where_the_supply_stands_above_the_zone():
    system = PowerSystem(static_head=np.array([-12.0, 5.0, 0.0]), coefficient=np.full(3, 900.0))
    found = bypass_on_system(system, coefficient=300.0)

    assert found.flow == pytest.approx([np.sqrt(12.0 / 1200.0), 0.0, 0.0], rel=1e-11)
    assert found.opens.tolist() == [True, False, False]
    assert found.head == pytest.approx([-3.0, 5.0, 0.0], rel=1e-10)
    assert np.all(found.energy_residual < 1e-9)


@given(st.floats(0.1, 50), st.floats(1, 1e5), st.floats(0, 1e5))
def test_the_bypass_meets_the_closed_form(static, coefficient, system_coefficient):
    system = PowerSystem(
        static_head=np.array([-static]), coefficient=np.array([system_coefficient])
    )
    found = bypass_on_system(system, coefficient=coefficient)
    assert found.flow[0] == pytest.approx(
        np.sqrt(static / (coefficient + system_coefficient)), rel=1e-9
    )


def test_beside_running_pumps_that_lift_the_bypass_stays_shut():
    assert bypass_flow_at([30.0, 0.0, -3.0, np.nan], coefficient=300.0).tolist()[:3] == [
        0.0, 0.0, pytest.approx(0.1),
    ]  # fmt: skip
    assert bypass_share(0.05, manifold_head=20.0, coefficient=300.0) == 0.0
    assert bypass_share(0.2, manifold_head=-3.0, coefficient=300.0) == pytest.approx(0.5)
    assert bypass_share(0.0, manifold_head=-3.0, coefficient=300.0) == 0.0


def test_with_all_pumps_off_the_demand_goes_through_the_bypass_at_its_loss():
    head = bypass_head([0.0, 0.05, np.nan], coefficient=400.0)
    assert head[:2].tolist() == [0.0, pytest.approx(-1.0)]
    assert bypass_flow_at(head[1], coefficient=400.0) == pytest.approx(0.05)


@pytest.mark.parametrize(
    ("call", "said"),
    [
        (lambda: bypass_flow_at(-1.0, coefficient=0.0), "coefficient must be above zero"),
        (lambda: bypass_head(-0.1, coefficient=1.0), "flow must not be below zero"),
    ],
)
def test_a_bypass_that_cannot_be_is_refused(call, said):
    with pytest.raises(ValueError, match=said):
        call()


def fed(demand, level, loss=2000.0, *, held=False):
    """Solve three combinations of mains at full speed with the tank beside them."""
    demands = np.atleast_1d(np.asarray(demand, dtype=float))
    closed = impose_flow(demands, legs=[MAIN] * 3, combinations=MASKS)
    return closed, fire_tank(
        demands, level=np.full(demands.size, level), tank_loss=loss, lift=lift,
        closed_head=closed.head, closed_held=np.full(closed.head.shape, held),
        legs=[MAIN] * 3, combinations=MASKS, speeds=1.0,
    )  # fmt: skip


def test_a_tank_below_the_grade_stays_shut_and_the_zone_is_closed():
    closed, found = fed(0.03, 150.0)
    known = np.isfinite(closed.head)

    assert not found.opens[known].any()
    assert np.all(found.tank_flow[known] == 0)
    assert np.all(found.station_flow[known] == 0.03)
    assert found.head[known] == pytest.approx(closed.head[known])
    assert np.all(found.node_grade[known] > 150.0)


def test_a_tank_above_the_grade_feeds_and_lifts_it():
    closed, found = fed(0.06, 195.0)
    grade = closed.head[0, 2] - RISE * 0.06**2 + SUCTION

    assert found.opens[0].all()
    assert np.all(found.tank_flow[0] > 0)
    assert grade < found.node_grade[0, 2] < 195.0
    assert found.station_flow[0] + found.tank_flow[0] == pytest.approx(0.06)


def test_a_station_that_runs_out_alone_is_relieved_by_the_tank():
    closed, found = fed(0.06, 190.0)

    assert closed.state[0, 0] == State.END_OF_CURVE
    assert found.opens[0, 0]
    assert found.state[0, 0] == State.SOLVED
    assert found.station_flow[0, 0] < MAIN.last_flow


def test_a_low_tank_does_not_hide_a_run_out():
    _, found = fed(0.06, 100.0)
    assert not found.opens[0, 0]
    assert found.state[0, 0] == State.END_OF_CURVE
    assert np.isnan(found.node_grade[0, 0])


def test_a_tank_higher_than_the_pumps_reach_feeds_alone():
    _, found = fed(0.02, 230.0, loss=0.0)
    assert found.opens.all()
    assert np.all(found.state == State.BELOW_STATIC)
    assert np.all(found.station_flow == 0)
    assert np.all(found.tank_flow == 0.02)


def test_a_set_point_held_below_the_tank_is_told_and_nothing_stated():
    _, found = fed(0.03, 212.0, held=True)
    assert found.draws_down[0, 2]
    assert found.state[0, 2] == State.NOT_AVAILABLE
    assert np.isnan(found.node_grade[0, 2])


@settings(max_examples=60, deadline=None)
@given(st.floats(0.001, 0.1), st.floats(120, 220), st.floats(0, 2e4))
def test_tank_and_grade_complement_each_other(demand, level, loss):
    _, found = fed(demand, level, loss)
    known = np.isfinite(found.node_grade)
    q, grade = found.tank_flow[known], found.node_grade[known]
    spare = grade - (level - loss * q**TANK_LOSS_EXPONENT)

    assert np.all(q >= -1e-12)
    assert np.all(spare >= -2e-9)
    assert np.all(np.minimum(q, np.abs(spare)) < 2e-9)
    assert np.all(found.energy_residual[known] < 1e-9)


@settings(max_examples=30, deadline=None)
@given(st.floats(0.01, 0.09), st.floats(150, 200), st.floats(0.1, 10))
def test_a_higher_tank_never_gives_less(demand, level, more):
    _, low = fed(demand, level)
    _, high = fed(demand, level + more)
    both = np.isfinite(low.tank_flow) & np.isfinite(high.tank_flow)
    assert np.all(high.tank_flow[both] >= low.tank_flow[both] - 1e-9)
    assert np.all(high.node_grade[both] >= low.node_grade[both] - 1e-6)


def test_a_demand_of_nothing_is_refused():
    with pytest.raises(ValueError, match="demand must be above zero"):
        fed(0.0, 150.0)
