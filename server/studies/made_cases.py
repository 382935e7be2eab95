"""Cases always made besides the scenarios: shut zone, station off, trip, hand-over."""

from collections.abc import Sequence

import numpy as np

from server.hydraulics.states import State
from server.studies import tank_made
from server.studies.assembly import Solved
from server.studies.cases import Cases, installed_slots, largest
from server.studies.combinations import Mask
from server.studies.cut_out import cut_out
from server.studies.duty_result import AfterTrip, Handover, MadeCases, StationOff, ZeroFlow
from server.studies.firm_capacity import firm_capacity
from server.studies.limits import StudyLimits
from server.studies.lowering.lowered import Floats, Indices, LoweredSet
from server.studies.one_pump_alone import one_pump_alone
from server.studies.running import Running
from server.studies.set_ends import CommonSpeed, at_common_speed, preferred_flows
from server.studies.set_states import full_speeds, without_drive
from server.studies.system_heads import point_pressures, required_head, system_heads

LAST = 10**6  # order of a horizon after all: every slot is installed


def made_cases(
    of: LoweredSet, limits: StudyLimits, cases: Cases, masks: Sequence[Mask], solved: Solved,
    running: Running,
) -> MadeCases:  # fmt: skip
    """Return the made cases of a set whose scenario cases are solved."""
    emptied = cut_out(of, cases, masks, solved, running)
    single = single_points(of)
    if of.floats:
        return MadeCases(
            zero_flow=tank_made.zero_flow(of),
            station_off=tank_made.station_off(of, cases),
            one_pump_alone=tank_made.one_pump_alone(of),
            firm_capacity=firm_capacity(of, limits),
            cut_out=emptied,
            several=tank_made.several_states(
                of, cases, solved.states.state, solved.combinations
            ),
            single_points=single,
        )
    holds = of.control.kind in ("zone_point_pressure", "discharge_pressure", "flow_compensated")
    units = at_common_speed(of, solved.combinations)
    return MadeCases(
        zero_flow=zero_flow(of, masks),
        station_off=station_off(of, cases),
        after_trip=after_trip(of, cases, masks, solved, running.scenario_chosen),
        one_pump_alone=one_pump_alone(of),
        # without drives, or beside units without one, no control curve leads from fewer to more
        handover=handover(of, units, masks) if holds and max(units.relative) == 1.0 else None,
        firm_capacity=firm_capacity(of, limits),
        cut_out=emptied,
        single_points=single,
    )


def single_points(of: LoweredSet) -> tuple[str, ...]:
    """Return the reaches, and the station's units, that have no second: ids, "unit" for one."""
    standing = [slot for slot in of.slots if slot.facts.role != "jockey"]
    return (*of.single_reaches, *(("unit",) if len(standing) == 1 else ()))


def zero_flow(of: LoweredSet, masks: Sequence[Mask]) -> ZeroFlow | None:
    """Return the pressures against a shut zone; nan where a shut-off head is not given.

    The set point is held by the first combination, the one that runs at the least flow; at
    fixed speed it is that combination's shut-off head. The largest pump is the largest unit;
    all at full speed give the head of the highest of them, the check valves of the others stay
    shut.
    """
    if not of.slots or not masks:
        return None
    shift = of.supply.shift
    static = of.supply.grade(np.zeros(shift.shape), shift)
    full = full_speeds(of)
    shutoff = full**2 * np.array([
        np.nan if s.facts.shutoff_head is None else s.facts.shutoff_head for s in of.slots
    ])  # fmt: skip
    biggest = largest(of.slots, installed_slots(of.slots, LAST))
    assert biggest is not None  # there is a slot
    speed, head = _held_at_rest(of, masks[0], shift, shutoff)
    held = static + np.maximum(head, 0.0)
    of_largest, of_all = static + shutoff[biggest], static + float(np.max(shutoff))
    return ZeroFlow(
        point_pressure_held=_at_points(of, held),
        speed_held=speed,
        discharge_pressure_largest=_at_gauge(of, of_largest),
        point_pressure_largest=_at_points(of, of_largest),
        discharge_pressure_all=_at_gauge(of, of_all),
        point_pressure_all=_at_points(of, of_all),
    )


def _held_at_rest(
    of: LoweredSet, mask: Mask, shift: Floats, shutoff: Floats
) -> tuple[Floats, Floats]:
    """Return speed and head at no flow of the combination that runs at the least, (3,)."""
    control = of.control
    full, drives = full_speeds(of), ~without_drive(of)
    own = list(mask)
    asked = required_head(of, np.zeros(shift.shape), True, np.nan_to_num(shift))
    asked = np.where(np.isfinite(shift), asked, np.nan)
    at_full = float(np.max(shutoff[own]))
    if control.kind in ("fixed_speed", "reducing_valve") or not drives[own].any():
        head = np.full(shift.shape, at_full)
        if control.kind == "reducing_valve":
            head = np.minimum(asked, at_full)
        return np.full(shift.shape, float(np.max(full[own]))), head
    moved = [i for i in own if drives[i]]
    tested = float(np.max(shutoff[moved])) / control.highest_speed**2
    speed = np.clip(
        np.sqrt(np.maximum(asked, 0.0) / tested), control.lowest_speed, control.highest_speed
    )
    still = [shutoff[i] for i in own if not drives[i]]
    return speed, np.maximum(speed**2 * tested, max(still, default=0.0))


