"""Efficiency, power and NPSH of a combination along what its control lets it do."""

from dataclasses import dataclass

import numpy as np

from server.hydraulics.parallel import leg_flows
from server.hydraulics.states import State
from server.studies.closed_states import closed_states
from server.studies.duty_result import DutyResult
from server.studies.lowering.lowered import Floats, LoweredSet
from server.studies.set_states import full_speeds, unit_readings
from server.studies.shapes import SUPPLY_STATES, PipeAge, SupplyState
from server.studies.suction_side import suction_side
from server.studies.system_heads import Draw, reach_losses, system_heads

READINGS = 181  # points of a curve at full speed


@dataclass(frozen=True, slots=True, eq=False)
class AlongControl:
    """A combination along the held set point, or at full speed; nan where it cannot run so."""

    combination: int
    flow: Floats  # (n,) [m3/s]
    speed: Floats  # (n,) ratio
    efficiency: Floats  # (n,) of all running pumps together, ratio
    shaft_power: Floats  # (n,) of all running pumps together [W]
    npsh_available: Floats  # (n,) least of the running pumps [m]
    npsh_required: Floats  # (n,) largest of the running pumps [m]


def along_control(
    lowered: LoweredSet,
    result: DutyResult,
    drawn: tuple[int, ...],
    flow: Floats,
    state: SupplyState,
    pipes: PipeAge,
) -> tuple[AlongControl, ...]:
    """Return each drawn combination along the set point, or along its own curve.

    Parameters
    ----------
    lowered : LoweredSet
        The set.
    result : DutyResult
        Its duty.
    drawn : tuple of int
        Combinations.
    flow : ndarray, shape (n,)
        Station flows at which a held set point is read. [m3/s]
    state : {"low", "normal", "high"}
        Supply state of the NPSH available.
    pipes : {"new", "aged"}
        Age of the pipes.
    """
    if not drawn:
        return ()
    shift = float(lowered.supply.shift[SUPPLY_STATES.index(state)])
    held = ("zone_point_pressure", "discharge_pressure", "flow_compensated")
    if lowered.control.kind in held:
        return _along_set_point(lowered, result, drawn, flow, shift, pipes == "aged")
    return tuple(_at_full_speed(lowered, result, k, shift, pipes == "aged") for k in drawn)


def _along_set_point(
    lowered: LoweredSet,
    result: DutyResult,
    drawn: tuple[int, ...],
    flow: Floats,
    shift: float,
    aged: bool,
) -> tuple[AlongControl, ...]:
    """Return each combination where it holds the set point, solved as the duty is."""
    draw = Draw(
        domestic=flow, fire=np.zeros(flow.shape), fire_point=-1, aged=aged,
        shift=np.full(flow.shape, shift),
    )  # fmt: skip
    heads = system_heads(lowered, draw)
    suction = suction_side(lowered, heads).suction_grade
    required = np.where(np.isfinite(suction), heads.required_head, np.nan)
    on = result.combinations[list(drawn)]
    solved = closed_states(lowered, on, flow, required)
    held = (solved.state == State.SOLVED) & (flow > 0)[:, None]
    curves = []
    for i, k in enumerate(drawn):
        slot = {
            name: np.where(held[:, i, None], values[:, i, on[i]], np.nan)
            for name, values in solved.slot.items()
        }
        available = lowered.npsh_available(suction[:, None], slot["suction_loss"])
        curves.append(_together(k, flow, slot, available))
    return tuple(curves)


def _at_full_speed(
    lowered: LoweredSet, result: DutyResult, combination: int, shift: float, aged: bool
) -> AlongControl:
    """Return one combination from no flow to the first last row, nothing held."""
    slots = [int(n) for n in np.flatnonzero(result.combinations[combination])]
    units = [lowered.slots[n].unit for n in slots]
    legs, speeds = [lowered.units[u].leg for u in units], full_speeds(lowered)[slots]
    square = speeds * speeds
    high = float(np.max(square * [leg.peak_head for leg in legs]))
    low = float(np.max(square * [leg.last_head for leg in legs]))
    head = high - (high - low) * np.linspace(0.0, 1.0, READINGS) ** 2
    found = leg_flows(head, legs=legs, speeds=speeds)
    passes = (found.state == State.SOLVED) & (found.flow > 0)
    each = np.where(passes, found.flow, np.nan)
    read = [
        unit_readings(lowered, unit, each[:, i], np.full(head.shape, speeds[i]))
        for i, unit in enumerate(units)
    ]
    slot = {name: np.stack([one[name] for one in read], axis=1) for name in read[0]}
    flow = found.flow.sum(axis=1)
    lost = reach_losses(lowered, flow, aged, 0)[..., : lowered.suction_reaches].sum(axis=-1)
    suction = lowered.supply.grade(flow, shift) - lost
    available = lowered.npsh_available(suction[:, None], slot["suction_loss"])
    return _together(combination, flow, slot, available)


def _together(
    combination: int, flow: Floats, slot: dict[str, Floats], available: Floats
) -> AlongControl:
    """Return the readings of the units that pass water as those of one machine."""
    passes = np.isfinite(slot["shaft_power"])
    power = np.where(passes, slot["shaft_power"], 0.0).sum(axis=1)
    useful = np.where(passes, slot["shaft_power"] * slot["efficiency"], 0.0).sum(axis=1)
    some = passes.any(axis=1) & (power > 0)
    nothing = np.full(flow.shape, np.nan)
    return AlongControl(
        combination=combination,
        flow=flow,
        speed=slot["speed"][:, 0],
        efficiency=np.divide(useful, power, out=nothing.copy(), where=some),
        shaft_power=np.where(some, power, np.nan),
        npsh_available=np.fmin.reduce(np.where(available < 0, np.nan, available), axis=1),
        npsh_required=np.fmax.reduce(slot["npsh_required"], axis=1),
    )
