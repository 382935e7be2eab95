"""The scenarios a station is usually judged in, made from the horizons and fires entered.

Minimum night at low and at high supply, new pipes; average day at normal supply; maximum day
and peak hour at low supply with the largest unit out; maximum day and fire the same, a scenario
a fire; shut-off at high supply. Towards a tank that floats on the zone: the easiest fill (high
supply, tank low, new pipes) and the four demands, the maximum day into the full tank. Else the
opening year has new pipes, later years aged ones, unless a horizon says otherwise.
"""

from pydantic import JsonValue

from server.station.edits import Edit, apply_edits
from server.station.faults import BadStation, Fault
from server.station.fresh import new_item
from server.station.station import Station

LIST = "/scenarios"
# title, demand, supply state, level of the tank, pipes (None: as old as the horizon's)
_FILLING = (
    ("Easiest fill", "none", "high", "low", "new"),
    ("Minimum night", "minimum_night", "low", "top", None),
    ("Average day", "average_day", "normal", "normal", None),
    ("Maximum day", "maximum_day", "low", "top", None),
    ("Peak hour", "peak_hour", "low", "low", None),
)
# title, demand, supply state, unit out, pipes (None: as old as the horizon's)
_USUAL = (
    ("Minimum night", "minimum_night", "low", "none", "new"),
    ("Minimum night, high supply", "minimum_night", "high", "none", "new"),
    ("Average day", "average_day", "normal", "none", None),
    ("Maximum day", "maximum_day", "low", "largest", None),
    ("Peak hour", "peak_hour", "low", "largest", None),
    ("Shut-off", "none", "high", "none", None),
)


def default_scenarios(station: Station) -> tuple[Edit, ...]:
    """Return the edits that add every usual scenario that is not there yet.

    Raises
    ------
    BadStation
        When there is no horizon to make them for, or all of them are there.
    """
    if not station.horizons:
        raise _refused("Add a horizon with its demand first; scenarios are made for each.")
    there = {(s.horizon, s.demand, s.supply, s.fire) for s in station.scenarios}
    edits: list[Edit] = []
    for place, horizon in enumerate(station.horizons):
        pipes = horizon.pipes or ("new" if place == 0 and len(station.horizons) > 1 else "aged")
        name = horizon.title.lower() or (
            str(horizon.year) if horizon.year else f"horizon {place + 1}"
        )
        wanted: list[dict[str, JsonValue]] = [
            {
                "title": f"{title}, {name}",
                "demand": demand,
                "supply": supply,
                "out": out,
                "pipes": age or pipes,
            }
            for title, demand, supply, out, age in _USUAL
        ]
        if _fills_a_tank(station):
            wanted = [
                {
                    "title": f"{title}, {name}",
                    "demand": demand,
                    "supply": supply,
                    "tank_state": level,
                    "out": "none",
                    "pipes": age or pipes,
                }
                for title, demand, supply, level, age in _FILLING
            ]
        wanted += [
            {
                "title": f"{_demand_words(fire.beside)} and fire, {name}"
                + (f", {fire.title}" if len(station.fires) > 1 and fire.title else ""),
                "demand": fire.beside,
                "supply": "low",
                "out": "largest",
                "fire": fire.id,
                "pipes": pipes,
            }
            for fire in station.fires
            if fire.carried_by != "storage"
        ]
        for scenario in wanted:
            key = (horizon.id, scenario["demand"], scenario["supply"], scenario.get("fire"))
            if key in there:
                continue
            item = {**new_item(station, LIST), **scenario, "horizon": horizon.id}
            edit = Edit("insert", LIST, item)
            station = apply_edits(station, [edit])
            edits.append(edit)
    if not edits:
        raise _refused("Every usual scenario is there already.")
    return tuple(edits)


def _fills_a_tank(station: Station) -> bool:
    zone = station.zone
    return zone.kind in ("tank", "both") and zone.tank.use == "floating"


def _demand_words(demand: str) -> str:
    return demand.replace("_", " ").capitalize()


def _refused(sentence: str) -> BadStation:
    return BadStation([Fault(LIST, "demand", "", "", sentence)])
