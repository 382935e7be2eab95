"""The array solver for legs in parallel against the frozen scalar baseline."""

from dataclasses import dataclass
from time import perf_counter

import numpy as np

from server.hydraulics.leg_curve import LegCurve, leg_curve
from server.hydraulics.parallel import leg_flows, solve_parallel
from server.hydraulics.pump_curve import pump_curve
from server.hydraulics.states import State
from server.hydraulics.system_curve import PowerSystem
from tests.bench.baseline import operating_point, scalar_leg
from tests.bench.registry import Measurement, bench

CASES = 100_000
SAMPLE = 500  # cases that the baseline solves; its time is scaled
SHUT = 0.1  # share of cases with one pump held shut
SPEED_BUDGET = 40.0
HEAD_BUDGET = 1e-9
REPEATS = 3


@dataclass(frozen=True, slots=True)
class Problem:
    """Three different pumps in many cases; the weakest is held shut in a tenth of them."""

    legs: tuple[LegCurve, ...]
    speeds: np.ndarray
    system: PowerSystem


def pumps() -> tuple[LegCurve, ...]:
    """Return three invented pumps: large, middle, and one of a lower shut-off head."""
    share = np.array([0, 0.18, 0.32, 0.46, 0.61, 0.71, 0.82, 0.93, 1.0])
    head = np.array([85.0, 83.9, 81.6, 77.8, 72.7, 68.0, 62.5, 56.3, 51.7])
    made = []
    for last, height, loss in (
        (0.0252, 1.0, 1700.0),
        (0.017, 0.97, 3600.0),
        (0.012, 0.8, 7000.0),
    ):
        pump = pump_curve(share * last, head=head * height, tested_speed=2950)
        made.append(leg_curve(pump, loss=loss))
    return tuple(made)


def problem(cases: int) -> Problem:
    """Return cases drawn once and for all, each with an answer inside the curves."""
    draw = np.random.default_rng(20471103)
    legs = pumps()
    speeds = draw.uniform(0.92, 1.0, (cases, 3))
    ends = (speeds**2 * [leg.last_head for leg in legs]).max(axis=1)
    tops = speeds**2 * [leg.peak_head for leg in legs]
    place = draw.uniform(0.02, 0.98, cases)
    running = ends + place * (tops.min(axis=1) - ends)
    shut = tops[:, 2] + place * (tops[:, :2].min(axis=1) - tops[:, 2])
    head = np.where(draw.uniform(size=cases) < SHUT, shut, running)
    flow = leg_flows(head, legs=legs, speeds=speeds).flow.sum(axis=1)
    static = head * draw.uniform(0.3, 0.95, cases)
    system = PowerSystem(static_head=static, coefficient=(head - static) / flow**2)
    return Problem(legs, speeds, system)


def baseline_heads(of: Problem, sample: int) -> np.ndarray:
    """Solve the first cases one at a time."""
    legs = [
        scalar_leg(
            leg.pump.head_curve.breaks.tolist(),
            leg.pump.head_curve.coefficients.tolist(),
            leg.loss,
        )
        for leg in of.legs
    ]
    speeds = of.speeds[:sample].tolist()
    static = of.system.static_head[:sample].tolist()
    factor = of.system.coefficient[:sample].tolist()
    return np.array(
        [
            operating_point(legs, s, h, c)[0]
            for s, h, c in zip(speeds, static, factor, strict=True)
        ]
    )


@bench("parallel pumps against one root at a time")
def parallel_against_baseline() -> list[Measurement]:
    """Measure how many times quicker the arrays are, and how far the answers lie apart."""
    cases = problem(CASES)
    ours = min(_seconds(cases) for _ in range(REPEATS))
    result = solve_parallel(cases.legs, system=cases.system, speeds=cases.speeds)
    start = perf_counter()
    expected = baseline_heads(cases, SAMPLE)
    scalar = (perf_counter() - start) * CASES / SAMPLE
    apart = float(np.abs(result.manifold_head[:SAMPLE] - expected).max())
    shut = float(np.mean(result.state == State.HELD_SHUT))
    return [
        Measurement(
            name="three unlike pumps, 100,000 cases: times quicker",
            value=scalar / ours,
            unit="x",
            budget=SPEED_BUDGET,
            at_least=True,
            note=f"arrays {ours:.3f} s, one at a time {scalar:.1f} s, held shut {shut:.3f}",
        ),
        Measurement(
            name="three unlike pumps: largest difference in head",
            value=apart,
            unit="m",
            budget=HEAD_BUDGET,
        ),
    ]


def _seconds(of: Problem) -> float:
    """Return the seconds that all cases take as arrays."""
    start = perf_counter()
    solve_parallel(of.legs, system=of.system, speeds=of.speeds)
    return perf_counter() - start
