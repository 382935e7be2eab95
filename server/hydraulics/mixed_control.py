"""Fixed-speed pumps beside variable ones while a head is held at an imposed demand."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import BoolArray, FloatArray, StateArray, finite, not_negative
from server.hydraulics.combinations import spread
from server.hydraulics.control import hold_head
from server.hydraulics.imposed_flow import impose_flow
from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.parallel import leg_flows
from server.hydraulics.states import State


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class MixedHold:
    """States with a held head; C cases, K combinations, N slots.

    Floats are nan where `state` is END_OF_CURVE or NOT_AVAILABLE. `state` is SOLVED or
    HELD_SHUT (a leg passes nothing) with the head held where `held`, else TOP_SPEED (less head
    than asked) or LOW_SPEED (more); a combination without variable pumps is never held.
    """

    state: StateArray  # (C, K)
    held: BoolArray  # (C, K) the head is the one asked
    fixed_exceeds: BoolArray  # (C, K) the fixed pumps alone pass the demand at that head
    speed: FloatArray  # (C, K, N) nan where the slot does not run [-]
    head: FloatArray  # (C, K) between the manifolds [m]
    leg_flow: FloatArray  # (C, K, N) [m3/s]
    held_shut: BoolArray  # (C, K, N) in the combination and passing nothing
    cannot_start: BoolArray  # (C, K, N)
    energy_residual: FloatArray  # (C, K) [m]
    mass_residual: FloatArray  # (C, K) [m3/s]


def hold_head_mixed(
    flow: ArrayLike,
    *,
    head: ArrayLike,
    legs: Sequence[LegCurve],
    combinations: ArrayLike,
    variable: ArrayLike,
    fixed_speeds: ArrayLike,
    lowest_speed: float,
    highest_speed: float,
) -> MixedHold:
    """Return what each combination of fixed and variable pumps does at an imposed demand.

    Parameters
    ----------
    flow, head : array_like, shape (C,)
        Demand, zero or more [m3/s]; head asked at that demand [m].
    legs : sequence of LegCurve, length N
        Slots.
    combinations : array_like of bool, shape (K, N)
        Slots that run.
    variable : array_like of bool, shape (N,)
        Slots with a drive; they share one speed.
    fixed_speeds : array_like, shape () or (N,)
        Speed ratio of the slots without one, above zero. [-]
    lowest_speed, highest_speed : float
        Limits of the drives. [-]

    Returns
    -------
    MixedHold
        States; at a speed limit the head is what all of them give at the demand.

    Raises
    ------
    ValueError
        If a demand is below zero or a speed is not above zero.

    Notes
    -----
    A fixed pump delivers at the held head and the variable ones take the rest. Where the fixed
    ones pass more than the demand there (`fixed_exceeds`) the drives fall to their lowest speed
    and the head rises until the flows fit.
    """
    mask = np.atleast_2d(np.asarray(combinations, dtype=np.bool_))
    drive = np.asarray(variable, dtype=np.bool_)
    q = np.atleast_1d(not_negative("flow", flow, "m3/s"))
    asked = np.broadcast_to(np.atleast_1d(finite("head", head, "m")), q.shape)
    shape = (q.size, *mask.shape)
    moved, still = mask & drive, mask & ~drive
    own = np.broadcast_to(np.asarray(fixed_speeds, dtype=np.float64), drive.shape)

    def all_at(speed: float) -> FloatArray:
        return spread(np.where(drive, speed, own), shape)

    at_held = leg_flows(
        np.broadcast_to(asked[:, None], shape[:2]), legs=legs, speeds=own, on=still
    )
    by_fixed = at_held.flow.sum(axis=2)
    rest = q[:, None] - by_fixed
    some_variable, some_fixed = moved.any(axis=1), still.any(axis=1)
    exceeds = some_fixed & (by_fixed > q[:, None])
    fixed_past = np.any(at_held.state == State.END_OF_CURVE, axis=2)
    hold = hold_head(
        np.maximum(rest, 0.0),
        head=np.broadcast_to(asked[:, None], shape[:2]),
        legs=legs,
        combinations=moved,
        lowest_speed=lowest_speed,
        highest_speed=highest_speed,
    )
    inside = np.isin(hold.state, (State.SOLVED, State.HELD_SHUT))
    held = inside & (hold.speed_limit == State.SOLVED) & ~exceeds & ~fixed_past & some_variable

    low = impose_flow(q, legs=legs, combinations=mask, speeds=all_at(lowest_speed))
    top = impose_flow(q, legs=legs, combinations=mask, speeds=all_at(highest_speed))
    # the drives stand where the head then lies on that side of the head asked
    at_low = ~held & (low.head >= asked[:, None])
    at_top = ~held & ~at_low & (top.head <= asked[:, None])
    limited = at_low | at_top
    state = np.where(at_low, State.LOW_SPEED, np.where(at_top, State.TOP_SPEED, hold.state))
    lost = ~held & ~limited
    state[lost] = np.where(
        (top.state == State.END_OF_CURVE) | (hold.state == State.END_OF_CURVE) | fixed_past,
        State.END_OF_CURVE,
        State.NOT_AVAILABLE,
    )[lost]
    state[:, ~mask.any(axis=1)] = State.NOT_AVAILABLE

    def picked(of_hold: FloatArray, of_low: FloatArray, of_top: FloatArray) -> FloatArray:
        extra = (...,) + (None,) * (of_low.ndim - 2)
        limit = np.where(at_low[extra], of_low, of_top)
        chosen = np.where(held[extra], of_hold, np.where(limited[extra], limit, np.nan))
        return np.asarray(chosen, dtype=np.float64)

    fixed_flow = np.where(still, at_held.flow, 0.0)
    leg_flow = picked(np.where(moved, hold.leg_flow, fixed_flow), low.leg_flow, top.leg_flow)
    speed = picked(
        np.where(drive, hold.speed[..., None], own), all_at(lowest_speed), all_at(highest_speed)
    )
    shut = mask & (leg_flow == 0) & (q[:, None, None] > 0)
    fixed_stuck = still & at_held.cannot_start
    stuck = np.where(
        held[..., None],
        hold.cannot_start | fixed_stuck,
        np.where(at_low[..., None], low.cannot_start, top.cannot_start),
    )
    mass = np.abs(leg_flow.sum(axis=2) - q[:, None])
    shut_state = (state == State.SOLVED) & shut.any(axis=2)
    return MixedHold(
        state=np.where(shut_state, State.HELD_SHUT, state).astype(np.int8),
        held=held,
        fixed_exceeds=exceeds,
        speed=np.where(mask, speed, np.nan),
        head=picked(
            np.broadcast_to(asked[:, None], shape[:2]).astype(np.float64), low.head, top.head
        ),
        leg_flow=leg_flow,
        held_shut=shut,
        cannot_start=np.asarray(stuck & (leg_flow > 0), dtype=np.bool_),
        energy_residual=picked(hold.energy_residual, low.energy_residual, top.energy_residual),
        mass_residual=mass,
    )
