"""The grade-line strip: the hydraulic grade line from the supply to the farthest customer.

Heights are to one scale, lengths are not: the suction line would vanish beside the main.
"""

from dataclasses import dataclass

import numpy as np

from server.hydraulics.water import GRAVITY
from server.station.entry import Quantity
from server.station.station import Station
from server.studies.duty_result import DutyResult, Place

MOST_POINTS = 4


@dataclass(frozen=True, slots=True)
class StripStop:
    """One place on the way; `grade` and `pressure` are None where there is none to give."""

    name: str
    elevation: float | None  # [m]
    grade: float | None  # [m]
    pressure: float | None  # gauge [Pa]
    after_pumps: bool
    concerns: bool = False  # what the case is judged by: the held point, the flowing hydrant
    dry: bool = False  # no water there: no grade and no pressure


@dataclass(frozen=True, slots=True)
class GradeStrip:
    """The strip in SI: its stops in the direction of flow, and the lift between them."""

    stops: tuple[StripStop, ...]
    lift: float | None  # [m]
    running: tuple[str, ...]
    speed: float | None  # of the first running unit, ratio
    flow: float | None  # [m3/s]


def grade_strip(station: Station, result: DutyResult, case: int) -> GradeStrip:
    """Return the strip of one case in the combination that is chosen there.

    Parameters
    ----------
    station : Station
        Gives the levels along the way.
    result : DutyResult
        Gives grades and pressures.
    case : int
        Index of the case.
    """
    chosen = int(result.chosen[case])
    combination = max(chosen, 0)
    solved = chosen >= 0 and bool(np.isfinite(result.discharge_grade[case, combination]))
    site = station.site
    place = Place(int(result.suction_breaks_at[case]))
    stops = [
        StripStop(
            station.supply.title or "Supply",
            _level(station.supply.connection_level),
            _number(result.supply_grade[case]),
            _number(result.connection_pressure[case]),
            False,
            dry=place is Place.CONNECTION,
        ),
        StripStop(
            "Suction manifold",
            _level(site.suction_gauge_level),
            _number(result.suction_grade[case]),
            _number(result.suction_pressure[case]),
            False,
            dry=place is not Place.NOWHERE,
        ),
        StripStop(
            "Discharge manifold",
            _level(site.discharge_gauge_level),
            _number(result.discharge_grade[case, combination]) if solved else None,
            _number(result.discharge_pressure[case, combination]) if solved else None,
            True,
            concerns=result.held_point is None,
            dry=solved and bool(result.discharge_without_water[case, combination]),
        ),
    ]
    end = (
        station.discharge_main.reaches[-1].end_level if station.discharge_main.reaches else None
    )
    entry = _number(result.zone_entry_grade[case, combination]) if solved else None
    level = _level(end)
    stops.append(_end_of_main(result, level, entry))
    stops.extend(_points(result, case, combination, solved))
    lift = _number(result.station_head[case, combination]) if solved else None
    running = (
        np.flatnonzero(result.combinations[combination])
        if solved
        else np.array([], dtype=np.intp)
    )
    names = tuple(result.slots[int(n)].title or result.slots[int(n)].id for n in running)
    speed = _number(result.speed[case, combination, running[0]]) if running.size else None
    return GradeStrip(tuple(stops), lift, names, speed, _number(result.demand[case]))


def _end_of_main(result: DutyResult, level: float | None, entry: float | None) -> StripStop:
    """Return the end of the main; without its level it is a bend of the line, without name."""
    if level is None or entry is None:
        return StripStop("" if level is None else "End of the main", level, entry, None, True)
    pressure = (entry - level) * result.density * GRAVITY
    if pressure < result.lowest_pressure:
        return StripStop("End of the main", level, None, None, True, dry=True)
    return StripStop("End of the main", level, entry, pressure, True)


def _points(result: DutyResult, case: int, combination: int, solved: bool) -> list[StripStop]:
    """Return the named points, the nearest (highest grade) first, at most `MOST_POINTS`."""
    burning = int(result.fire_point[case])
    weight = {"critical": 0, "lowest": 2, "hydrant": 3, "customer": 4}
    order = sorted(
        range(len(result.points)),
        key=lambda p: (0 if p == burning else 1, weight.get(result.points[p].role, 5), p),
    )[:MOST_POINTS]
    stops = [
        StripStop(
            result.points[p].title or "Point without a name",
            _number(result.points[p].elevation),
            _number(result.point_grade[case, combination, p]) if solved else None,
            _number(result.point_pressure[case, combination, p]) if solved else None,
            True,
            concerns=p == burning or result.points[p].id == result.held_point,
            dry=solved and bool(result.point_without_water[case, combination, p]),
        )
        for p in order
    ]
    return sorted(stops, key=lambda s: (-(s.grade or 0.0), s.elevation or 0.0))


def _number(value: float) -> float | None:
    return float(value) if np.isfinite(value) else None


def _level(quantity: Quantity | None) -> float | None:
    return None if quantity is None else quantity.si
