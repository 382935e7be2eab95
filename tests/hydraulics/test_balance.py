"""The residuals are real: they see a wrong flow, and they are small where the answer is right.

Sources
    None: the flows are read off the curves and then spoilt by a known step.
"""

import numpy as np
import pytest

from server.hydraulics.balance import energy_residual, residuals
from server.hydraulics.leg_curve import leg_curve
from server.hydraulics.parallel import leg_flows, solve_parallel
from server.hydraulics.states import State
from server.hydraulics.system_curve import PowerSystem
from tests.hydraulics.demo_pumps import jockey_pump, main_pump

LEGS = [leg_curve(main_pump(), loss=1700.0), leg_curve(jockey_pump(), loss=10000.0)]
SPEED = np.array([[0.95, 1.05]])


def at(head):
    found = leg_flows(np.array([head]), legs=LEGS, speeds=SPEED)
    return found.flow, found.state


def test_a_flow_that_is_wrong_by_a_step_is_seen_as_that_step():
    flow, state = at(48.0)
    spoilt = flow + [[1e-5, -1e-5]]
    energy, mass = residuals(spoilt, state, np.array([48.0]), LEGS, SPEED)

    assert mass[0] == pytest.approx(2e-5, rel=0.02)  # they do not cancel
    slopes = SPEED[0] * [
        float(k.curve.slope(q)) for k, q in zip(LEGS, (flow / SPEED)[0], strict=True)
    ]
    assert energy[0] == pytest.approx(1e-5 * np.abs(slopes).max(), rel=0.02)
    assert energy_residual(spoilt, state, np.array([48.0]), LEGS, SPEED)[0] == energy[0]


def test_flows_read_off_the_curves_have_no_residual():
    flow, state = at(48.0)
    energy, mass = residuals(flow, state, np.array([48.0]), LEGS, SPEED)

    assert energy[0] < 1e-12
    assert mass[0] < 1e-14


def test_a_leg_held_shut_is_in_balance():
    flow, state = at(65.0)
    energy, mass = residuals(flow, state, np.array([65.0]), LEGS, SPEED)

    assert state[0, 1] == State.HELD_SHUT
    assert (energy[0], mass[0]) == (
        pytest.approx(0.0, abs=1e-12),
        pytest.approx(0.0, abs=1e-14),
    )


def test_the_mass_residual_of_a_solve_is_not_zero_by_construction():
    draw = np.random.default_rng(5)
    system = PowerSystem(
        static_head=draw.uniform(20, 60, 200), coefficient=draw.uniform(1e4, 1e5, 200)
    )
    result = solve_parallel(LEGS, system=system)
    solved = np.isin(result.state, [State.SOLVED, State.HELD_SHUT])

    assert np.any(result.mass_residual[solved] > 0)
    assert np.all(result.mass_residual[solved] < 1e-9)
