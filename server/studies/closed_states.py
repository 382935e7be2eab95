"""States of every combination in a closed zone: the demand is imposed, the head follows.

Drives hold the head that the set point asks, beside pumps without one; at fixed speed nothing
is held; a reducing valve takes away what the pumps give too much.
"""

import numpy as np

from server.hydraulics.control import hold_head
from server.hydraulics.imposed_flow import impose_flow
from server.hydraulics.mixed_control import hold_head_mixed
from server.hydraulics.reducing_valve import reduced_head
from server.hydraulics.states import State
from server.studies.lowering.lowered import Flags, Floats, LoweredSet
from server.studies.set_ends import at_common_speed, flow_at_end
from server.studies.set_states import (
    RawStates,
    SetStates,
    full_speeds,
    states_of,
    without_drive,
)

OPEN_TOLERANCE = 1e-9  # head by which a reducing valve may miss what it is set to [m]


def closed_states(
    of: LoweredSet, combinations: Flags, flow: Floats, required: Floats
) -> SetStates:
    """Return the states of K combinations in C cases.

    Parameters
    ----------
    of : LoweredSet
        The set.
    combinations : ndarray of bool, shape (K, N)
        Slots that run in each combination.
    flow, required : ndarray, shape (C,)
        Station flow [m3/s], and head that holds the set point, manifold to manifold; nan where
        it is not known [m].
    """
    known = np.asarray(np.isfinite(required), dtype=np.bool_)
    asked = np.where(known, required, 0.0)
    if of.control.kind in ("fixed_speed", "reducing_valve"):
        raw = _at_full_speed(of, combinations, flow, asked)
    elif without_drive(of).any():
        raw = _held_beside_fixed(of, combinations, flow, asked)
    else:
        raw = _held(of, combinations, flow, asked)
    return states_of(of, combinations, raw, known)


def _held(of: LoweredSet, combinations: Flags, flow: Floats, asked: Floats) -> RawStates:
    """Return the states of drives that all hold one head at one speed."""
    held = hold_head(
        flow,
        head=asked,
        legs=[of.units[slot.unit].leg for slot in of.slots],
        combinations=combinations,
        lowest_speed=of.control.lowest_speed,
        highest_speed=of.control.highest_speed,
    )
    return RawStates(
        state=held.state,
        flow=_imposed(flow, held.head),
        head=held.head,
        leg_flow=held.leg_flow,
        speed=np.broadcast_to(held.speed[..., None], held.leg_flow.shape),
        held_shut=held.held_shut,
        cannot_start=held.cannot_start,
        flow_at_end=held.last_row_flow,
        speed_at_end=held.last_row_speed,
        lack=asked[:, None] - held.head,
        energy_residual=held.energy_residual,
        mass_residual=held.mass_residual,
        head_per_per_cent=held.head_per_per_cent,
    )


def _held_beside_fixed(
    of: LoweredSet, combinations: Flags, flow: Floats, asked: Floats
) -> RawStates:
    """Return the states of drives that hold a head beside pumps without one."""
    legs = [of.units[slot.unit].leg for slot in of.slots]
    low, top = of.control.lowest_speed, of.control.highest_speed
    held = hold_head_mixed(
        flow, head=asked, legs=legs, combinations=combinations, variable=~without_drive(of),
        fixed_speeds=1.0, lowest_speed=low, highest_speed=top,
    )  # fmt: skip
    # the end of the curves at full speed: with unlike speeds it has no homologous point
    end = flow_at_end(of, at_common_speed(of, combinations))
    return RawStates(
        state=held.state,
        flow=_imposed(flow, held.head),
        head=held.head,
        leg_flow=held.leg_flow,
        speed=held.speed,
        held_shut=held.held_shut,
        cannot_start=held.cannot_start,
        flow_at_end=np.broadcast_to(end, held.state.shape),
        speed_at_end=np.full(held.state.shape, top),
        lack=asked[:, None] - held.head,
        fixed_exceeds=held.fixed_exceeds,
        energy_residual=held.energy_residual,
        mass_residual=held.mass_residual,
    )


def _at_full_speed(
    of: LoweredSet, combinations: Flags, flow: Floats, asked: Floats
) -> RawStates:
    """Return the states at full speed, behind the reducing valve where there is one.

    SOLVED: the valve holds its pressure, or without one the zone gets what it requires.
    TOP_SPEED: less than that.
    """
    found = impose_flow(
        flow,
        legs=[of.units[slot.unit].leg for slot in of.slots],
        combinations=combinations,
        speeds=full_speeds(of),
    )
    head = found.head
    lost = np.zeros(head.shape)
    if of.control.kind == "reducing_valve":
        wide_open = of.control.valve_loss * flow * flow
        behind = reduced_head(head, set_head=asked[:, None], open_loss=wide_open[:, None])
        head, lost = behind.head, behind.lost
    short = asked[:, None] - head
    below = (found.state == State.SOLVED) & (short > OPEN_TOLERANCE)
    on = combinations[None]
    return RawStates(
        state=np.where(below, np.int8(State.TOP_SPEED), found.state),
        flow=_imposed(flow, head),
        head=head,
        leg_flow=found.leg_flow,
        speed=np.broadcast_to(full_speeds(of), found.leg_flow.shape),
        held_shut=on & (found.leg_state == State.HELD_SHUT),
        cannot_start=found.cannot_start,
        flow_at_end=found.last_row_flow,
        speed_at_end=np.full(head.shape, of.control.highest_speed),
        lack=short,
        energy_residual=found.energy_residual,
        mass_residual=found.mass_residual,
        valve_loss=lost,
    )


def _imposed(flow: Floats, head: Floats) -> Floats:
    """Return the imposed flow where a combination has a state, nan elsewhere, (C, K)."""
    return np.where(np.isfinite(head), flow[:, None], np.nan)
