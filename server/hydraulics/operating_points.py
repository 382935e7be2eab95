"""All operating points of a set on one system, by a scan: humped curves can have several.

Each leg stands on one of its branches (a falling or rising stretch, or held shut). For every
choice of branches the head that the flows ask of the system is scanned against the head itself;
each change of sign is a root, each near miss is looked into.
"""

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from enum import StrEnum
from itertools import combinations_with_replacement, product

import numpy as np
from scipy.optimize import brentq, minimize_scalar

from server.hydraulics.arrays import FloatArray, read_only
from server.hydraulics.branches import Branch, branches
from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.system_curve import SystemCurve

SAMPLES = 129  # heads looked at on each choice of branches
SAME_FLOW = 1e-6  # of the last flows: roots nearer are one, and nearer to zero are none [-]
_ROUNDING = 1e-10  # of the head, in comparing heads at the ends of branches [-]


class Answer(StrEnum):
    """What can be said of a set on a system."""

    ONE = "one"
    SEVERAL = "several"
    """More than one state fits; which one comes depends on how the pumps are started."""
    BELOW_STATIC = "below_static"
    """No pump reaches the head asked at no flow: nothing flows."""
    RUN_OUT = "run_out"
    """The system asks for less head than the last row gives: past the end of a curve."""
    NOT_KNOWN = "not_known"
    """It would lie before a first row that is above zero flow, or nothing runs."""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class OperatingPoint:
    """One state that fits."""

    flow: float  # of the set [m3/s]
    manifold_head: float  # [m]
    leg_flow: FloatArray  # (N,) [m3/s]
    stable: bool  # a small disturbance dies out
    startable: bool  # every pump that flows could be started into this state
    energy_residual: float  # [m]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class OperatingPoints:
    """Every state that fits, largest flow first, and what stands in the way of more.

    `head_missing` is the head asked at no flow less the highest shut-off head, where that is
    the limit: the nearest attainable state is no flow at `highest_head`. `last_row_flow` and
    `last_row_surplus` are the state as the first pump reaches its last row and the head that
    would have to be taken away to hold it there: the nearest attainable state of a run-out.
    """

    answer: Answer
    points: tuple[OperatingPoint, ...]
    static_head: float  # asked at no flow [m]
    highest_head: float  # that the set gives at any flow [m]
    head_missing: float  # zero or more [m]
    last_row_flow: float  # nan where nothing runs [m3/s]
    last_row_surplus: float  # [m]

    @property
    def best(self) -> OperatingPoint | None:
        """The stable point of the largest flow that can be started into, else None."""
        fit = (one for one in self.points if one.stable and one.startable and one.flow > 0)
        return next(fit, None)


def all_operating_points(
    legs: Sequence[LegCurve],
    *,
    system: SystemCurve,
    case: int = 0,
    speeds: Sequence[float] | None = None,
    on: Sequence[bool] | None = None,
) -> OperatingPoints:
    """Return every operating point of legs in parallel on one case of a system.

    Parameters
    ----------
    legs : sequence of LegCurve, length N
        The legs; equal legs at one speed count once in the choices.
    system : SystemCurve
        Head asked for a flow.
    case : int
        Case of the system.
    speeds : sequence of float, length N, optional
        Running over tested speed, 1 without it. [-]
    on : sequence of bool, length N, optional
        Legs that run, all without it.

    Returns
    -------
    OperatingPoints
        The points and the answer in one word, with the binding limit.

    Raises
    ------
    ValueError
        If a speed is not above zero.

    Notes
    -----
    A point is stable where the matrix of dH_i/dq_i on the diagonal less the slope of the system
    everywhere is negative definite: each leg's column of water then returns to rest.
    """
    ratio = [1.0] * len(legs) if speeds is None else [float(s) for s in speeds]
    live = [True] * len(legs) if on is None else [bool(one) for one in on]
    if any(r and not s > 0 for r, s in zip(live, ratio, strict=True)):
        raise ValueError(f"speeds must be above zero; got {min(ratio):g}")
    running = [n for n in range(len(legs)) if live[n]]

    def asked(flow: FloatArray) -> FloatArray:
        return system.head(flow, case=np.full(flow.shape, case, dtype=np.intp))

    static = float(asked(np.zeros(1))[0])
    roots: list[tuple[float, FloatArray, tuple[Branch, ...]]] = []
    for choice in _choices([(legs[n], ratio[n]) for n in running]):
        for head in _heads(choice, asked, static):
            flows = np.array([float(b.flow(np.array([head]))[0]) for b in choice])
            roots.append((head, flows, choice))
    nearest = SAME_FLOW * sum(ratio[n] * legs[n].last_flow for n in running)
    points = _points(roots, running, len(legs), asked, nearest)
    ends = [ratio[n] ** 2 * legs[n].last_head for n in running]
    end_head = max(ends, default=0.0)
    end_flow = sum(
        ratio[n] * float(legs[n].largest_flow(end_head / ratio[n] ** 2)) for n in running
    )
    surplus = end_head - float(asked(np.array([end_flow]))[0])
    shutoffs = [
        ratio[n] ** 2 * (legs[n].peak_head if (h := legs[n].shutoff_head) is None else h)
        for n in running
    ]
    missing = max(0.0, static - max(shutoffs, default=static))
    return OperatingPoints(
        answer=_answer(points, surplus, bool(running)),
        points=points,
        static_head=static,
        highest_head=max((ratio[n] ** 2 * legs[n].peak_head for n in running), default=np.nan),
        head_missing=missing,
        last_row_flow=end_flow if running else np.nan,
        last_row_surplus=surplus if running else np.nan,
    )


