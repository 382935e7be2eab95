"""The duty of one set in all its cases: what runs, at which speed, flow, pressure and power."""

from dataclasses import fields, is_dataclass, replace
from hashlib import sha256

import numpy as np

from server import __version__
from server.hydraulics.states import State
from server.station.station import Station
from server.studies.cases import Cases, cases_of
from server.studies.choice import choose
from server.studies.combinations import Mask, as_flags, combinations_of
from server.studies.duty_result import DutyResult, NotSolved, Place
from server.studies.limits import StudyLimits
from server.studies.lowering import lower
from server.studies.lowering.lowered import Flags, LoweredSet
from server.studies.made_cases import Left, made_cases
from server.studies.set_ends import at_common_speed, flow_at_end, zero_flow_speed
from server.studies.set_states import SetStates, solve_states
from server.studies.shapes import Stamp
from server.studies.suction_side import SuctionSide, breaks_before_eye, suction_side
from server.studies.system_heads import SystemHeads, point_pressures, system_heads

NAME, VERSION = "duty", 1
READ = (
    "site",
    "supply",
    "suction_line",
    "legs",
    "discharge_main",
    "zone",
    "horizons",
    "fires",
    "scenarios",
    "pumps",
    "sets",
)


def duty(
    station: Station, pump_set_id: str, limits: StudyLimits, *, document_hash: str = ""
) -> DutyResult | NotSolved:
    """Return the duty of a set, or what stands in its way.

    Parameters
    ----------
    station : Station
        The document.
    pump_set_id : str
        Id of one of its sets.
    limits : StudyLimits
        Limits by the station's criteria.
    document_hash : str
        Of the document's canonical bytes, for the stamp.

    Raises
    ------
    KeyError
        If the station has no such set.
    """
    lowered = lower(station, pump_set_id, limits)
    if isinstance(lowered, NotSolved):
        return lowered
    stamp = Stamp(
        study=NAME,
        study_version=VERSION,
        program=__version__,
        document=document_hash,
        inputs=_inputs_hash(station, limits),
    )
    return duty_of(lowered, limits, stamp)


def _inputs_hash(station: Station, limits: StudyLimits) -> str:
    """Return the hash of the parts of the document that the study reads, and of its limits."""
    read = station.model_dump_json(include=set(READ))
    return sha256(f"{read}{limits}".encode()).hexdigest()


def duty_of(of: LoweredSet, limits: StudyLimits, stamp: Stamp) -> DutyResult:
    """Return the duty of a lowered set: every case and combination in one pass."""
    cases = cases_of(of)
    heads = system_heads(of, cases.draw)
    masks, available = combinations_of(of.slots, cases.running, cases.jockeys)
    combinations = as_flags(masks, len(of.slots))
    side = suction_side(of, heads)
    states = solve_states(of, combinations, cases.draw.flow, heads.required_head)
    states = _only_stated(of, states, side, available)
    return _result(
        of, limits, stamp, cases, heads, side, masks, available, combinations, states
    )


def _only_stated(
    of: LoweredSet, states: SetStates, side: SuctionSide, available: Flags
) -> SetStates:
    """Blank the combinations that a case does not allow, and those without water to pump."""
    in_branch = breaks_before_eye(of, side.suction_grade, states.slot["suction_loss"])
    dry = (side.breaks_at[:, None] != Place.NOWHERE) | (in_branch != Place.NOWHERE)
    # past the last row no duty is stated anyway, and the demand is too much for the pumps too
    dry &= available & (states.state != State.END_OF_CURVE)
    state = np.where(available, states.state, np.int8(State.NOT_AVAILABLE))
    there = np.where(available & ~dry, 1.0, np.nan)
    allowed = np.where(available, 1.0, np.nan)
    return replace(
        states,
        state=np.where(dry, np.int8(State.NO_WATER), state),
        station_head=states.station_head * there,
        head_per_per_cent=states.head_per_per_cent * there,
        flow_at_end=states.flow_at_end * allowed,
        speed_at_end=states.speed_at_end * allowed,
        energy_residual=states.energy_residual * there,
        mass_residual=states.mass_residual * there,
        slot={name: values * there[..., None] for name, values in states.slot.items()},
    )


