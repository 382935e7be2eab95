"""What the document itself shows: absent inputs, defaults, departures, demands out of order."""

from collections.abc import Iterable, Iterator

from server.station import paths
from server.station.demand import Horizon
from server.station.entry import Quantity
from server.station.pump_set import PumpSet
from server.station.station import Station
from server.studies.duty_result import DutyResult, NotSolved
from server.studies.findings.criteria import Criterion
from server.studies.findings.judge_defaults import (
    DEFAULT_USED,
    default_used,
    judge_defaults,
    judge_departures,
)
from server.studies.findings.judged_set import amount
from server.studies.findings.reading import Reading
from server.studies.shapes import Finding, Path, Severity
from server.units import Dimension as D

NOT_IN_THIS_VERSION = "not_in_this_version"
DEMANDS = (
    ("minimum_night", "minimum night"), ("average_day", "average day"),
    ("maximum_day", "maximum day"), ("peak_hour", "peak hour"),
)  # fmt: skip


def judge_missing(results: dict[str, DutyResult | NotSolved]) -> Iterator[Finding]:
    """Yield each absent field once, and each default that a study used."""
    seen: set[tuple[Path, str]] = set()
    for set_id, result in results.items():
        pairs: Iterable[tuple[str, str]] = (
            result.needs_missing
            if isinstance(result, DutyResult)
            else ((missing.path, missing.reason) for missing in result.missing)
        )
        stops = isinstance(result, NotSolved)
        for path, reason in pairs:
            if (path, reason) in seen:
                continue
            seen.add((path, reason))
            yield _missing(
                path, reason, stops, set_id if path.startswith(f"/sets/{set_id}") else None
            )


def _missing(path: Path, reason: str, stops: bool, set_id: str | None) -> Finding:
    if reason == DEFAULT_USED:
        return default_used(path)
    code = "kind_not_computed" if reason == NOT_IN_THIS_VERSION else "input_missing"
    if reason not in ("absent", NOT_IN_THIS_VERSION):
        code = "input_refused" if stops else "input_lacks"
    return Finding(
        code=code, severity=Severity.NOT_CHECKED, subject=path, pump_set=set_id,
        names=(("state", "stops" if stops else "part"), ("reason", reason)), basis="physics",
        mend=(path,), because=reason,
    )  # fmt: skip


def judge_inputs(
    station: Station, criteria: dict[str, Criterion]
) -> tuple[list[Reading], list[Finding]]:
    """Return what the document shows without a study."""
    findings = [
        *judge_defaults(station), *judge_departures(criteria), *_empty(station),
        *_scenarios(station),
        *_demands(station), *_points(station), *_under_criteria(station, criteria),
    ]  # fmt: skip
    findings.extend(_missing(path, "absent", False, None) for path in _unasked(station))
    for each in station.sets:
        findings.extend(_protections(station, each))
        findings.extend(_ratings(station, each))
    return list(_fires(station, criteria)), findings


def _not_checked(code: str, path: Path, names: tuple[tuple[str, str], ...] = (),
                 set_id: str | None = None,
                 subject: Path | None = None) -> Finding:  # fmt: skip
    return Finding(
        code=code, severity=Severity.NOT_CHECKED, subject=subject or path, pump_set=set_id,
        names=names, basis="physics", mend=(path,), because="absent",
    )  # fmt: skip


def _unasked(station: Station) -> Iterator[Path]:
    """Yield the absent fields that a judge needs and no study asks for."""
    for fire in station.fires:
        if fire.duration is None:
            yield f"/fires/{fire.id}/duration"
    if station.supply.bypass.fitted is None and station.sets:
        yield "/supply/bypass/fitted"
    used = {slot.pump for each in station.sets for slot in each.slots}
    for pump in station.pumps:
        if pump.id in used and pump.motor_power is None:
            yield f"/pumps/{pump.id}/motor_power"
    if station.supply.kind == "main":
        for test in station.supply.flow_tests:
            for name in ("gauge_level", "static_pressure", "residual_pressure", "test_flow"):
                if test.use == "compared" and getattr(test, name) is None:
                    yield f"/supply/flow_tests/{test.id}/{name}"


