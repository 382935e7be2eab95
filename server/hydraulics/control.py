"""A common speed that holds a head while the demand is imposed: a closed zone.

All legs of a combination run at one speed ratio s. With u = head / s^2 and x = q / s each leg
reads x = Y(u) whatever the speed, so the set holds a head h at a demand Q where

    sum of Y(u) = Q sqrt(u / h)        (then s = sqrt(h / u))

and at a speed limit, where the head follows from the demand instead, where sum of Y(u) = Q / s.
Both left sides fall with u and both right sides do not: one bracketed root for each case and
combination.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import BoolArray, FloatArray, StateArray, finite, not_negative
from server.hydraulics.errors import SolutionNotFound
from server.hydraulics.held_root import Sharing, held_root
from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.parallel import FLOW_TOLERANCE, HEAD_TOLERANCE
from server.hydraulics.states import State

PER_CENT = 0.01


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class HoldResult:
    """Common speed and what follows from it; C cases, K combinations, N slots.

    Floats of END_OF_CURVE and NOT_AVAILABLE are nan (`last_row_` values are not). `state` is
    the gravest of: NOT_AVAILABLE, END_OF_CURVE, HELD_SHUT, TOP_SPEED or LOW_SPEED, SOLVED; the
    speed limit alone stands in `speed_limit`, since a set may be at a limit with a leg held
    shut.
    """

    state: StateArray  # (C, K)
    speed_limit: StateArray  # (C, K) SOLVED, TOP_SPEED or LOW_SPEED
    speed: FloatArray  # (C, K) ratio [-]
    head: FloatArray  # (C, K) between the manifolds at the demand; the head asked when held [m]
    leg_flow: FloatArray  # (C, K, N) zero where held shut or not in the combination [m3/s]
    held_shut: BoolArray  # (C, K, N) in the combination and passing nothing
    cannot_start: BoolArray  # (C, K, N) held only because it already runs
    rising_branch: BoolArray  # (C, K) equal pumps left of the peak of a humped curve
    head_per_per_cent: FloatArray  # (C, K) change of head at the demand for 1 % of speed [m]
    last_row_speed: FloatArray  # (C, K) where a leg reaches its last row, within the limits [-]
    last_row_head: FloatArray  # (C, K) head there [m]
    last_row_flow: FloatArray  # (C, K) flow of the set there [m3/s]
    last_row_excess: FloatArray  # (C, K) demand less that flow: above zero, past the end [m3/s]
    energy_residual: FloatArray  # (C, K) [m]
    mass_residual: FloatArray  # (C, K) [m3/s]


def hold_head(
    flow: ArrayLike,
    *,
    head: ArrayLike,
    legs: Sequence[LegCurve],
    combinations: ArrayLike,
    lowest_speed: ArrayLike,
    highest_speed: ArrayLike,
) -> HoldResult:
    """Return the common speed at which each combination holds a head at an imposed demand.

    Parameters
    ----------
    flow : array_like, shape (C,) or (C, K)
        Demand, zero or more. [m3/s]
    head : array_like, shape (C,) or (C, K)
        Head asked from suction manifold to discharge manifold at that demand. [m]
    legs : sequence of LegCurve, length N
        Slots; equal slots are quickest when they share one LegCurve.
    combinations : array_like of bool, shape (K, N)
        Slots that run.
    lowest_speed, highest_speed : array_like, () or (C,) or (C, K)
        Limits of the speed ratio, above zero. [-]

    Returns
    -------
    HoldResult
        Speeds, heads and leg flows with their states and residuals.

    Raises
    ------
    ValueError
        If a demand is below zero, a speed limit is not above zero or they are crossed.
    SolutionNotFound
        If a combination whose legs share uniquely does not reach the tolerances.

    Notes
    -----
    Pumps of one kind share the demand equally, so they are solved left of a hump too, and
    marked `rising_branch`. Unlike pumps with a hump can have no unique share: NOT_AVAILABLE.

    Examples
    --------
    >>> from server.hydraulics.pump_curve import pump_curve
    >>> from server.hydraulics.leg_curve import leg_curve
    >>> pump = pump_curve([0, 0.01, 0.02], head=[60, 54, 40], tested_speed=2900)
    >>> held = hold_head([0.018], head=[43.74], legs=[leg_curve(pump, loss=0.0)] * 2,
    ...                  combinations=[[True, True]], lowest_speed=0.5, highest_speed=1.0)
    >>> held.speed.round(4).tolist(), held.leg_flow.round(4).tolist()
    ([[0.9]], [[[0.009, 0.009]]])
    """
    mask = np.atleast_2d(np.asarray(combinations, dtype=np.bool_))
    kinds, kind_of = _kinds(legs)
    shape = (_cases(flow, head), mask.shape[0])
    q = not_negative("flow", _spread(flow, shape), "m3/s").ravel()
    asked = finite("head", _spread(head, shape), "m").ravel()
    low, high = _spread(lowest_speed, shape).ravel(), _spread(highest_speed, shape).ravel()
    if not np.all((low > 0) & (high >= low)):
        raise ValueError("lowest_speed must be above zero and not above highest_speed")
    counts = np.stack([(mask & (kind_of == k)).sum(axis=1) for k in range(len(kinds))], axis=1)
    sharing = Sharing(kinds=kinds, count=np.tile(counts, (shape[0], 1)).astype(np.float64))
    some = sharing.count.sum(axis=1) > 0

    limit, root = held_root(sharing, q, asked, low, high)
    speed = np.where(limit == State.TOP_SPEED, high, low)
    held = limit == State.SOLVED
    speed[held] = np.sqrt(asked[held] / root.u[held])
    reached = np.where(held, asked, speed**2 * root.u)
    kind_flow = speed[:, None] * root.x
    energy, mass = _residuals(sharing, q, reached, speed, kind_flow)

    shut = (sharing.count > 0) & (kind_flow == 0) & ~sharing.open_at(root.u)
    state = np.where(shut.any(axis=1), np.int8(State.HELD_SHUT), limit).astype(np.int8)
    state[root.past_end] = State.END_OF_CURVE
    unknown = root.unknown | ~some
    wrong = ~root.past_end & ~unknown & ((energy > HEAD_TOLERANCE) | (mass > _enough(q)))
    if np.any(wrong & sharing.shares_uniquely):
        raise SolutionNotFound("common speed", int(wrong.sum()), float(energy[wrong].max()))
    state[unknown | wrong] = State.NOT_AVAILABLE
    masked = (state == State.END_OF_CURVE) | (state == State.NOT_AVAILABLE)

    end_speed, end_head, end_flow = _last_row(sharing, asked, low, high)
    gain = PER_CENT * (2.0 * reached - speed * q * sharing.head_slope(root.x))

    def cases(values: FloatArray) -> FloatArray:
        return np.where(masked, np.nan, values).reshape(shape)

    def slots(values: BoolArray) -> BoolArray:
        return values[:, kind_of].reshape(*shape, kind_of.size) & mask

    stuck = np.stack([k.cannot_start(root.u) for k in kinds], axis=1) & (kind_flow > 0)
    leg_flow = np.where(mask, kind_flow[:, kind_of].reshape(*shape, kind_of.size), 0.0)
    return HoldResult(
        state=state.reshape(shape),
        speed_limit=limit.reshape(shape),
        speed=cases(speed),
        head=cases(reached),
        leg_flow=np.where(masked.reshape(shape)[..., None], np.nan, leg_flow),
        held_shut=slots(shut & ~masked[:, None]),
        cannot_start=slots(stuck & ~masked[:, None]),
        rising_branch=(root.rising & ~masked).reshape(shape),
        head_per_per_cent=cases(gain),
        last_row_speed=end_speed.reshape(shape),
        last_row_head=end_head.reshape(shape),
        last_row_flow=end_flow.reshape(shape),
        last_row_excess=(q - end_flow).reshape(shape),
        energy_residual=cases(energy),
        mass_residual=cases(mass),
    )


def opening_speed(head: ArrayLike, *, leg: LegCurve) -> FloatArray:
    """Return the speed at which a leg opens its check valve against a head.

    Parameters
    ----------
    head : array_like, shape (...)
        Head between the manifolds. [m]
    leg : LegCurve
        The leg.

    Returns
    -------
    ndarray, shape (...)
        sqrt(head / shut-off head); zero where the head is not above zero; nan where the
        shut-off head is not given. With the head asked at zero flow it is the zero-flow speed.
        [-]

    References
    ----------
    .. [1] Affinity law at zero flow: h = s^2 H(0).
    """
    wanted = np.maximum(np.asarray(head, dtype=np.float64), 0.0)
    if leg.shutoff_head is None:
        return np.full(wanted.shape, np.nan)
    return np.asarray(np.sqrt(wanted / leg.shutoff_head), dtype=np.float64)


def _cases(flow: ArrayLike, head: ArrayLike) -> int:
    """Return the number of cases that flow and head speak of."""
    sizes = {np.atleast_1d(np.asarray(a)).shape[0] for a in (flow, head)} - {1}
    if len(sizes) > 1:
        raise ValueError(f"flow and head must have the same cases; got {sorted(sizes)}")
    return sizes.pop() if sizes else 1


def _spread(value: ArrayLike, shape: tuple[int, int]) -> FloatArray:
    """Return a value for each case and combination from (), (C,) or (C, K)."""
    array = np.asarray(value, dtype=np.float64)
    if array.ndim == 1:
        array = array[:, None]
    return np.array(np.broadcast_to(array, shape))


def _kinds(legs: Sequence[LegCurve]) -> tuple[tuple[LegCurve, ...], np.ndarray]:
    """Return the distinct legs and, for each slot, which of them it is."""
    kinds: list[LegCurve] = []
    for leg in legs:
        if not any(leg is kind for kind in kinds):
            kinds.append(leg)
    index = [next(i for i, kind in enumerate(kinds) if kind is leg) for leg in legs]
    return tuple(kinds), np.array(index, dtype=np.intp)


def _enough(flow: FloatArray) -> FloatArray:
    """Return the mass residual allowed at a demand [m3/s]."""
    return np.maximum(FLOW_TOLERANCE * np.minimum(1.0, flow), 1e-15)


def _residuals(
    sharing: Sharing,
    flow: FloatArray,
    head: FloatArray,
    speed: FloatArray,
    kind_flow: FloatArray,
) -> tuple[FloatArray, FloatArray]:
    """Return the gaps in head over the legs that flow, and in flow at the manifold."""
    energy = np.zeros(flow.shape)
    for k, leg in enumerate(sharing.kinds):
        x = np.clip(kind_flow[:, k] / speed, leg.first_flow, leg.last_flow)
        gap = np.abs(speed**2 * leg.head(x) - head)
        flows = (sharing.count[:, k] > 0) & (kind_flow[:, k] > 0)
        energy = np.maximum(energy, np.where(flows, gap, 0.0))
    return energy, np.abs((sharing.count * kind_flow).sum(axis=1) - flow)


def _last_row(
    sharing: Sharing, head: FloatArray, low: FloatArray, high: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return speed, head and flow where the first leg reaches its last row."""
    end = sharing.end_head
    ratio = np.where(end > 0, np.maximum(head, 0.0) / np.where(end > 0, end, 1.0), np.inf)
    speed = np.clip(np.sqrt(ratio), low, high)
    total = (sharing.count * sharing.flows(end)[0]).sum(axis=1)
    some = sharing.count.sum(axis=1) > 0
    return (
        np.where(some, speed, np.nan),
        np.where(some, speed**2 * end, np.nan),
        np.where(some, speed * total, np.nan),
    )
