"""From the document to SI arrays and physics: the only place that reads entered units."""

from collections.abc import Iterable

from server.station.station import Station
from server.studies.duty_result import Missing, NotSolved
from server.studies.limits import StudyLimits
from server.studies.lowering import pumps, supply, zone
from server.studies.lowering.control import control as control_of
from server.studies.lowering.lowered import LoweredSet, Scenario
from server.studies.lowering.needs import Needs
from server.studies.lowering.pipes import route
from server.studies.lowering.tank import zone_tank
from server.studies.shapes import PipeAge


def lower(station: Station, pump_set_id: str, limits: StudyLimits) -> LoweredSet | NotSolved:
    """Return what the duty of a set needs, or every field that stands in its way.

    Parameters
    ----------
    station : Station
        The document.
    pump_set_id : str
        Id of one of its sets.
    limits : StudyLimits
        Limits by the criteria, for the fields that are empty.

    Raises
    ------
    KeyError
        If the station has no such set.
    """
    pump_set = next((one for one in station.sets if one.id == pump_set_id), None)
    if pump_set is None:
        raise KeyError(pump_set_id)
    needs = Needs()
    of_water = supply.water(station.site, needs)
    of_supply = supply.supply(station, of_water, needs)
    of_bypass = supply.bypass(station, needs)
    points = zone.points(station, limits, needs)
    tank = zone_tank(station, needs)
    floats = tank is not None and not tank.fire_only
    barrels_out = zone.barrels_out(station, needs)
    scenarios = zone.scenarios(station, barrels_out, needs)
    way = route(station, _ages(scenarios), needs)
    control = control_of(station, pump_set, points.facts, limits, floats, needs)
    units, slots = pumps.units_and_slots(
        station, pump_set, limits, control.highest_speed, of_water.density, needs
    )
    growth = zone.growth(station, needs)
    eye = needs.part("/site/eye_level", station.site.eye_level)
    if needs.stops or of_supply is None:
        return NotSolved(pump_set_id, tuple(needs.stops))
    return LoweredSet(
        pump_set=pump_set_id,
        water=of_water,
        supply=of_supply,
        route=way,
        single_reaches=tuple(
            reach.id
            for reach in (*station.suction_line.reaches, *station.discharge_main.reaches)
            if reach.barrels == 1
        ),
        ways=(way, *(way.with_barrel_out(_place(station, reach)) for reach in barrels_out)),
        suction_reaches=len(station.suction_line.reaches),
        points=points,
        units=units,
        slots=slots,
        control=control,
        eye_level=eye,
        scenarios=scenarios,
        growth=growth,
        bypass=of_bypass,
        tank=tank,
        needs_missing=_pairs(needs.leaves_out),
    )


def _place(station: Station, reach: str) -> int:
    """Return the place of a reach of the discharge main along suction line and main."""
    places = [each.id for each in station.discharge_main.reaches]
    return len(station.suction_line.reaches) + places.index(reach)


def _ages(scenarios: Iterable[Scenario]) -> set[PipeAge]:
    # without a scenario the aged wall is asked for: it is the one that decides
    ages: set[PipeAge] = {scenario.pipes for scenario in scenarios}
    return ages or {"aged"}


def _pairs(missing: Iterable[Missing]) -> tuple[tuple[str, str], ...]:
    return tuple((one.path, one.reason) for one in missing)
