"""A curve that is not refused is solved or has its reason: humps, saddles, level pieces.

Sources
    None: seeded random rows; the laws of energy and mass are the check.
"""

import numpy as np
import pytest

from server.hydraulics.control import hold_head
from server.hydraulics.errors import CurveRefused
from server.hydraulics.leg_curve import leg_curve
from server.hydraulics.parallel import solve_parallel
from server.hydraulics.pump_curve import pump_curve
from server.hydraulics.states import State
from server.hydraulics.system_curve import PowerSystem

CASES = 30
WITH_A_DUTY = [State.SOLVED, State.TOP_SPEED, State.LOW_SPEED, State.HELD_SHUT]


def odd_legs(draw):
    """Draw one to four legs, some of them equal."""
    legs = []
    while not legs:
        for _ in range(draw.integers(1, 4)):
            rows = draw.integers(3, 10)
            flow = np.cumsum(draw.uniform(0.0005, 0.005, rows))
            flow = flow - flow[0] * (draw.random() < 0.85)
            head = [
                60 * draw.uniform(0.6, 1.3) - np.cumsum(draw.uniform(0.05, 8, rows)),
                50 + np.cumsum(draw.uniform(-6, 3, rows)),
                60.0 - np.cumsum(draw.integers(0, 6, rows)),
            ][draw.integers(3)]
            try:
                pump = pump_curve(flow, head=head, tested_speed=1450)
            except CurveRefused:
                continue
            legs.append(leg_curve(pump, loss=float(draw.choice([0, 500, 5000]))))
    return legs + legs[:1] if draw.random() < 0.5 else legs


@pytest.mark.parametrize("seed", range(20))
def test_a_held_head_balances_or_says_why_not(seed):
    draw = np.random.default_rng(seed)
    legs = odd_legs(draw)
    count = len(legs)
    combinations = [[bool(m >> n & 1) for n in range(count)] for m in range(1, 2**count)]
    flow = draw.uniform(0, 0.08, CASES) * draw.choice([0, 1e-6, 1e-3, 1, 1], CASES)
    result = hold_head(
        flow,
        head=draw.uniform(-5, 80, CASES),
        legs=legs,
        combinations=combinations,
        lowest_speed=0.4,
        highest_speed=1.1,
    )
    duty = np.isin(result.state, WITH_A_DUTY)
    apart = np.abs(result.leg_flow.sum(axis=-1) - flow[:, None])

    assert np.isfinite(result.speed[duty]).all()
    assert np.isfinite(result.head_per_per_cent[duty]).all()
    assert np.all((result.speed[duty] > 0.4 - 1e-12) & (result.speed[duty] < 1.1 + 1e-12))
    assert np.all(apart[duty] < 1e-12)
    assert np.all(result.energy_residual[duty] < 1e-9)
    assert np.isnan(result.speed[~duty]).all()


@pytest.mark.parametrize("seed", range(20))
def test_an_operating_point_balances_or_says_why_not(seed):
    draw = np.random.default_rng(seed)
    legs = odd_legs(draw)
    static, factor = draw.uniform(0, 70, CASES), draw.uniform(0, 5e4, CASES)
    result = solve_parallel(
        legs,
        system=PowerSystem(static_head=static, coefficient=factor, exponent=1.852),
        speeds=draw.uniform(0.5, 1.1, (CASES, len(legs))),
        on=draw.random((CASES, len(legs))) < 0.7,
    )
    duty = np.isin(result.state, [*WITH_A_DUTY, State.BELOW_STATIC])
    asked = static[duty] + factor[duty] * result.flow[duty] ** 1.852

    assert result.manifold_head[duty] == pytest.approx(asked, abs=1e-9)
    assert np.all(result.energy_residual[duty] < 1e-9)
    assert result.flow[duty] == pytest.approx(result.leg_flow[duty].sum(axis=1), abs=1e-12)
    assert np.isnan(result.flow[~duty]).all()
