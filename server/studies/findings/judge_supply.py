"""The supply as tested: flow tests, their states, and the supplying zone."""

from collections.abc import Iterator
from dataclasses import dataclass, field

from server.hydraulics.errors import SupplyRefused
from server.hydraulics.supply import FlowTestSupply, compare_flow_tests, fit_flow_tests
from server.station.station import Station
from server.station.supply import FlowTest
from server.studies.duty_result import DutyResult
from server.studies.findings.criteria import Criterion
from server.studies.findings.judged_set import amount
from server.studies.findings.reading import Reading, Sense
from server.studies.shapes import Amount, Case, Finding, Path, Severity
from server.studies.supplying_zone import PATH as ZONE_PATH
from server.studies.supplying_zone import absent_fields, check_supplying_zone
from server.units import Dimension as D


@dataclass(frozen=True, slots=True)
class Draws:
    """Largest draws of the station over all solved sets, with their cases."""

    normal: float = 0.0
    fire: float | None = None
    density: float = 999.0
    largest: float = 0.0
    cases: tuple[Case, ...] = field(default=())


def draws_of(results: list[DutyResult]) -> Draws | None:
    """Return the largest draws of the solved sets, None when no set is solved."""
    if not results:
        return None
    drawn = [each for result in results for each in _drawn(result)]
    normal = [q for q, in_fire, _ in drawn if not in_fire]
    fire = [q for q, in_fire, _ in drawn if in_fire]
    largest = max([*normal, *fire], default=0.0)
    cases = tuple(case for q, _, case in _drawn(results[0]) if q >= largest)
    return Draws(
        max(normal, default=0.0), max(fire, default=None), results[0].density, largest, cases
    )


def _drawn(result: DutyResult) -> Iterator[tuple[float, bool, Case]]:
    """Yield what each case draws from the supply: the demand, or what fills a tank."""
    for c, case in enumerate(result.cases):
        k = int(result.chosen[c])
        drawn = float(result.demand[c])
        if result.zone_kind == "floating_tank":
            drawn = float(result.flow[c, k]) if k >= 0 else float("nan")
        if drawn == drawn:
            yield drawn, bool(result.is_fire[c]), case


def judge_supply(
    station: Station, criteria: dict[str, Criterion], draws: Draws | None
) -> tuple[list[Reading], list[Finding]]:
    """Return readings of the flow tests and the supplying zone, and what cannot be checked."""
    readings: list[Reading] = []
    findings: list[Finding] = []
    if station.supply.kind == "main":
        for test in station.supply.flow_tests:
            readings.extend(_of_test(station, criteria, test, draws))
            findings.extend(_untold(test))
        readings.extend(_scatter(station, criteria))
        findings.extend(_estimate(station))
    findings.extend(_order(station))
    if station.supply.kind in ("main", "grade_line"):
        absent = absent_fields(station.supply.supplying_zone)
        if absent:
            findings.append(
                Finding(
                    code="supplying_zone_not_checked", severity=Severity.NOT_CHECKED,
                    subject=ZONE_PATH, pump_set=None,
                    criterion=criteria["supplying-zone-fire-min"].path,
                    names=(("supply", station.supply.title or "the supplying main"),),
                    basis="supplying-zone-fire-min", mend=absent, because="absent",
                )
            )  # fmt: skip
        elif draws is not None:
            readings.extend(_zone(station, criteria, draws))
    return readings, findings


def _reading(
    criteria: dict[str, Criterion], code: str, key: str, test: FlowTest, provided: Amount,
    dimension: D, sense: Sense, mend: tuple[Path,
                                            ...], *, severity: Severity = Severity.CAUTION,
    others: tuple[Amount, ...] = (), case: Case | None = None,
) -> Reading:  # fmt: skip
    return Reading(
        code=code, severity=severity, subject=f"/supply/flow_tests/{test.id}", pump_set=None,
        criterion=criteria[key].path, case=case, provided=provided,
        required=amount("required", criteria[key].si, dimension, criteria[key].rule.decimals),
        sense=sense, mend=mend, others=others, names=(("test", test.title or "a flow test"),),
        at_limit_share=0.0,
    )  # fmt: skip