def _at_gauge(of: LoweredSet, grade: Floats) -> Floats:
    return _pressure(of, of.water.weight * (grade - of.control.discharge_gauge_level))


def _at_points(of: LoweredSet, grade: Floats) -> Floats:
    """Return the pressure at each point with nothing flowing, (3, P)."""
    none = np.zeros((grade.size, len(of.points.facts)))
    return _pressure(of, point_pressures(of, grade, none)[1])


def _pressure(of: LoweredSet, computed: Floats) -> Floats:
    """Return a pressure where it can be one: nan below a vacuum."""
    return np.where(computed < of.water.lowest_pressure, np.nan, computed)


def station_off(of: LoweredSet, cases: Cases) -> StationOff:
    """Return what the supply alone would give each point at the demanded flow.

    Through the bypass where one is entered; else as if the water passed the pumps without loss,
    an upper bound and no promise.
    """
    heads, flow = system_heads(of, cases.draw), cases.draw.flow
    loss = 0.0 if of.bypass is None else of.bypass.coefficient * flow * flow
    entry = heads.suction_grade - loss - heads.main_loss
    path = "through_pumps" if of.bypass is None else "bypass"
    if of.tank is not None:
        # a fire tank opens where the supply alone would leave the grade below it
        level = of.tank.levels[cases.tank_state]
        path = "tank" if bool(np.any(level > entry)) else path
        entry = np.fmax(entry, level)
    pressure = point_pressures(of, entry, heads.zone_loss)[1]
    return StationOff(
        cases=cases.cases,
        arithmetic_pressure=pressure,
        drains=np.asarray(pressure < of.water.lowest_pressure, dtype=np.bool_),
        path=path,
    )


def after_trip(
    of: LoweredSet, cases: Cases, masks: Sequence[Mask], solved: Solved, chosen: Indices
) -> AfterTrip:
    """Return the state of what is left when the largest running unit trips.

    What is left is itself one of the combinations, so its state is already solved; the standby
    has not started yet.
    """
    states = solved.states
    size = len(cases.cases)
    where = {mask: k for k, mask in enumerate(masks)}
    running = np.zeros(size, dtype=np.intp)
    state = np.full(size, State.NOT_AVAILABLE, dtype=np.int8)
    share, region_end, end, available, required = np.full((5, size), np.nan)
    points = np.full((size, len(of.points.facts)), np.nan)
    dry = np.zeros(points.shape, dtype=np.bool_)
    lost: list[str | None] = []
    for c, k in enumerate(chosen):
        tripped = largest(of.slots, masks[k]) if k >= 0 else None
        lost.append(None if tripped is None else of.slots[tripped].facts.id)
        rest = [i for i in masks[k] if i != tripped] if k >= 0 else []
        running[c] = len(rest)
        if not rest:
            continue
        at = where[tuple(rest)]
        state[c] = states.state[c, at]
        far = rest[int(np.argmax(states.slot["best_efficiency_share"][c, at, rest]))]
        share[c] = states.slot["best_efficiency_share"][c, at, far]
        region_end[c] = of.slots[far].preferred[1]
        margin = solved.npsh_available[c, at, rest] - states.slot["npsh_required"][c, at, rest]
        least = rest[int(np.argmin(margin))]
        available[c] = solved.npsh_available[c, at, least]
        required[c] = states.slot["npsh_required"][c, at, least]
        points[c], dry[c] = solved.point_pressure[c, at], solved.dry_point[c, at]
        end[c] = states.flow_at_end[c, at]
    return AfterTrip(
        cases=cases.cases, running=running, lost=tuple(lost), state=state,
        best_efficiency_share=share, region_end=region_end, npsh_available=available,
        npsh_required=required, point_pressure=points, point_without_water=dry,
        flow_at_end=end,
    )  # fmt: skip


def handover(of: LoweredSet, units: CommonSpeed, masks: Sequence[Mask]) -> Handover:
    """Return the flows between one number of units and the next, on aged pipes where known."""
    aged = of.route.knows("aged")
    flows = preferred_flows(of, units, aged, of.supply.shift)
    chain = steps(of, masks)
    fewer, more = chain[:-1], chain[1:]
    return Handover(
        fewer=fewer,
        more=more,
        fewer_end=flows.end[list(fewer)],
        more_start=flows.start[list(more)],
        preferred_start=flows.start,
        preferred_end=flows.end,
    )


def steps(of: LoweredSet, masks: Sequence[Mask]) -> tuple[int, ...]:
    """Return the combinations passed through as the flow grows: jockeys, then mains."""
    first: dict[tuple[bool, int], int] = {}
    for k, mask in enumerate(masks):
        is_main = of.slots[mask[0]].facts.role != "jockey"
        first.setdefault((is_main, len(mask)), k)
    return tuple(first[key] for key in sorted(first))