def _answer(points: tuple[OperatingPoint, ...], surplus: float, runs: bool) -> Answer:
    """Return the answer in one word."""
    if len(points) > 1:
        return Answer.SEVERAL
    if points:
        return Answer.ONE if points[0].flow > 0 else Answer.BELOW_STATIC
    return Answer.RUN_OUT if runs and surplus > 0 else Answer.NOT_KNOWN


def _choices(running: list[tuple[LegCurve, float]]) -> Iterator[tuple[Branch, ...]]:
    """Return every choice of a branch for each leg, in the order of the legs.

    Equal legs at one speed are taken in one order only: which of them stands where is the same
    state.
    """
    groups: list[list[int]] = []
    for i, (leg, speed) in enumerate(running):
        for group in groups:
            if running[group[0]] == (leg, speed):
                group.append(i)
                break
        else:
            groups.append([i])
    ways = []
    for group in groups:
        leg, speed = running[group[0]]
        of_leg = branches(leg, speed=speed)
        ways.append(list(combinations_with_replacement(of_leg, len(group))))
    for picked in product(*ways):
        choice: dict[int, Branch] = {}
        for group, these in zip(groups, picked, strict=True):
            choice.update(zip(group, these, strict=True))
        yield tuple(choice[i] for i in range(len(running)))


def _heads(
    choice: tuple[Branch, ...], asked: Callable[[FloatArray], FloatArray], static: float
) -> list[float]:
    """Return the heads at which one choice of branches meets the system."""
    if not choice:
        return []
    low, high = max(b.low for b in choice), min(b.high for b in choice)
    if all(b.shut for b in choice):
        return [static] if static >= low * (1.0 - _ROUNDING) else []
    if not low <= high:
        return []

    def off(head: FloatArray) -> FloatArray:
        flows = sum(b.flow(head) for b in choice)
        return np.asarray(head - asked(np.asarray(flows, dtype=np.float64)), dtype=np.float64)

    def off_at(head: float) -> float:
        return float(off(np.array([head]))[0])

    # near the ends of a branch flow runs as a root of head: more samples there
    even = 0.5 - 0.5 * np.cos(np.linspace(0.0, np.pi, SAMPLES))
    heads = low + (high - low) * even
    values = off(heads)
    found = [float(h) for h, v in zip(heads, values, strict=True) if v == 0]
    edge = _ROUNDING * max(1.0, abs(high))
    found += [float(heads[i]) for i in (0, -1) if 0 < abs(values[i]) <= edge]
    for i in range(SAMPLES - 1):
        if values[i] * values[i + 1] < 0:
            found.append(float(brentq(off_at, heads[i], heads[i + 1], xtol=1e-13, rtol=1e-15)))
    for i in range(1, SAMPLES - 1):
        side = np.sign(values[i])
        near, far = abs(values[i]), min(abs(values[i - 1]), abs(values[i + 1]))
        if near < far and side == np.sign(values[i - 1]) == np.sign(values[i + 1]):
            found += _touching(off_at, heads[i - 1], heads[i + 1], float(side))
    return found


def _touching(
    off_at: Callable[[float], float], left: float, right: float, side: float
) -> list[float]:
    """Return two roots that lie between samples of one sign, if there are."""
    nearest = minimize_scalar(
        lambda h: side * off_at(h), bounds=(left, right), method="bounded"
    )
    if not nearest.fun < 0:
        return []
    middle = float(nearest.x)
    return [
        float(brentq(off_at, a, b, xtol=1e-13, rtol=1e-15))
        for a, b in ((left, middle), (middle, right))
    ]


def _points(
    roots: list[tuple[float, FloatArray, tuple[Branch, ...]]],
    running: list[int],
    slots: int,
    asked: Callable[[FloatArray], FloatArray],
    nearest: float,
) -> tuple[OperatingPoint, ...]:
    """Return the roots as points, each once, largest flow first."""
    points: list[OperatingPoint] = []
    for head, found, choice in sorted(roots, key=lambda r: -float(r[1].sum())):
        # beside a level shut-off head rounding in head is a step in flow
        flows = np.where(found <= nearest, 0.0, found)
        leg_flow = np.zeros(slots)
        leg_flow[running] = flows
        if any(np.abs(one.leg_flow - leg_flow).max() <= nearest for one in points):
            continue
        total = float(flows.sum())
        wanted = float(asked(np.array([total]))[0])
        gaps = [
            abs(b.head(float(q)) - wanted)
            for b, q in zip(choice, flows, strict=True)
            if b.leg is not None
        ]
        points.append(
            OperatingPoint(
                flow=total,
                manifold_head=wanted,
                leg_flow=read_only(leg_flow),
                stable=_stable(choice, flows, asked),
                startable=all(head <= b.startable_head * (1.0 + _ROUNDING) for b in choice),
                energy_residual=max(gaps, default=0.0),
            )
        )
    return tuple(points)


def _stable(
    choice: tuple[Branch, ...], flows: FloatArray, asked: Callable[[FloatArray], FloatArray]
) -> bool:
    """Return whether a small disturbance of the flows dies out."""
    moving = [(b, float(q)) for b, q in zip(choice, flows, strict=True) if not b.shut]
    if not moving:
        return True
    total, step = float(flows.sum()), 1e-6
    ahead, here = asked(np.array([total + step, total]))
    matrix = np.diag([b.slope(q) for b, q in moving]) - (ahead - here) / step
    return bool(np.linalg.eigvalsh(matrix).max() < 0)
