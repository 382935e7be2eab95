"""Pressures at the named points against what is required, at shut-off against ratings."""

from collections.abc import Iterator

import numpy as np

from server.hydraulics.states import State
from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.findings.reading import Reading, Sense
from server.studies.shapes import SUPPLY_STATES, Case, Finding, Path, Severity
from server.units import Dimension as D


def judge_pressures(judged: JudgedSet) -> tuple[list[Reading], list[Finding]]:
    """Return readings of every point in every case, and where a point has no water at all."""
    readings: list[Reading] = []
    dry: dict[int, list[Case]] = {}
    for c, k in judged.stated:
        for p in range(len(judged.points)):
            pressure = float(judged.result.point_pressure[c, k, p])
            if pressure < judged.lowest_pressure:
                dry.setdefault(p, []).append(judged.case(c))
                continue
            readings.extend(_in_case(judged, c, k, p, pressure))
    readings.extend(_at_no_flow(judged))
    findings = [
        Finding(
            code="no_water_at_point", severity=Severity.STOP, subject=judged.point_path(p),
            pump_set=judged.id, governing=cases[0], cases=tuple(cases),
            names=(("point", judged.points[p].title), ("set", judged.title)), basis="physics",
            mend=_to_raise(judged, top_speed=True),
        )
        for p, cases in dry.items()
    ]  # fmt: skip
    return readings, findings


def _in_case(judged: JudgedSet, c: int, k: int, p: int, pressure: float) -> Iterator[Reading]:
    """Yield the readings of one point in one case."""
    point, result = judged.points[p], judged.result
    at_top = State(int(result.state[c, k])) is State.TOP_SPEED
    raising = _to_raise(judged, at_top)
    if result.is_fire[c]:
        if int(result.fire_point[c]) == p:
            yield _reading(judged, "hydrant_residual_low", "hydrant-residual-min", p, pressure,
                           point.residual_pressure, "at_least", judged.case(c),
                           raising)  # fmt: skip
        else:
            yield _reading(judged, "fire_pressure_low", "fire-pressure-min", p, pressure,
                           point.fire_pressure, "at_least", judged.case(c),
                           raising)  # fmt: skip
        yield _reading(judged, "pressure_high_in_fire", "service-pressure-max-abnormal", p,
                       pressure,
                       point.highest_pressure_abnormal, "at_most", judged.case(c),
                       (f"{judged.path}/control/pressure",))  # fmt: skip
        return
    if point.role != "hydrant" or point.required_pressure is not None:
        held = p == judged.held_index and bool(result.set_point_held[c, k])
        yield _reading(judged, "pressure_low", "service-pressure-min", p, pressure,
                       point.required_pressure, "at_least", judged.case(c), raising,
                       held)  # fmt: skip
    yield _reading(judged, "pressure_high", "service-pressure-max", p, pressure,
                   point.highest_pressure, "at_most", judged.case(c),
                   (f"{judged.path}/control/pressure",))  # fmt: skip


def _reading(
    judged: JudgedSet, code: str, key: str, p: int, pressure: float, typed: float | None,
    sense: Sense, case: Case, mend: tuple[Path, ...], held: bool = False,
    severity: Severity = Severity.FAIL, name: str = "",
) -> Reading:  # fmt: skip
    limit = judged.limit(key) if typed is None else typed
    return Reading(
        code=code, severity=severity, subject=judged.point_path(p), pump_set=judged.id,
        criterion=judged.criterion(key), case=case,
        provided=amount("pressure", pressure, D.PRESSURE, 0),
        required=amount("required", limit, D.PRESSURE), sense=sense, mend=mend,
        names=(("point", judged.points[p].title), ("set", judged.title),
               ("limit", "point" if typed is not None else "criterion"), ("state", name)),
        # a held pressure is the set point itself: its margin lies in the speed, not here
        at_limit_share=0.0 if held else 0.02,
    )  # fmt: skip


def _to_raise(judged: JudgedSet, top_speed: bool) -> tuple[Path, ...]:
    """Return the fields that raise a pressure, best first."""
    set_point = f"{judged.path}/control/pressure"
    if not top_speed:
        return (set_point,)
    return (*_pump_tables(judged), f"{judged.path}/control/highest_speed", set_point)


def _pump_tables(judged: JudgedSet) -> tuple[Path, ...]:
    """Return the curves of the duty pumps, each once, the first slot's first."""
    order = sorted(range(len(judged.slots)), key=lambda n: judged.slots[n].role == "jockey")
    return tuple(dict.fromkeys(f"{judged.curve_path(n)}/table" for n in order))


def _at_no_flow(judged: JudgedSet) -> Iterator[Reading]:
    """Yield the readings against a shut zone: set point held, and all at top speed."""
    zero = judged.result.made.zero_flow
    if zero is None:
        return
    largest = np.fmax(zero.point_pressure_largest, zero.point_pressure_all)
    gauge = np.fmax(zero.discharge_pressure_largest, zero.discharge_pressure_all)
    for s in range(len(SUPPLY_STATES)):
        for p, point in enumerate(judged.points):
            yield _reading(judged, "pressure_high", "service-pressure-max", p,
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
    reading = _reading(
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


def _ratings(judged: JudgedSet, s: int, gauge: float) -> Iterator[Reading]:
    """Yield shut-off pressure against every typed rating of pumps, flanges and main."""
    rated: list[tuple[Path, str, float]] = []
    used = {slot.pump for slot in judged.slots}
    for pump in judged.station.pumps:
        if pump.id in used and pump.rating is not None:
            rated.append((f"/pumps/{pump.id}/rating", pump.title, pump.rating.si))
    if judged.entered.flange_rating is not None:
        rated.append(
            (f"{judged.path}/flange_rating", "the manifold", judged.entered.flange_rating.si)
        )
    for reach in judged.station.discharge_main.reaches:
        if reach.rating is not None:
            rated.append(
                (f"/discharge_main/reaches/{reach.id}/rating", reach.title, reach.rating.si)
            )
    for path, title, rating in rated:
        protection = _protection(judged, rating)
        reading = Reading(
            code="rating_exceeded",
            severity=Severity.STOP if protection is None else Severity.CAUTION,
            subject=path, pump_set=judged.id, criterion=judged.criterion("pressure-rating"),
            case=judged.made_case("shut-off", s),
            provided=amount("pressure", gauge, D.PRESSURE, 0),
            required=amount("required", rating, D.PRESSURE), sense="at_most",
            mend=(path, f"{judged.path}/control/highest_speed",
                  f"{judged.path}/trips/high_discharge_trip"),
            names=(("part", title), ("set", judged.title),
                   ("state", "" if protection is None else protection[0])),
        )  # fmt: skip
        yield _with_protection(judged, reading, gauge, protection)
