"""Cases always made where a tank floats on the zone: shut-off, station off, one pump alone."""

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from server.hydraulics.operating_points import all_operating_points
from server.hydraulics.states import State
from server.studies.cases import Cases, installed_slots, largest, shifts
from server.studies.duty_result import OnePumpAlone, SeveralStates, StationOff, ZeroFlow
from server.studies.lowering.lowered import Flags, LoweredSet
from server.studies.set_states import full_speeds
from server.studies.shapes import PipeAge
from server.studies.suction_side import suction_side
from server.studies.system_heads import Draw, SystemHeads, point_pressures
from server.studies.tank_states import tank_states, tank_way

LAST = 10**6  # order of a horizon after all: every slot is installed
LOW, TOP = 0, 2  # places of the tank's levels
MOST_SCANS = 4  # combinations of a case that are scanned for more than one state


def zero_flow(of: LoweredSet) -> ZeroFlow | None:
    """Return the pressures at no flow: at the points the full tank's, whatever the pumps do.

    Against a shut valve in the main the gauge sees the shut-off head; the zone behind that
    valve sees the tank.
    """
    if not of.slots or of.tank is None:
        return None
    shift = of.supply.shift
    static = of.supply.grade(np.zeros(shift.shape), shift)
    full = full_speeds(of) ** 2
    shutoff = full * np.array([
        np.nan if s.facts.shutoff_head is None else s.facts.shutoff_head for s in of.slots
    ])  # fmt: skip
    biggest = largest(of.slots, installed_slots(of.slots, LAST))
    assert biggest is not None  # there is a slot
    level = np.full(shift.shape, of.tank.levels[TOP])
    none = np.zeros((shift.size, len(of.points.facts)))
    weight, gauge = of.water.weight, of.control.discharge_gauge_level
    return ZeroFlow(
        point_pressure_held=point_pressures(of, level, none)[1],
        speed_held=np.full(shift.shape, np.nan),
        discharge_pressure_largest=weight * (static + shutoff[biggest] - gauge),
        point_pressure_largest=none * np.nan,
        discharge_pressure_all=weight * (static + float(np.max(shutoff)) - gauge),
        point_pressure_all=none * np.nan,
    )


def station_off(of: LoweredSet, cases: Cases) -> StationOff:
    """Return what the tank alone gives each point at the demand: it feeds all of it."""
    draw = cases.draw
    way = tank_way(of, draw, cases.tank_state)
    rest = np.zeros(draw.flow.shape)
    entry = way.grades(rest, np.arange(rest.size)).draw_grade
    loss = of.points.loss(draw.domestic, draw.fire, draw.fire_point)
    pressure = point_pressures(of, entry, loss)[1]
    return StationOff(
        cases=cases.cases,
        arithmetic_pressure=pressure,
        drains=np.asarray(pressure < of.water.lowest_pressure, dtype=np.bool_),
        path="tank",
    )


def one_pump_alone(of: LoweredSet) -> OnePumpAlone | None:
    """Return each kind of pump alone at full speed, supply low, tank low, on new pipes."""
    shift = float(shifts(of, np.nan)[0])
    if of.tank is None or np.isnan(shift) or np.isnan(of.tank.levels[LOW]) or not of.units:
        return None
    pipes: PipeAge = "new" if of.route.knows("new") else "aged"
    kinds = [slot.unit for slot in of.slots]
    firsts = [kinds.index(t) for t in range(len(of.units))]
    alone = np.eye(len(of.slots), dtype=np.bool_)[firsts]
    one = np.zeros(1)
    draw = Draw(
        domestic=one, fire=one, fire_point=np.full(1, -1), aged=np.full(1, pipes == "aged"),
        shift=np.full(1, shift), way=np.zeros(1, dtype=np.intp),
    )  # fmt: skip
    way = tank_way(of, draw, np.zeros(1, dtype=np.intp))
    states, grades = tank_states(of, alone, way)
    heads = SystemHeads(
        supply_grade=grades.supply_grade[0], suction_grade=grades.suction_grade[0],
        main_loss=grades.before_draw[0], zone_loss=np.zeros((len(firsts), 0)),
        required_head=grades.required_head[0],
    )  # fmt: skip
    side = suction_side(of, heads)
    own = np.arange(len(firsts))
    slot = {name: values[0, own, firsts] for name, values in states.slot.items()}
    flow = states.flow[0]
    past = states.flow_at_end[0]
    to_last_row = np.isnan(flow) & np.isfinite(past)
    return OnePumpAlone(
        slots=tuple(of.slots[i].facts.id for i in firsts),
        pipes=pipes,
        flow=flow,
        to_last_row=to_last_row,
        suction_breaks_at=side.breaks_at,
        suction_pressure=np.where(np.isfinite(flow), side.gauge_pressure, np.nan),
        best_efficiency_share=slot["best_efficiency_share"],
        npsh_available=of.npsh_available(side.suction_grade, slot["suction_loss"]),
        npsh_required=slot["npsh_required"],
        shaft_power=slot["shaft_power"],
    )


def several_states(
    of: LoweredSet, cases: Cases, states: NDArray[np.int8], combinations: Flags
) -> tuple[SeveralStates, ...]:
    """Return the states that humped pumps could keep but not be started into, by a scan.

    Legs that fall throughout have one operating point. A humped one has several only where the
    head stands above its shut-off head: then its combination is marked held shut.
    """
    legs = [of.units[slot.unit].leg for slot in of.slots]
    humped = np.array([not leg.shares_uniquely for leg in legs], dtype=np.bool_)
    if not humped.any() or of.control.kind == "held_flow":
        return ()
    way = tank_way(of, cases.draw, cases.tank_state)
    system, speeds, known = way.system(), full_speeds(of).tolist(), way.known
    found = []
    for c in np.flatnonzero(cases.shown & known):
        stuck = (states[c] == State.HELD_SHUT) & (combinations & humped).any(axis=1)
        for k in np.flatnonzero(stuck)[:MOST_SCANS]:
            every = all_operating_points(
                legs, system=system, case=int(c), speeds=speeds, on=combinations[k].tolist()
            )
            flows = tuple(point.flow for point in every.points)
            if len(flows) > 1:
                case = replace(cases.cases[c], units=int(combinations[k].sum()))
                found.append(SeveralStates(case=case, combination=int(k), flows=flows))
    return tuple(found)