def _of_test(
    station: Station, criteria: dict[str, Criterion], test: FlowTest, draws: Draws | None
) -> Iterator[Reading]:
    path = f"/supply/flow_tests/{test.id}"
    year = judged_year(station)
    if test.made_at is not None and year is not None and test.made_at[:4].isdecimal():
        age = float(year - int(test.made_at[:4]))
        yield _reading(criteria, "flow_test_old", "flow-test-age-max", test,
                       amount("age", age, D.NUMBER, 0), D.NUMBER, "at_most",
                       (f"{path}/made_at",),
                       others=(amount("year", float(year), D.NUMBER, 0),))  # fmt: skip
    if test.static_pressure is None or test.residual_pressure is None:
        return
    static = test.static_pressure.si
    drop = (static - test.residual_pressure.si) / static
    yield _reading(criteria, "flow_test_small_drop", "flow-test-drop-min", test,
                   amount("drop", drop, D.RATIO, 0), D.RATIO, "at_least",
                   (f"{path}/residual_pressure", f"{path}/test_flow"))  # fmt: skip
    if _reaches_furthest(station, test) and test.test_flow is not None and draws is not None:
        yield _reading(criteria, "flow_test_extrapolated", "flow-test-extrapolation-max", test,
                       amount("times", draws.largest / test.test_flow.si, D.NUMBER, 2),
                       D.NUMBER,
                       "at_most", (f"{path}/test_flow",),
                       case=draws.cases[0] if draws.cases else None,
                       others=(amount("design", draws.largest, D.FLOW),
                               amount("tested", test.test_flow.si, D.FLOW)))  # fmt: skip


def _reaches_furthest(station: Station, test: FlowTest) -> bool:
    """Return whether a test is the one to which the curve in use is tested.

    Several tests of the basis give one curve, known as far as the largest of their flows.
    """
    basis = [
        (each.test_flow.si, each.id)
        for each in station.supply.flow_tests
        if each.use == "basis" and each.test_flow is not None
    ]
    return bool(basis) and max(basis)[1] == test.id


def judged_year(station: Station) -> int | None:
    """Return the year in which a test's age is judged: the memo's, else the first horizon's."""
    if station.memo.date[:4].isdecimal():
        return int(station.memo.date[:4])
    years = [horizon.year for horizon in station.horizons if horizon.year is not None]
    return min(years, default=None)


def _untold(test: FlowTest) -> Iterator[Finding]:
    """Yield what a test does not say about itself."""
    path = f"/supply/flow_tests/{test.id}"
    for name, code, value in (
        ("station_draw", "flow_test_draw_unknown", test.station_draw),
        ("made_at", "flow_test_date_unknown", test.made_at),
    ):
        if value is None:
            yield Finding(
                code=code, severity=Severity.NOT_CHECKED, subject=path, pump_set=None,
                names=(("test", test.title or "a flow test"),), basis="physics",
                mend=(f"{path}/{name}",), because="absent",
            )  # fmt: skip


def _lowered(test: FlowTest) -> FlowTestSupply | None:
    if (
        test.gauge_level is None or test.static_pressure is None
        or test.residual_pressure is None or test.test_flow is None
    ):  # fmt: skip
        return None
    try:
        return FlowTestSupply(
            gauge_level=test.gauge_level.si, static_pressure=test.static_pressure.si,
            residual_pressure=test.residual_pressure.si, test_flow=test.test_flow.si,
        )  # fmt: skip
    except SupplyRefused:
        return None  # the duty study names the field that refuses it