def _empty(station: Station) -> Iterator[Finding]:
    """Yield the parts of an unfinished station that no study can name, for want of a set."""
    if not station.sets:
        for path, present in (
            ("/supply/kind", station.supply.kind),
            ("/suction_line/reaches", station.suction_line.reaches),
            ("/discharge_main/reaches", station.discharge_main.reaches),
            ("/zone/kind", station.zone.kind),
            ("/zone/points", station.zone.points), ("/horizons", station.horizons),
            ("/scenarios", station.scenarios), ("/pumps", station.pumps),
            ("/legs", station.legs),
            ("/sets", station.sets),
        ):  # fmt: skip
            if not present:
                yield _missing(path, "absent", True, None)
    elif station.proposed_set is None:
        yield _not_checked("proposed_set_missing", "/proposed_set")


def _scenarios(station: Station) -> Iterator[Finding]:
    """Yield the demands and years that no scenario in use judges."""
    used = [scenario for scenario in station.scenarios if scenario.on]
    for horizon in station.horizons:
        names = (("horizon", _horizon_name(station, horizon)),)
        own = [scenario for scenario in used if scenario.horizon == horizon.id]
        if horizon.year is None:
            yield _not_checked("horizon_without_year", f"/horizons/{horizon.id}/year", names)
        for demand, words in DEMANDS:
            if not any(scenario.demand == demand and scenario.fire is None for scenario in own):
                yield _not_checked(
                    "scenario_missing",
                    _scenario_field(station, horizon.id, demand),
                    (*names, ("demand", words)),
                    subject=f"/horizons/{horizon.id}/demand/{demand}",
                )
        pumped = [fire for fire in station.fires if fire.carried_by != "storage"]
        if pumped and not any(scenario.fire is not None for scenario in own):
            yield _not_checked("fire_scenario_missing",
                               _scenario_field(station, horizon.id, None), names,
                               subject=f"/horizons/{horizon.id}")  # fmt: skip


def _horizon_name(station: Station, horizon: Horizon) -> str:
    """Return the horizon's name, else its year, else its place: "horizon 1"."""
    year = "" if horizon.year is None else str(horizon.year)
    return horizon.title or year or paths.item_title(station, f"/horizons/{horizon.id}")


def _scenario_field(station: Station, horizon: str, demand: str | None) -> Path:
    """Return the switch of a scenario that is left out, or the list that wants one."""
    for scenario in station.scenarios:
        of_kind = (
            scenario.fire is not None
            if demand is None
            else (scenario.demand == demand and scenario.fire is None)
        )
        if scenario.horizon == horizon and of_kind and not scenario.on:
            return f"/scenarios/{scenario.id}/on"
    return "/scenarios"


def _demands(station: Station) -> Iterator[Finding]:
    """Yield demands that cannot be: night at zero, a smaller demand above a larger one."""
    for horizon in station.horizons:
        base = f"/horizons/{horizon.id}/demand"
        names = (("horizon", _horizon_name(station, horizon)),)
        night = horizon.demand.minimum_night
        if night is not None and night.si == 0:
            yield Finding(
                code="minimum_night_zero", severity=Severity.CAUTION,
                subject=f"{base}/minimum_night",
                pump_set=None, names=names, basis="physics", mend=(f"{base}/minimum_night",),
            )  # fmt: skip
        entered = [(name, words, q.si) for name, words in DEMANDS
                   if (q := getattr(horizon.demand, name)) is not None]  # fmt: skip
        for (lower, lower_words, below), (_, upper_words, above) in zip(
            entered, entered[1:], strict=False
        ):
            if below > above:
                yield Finding(
                    code="demands_out_of_order", severity=Severity.CAUTION,
                    subject=f"{base}/{lower}",
                    pump_set=None, provided=amount("below", below, D.FLOW),
                    required=amount("above", above, D.FLOW),
                    names=(*names, ("lower", lower_words), ("upper", upper_words)),
                    basis="physics",
                    mend=(f"{base}/{lower}",),
                )  # fmt: skip


def _points(station: Station) -> Iterator[Finding]:
    """Yield the kinds of point without which a requirement is judged nowhere."""
    roles = {point.role for point in station.zone.points}
    customers = [point for point in station.zone.points if point.role != "hydrant"]
    known = sorted((p for p in customers if p.elevation is not None),
                   key=lambda p: 0.0 if p.elevation is None else p.elevation.si)  # fmt: skip
    if not station.zone.points:
        return
    for role, code, place in (
        ("critical", "no_critical_point", -1),
        ("lowest", "no_lowest_point", 0),
    ):
        if role not in roles:
            path = f"/zone/points/{known[place].id}/role" if known else "/zone/points"
            yield _not_checked(code, path, subject="/zone/points")


