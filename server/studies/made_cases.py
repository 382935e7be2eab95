"""Cases always made besides the scenarios: shut zone, station off, trip, hand-over."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from server.hydraulics.states import State
from server.studies.cases import Cases, installed_slots, largest
from server.studies.combinations import Mask
from server.studies.duty_result import AfterTrip, Handover, MadeCases, StationOff, ZeroFlow
from server.studies.firm_capacity import firm_capacity
from server.studies.limits import StudyLimits
from server.studies.lowering.lowered import Flags, Floats, Indices, LoweredSet
from server.studies.one_pump_alone import one_pump_alone
from server.studies.set_ends import CommonSpeed, preferred_flows
from server.studies.set_states import SetStates
from server.studies.system_heads import SystemHeads, point_pressures, required_head

LAST = 10**6  # order of a horizon after all: every slot is installed


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Left:
    """What the units left by a trip do: they are themselves one of the combinations."""

    pressure: Floats  # (C, K, P) [Pa]
    without_water: Flags  # (C, K, P)
    npsh_available: Floats  # (C, K, N) [m]


def made_cases(
    of: LoweredSet, limits: StudyLimits, cases: Cases, heads: SystemHeads,
    units: CommonSpeed, masks: Sequence[Mask], states: SetStates, left: Left, chosen: Indices,
) -> MadeCases:  # fmt: skip
    """Return the made cases of a set whose scenario cases are solved."""
    return MadeCases(
        zero_flow=zero_flow(of, masks),
        station_off=station_off(of, cases, heads),
        after_trip=after_trip(of, cases, masks, states, left, chosen),
        one_pump_alone=one_pump_alone(of),
        handover=handover(of, units, masks),
        firm_capacity=firm_capacity(of, limits),
    )


def zero_flow(of: LoweredSet, masks: Sequence[Mask]) -> ZeroFlow | None:
    """Return the pressures against a shut zone; nan where a shut-off head is not given.

    The set point is held by the first combination, the one that runs at the least flow. The
    largest pump is the largest unit; all at top speed give the head of the highest of them, the
    check valves of the others stay shut.
    """
    if not of.slots or not masks:
        return None
    shift = of.supply.shift
    static = of.supply.grade(np.zeros(shift.shape), shift)
    control = of.control
    shutoff = [
        np.nan if s.facts.shutoff_head is None else s.facts.shutoff_head for s in of.slots
    ]
    asked = required_head(of, np.zeros(shift.shape), True, np.nan_to_num(shift))
    asked = np.where(np.isfinite(shift), asked, np.nan)
    holding = max(shutoff[i] for i in masks[0])
    speed = np.clip(
        np.sqrt(np.maximum(asked, 0.0) / holding), control.lowest_speed, control.highest_speed
    )
    biggest = largest(of.slots, installed_slots(of.slots, LAST))
    assert biggest is not None  # there is a slot
    top = control.highest_speed**2
    held = static + np.maximum(speed**2 * holding, 0.0)
    of_largest, of_all = static + top * shutoff[biggest], static + top * float(np.max(shutoff))
    return ZeroFlow(
        point_pressure_held=_at_points(of, held),
        speed_held=speed,
        discharge_pressure_largest=_at_gauge(of, of_largest),
        point_pressure_largest=_at_points(of, of_largest),
        discharge_pressure_all=_at_gauge(of, of_all),
        point_pressure_all=_at_points(of, of_all),
    )


def _at_gauge(of: LoweredSet, grade: Floats) -> Floats:
    return _pressure(of, of.water.weight * (grade - of.control.discharge_gauge_level))


def _at_points(of: LoweredSet, grade: Floats) -> Floats:
    """Return the pressure at each point with nothing flowing, (3, P)."""
    none = np.zeros((grade.size, len(of.points.facts)))
    return _pressure(of, point_pressures(of, grade, none)[1])


def _pressure(of: LoweredSet, computed: Floats) -> Floats:
    """Return a pressure where it can be one: nan below a vacuum."""
    return np.where(computed < of.water.lowest_pressure, np.nan, computed)


def station_off(of: LoweredSet, cases: Cases, heads: SystemHeads) -> StationOff:
    """Return what the supply alone would give each point at the demanded flow.

    Through the bypass where one is entered; else as if the water passed the pumps without loss,
    an upper bound and no promise.
    """
    flow = cases.draw.flow
    loss = 0.0 if of.bypass is None else of.bypass.coefficient * flow * flow
    entry = heads.suction_grade - loss - heads.main_loss
    pressure = point_pressures(of, entry, heads.zone_loss)[1]
    return StationOff(
        cases=cases.cases,
        arithmetic_pressure=pressure,
        drains=np.asarray(pressure < of.water.lowest_pressure, dtype=np.bool_),
        path="through_pumps" if of.bypass is None else "bypass",
    )


def after_trip(
    of: LoweredSet, cases: Cases, masks: Sequence[Mask], states: SetStates, left: Left,
    chosen: Indices,
) -> AfterTrip:  # fmt: skip
    """Return the state of what is left when the largest running unit trips.

    What is left is itself one of the combinations, so its state is already solved; the standby
    has not started yet.
    """
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
        margin = left.npsh_available[c, at, rest] - states.slot["npsh_required"][c, at, rest]
        least = rest[int(np.argmin(margin))]
        available[c] = left.npsh_available[c, at, least]
        required[c] = states.slot["npsh_required"][c, at, least]
        points[c], dry[c] = left.pressure[c, at], left.without_water[c, at]
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
