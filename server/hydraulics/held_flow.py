"""A flow that is held against a system: the common speed that passes it."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import BoolArray, FloatArray, StateArray, not_negative
from server.hydraulics.combinations import solve_combinations, spread
from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.mixed_control import hold_head_mixed
from server.hydraulics.states import State
from server.hydraulics.system_curve import SystemCurve

_HELD = (State.SOLVED, State.HELD_SHUT)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class HeldFlow:
    """States with a held flow; C cases, K combinations, N slots.

    Floats are nan where `state` is END_OF_CURVE or NOT_AVAILABLE. TOP_SPEED: less than the flow
    asked passes at the highest speed (BELOW_STATIC: nothing does); LOW_SPEED: more passes at
    the lowest.
    """

    state: StateArray  # (C, K)
    held: BoolArray  # (C, K) the flow is the one asked
    fixed_exceeds: BoolArray  # (C, K) the pumps without a drive pass more alone
    speed: FloatArray  # (C, K, N) nan where the slot does not run [-]
    flow: FloatArray  # (C, K) of the set [m3/s]
    head: FloatArray  # (C, K) between the manifolds [m]
    leg_flow: FloatArray  # (C, K, N) [m3/s]
    held_shut: BoolArray  # (C, K, N)
    cannot_start: BoolArray  # (C, K, N)
    energy_residual: FloatArray  # (C, K) [m]
    mass_residual: FloatArray  # (C, K) [m3/s]


def hold_flow(
    flow: ArrayLike,
    *,
    system: SystemCurve,
    legs: Sequence[LegCurve],
    combinations: ArrayLike,
    lowest_speed: float,
    highest_speed: float,
    variable: ArrayLike = True,
    fixed_speeds: ArrayLike = 1.0,
) -> HeldFlow:
    """Return the common speed at which each combination passes a flow against a system.

    Parameters
    ----------
    flow : array_like, shape (C,) or ()
        Flow to hold, zero or more. [m3/s]
    system : SystemCurve
        Head asked for a flow, for C cases.
    legs : sequence of LegCurve, length N
        Slots.
    combinations : array_like of bool, shape (K, N)
        Slots that run.
    lowest_speed, highest_speed : float
        Limits of the drives. [-]
    variable : array_like of bool, shape () or (N,)
        Slots with a drive.
    fixed_speeds : array_like, shape () or (N,)
        Speed ratio of the others. [-]

    Returns
    -------
    HeldFlow
        Speeds and flows; where a speed limit stops the drives, the operating point there.

    Raises
    ------
    ValueError
        If a flow is below zero or a speed is not above zero.

    Notes
    -----
    A held flow fixes the head that the system asks, so the speed is that of a held head; only
    at a speed limit does the flow follow from pumps and system.
    """
    wanted = np.array(np.broadcast_to(not_negative("flow", flow, "m3/s"), (system.cases,)))
    every = np.arange(system.cases)
    mask = np.atleast_2d(np.asarray(combinations, dtype=np.bool_))
    shape = (system.cases, *mask.shape)
    drive = np.broadcast_to(np.asarray(variable, dtype=np.bool_), (len(legs),))
    asked = system.head(wanted, case=every)
    hold = hold_head_mixed(
        wanted, head=asked, legs=legs, combinations=mask, variable=drive,
        fixed_speeds=fixed_speeds, lowest_speed=lowest_speed, highest_speed=highest_speed,
    )  # fmt: skip
    own = np.broadcast_to(np.asarray(fixed_speeds, dtype=np.float64), drive.shape)
    at_low, at_top = (
        solve_combinations(
            legs, system=system, combinations=mask, speeds=np.where(drive, s, own)
        )
        for s in (lowest_speed, highest_speed)
    )
    over = ~hold.held & (at_low.flow >= wanted[:, None])
    short = ~hold.held & ~over & (at_top.flow <= wanted[:, None])
    state = np.where(hold.held, hold.state, State.NOT_AVAILABLE)
    lost = ~hold.held & ~over & ~short
    ended = (hold.state == State.END_OF_CURVE) | (at_top.state == State.END_OF_CURVE)
    state[lost & ended] = State.END_OF_CURVE
    state[over] = State.LOW_SPEED
    state[short] = np.where(
        at_top.state == State.BELOW_STATIC, State.BELOW_STATIC, State.TOP_SPEED
    )[short]

    def picked(of_hold: FloatArray, of_low: FloatArray, of_top: FloatArray) -> FloatArray:
        extra = (...,) + (None,) * (of_low.ndim - 2)
        limit = np.where(over[extra], of_low, np.where(short[extra], of_top, np.nan))
        return np.asarray(np.where(hold.held[extra], of_hold, limit), dtype=np.float64)

    speeds = (spread(np.where(drive, s, own), shape) for s in (lowest_speed, highest_speed))
    leg_flow = picked(hold.leg_flow, at_low.leg_flow, at_top.leg_flow)
    total = picked(
        np.broadcast_to(wanted[:, None], shape[:2]).astype(np.float64), at_low.flow, at_top.flow
    )
    stuck = np.where(
        hold.held[..., None],
        hold.cannot_start,
        np.where(over[..., None], at_low.cannot_start, at_top.cannot_start),
    )
    return HeldFlow(
        state=state.astype(np.int8),
        held=hold.held,
        fixed_exceeds=over & hold.fixed_exceeds,
        speed=np.where(mask, picked(hold.speed, *speeds), np.nan),
        flow=total,
        head=picked(hold.head, at_low.manifold_head, at_top.manifold_head),
        leg_flow=leg_flow,
        held_shut=mask & (leg_flow == 0) & (wanted > 0)[:, None, None],
        cannot_start=np.asarray(stuck & (leg_flow > 0), dtype=np.bool_),
        energy_residual=picked(
            hold.energy_residual, at_low.energy_residual, at_top.energy_residual
        ),
        mass_residual=picked(hold.mass_residual, at_low.mass_residual, at_top.mass_residual),
    )