def _under_criteria(station: Station, criteria: dict[str, Criterion]) -> Iterator[Finding]:
    """Yield the limits typed at a point that ask less than the criteria do."""
    for point in station.zone.points:
        for field, key, least in (
            ("required_pressure", "service-pressure-min", True),
            ("fire_pressure", "fire-pressure-min", True),
            ("residual_pressure", "hydrant-residual-min", True),
            ("highest_pressure", "service-pressure-max", False),
            ("highest_pressure_abnormal", "service-pressure-max-abnormal", False),
        ):
            typed, limit = getattr(point, field), criteria[key].si
            if typed is None or limit is None:
                continue
            weaker = (
                typed.si < limit - 1e-6 * limit if least else typed.si > limit + 1e-6 * limit
            )
            if weaker:
                path = f"/zone/points/{point.id}/{field}"
                yield Finding(
                    code="point_asks_less", severity=Severity.CAUTION, subject=path,
                    pump_set=None,
                    criterion=criteria[key].path,
                    provided=amount("typed", typed.si, D.PRESSURE),
                    required=amount("required", limit, D.PRESSURE),
                    names=(("point", paths.item_title(station, path)),
                           ("rule", criteria[key].title)), basis=key,
                    mend=(path, f"{criteria[key].path}/limit"),
                )  # fmt: skip


def _protections(station: Station, each: PumpSet) -> Iterator[Finding]:
    """Yield the protections that are not entered: what they protect is not checked."""
    base, trips = f"/sets/{each.id}/trips", each.trips
    # a tank's cut-out level stops the pumps before they draw air
    from_tank = station.supply.kind == "tank" and station.supply.tank.cut_out is not None
    for field, value, needed in (
        ("high_level_trip", trips.high_level_trip, each.control.kind == "levels"),
        ("low_suction_trip", trips.low_suction_trip, not from_tank),
        ("low_suction_delay", trips.low_suction_delay, trips.low_suction_trip is not None),
        ("high_discharge_trip", trips.high_discharge_trip, True),
        (
            "high_discharge_delay",
            trips.high_discharge_delay,
            trips.high_discharge_trip is not None,
        ),
    ):
        if value is None and needed:
            named = (("set", paths.item_title(station, f"/sets/{each.id}")),)
            yield _not_checked("protection_missing", f"{base}/{field}", named, each.id)


def _ratings(station: Station, each: PumpSet) -> Iterator[Finding]:
    """Yield the parts under shut-off pressure without a rating."""
    used = {slot.pump for slot in each.slots}
    for pump in station.pumps:
        if pump.id in used and pump.rating is None:
            named = (("part", paths.item_title(station, f"/pumps/{pump.id}")),)
            yield _not_checked("rating_missing", f"/pumps/{pump.id}/rating", named, each.id)
    if each.slots and each.flange_rating is None:
        yield _not_checked("rating_missing", f"/sets/{each.id}/flange_rating",
                           (("part", "the manifold"),), each.id)  # fmt: skip
    for reach in station.discharge_main.reaches:
        if reach.rating is None:
            yield _not_checked("rating_missing", f"/discharge_main/reaches/{reach.id}/rating",
                               (("part", reach.title or "the discharge main"),),
                               each.id)  # fmt: skip


def _fires(station: Station, criteria: dict[str, Criterion]) -> Iterator[Reading]:
    """Yield the duration of each fire; in the US what is asked grows with the flow."""
    for fire in station.fires:
        if fire.duration is None:
            continue
        key = "fire-duration-min"
        for other, above in (
            ("fire-duration-above-2500-gpm-min", 2500.0),
            ("fire-duration-above-3500-gpm-min", 3500.0),
        ):  # fmt: skip
            flow = Quantity(value=above, unit="gpm_us").si
            if (
                criteria[other].si is not None
                and fire.flow is not None
                and fire.flow.si > flow * (1 + 1e-9)
            ):
                key = other
        yield Reading(
            code="fire_duration_short", severity=Severity.FAIL,
            subject=f"/fires/{fire.id}/duration",
            pump_set=None, criterion=criteria[key].path, case=None,
            provided=amount("duration", fire.duration.si, D.TIME, 0),
            required=amount("required", criteria[key].si, D.TIME, 0), sense="at_least",
            mend=(f"/fires/{fire.id}/duration",), names=(("fire", fire.title or "the fire"),),
            at_limit_share=0.0,
        )  # fmt: skip