def _scatter(station: Station, criteria: dict[str, Criterion]) -> Iterator[Reading]:
    """Yield the distance of every other test from the curve by the test, or the tests, used."""
    tests = station.supply.flow_tests
    used = [_lowered(test) for test in tests if test.use == "basis"]
    known = [each for each in used if each is not None]
    if not known or len(known) < len(used):
        return
    basis = known[0] if len(known) == 1 else fit_flow_tests(known).supply
    for test in tests:
        other = _lowered(test) if test.use == "compared" or len(known) > 1 else None
        if other is None:
            continue
        compared = compare_flow_tests(basis, others=[other])
        yield _reading(
            criteria, "flow_tests_disagree", "flow-test-scatter-max", test,
            amount("difference", abs(float(compared.difference[0])), D.PRESSURE, 1), D.PRESSURE,
            "at_most", (f"/supply/flow_tests/{test.id}/residual_pressure",),
            others=(amount("expected", float(compared.expected_pressure[0]), D.PRESSURE, 1),
                    amount("read", float(compared.shifted_pressure[0]), D.PRESSURE, 1)),
        )  # fmt: skip


def _estimate(station: Station) -> Iterator[Finding]:
    """Yield a low state that rests on the engineer's estimate, not on a record."""
    low = station.supply.states.low
    if low is not None and low.source is not None and low.source.kind in ("office", "default"):
        yield Finding(
            code="low_state_estimated", severity=Severity.NOTE, subject="/supply/states/low",
            pump_set=None, provided=amount("shift", low.si, D.PRESSURE),
            names=(("said", low.source.text),
                   ("supply", station.supply.title or "the supplying main")),
            basis="low-state-shift", mend=("/supply/states/low",),
        )  # fmt: skip


def _order(station: Station) -> Iterator[Finding]:
    """Yield supply states that do not rise from low to high."""
    supply = station.supply
    if supply.kind == "main":
        levels, base, dimension = supply.states, "/supply/states", D.PRESSURE
        values = (levels.low, levels.normal, levels.high)
    elif supply.kind == "grade_line":
        line, base, dimension = supply.grade_line, "/supply/grade_line", D.LEVEL
        values = (line.low, line.normal, line.high)
    else:
        return
    named = [
        (n, v.si)
        for n, v in zip(("low", "normal", "high"), values, strict=True)
        if v is not None
    ]
    for (lower, below), (upper, above) in zip(named, named[1:], strict=False):
        if below > above:
            yield Finding(
                code="supply_states_out_of_order", severity=Severity.FAIL, subject=base,
                pump_set=None,
                provided=amount("lower", below, dimension),
                required=amount("upper", above, dimension),
                names=(("lower_state", lower), ("upper_state", upper)), basis="physics",
                mend=(f"{base}/{lower}", f"{base}/{upper}"),
            )  # fmt: skip
            return


def _zone(station: Station, criteria: dict[str, Criterion], draws: Draws) -> Iterator[Reading]:
    for check in check_supplying_zone(
        station.supply.supplying_zone, station_peak=draws.normal, station_fire=draws.fire,
        density=draws.density,
    ):  # fmt: skip
        key = (
            "supplying-zone-normal-min"
            if check.check == "peak_hour"
            else "supplying-zone-fire-min"
        )
        yield Reading(
            code="supplying_zone_low", severity=Severity.FAIL, subject=ZONE_PATH, pump_set=None,
            criterion=criteria[key].path,
            case=Case(f"made:zone-{check.check}", "", "", "low", "aged", None),
            provided=amount("pressure", check.pressure, D.PRESSURE, 0),
            required=amount("required", criteria[key].si, D.PRESSURE), sense="at_least",
            others=(amount("flow", check.flow, D.FLOW),),
            mend=(f"{ZONE_PATH}/loss", f"{ZONE_PATH}/source_grade"),
            names=(("check", check.check), ("supply",
                                            station.supply.title or "the supplying main")),
        )  # fmt: skip