def _result(
    of: LoweredSet,
    limits: StudyLimits,
    stamp: Stamp,
    cases: Cases,
    heads: SystemHeads,
    side: SuctionSide,
    masks: tuple[Mask, ...],
    available: Flags,
    combinations: Flags,
    states: SetStates,
) -> DutyResult:
    """Put the result together: pressures follow from grades, the choice from all of it."""
    water, levels = of.water, of.control
    flow = cases.draw.flow
    discharge = heads.suction_grade[:, None] + states.station_head
    entry = discharge - heads.main_loss[:, None]
    grade, pressure = point_pressures(of, entry, heads.zone_loss[:, None, :])
    discharge_pressure = water.weight * (discharge - levels.discharge_gauge_level)
    held = discharge_pressure if levels.point < 0 else pressure[..., levels.point]
    lowest = water.lowest_pressure
    dry_point, dry_discharge = pressure < lowest, discharge_pressure < lowest
    units = at_common_speed(of, combinations)
    end = flow_at_end(of, units)
    slot = states.slot
    has_water = side.breaks_at == Place.NOWHERE
    chosen, choice_class = choose(
        of.slots,
        available=available,
        known=np.isfinite(heads.required_head) & has_water,
        state=states.state,
        share=slot["best_efficiency_share"],
        combinations=combinations,
        held_pressure=held,
        set_point=levels.pressure,
        flow_at_end=end,
    )
    velocity = of.route.velocities(flow)
    grade, pressure = (np.where(dry_point, np.nan, each) for each in (grade, pressure))
    available_head = of.npsh_available(side.suction_grade[:, None, None], slot["suction_loss"])
    result = DutyResult(
        stamp=stamp,
        pump_set=of.pump_set,
        slots=tuple(one.facts for one in of.slots),
        points=of.points.facts,
        held_point=None if levels.point < 0 else of.points.facts[levels.point].id,
        set_point=levels.pressure,
        lowest_speed=levels.lowest_speed,
        highest_speed=levels.highest_speed,
        density=water.density,
        lowest_pressure=water.lowest_pressure,
        cases=cases.cases,
        shown=cases.shown,
        is_fire=cases.is_fire,
        demand=flow,
        fire_flow=cases.draw.fire,
        fire_point=np.asarray(cases.draw.fire_point, dtype=np.intp),
        combinations=combinations,
        available=available,
        chosen=chosen,
        choice_class=choice_class,
        state=states.state,
        flow=np.where(np.isfinite(states.station_head), flow[:, None], np.nan),
        station_head=states.station_head,
        required_head=np.where(has_water, heads.required_head, np.nan),
        set_point_held=states.state == State.SOLVED,
        held_pressure=np.where(held < lowest, np.nan, held),
        speed=slot["speed"],
        leg_flow=slot["leg_flow"],
        best_efficiency_share=slot["best_efficiency_share"],
        efficiency=slot["efficiency"],
        npsh_available=available_head,
        npsh_required=slot["npsh_required"],
        shaft_power=slot["shaft_power"],
        wire_power=slot["wire_power"],
        point_pressure=pressure,
        point_grade=grade,
        point_without_water=dry_point,
        suction_breaks_at=side.breaks_at,
        supply_grade=side.supply_grade,
        connection_pressure=side.connection_pressure,
        suction_pressure=side.gauge_pressure,
        suction_grade=side.suction_grade,
        discharge_without_water=dry_discharge,
        discharge_grade=discharge,
        discharge_pressure=np.where(dry_discharge, np.nan, discharge_pressure),
        zone_entry_grade=entry,
        suction_line_velocity=velocity[:, : of.suction_reaches],
        main_velocity=velocity[:, of.suction_reaches :],
        suction_branch_velocity=slot["suction_velocity"],
        discharge_branch_velocity=slot["discharge_velocity"],
        pressure_per_speed=water.weight * states.head_per_per_cent,
        zero_flow_speed=zero_flow_speed(of, units, cases.draw),
        flow_at_end=states.flow_at_end,
        speed_at_end=states.speed_at_end,
        energy_residual=states.energy_residual,
        mass_residual=states.mass_residual,
        made=made_cases(
            of,
            limits,
            cases,
            heads,
            units,
            masks,
            states,
            Left(pressure=pressure, without_water=dry_point, npsh_available=available_head),
            chosen,
        ),
        needs_missing=of.needs_missing,
    )
    _lock(result)
    return result


def _lock(part: object) -> None:
    """Make the arrays of a result read-only: it is shared by every reader."""
    if isinstance(part, np.ndarray):
        part.flags.writeable = False
    elif is_dataclass(part):
        for field in fields(part):
            _lock(getattr(part, field.name))
