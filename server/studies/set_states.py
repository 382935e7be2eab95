"""States of every running combination in every case, solved as arrays."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from server.hydraulics import affinity
from server.hydraulics.states import State
from server.studies.lowering.lowered import Flags, Floats, Indices, LoweredSet

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
    flow: Floats  # of the set: the demand in a closed zone [m3/s]
    station_head: Floats  # between the manifolds, behind a reducing valve [m]
    valve_loss: Floats  # head taken away by a reducing valve, zero without one [m]
    head_per_per_cent: Floats  # change of head at this flow for 1 % of speed [m]
    flow_at_end: Floats  # of the set with the first unit at its last row [m3/s]
    speed_at_end: Floats  # speed there: the one that holds the head asked, or its limit
    lack: Floats  # head missing, above zero, or in excess where nothing is held or solved [m]
    fixed_exceeds: Flags  # the units without a drive pass more than is asked, alone
    energy_residual: Floats  # [m]
    mass_residual: Floats  # [m3/s]
    slot: dict[str, Floats]  # the quantities of PER_SLOT


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class RawStates:
    """What a solver found, (C, K) and (C, K, N), before anything is read off the curves."""

    state: NDArray[np.int8]
    flow: Floats  # [m3/s]
    head: Floats  # between the manifolds [m]
    leg_flow: Floats  # (C, K, N) zero where shut or not running [m3/s]
    speed: Floats  # (C, K, N)
    held_shut: Flags  # (C, K, N)
    cannot_start: Flags  # (C, K, N) held only because it already runs
    flow_at_end: Floats  # [m3/s]
    speed_at_end: Floats
    lack: Floats  # [m]
    energy_residual: Floats  # [m]
    mass_residual: Floats  # [m3/s]
    head_per_per_cent: Floats | None = None  # [m]
    fixed_exceeds: Flags | None = None
    valve_loss: Floats | None = None  # [m]


def states_of(of: LoweredSet, combinations: Flags, raw: RawStates, known: Flags) -> SetStates:
    """Return the states with every reading of every slot.

    Parameters
    ----------
    of : LoweredSet
        The set.
    combinations : ndarray of bool, shape (K, N)
        Slots that run in each combination.
    raw : RawStates
        What the solver found.
    known : ndarray of bool, shape (C,)
        Cases that are stated; of the others nothing is.
    """
    state = np.array(raw.state)
    state[_valve_stays_shut(of, combinations, raw)] = State.HELD_SHUT
    # held only because it already runs: it could not be started into that state
    state[raw.cannot_start.any(axis=2) & (raw.flow > 0)] = State.HELD_SHUT
    state[~known] = State.NOT_AVAILABLE
    blank = np.where(known, 1.0, np.nan)[:, None]
    # a leg held shut passes nothing: no efficiency, power or NPSH is stated for it
    leg_flow = np.where(raw.held_shut, np.nan, raw.leg_flow) * blank[..., None]
    slot = _readings(of, combinations, leg_flow, raw.speed * blank[..., None])
    slot["leg_flow"] = raw.leg_flow * blank[..., None]
    none = np.zeros(state.shape)
    return SetStates(
        state=state,
        flow=raw.flow * blank,
        station_head=raw.head * blank,
        valve_loss=(none if raw.valve_loss is None else raw.valve_loss) * blank,
        head_per_per_cent=(
            none * np.nan if raw.head_per_per_cent is None else raw.head_per_per_cent * blank
        ),
        flow_at_end=raw.flow_at_end * blank,
        speed_at_end=raw.speed_at_end * blank,
        lack=raw.lack * blank,
        fixed_exceeds=(
            np.zeros(state.shape, dtype=np.bool_)
            if raw.fixed_exceeds is None
            else raw.fixed_exceeds & known[:, None]
        ),
        energy_residual=raw.energy_residual * blank,
        mass_residual=raw.mass_residual * blank,
        slot=slot,
    )


def taken(states: SetStates, rows: Indices) -> SetStates:
    """Return the states of some rows of cases."""
    return SetStates(
        state=states.state[rows],
        flow=states.flow[rows],
        station_head=states.station_head[rows],
        valve_loss=states.valve_loss[rows],
        head_per_per_cent=states.head_per_per_cent[rows],
        flow_at_end=states.flow_at_end[rows],
        speed_at_end=states.speed_at_end[rows],
        lack=states.lack[rows],
        fixed_exceeds=states.fixed_exceeds[rows],
        energy_residual=states.energy_residual[rows],
        mass_residual=states.mass_residual[rows],
        slot={name: values[rows] for name, values in states.slot.items()},
    )


def full_speeds(of: LoweredSet) -> Floats:
    """Return the speed of each slot with nothing held: tested, or the drives' highest, (N,)."""
    top = of.control.highest_speed
    return np.array([1.0 if of.units[slot.unit].fixed else top for slot in of.slots])


def without_drive(of: LoweredSet) -> Flags:
    """Return which slots run at their tested speed only, (N,)."""
    return np.array([of.units[slot.unit].fixed for slot in of.slots], dtype=np.bool_)


def _valve_stays_shut(of: LoweredSet, combinations: Flags, raw: RawStates) -> Flags:
    """Return where a leg could not lift its check valve: the cracking head comes on top."""
    shut = np.zeros(raw.state.shape, dtype=np.bool_)
    across = raw.head if raw.valve_loss is None else raw.head + raw.valve_loss
    for i, slot in enumerate(of.slots):
        unit = of.units[slot.unit]
        shutoff = unit.curve.shutoff_head
        if unit.cracking_head > 0 and shutoff is not None:
            stays = raw.speed[..., i] ** 2 * shutoff <= across + unit.cracking_head
            shut |= combinations[:, i] & stays & (raw.leg_flow[..., i] > 0)
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
        one = unit_readings(of, unit, leg_flow[:, columns, first], speed[:, columns, first])
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
