"""Pumps at given speeds while the demand is imposed: the head follows, as in a closed zone."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import BoolArray, FloatArray, StateArray, not_negative
from server.hydraulics.balance import energy_residual
from server.hydraulics.combinations import spread
from server.hydraulics.errors import SolutionNotFound
from server.hydraulics.falling_root import falling_root
from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.parallel import FLOW_TOLERANCE, HEAD_TOLERANCE, leg_flows
from server.hydraulics.states import State

_POLISHES = 3


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class ImposedFlow:
    """Heads at an imposed flow; C cases, K combinations, N slots.

    Floats are nan where `state` is END_OF_CURVE (the demand is past what the legs give before
    the first of them ends; see `last_row_flow`) or NOT_AVAILABLE.
    """

    state: StateArray  # (C, K)
    head: FloatArray  # (C, K) between the manifolds [m]
    leg_flow: FloatArray  # (C, K, N) [m3/s]
    leg_state: StateArray  # (C, K, N)
    cannot_start: BoolArray  # (C, K, N) held only because it already runs
    rising_branch: BoolArray  # (C, K) equal pumps left of the peak of a humped curve
    last_row_flow: FloatArray  # (C, K) flow of the set as its first leg reaches its end [m3/s]
    last_row_excess: FloatArray  # (C, K) demand less that flow [m3/s]
    energy_residual: FloatArray  # (C, K) [m]
    mass_residual: FloatArray  # (C, K) [m3/s]


def impose_flow(
    flow: ArrayLike,
    *,
    legs: Sequence[LegCurve],
    combinations: ArrayLike,
    speeds: ArrayLike = 1.0,
) -> ImposedFlow:
    """Return the head that each combination gives at the flow imposed on it.

    Parameters
    ----------
    flow : array_like, shape (C,) or (C, K)
        Demand, zero or more. [m3/s]
    legs : sequence of LegCurve, length N
        Slots, unlike ones allowed.
    combinations : array_like of bool, shape (K, N)
        Slots that run.
    speeds : array_like, shape () or (N,) or (K, N) or (C, K, N)
        Running over tested speed, above zero. [-]

    Returns
    -------
    ImposedFlow
        Heads and leg flows with their states and residuals.

    Raises
    ------
    ValueError
        If a demand is below zero or a speed is not above zero.
    SolutionNotFound
        If a combination whose legs share uniquely does not reach the tolerances.

    Notes
    -----
    The sum of the largest flows falls with the head: one bracketed root. Equal legs at one
    speed share equally instead and need no root, so they are known left of a hump too, and
    marked. Unlike legs with a hump can have no unique share: NOT_AVAILABLE.

    Examples
    --------
    >>> from server.hydraulics.pump_curve import pump_curve
    >>> from server.hydraulics.leg_curve import leg_curve
    >>> leg = leg_curve(pump_curve([0, 0.01, 0.02], head=[60, 54, 40], tested_speed=2900),
    ...                 loss=0.0)
    >>> found = impose_flow([0.0, 0.02], legs=[leg] * 2, combinations=[[1, 1], [1, 0]])
    >>> found.head.tolist()
    [[60.0, 60.0], [54.0, 40.0]]
    """
    mask = np.atleast_2d(np.asarray(combinations, dtype=np.bool_))
    demand = not_negative("flow", flow, "m3/s")
    demand = np.atleast_1d(demand) if demand.ndim < 2 else demand
    shape = (demand.shape[0], *mask.shape)
    if demand.ndim == 1:
        demand = np.broadcast_to(demand[:, None], shape[:2])
    on = np.broadcast_to(mask, shape).reshape(-1, shape[2])
    speed = np.where(on, spread(speeds, shape).reshape(-1, shape[2]), 1.0)
    if not np.all(speed > 0):
        raise ValueError(f"speeds must be above zero; got {float(speed.min()):g}")
    rows = _Rows(legs=tuple(legs), flow=np.array(demand).ravel(), speed=speed, on=on)

    def shaped(values: FloatArray) -> FloatArray:
        return values.reshape(shape[:2])

    head, q, equal, rising = rows.solved()
    found = leg_flows(head, legs=legs, speeds=speed, on=on)
    leg_state = np.array(found.state)
    leg_state[equal[:, None] & on] = State.SOLVED
    quiet = (rows.flow == 0)[:, None] & on & (leg_state == State.SOLVED)
    leg_state[quiet & ~(equal[:, None] | rows.opens_at(head))] = State.HELD_SHUT
    rows.polish(q, head, leg_state)
    energy = energy_residual(q, leg_state, head, legs, speed)
    mass = np.abs(q.sum(axis=1) - rows.flow)
    end = rows.last_flow()
    state = rows.states(leg_state, end)
    missed = (energy > HEAD_TOLERANCE) | (mass > FLOW_TOLERANCE * np.maximum(1.0, rows.flow))
    missed &= (state == State.SOLVED) | (state == State.HELD_SHUT)
    if np.any(missed & rows.unique()):
        raise SolutionNotFound("imposed flow", int(missed.sum()), float(energy[missed].max()))
    state[missed] = State.NOT_AVAILABLE
    masked = (state == State.END_OF_CURVE) | (state == State.NOT_AVAILABLE)
    # equal legs left of the peak stand above their shut-off head: they run only if they did
    stuck = found.cannot_start & on & (q > 0)
    return ImposedFlow(
        state=state.reshape(shape[:2]),
        head=shaped(np.where(masked, np.nan, head)),
        leg_flow=np.where(masked[:, None], np.nan, q).reshape(shape),
        leg_state=leg_state.reshape(shape),
        cannot_start=(stuck & ~masked[:, None]).reshape(shape),
        rising_branch=(rising & ~masked).reshape(shape[:2]),
        last_row_flow=shaped(end),
        last_row_excess=shaped(rows.flow - end),
        energy_residual=shaped(np.where(masked, np.nan, energy)),
        mass_residual=shaped(np.where(masked, np.nan, mass)),
    )


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class _Rows:
    """Cases and combinations in one row of M."""

    legs: tuple[LegCurve, ...]
    flow: FloatArray  # (M,)
    speed: FloatArray  # (M, N)
    on: BoolArray  # (M, N)

    def _most(self, heads: list[float]) -> FloatArray:
        """Return the largest of some heads at the running speeds, zero where nothing runs."""
        of_running = np.where(self.on, self.speed**2 * np.array(heads), -np.inf)
        top = of_running.max(axis=1, initial=-np.inf)
        return np.where(np.isfinite(top), top, 0.0)

    def total(self, head: FloatArray) -> FloatArray:
        """Return what the set passes at a head."""
        found = leg_flows(head, legs=self.legs, speeds=self.speed, on=self.on)
        return np.asarray(found.flow.sum(axis=1), dtype=np.float64)

    def opens_at(self, head: FloatArray) -> BoolArray:
        """Return where a leg stands at its own shut-off head, shape (M, N)."""
        given = np.array(
            [np.inf if g.shutoff_head is None else g.shutoff_head for g in self.legs]
        )
        reach = self.speed**2 * given * (1.0 + 1e-14)
        return np.asarray(reach >= head[:, None], dtype=np.bool_)

    def last_flow(self) -> FloatArray:
        """Return the flow of the set as its first leg reaches its last row, nan with none."""
        flow = self.total(self._most([leg.last_head for leg in self.legs]))
        return np.where(self.on.any(axis=1), flow, np.nan)

    def unique(self) -> BoolArray:
        """Return where every leg that runs has one flow for each head."""
        falls = np.array([leg.shares_uniquely for leg in self.legs], dtype=np.bool_)
        return np.asarray(~np.any(self.on & ~falls, axis=1), dtype=np.bool_)

    def solved(self) -> tuple[FloatArray, FloatArray, BoolArray, BoolArray]:
        """Return heads, leg flows, where equal legs share equally, and left of their peak."""
        low = self._most([leg.last_head for leg in self.legs])
        high = self._most([leg.peak_head for leg in self.legs])
        root = falling_root(lambda head: self.total(head) - self.flow, low, high)
        # more than the peak gives: shut; less than the last row takes: told by the state
        head = np.where(root.at_low < 0, low, np.where(root.at_high > 0, high, root.root))
        q = np.array(leg_flows(head, legs=self.legs, speeds=self.speed, on=self.on).flow)
        equal = np.zeros(self.flow.shape, dtype=np.bool_)
        rising = np.zeros(self.flow.shape, dtype=np.bool_)
        for n, leg in enumerate(self.legs):
            same = np.array([other is leg for other in self.legs])
            s = self.speed[:, n]
            rows = self.on[:, n] & ~np.any(self.on & ~same, axis=1)
            rows &= ~np.any(self.on & (self.speed != s[:, None]), axis=1)
            each = self.flow / np.maximum(self.on.sum(axis=1), 1)
            x = each / s
            rows &= (x >= leg.first_flow) & (x <= leg.last_flow) & ~equal
            head[rows] = s[rows] ** 2 * leg.head(x[rows])
            q[rows] = np.where(self.on[rows], each[rows, None], 0.0)
            equal |= rows
            rising |= rows & (x < leg.peak_flow)
        still = self._still() & ~equal
        head[still] = self._most([leg.shutoff_head or 0.0 for leg in self.legs])[still]
        q[still] = 0.0
        return head, q, equal, rising

    def _still(self) -> BoolArray:
        """Return where nothing is asked and every shut-off head is known."""
        known = np.array([leg.shutoff_head is not None for leg in self.legs], dtype=np.bool_)
        quiet = (self.flow == 0) & ~np.any(self.on & ~known, axis=1)
        return np.asarray(quiet & self.on.any(axis=1), dtype=np.bool_)

    def polish(self, q: FloatArray, head: FloatArray, leg_state: StateArray) -> None:
        """Settle flows and head in place: Newton steps in all flows and the head together."""
        for _ in range(_POLISHES):
            gap = self.flow - q.sum(axis=1)
            energy = energy_residual(q, leg_state, head, self.legs, self.speed)
            rough = (np.abs(gap) > 1e-3 * FLOW_TOLERANCE * np.minimum(1.0, self.flow)) | (
                energy > 1e-3 * HEAD_TOLERANCE
            )
            rough &= (np.abs(gap) < 1e-3) & ~np.any(leg_state == State.END_OF_CURVE, axis=1)
            if not rough.any():
                return
            at, s, moving = q[rough], self.speed[rough], leg_state[rough] == State.SOLVED
            miss, inverse = np.zeros_like(at), np.zeros_like(at)
            for n, leg in enumerate(self.legs):
                x = np.clip(at[:, n] / s[:, n], leg.first_flow, leg.last_flow)
                value, slope = leg.curve.value_and_slope(x)
                live = moving[:, n]
                miss[:, n] = np.where(live, head[rough] - s[:, n] ** 2 * value, 0.0)
                inverse[:, n] = np.where(live, 1.0 / np.minimum(s[:, n] * slope, -1e-9), 0.0)
            steep = inverse.sum(axis=1)
            change = np.where(
                steep < 0,
                (gap[rough] - (miss * inverse).sum(axis=1)) / np.minimum(steep, -1e-30),
                0.0,
            )
            q[rough] = np.where(
                moving, np.maximum(at + (miss + change[:, None]) * inverse, 0.0), at
            )
            head[rough] += change

    def states(self, leg_state: StateArray, end: FloatArray) -> StateArray:
        """Return the state of each row."""
        state = np.full(self.flow.shape, State.SOLVED, dtype=np.int8)
        state[np.any(leg_state == State.HELD_SHUT, axis=1)] = State.HELD_SHUT
        ended = np.any(leg_state == State.END_OF_CURVE, axis=1) | (
            self.flow > end * (1.0 + 1e-12)
        )
        state[ended] = State.END_OF_CURVE
        unknown = np.any(self.on & (leg_state == State.NOT_AVAILABLE), axis=1)
        state[unknown | ~self.on.any(axis=1)] = State.NOT_AVAILABLE
        return state
