"""The set against a shut zone: pressures at points, ratings of pumps, flanges and main."""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from server.hydraulics.water import GRAVITY
from server.studies.findings.judge_pressures import pressure_reading
from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.findings.reading import Reading
from server.studies.shapes import SUPPLY_STATES, Finding, Path, Severity
from server.units import Dimension as D


def judge_shut_off(judged: JudgedSet) -> Iterator[Reading]:
    """Yield the readings against a shut zone: set point held, and all at top speed."""
    zero = judged.result.made.zero_flow
    if zero is None:
        return
    largest = np.fmax(zero.point_pressure_largest, zero.point_pressure_all)
    gauge = np.fmax(zero.discharge_pressure_largest, zero.discharge_pressure_all)
    for s in range(len(SUPPLY_STATES)):
        for p, point in enumerate(judged.points):
            yield pressure_reading(judged, "pressure_high", "service-pressure-max", p,
                           float(zero.point_pressure_held[s, p]), point.highest_pressure,
                           "at_most",
                           judged.made_case("no-flow-held", s),
                           (f"{judged.path}/control/pressure",))  # fmt: skip
            yield _shut_off(judged, s, p, float(largest[s, p]), float(gauge[s]))
        yield from _ratings(judged, s, float(gauge[s]))


def _protection(judged: JudgedSet, allowed_at_gauge: float) -> tuple[str, float, Path] | None:
    """Return the trip or relief that acts before the gauge pressure `allowed_at_gauge`."""
    trips = judged.entered.trips
    for name, field, quantity in (
        ("relief", "relief_pressure", trips.relief_pressure),
        ("trip", "high_discharge_trip", trips.high_discharge_trip),
    ):
        if quantity is not None and quantity.si <= allowed_at_gauge:
            return name, quantity.si, f"{judged.path}/trips/{field}"
    return None


def _shut_off(judged: JudgedSet, s: int, p: int, pressure: float, gauge: float) -> Reading:
    """Return the reading of one point at shut-off and top speed: a trip makes it a caution."""
    point = judged.points[p]
    limit = point.highest_pressure_abnormal
    if limit is None:
        limit = judged.limit("service-pressure-max-abnormal")
    # at no flow the gauge stands above the point by the same head, whatever the speed
    protection = _protection(judged, limit + gauge - pressure)
    reading = pressure_reading(
        judged, "shutoff_pressure_high", "service-pressure-max-abnormal", p, pressure,
        point.highest_pressure_abnormal, "at_most", judged.made_case("shut-off", s),
        (f"{judged.path}/control/highest_speed", f"{judged.path}/trips/high_discharge_trip",
         f"{judged.path}/trips/relief_pressure"),
        severity=Severity.FAIL if protection is None else Severity.CAUTION,
        name="" if protection is None else protection[0],
    )  # fmt: skip
    return _with_protection(judged, reading, gauge, protection)


def _with_protection(
    judged: JudgedSet,
    reading: Reading,
    gauge: float,
    protection: tuple[str, float, Path] | None,
) -> Reading:
    delay = judged.entered.trips.high_discharge_delay
    others = [amount("gauge", gauge, D.PRESSURE, 0)]
    if protection is not None:
        others.append(amount("protection", protection[1], D.PRESSURE))
        others.append(amount("delay", None if delay is None else delay.si, D.TIME))
    return reading.varied(others=tuple(others))


@dataclass(frozen=True, slots=True)
class _Rated:
    """A part under pressure: its field, name, rating, and how far it lies under the gauge."""

    path: Path
    title: str
    rating: float  # [Pa]
    more: float  # pressure of its lowest known level over that at the discharge gauge [Pa]


def _rated(judged: JudgedSet) -> Iterator[_Rated]:
    """Yield pumps and flanges at the gauge, and each reach at its lowest known level."""
    used = {slot.pump for slot in judged.slots}
    for pump in judged.station.pumps:
        if pump.id in used and pump.rating is not None:
            yield _Rated(f"/pumps/{pump.id}/rating", pump.title, pump.rating.si, 0.0)
    flanges = judged.entered.flange_rating
    if flanges is not None:
        yield _Rated(f"{judged.path}/flange_rating", "the manifold", flanges.si, 0.0)
    gauge = judged.station.site.discharge_gauge_level
    level = None if gauge is None else gauge.si
    start = level
    for reach in judged.station.discharge_main.reaches:
        end = None if reach.end_level is None else reach.end_level.si
        if reach.rating is not None:
            known = [each for each in (start, end) if each is not None]
            lower = 0.0 if level is None or not known else level - min(known)
            path = f"/discharge_main/reaches/{reach.id}/rating"
            more = judged.result.density * GRAVITY * lower
            yield _Rated(path, reach.title, reach.rating.si, more)
        start = level if end is None else end


def levels_not_given(judged: JudgedSet) -> Iterator[Finding]:
    """Yield the rated reaches whose end has no level: lower down the pressure is higher."""
    for reach in judged.station.discharge_main.reaches:
        if reach.rating is not None and reach.end_level is None:
            path = f"/discharge_main/reaches/{reach.id}"
            yield Finding(
                code="rating_level_not_given", severity=Severity.NOTE, subject=path,
                pump_set=judged.id, basis="physics", mend=(f"{path}/end_level",),
                names=(("part", reach.title or "the discharge main"), ("set", judged.title)),
            )  # fmt: skip


def _ratings(judged: JudgedSet, s: int, gauge: float) -> Iterator[Reading]:
    """Yield shut-off pressure against every typed rating of pumps, flanges and main."""
    for part in _rated(judged):
        protection = _protection(judged, part.rating - part.more)
        reading = Reading(
            code="rating_exceeded",
            severity=Severity.STOP if protection is None else Severity.CAUTION,
            subject=part.path, pump_set=judged.id,
            criterion=judged.criterion("pressure-rating"),
            case=judged.made_case("shut-off", s),
            provided=amount("pressure", gauge + part.more, D.PRESSURE, 0),
            required=amount("required", part.rating, D.PRESSURE), sense="at_most",
            mend=(part.path, f"{judged.path}/control/highest_speed",
                  f"{judged.path}/trips/high_discharge_trip"),
            names=(("part", part.title), ("set", judged.title),
                   ("state", "" if protection is None else protection[0])),
        )  # fmt: skip
        yield _with_protection(judged, reading, gauge, protection)
