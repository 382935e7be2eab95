"""The set: legs in parallel between two manifolds, and its operating point on a system."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import BoolArray, FloatArray, IndexArray, StateArray
from server.hydraulics.balance import residuals
from server.hydraulics.errors import SolutionNotFound
from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.states import State
from server.hydraulics.system_curve import SystemCurve

HEAD_TOLERANCE = 1e-9  # energy residual that counts as solved [m]
FLOW_TOLERANCE = 1e-9  # mass residual that counts as solved [m3/s]
_STEPS = 100
_NEWTON_ONLY = 12  # steps after which every other one is a bisection
_JUMP = 1e-3  # energy residual that is no rounding but a jump of the largest flow [m]
_POLISHES = 6
_POLISH_STEP = 1e-4  # of the flow, for the slope of the system while polishing [-]
_LEAST_FLOW = 1e-12  # that such a step has at least [m3/s]
_ROUNDING = 1e-14  # share of the head below which a step changes nothing


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class LegFlows:
    """What each leg passes at a manifold head; arrays of shape (..., N)."""

    flow: FloatArray  # largest flow; zero when shut or off, at the last row when past it [m3/s]
    state: StateArray  # SOLVED, HELD_SHUT, END_OF_CURVE or NOT_AVAILABLE (off, or no row there)
    cannot_start: BoolArray  # a running pump holds it, a starting one would not


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class ParallelResult:
    """Operating points; arrays of shape (C,) and (C, N).

    Floats are nan where `state` is END_OF_CURVE or NOT_AVAILABLE; the `last_row_` values are
    the state in which the first leg reaches its last row.
    """

    state: StateArray  # (C,)
    flow: FloatArray  # (C,) [m3/s]
    manifold_head: FloatArray  # (C,) [m]
    leg_flow: FloatArray  # (C, N) [m3/s]
    leg_state: StateArray  # (C, N)
    cannot_start: BoolArray  # (C, N)
    unique: BoolArray  # (C,) every leg that is on has one flow for each head
    last_row_flow: FloatArray  # (C,) [m3/s]
    last_row_surplus: FloatArray  # (C,) head of the set there over what the system asks [m]
    static_shortfall: FloatArray  # (C,) head missing at zero flow, zero unless BELOW_STATIC [m]
    energy_residual: FloatArray  # (C,) largest gap of a leg's head to the manifold's [m]
    mass_residual: FloatArray  # (C,) gap of the legs' flows at that head to the flow [m3/s]


def leg_flows(
    manifold_head: ArrayLike,
    *,
    legs: Sequence[LegCurve],
    speeds: ArrayLike = 1.0,
    on: ArrayLike = True,
) -> LegFlows:
    """Return the largest flow of each leg at a manifold head.

    Parameters
    ----------
    manifold_head : array_like, shape (...)
        Head from suction manifold to discharge manifold. [m]
    legs : sequence of LegCurve, length N
        The legs, unlike ones allowed.
    speeds : array_like, shape (..., N) or less
        Running over tested speed, above zero. [-]
    on : array_like of bool, shape (..., N) or less
        Whether the leg runs.

    Returns
    -------
    LegFlows
        Flows and states, shape (..., N); sum the flows over the last axis for the set.
    """
    head = np.asarray(manifold_head, dtype=np.float64)
    shape = (*head.shape, len(legs))
    speed, running = _per_leg(speeds, on, shape)
    flow = np.zeros(shape)
    state = np.full(shape, State.NOT_AVAILABLE, dtype=np.int8)
    stuck = np.zeros(shape, dtype=np.bool_)
    for n, leg in enumerate(legs):
        s = speed[..., n]
        tested = head / (s * s)
        shut, past, before = (
            leg.held_shut(tested),
            leg.past_end(tested),
            leg.before_start(tested),
        )
        found = np.where(
            shut, State.HELD_SHUT, np.where(past, State.END_OF_CURVE, State.SOLVED)
        )
        found = np.where(before, State.NOT_AVAILABLE, found)
        flow[..., n] = np.where(running[..., n], s * leg.largest_flow(tested), 0.0)
        state[..., n] = np.where(running[..., n], found, State.NOT_AVAILABLE)
        stuck[..., n] = running[..., n] & leg.cannot_start(tested)
    return LegFlows(flow=flow, state=state, cannot_start=stuck)


def solve_parallel(
    legs: Sequence[LegCurve],
    *,
    system: SystemCurve,
    speeds: ArrayLike = 1.0,
    on: ArrayLike = True,
) -> ParallelResult:
    """Return where legs in parallel meet a system curve, for all cases at once.

    Parameters
    ----------
    legs : sequence of LegCurve, length N
        The legs, unlike ones allowed.
    system : SystemCurve
        Head asked for a flow, rising or level, for C cases.
    speeds : array_like, shape (C, N) or less
        Running over tested speed, above zero. [-]
    on : array_like of bool, shape (C, N) or less
        Whether the leg runs.

    Returns
    -------
    ParallelResult
        Operating points, with the residuals of energy and mass.

    Raises
    ------
    SolutionNotFound
        If a case with legs that fall throughout does not reach the tolerances.

    Notes
    -----
    The unknown is the manifold head h in h = system(sum of leg flows at h). Its left side rises
    and its right side falls with h, so the root is bracketed by the head asked at zero flow and
    the highest peak, and Newton steps that leave the bracket become bisections. A leg past its
    last row is held at that row's flow while solving: this cannot hide that it is past, since
    the set then gives less flow, hence the system asks for less head still.
    """
    case_count = system.cases
    shape = (case_count, len(legs))
    speed, running = _per_leg(speeds, on, shape)
    every = np.arange(case_count)
    none = np.zeros(case_count)
    static = system.head(none, case=every)
    peaks = np.where(running, speed**2 * [leg.peak_head for leg in legs], -np.inf).max(axis=1)
    reaches = peaks > static
    head = np.array(static)
    head[reaches] = _manifold_head(
        legs, system, speed, running, every[reaches], static[reaches], peaks[reaches]
    )
    flows = leg_flows(head, legs=legs, speeds=speed, on=running)
    flow = np.array(flows.flow)
    _polish(flow, flows.state, legs, system, speed, every)
    total = flow.sum(axis=1)
    manifold = system.head(total, case=every)
    energy, mass = residuals(flow, flows.state, manifold, legs, speed)

    state = _set_state(flows.state, running, reaches)
    unique = ~np.any(running & ~np.array([leg.shares_uniquely for leg in legs]), axis=1)
    missed = (energy > HEAD_TOLERANCE) | (mass > FLOW_TOLERANCE * np.maximum(1.0, total))
    missed &= state != State.END_OF_CURVE
    if np.any(missed & unique):
        raise SolutionNotFound(
            "legs in parallel", int(np.sum(missed & unique)), float(energy[missed].max())
        )
    state[missed] = State.NOT_AVAILABLE
    masked = (state == State.END_OF_CURVE) | (state == State.NOT_AVAILABLE)
    last_flow, last_surplus = _last_row(legs, system, speed, running, every)
    return ParallelResult(
        state=state,
        flow=np.where(masked, np.nan, total),
        manifold_head=np.where(masked, np.nan, manifold),
        leg_flow=np.where(masked[:, None], np.nan, flow),
        leg_state=flows.state,
        cannot_start=flows.cannot_start,
        unique=unique,
        last_row_flow=last_flow,
        last_row_surplus=last_surplus,
        static_shortfall=np.where(reaches | ~running.any(axis=1), 0.0, static - peaks),
        energy_residual=np.where(masked, np.nan, energy),
        mass_residual=np.where(masked, np.nan, mass),
    )


def _per_leg(
    speeds: ArrayLike, on: ArrayLike, shape: tuple[int, ...]
) -> tuple[FloatArray, BoolArray]:
    """Return speeds and running marks for every leg; the speed of a leg that is off is 1."""
    running = np.broadcast_to(np.asarray(on, dtype=np.bool_), shape)
    speed = np.where(running, np.broadcast_to(np.asarray(speeds, dtype=np.float64), shape), 1.0)
    if not np.all(speed > 0):
        raise ValueError(f"speeds must be above zero; got {float(np.nanmin(speed)):g}")
    return speed, running


def _manifold_head(
    legs: Sequence[LegCurve],
    system: SystemCurve,
    speed: FloatArray,
    running: BoolArray,
    case: IndexArray,
    low: FloatArray,
    high: FloatArray,
) -> FloatArray:
    """Return the root in the manifold head, bracketed by `low` and `high`, for some cases."""
    answer = 0.5 * (low + high)
    place = np.arange(case.size)
    head, s, live = answer.copy(), speed[case], running[case]
    for step in range(_STEPS):
        total, per_head = _set_flow(legs, head, s, live)
        off = head - system.head(total, case=case)
        low, high = np.where(off < 0, head, low), np.where(off > 0, head, high)
        newton = head - off / (1.0 - system.slope(total, case=case) * per_head)
        bisect = (newton < low) | (newton > high)
        if step > _NEWTON_ONLY and step % 2:
            bisect = np.ones_like(bisect)
        ahead = np.where(bisect, 0.5 * (low + high), newton)
        done = np.abs(ahead - head) <= _ROUNDING * np.maximum(1.0, np.abs(head))
        head = ahead
        if done.any():
            answer[place[done]] = head[done]
            left = ~done
            if not left.any():
                return answer
            place, case, head = place[left], case[left], head[left]
            low, high, s, live = low[left], high[left], s[left], live[left]
    answer[place] = head
    return answer


def _set_flow(
    legs: Sequence[LegCurve], head: FloatArray, speed: FloatArray, running: BoolArray
) -> tuple[FloatArray, FloatArray]:
    """Return the flow of the set and its derivative with the manifold head."""
    total, per_head = np.zeros(head.shape), np.zeros(head.shape)
    for n, leg in enumerate(legs):
        s, live = speed[:, n], running[:, n]
        flow, gain = leg.invert(head / (s * s))
        total += np.where(live, s * flow, 0.0)
        per_head += np.where(live, gain / s, 0.0)
    return total, per_head


def _polish(
    flow: FloatArray,
    leg_state: StateArray,
    legs: Sequence[LegCurve],
    system: SystemCurve,
    speed: FloatArray,
    every: IndexArray,
) -> None:
    """Mend, in place, cases whose head is found but whose flows are not: near shut-off.

    There a leg's curve is level, so that rounding in the head is a large step in flow. One or
    two Newton steps in the leg flows themselves, all legs and the system together, settle it.
    """
    for _ in range(_POLISHES):
        head = system.head(flow.sum(axis=1), case=every)
        energy, mass = residuals(flow, leg_state, head, legs, speed)
        rough = (energy > 1e-3 * HEAD_TOLERANCE) | (mass > 0.1 * FLOW_TOLERANCE)
        rough &= energy < _JUMP
        rough &= ~np.any(leg_state == State.END_OF_CURVE, axis=1)
        if not rough.any():
            return
        case = every[rough]
        q, s, moving = flow[rough], speed[rough], leg_state[rough] == State.SOLVED
        miss, slope = np.zeros_like(q), np.full_like(q, -np.inf)
        for n, leg in enumerate(legs):
            x = np.clip(q[:, n] / s[:, n], leg.first_flow, leg.last_flow)
            miss[:, n] = np.where(moving[:, n], head[rough] - s[:, n] ** 2 * leg.head(x), 0.0)
            steep = np.minimum(s[:, n] * leg.curve.slope(x), -1e-9)
            slope[:, n] = np.where(moving[:, n], steep, -np.inf)
        # read off the system itself: a tabled slope may be far off at so small a flow
        total = q.sum(axis=1)
        step = np.maximum(_POLISH_STEP * total, _LEAST_FLOW)
        system_slope = (system.head(total + step, case=case) - head[rough]) / step
        change = (miss / slope).sum(axis=1) / (1.0 - system_slope * (1.0 / slope).sum(axis=1))
        moved = q + (miss + (system_slope * change)[:, None]) / slope
        flow[rough] = np.where(moving, np.maximum(moved, 0.0), q)


def _set_state(leg_state: StateArray, running: BoolArray, reaches: BoolArray) -> StateArray:
    """Return the state of the set from those of its legs."""
    state = np.full(reaches.shape, State.SOLVED, dtype=np.int8)
    state[np.any(leg_state == State.HELD_SHUT, axis=1)] = State.HELD_SHUT
    state[~reaches] = State.BELOW_STATIC
    state[np.any(leg_state == State.END_OF_CURVE, axis=1)] = State.END_OF_CURVE
    unknown = np.any(running & (leg_state == State.NOT_AVAILABLE), axis=1)
    state[unknown | ~running.any(axis=1)] = State.NOT_AVAILABLE
    return state


def _last_row(
    legs: Sequence[LegCurve],
    system: SystemCurve,
    speed: FloatArray,
    running: BoolArray,
    every: IndexArray,
) -> tuple[FloatArray, FloatArray]:
    """Return the set's flow when its first leg reaches its last row, and the head to spare."""
    ends = np.where(running, speed**2 * [leg.last_head for leg in legs], -np.inf).max(axis=1)
    some = running.any(axis=1)
    head = np.where(some, ends, 0.0)
    total, _ = _set_flow(legs, head, speed, running)
    surplus = head - system.head(total, case=every)
    return np.where(some, total, np.nan), np.where(some, surplus, np.nan)
