"""States of every running combination in every case, solved as arrays."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from server.hydraulics import affinity
from server.hydraulics.control import hold_head
from server.hydraulics.states import State
from server.studies.lowering.lowered import Flags, Floats, LoweredSet

PER_SLOT = (
    "speed", "leg_flow", "best_efficiency_share", "efficiency", "npsh_required", "shaft_power",
    "wire_power", "suction_loss", "suction_velocity", "discharge_velocity",
)  # fmt: skip


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class SetStates:
    """States (C, K), floats nan where the state has no meaning; per slot (C, K, N).

    Of a slot that does not run `leg_flow` is 0 and all else nan.
    """

    state: NDArray[np.int8]
    station_head: Floats  # [m]
    head_per_per_cent: Floats  # change of head at this flow for 1 % of speed [m]
    flow_at_end: Floats  # of the set with the first unit at its last row [m3/s]
    speed_at_end: Floats  # speed there: the one that holds the head asked, or its limit
    energy_residual: Floats  # [m]
    mass_residual: Floats  # [m3/s]
    slot: dict[str, Floats]  # the quantities of PER_SLOT


def solve_states(
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
    unknown = ~np.isfinite(required)
    held = hold_head(
        flow,
        head=np.where(unknown, 0.0, required),
        legs=[of.units[slot.unit].leg for slot in of.slots],
        combinations=combinations,
        lowest_speed=of.control.lowest_speed,
        highest_speed=of.control.highest_speed,
    )
    state = np.array(held.state)
    state[_valve_stays_shut(of, combinations, held.speed, held.head, held.leg_flow)] = (
        State.HELD_SHUT
    )
    # held only because it already runs: it could not be started into that state
    state[held.cannot_start.any(axis=2) & (flow > 0)[:, None]] = State.HELD_SHUT
    state[unknown] = State.NOT_AVAILABLE
    blank = np.where(unknown, np.nan, 1.0)[:, None]
    speed = held.speed * blank
    # a leg held shut passes nothing: no efficiency, power or NPSH is stated for it
    leg_flow = np.where(held.held_shut, np.nan, held.leg_flow) * blank[..., None]
    slot = _readings(of, combinations, leg_flow, speed)
    slot["leg_flow"] = held.leg_flow * blank[..., None]
    return SetStates(
        state=state,
        station_head=held.head * blank,
        head_per_per_cent=held.head_per_per_cent * blank,
        flow_at_end=held.last_row_flow * blank,
        speed_at_end=held.last_row_speed * blank,
        energy_residual=held.energy_residual * blank,
        mass_residual=held.mass_residual * blank,
        slot=slot,
    )


def _valve_stays_shut(
    of: LoweredSet, combinations: Flags, speed: Floats, head: Floats, leg_flow: Floats
) -> Flags:
    """Return where a leg could not lift its check valve: the cracking head comes on top."""
    shut = np.zeros(speed.shape, dtype=np.bool_)
    for i, slot in enumerate(of.slots):
        unit = of.units[slot.unit]
        shutoff = unit.curve.shutoff_head
        if unit.cracking_head > 0 and shutoff is not None:
            stays = speed**2 * shutoff <= head + unit.cracking_head
            shut |= combinations[:, i] & stays & (leg_flow[..., i] > 0)
    return shut


def _readings(
    of: LoweredSet, combinations: Flags, leg_flow: Floats, speed: Floats
) -> dict[str, Floats]:
    """Return the quantities of PER_SLOT, shape (C, K, N): read once for each kind of unit."""
    shape = leg_flow.shape
    slot = {name: np.full(shape, np.nan) for name in PER_SLOT}
    for unit in range(len(of.units)):
        slots = np.array(
            [i for i, one in enumerate(of.slots) if one.unit == unit], dtype=np.intp
        )
        columns = np.flatnonzero(combinations[:, slots].any(axis=1))
        if not columns.size:
            continue
        # running slots of one kind carry the same flow: the first of them is read for all
        first = slots[np.argmax(combinations[np.ix_(columns, slots)], axis=1)]
        one = unit_readings(of, unit, leg_flow[:, columns, first], speed[:, columns])
        running = combinations[np.ix_(columns, slots)]
        for name, values in one.items():
            slot[name][:, columns[:, None], slots] = np.where(
                running, values[..., None], np.nan
            )
    return slot


def unit_readings(of: LoweredSet, unit: int, flow: Floats, speed: Floats) -> dict[str, Floats]:
    """Return the quantities of PER_SLOT of a unit at a flow and a speed, shape (...)."""
    one = of.units[unit]
    best = one.curve.best
    shaft = affinity.shaft_power(one.curve, flow, speed=speed, density=of.water.density)
    area = 0.25 * np.pi
    return {
        "speed": speed,
        "leg_flow": flow,
        "best_efficiency_share": flow / speed / (np.nan if best is None else best.flow),
        "efficiency": affinity.efficiency(one.curve, flow, speed=speed),
        "npsh_required": affinity.npsh_required(
            one.curve, flow, speed=speed, exponent=one.npsh_exponent
        ),
        "shaft_power": shaft,
        "wire_power": shaft / (one.motor_efficiency * one.drive_efficiency),
        "suction_loss": one.suction_coefficient * flow * flow,
        "suction_velocity": flow / (area * one.suction_bore**2),
        "discharge_velocity": flow / (area * one.discharge_bore**2),
    }
