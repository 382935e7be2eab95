"""Forty scenarios at three supply states for a mixed set of six slots on a floating tank."""

from time import process_time

import numpy as np

from server.hydraulics.combinations import solve_combinations
from server.hydraulics.leg_curve import leg_curve
from tests.bench.registry import Measurement, bench
from tests.hydraulics.demo_tank import leg_t, pump_t, tank_station

CASES = 120
REPEATS = 15
BUDGET = 60.0  # processor time [ms]


@bench("mixed set on a floating tank")
def mixed_set_on_a_floating_tank() -> list[Measurement]:
    """Measure all 23 mixtures of three, two and one slots alike, demand drawn part-way."""
    draw = np.random.default_rng(20470611)
    first, second, third = (
        leg_t(),
        leg_curve(pump_t(), loss=900.0),
        leg_curve(pump_t(), loss=2900.0),
    )
    legs = [first] * 3 + [second] * 2 + [third]
    masks = [
        [n < a for n in range(3)] + [n < b for n in range(2)] + [bool(c)]
        for a in range(4) for b in range(3) for c in range(2) if a + b + c
    ]  # fmt: skip
    station = tank_station(
        draw.uniform(121.6, 124.4, CASES).tolist(),
        draw.uniform(180.0, 182.6, CASES).tolist(),
        ["aged", "new"] * (CASES // 2),
        draw=draw.uniform(0.0, 0.1, CASES).tolist(),
        after_reach=1,
    )
    spent = []
    for _ in range(REPEATS):
        start = process_time()
        solve_combinations(legs, system=station.system, combinations=masks)
        spent.append(1e3 * (process_time() - start))
    spent.sort()
    return [
        Measurement(
            name="120 cases, 23 mixtures, floating tank",
            value=spent[REPEATS // 2],
            unit="ms",
            budget=BUDGET,
            note=f"median of {REPEATS}, least {spent[0]:.1f} ms",
        )
    ]
