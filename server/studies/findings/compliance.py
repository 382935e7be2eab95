"""Compliance: every criterion with what is provided, for the Criteria sheet and the memo."""

from collections.abc import Iterable
from dataclasses import dataclass

from server.station.station import Station
from server.studies.findings.criteria import Criterion
from server.studies.findings.reading import Reading, broken, worst_first
from server.studies.shapes import Amount, Case, Finding, Severity, Verdict
from server.units import Dimension

# codes of readings that inform about a criterion without judging it
INFORMING = frozenset({"pressure_by_speed", "region_edge", "region_outside_in_fire"})
NO_SUCH_CASE = (
    "npsh-margin-outside-min",
    "power-disagreement-max",
    "best-efficiency-difference-max",
)
# rules judged by a finding rather than by one number against another
BY_FINDING = frozenset({"station-off-pressure-min", "gap-narrow"})
OF_A_MAIN = (
    "suction-main-minimum", "suction-gauge-minimum", "supplying-zone-fire-min",
    "supplying-zone-normal-min", "flow-test-age-max", "flow-test-drop-min",
    "flow-test-extrapolation-max", "flow-test-scatter-max",
)  # fmt: skip
OF_POINTS = (
    "service-pressure-min", "fire-pressure-min", "hydrant-residual-min", "service-pressure-max",
    "service-pressure-max-abnormal", "station-off-pressure-min",
)  # fmt: skip
OF_A_HELD_PRESSURE = ("pressure-per-speed-max", "speed-span-min", "gap-narrow")
OF_A_DRIVE = ("speed-lowest", "speed-highest")
NOT_COMPUTED = {
    "hours-outside-region": "energy and hours are not computed in this version",
    "starts-small-max": "starts an hour are not computed in this version",
    "starts-15-kw-max": "starts an hour are not computed in this version",
    "starts-75-kw-max": "starts an hour are not computed in this version",
    "starts-185-kw-max": "starts an hour are not computed in this version",
    "temperature-rise-max": "running at no flow is not computed in this version",
    "transient-pressure-min": "transients are not computed in this version",
}


@dataclass(frozen=True, slots=True)
class ComplianceRow:
    """One criterion and how the proposed set stands against it."""

    criterion: Criterion
    verdict: Verdict
    required: Amount | None = None
    provided: Amount | None = None
    case: Case | None = None
    subject: str = ""
    because: str = ""


def compliance_rows(
    criteria: dict[str, Criterion], readings: Iterable[Reading], findings: Iterable[Finding],
    pump_set: str | None, station: Station,
) -> tuple[ComplianceRow, ...]:  # fmt: skip
    """Return a row for every criterion, in the order of the sheet, for the set `pump_set`."""
    elsewhere = _not_here(station, pump_set)
    by_key: dict[str, list[Reading]] = {}
    for reading in readings:
        judged = reading.verdict is not Verdict.NOT_CHECKED and reading.code not in INFORMING
        if judged and reading.criterion is not None and reading.pump_set in (None, pump_set):
            by_key.setdefault(reading.criterion.rsplit("/", 1)[-1], []).append(reading)
    found: dict[str, list[Finding]] = {}
    for finding in findings:
        if finding.pump_set in (None, pump_set):
            found.setdefault(finding.basis, []).append(finding)
    return tuple(
        _row(criterion, by_key.get(key, []), found.get(key, []), pump_set,
             elsewhere.get(key, ""))
        for key, criterion in criteria.items()
    )  # fmt: skip


def _not_here(station: Station, pump_set: str | None) -> dict[str, str]:
    """Return the rules that this kind of station has no use for, and why."""
    found: dict[str, str] = {}
    if station.supply.kind == "tank":
        found |= dict.fromkeys(OF_A_MAIN, "the station draws from a tank")
    if station.zone.kind == "tank" and not station.zone.points:
        found |= dict.fromkeys(OF_POINTS, "no point is named; the tank holds the zone")
    own = next((each for each in station.sets if each.id == pump_set), None)
    if own is not None:
        if own.control.kind in ("fixed_speed", "levels", "held_flow"):
            found |= dict.fromkeys(OF_A_HELD_PRESSURE, "no pressure is held")
        if all(slot.drive == "fixed" for slot in own.slots):
            found |= dict.fromkeys(OF_A_DRIVE, "no unit has a drive")
    return found


def _row(
    criterion: Criterion, readings: list[Reading], findings: list[Finding],
    pump_set: str | None, not_here: str,
) -> ComplianceRow:  # fmt: skip
    limit = None
    if criterion.quantity is not None:
        limit = Amount("limit", criterion.si, criterion.dimension, criterion.rule.decimals)
    if not_here and not readings and not findings:
        return ComplianceRow(criterion, Verdict.NOT_APPLICABLE, limit, because=not_here)
    if criterion.sense in ("setting", "stated") and not readings:
        return ComplianceRow(criterion, Verdict.NOT_APPLICABLE, limit,
                             because="a setting"
                             if criterion.sense == "setting" else criterion.source)  # fmt: skip
    if criterion.key in BY_FINDING:
        return _by_finding(criterion, limit, findings, pump_set)
    if not readings:
        return _unread(criterion, limit, findings)
    failing = [reading for reading in readings if broken(reading)]
    worst = (
        worst_first(failing)[0] if failing else min(readings, key=lambda r: r.relative_margin)
    )
    return ComplianceRow(
        criterion, worst.verdict, limit if worst.without_number else worst.required,
        worst.provided, worst.case, worst.subject,
        "no water there" if worst.without_number else "",
    )  # fmt: skip


def _by_finding(
    criterion: Criterion, limit: Amount | None, findings: list[Finding], pump_set: str | None
) -> ComplianceRow:
    if pump_set is None:
        return ComplianceRow(criterion, Verdict.NOT_CHECKED, limit, because="no set is solved")
    if not findings:
        return ComplianceRow(criterion, Verdict.MEETS, limit)
    worst = findings[0]
    verdict = {
        Severity.STOP: Verdict.DOES_NOT_MEET,
        Severity.FAIL: Verdict.DOES_NOT_MEET,
        Severity.NOT_CHECKED: Verdict.NOT_CHECKED,
    }.get(worst.severity, Verdict.MEETS)
    same = worst.provided is not None and worst.provided.dimension is criterion.dimension
    because = "by standby power" if worst.code == "station_off_relies_on_standby" else ""
    return ComplianceRow(criterion, verdict, limit, worst.provided if same else None,
                         worst.governing,
                         worst.subject, because)  # fmt: skip


def _unread(
    criterion: Criterion, limit: Amount | None, findings: list[Finding]
) -> ComplianceRow:
    if criterion.quantity is None:
        return ComplianceRow(
            criterion, Verdict.NOT_APPLICABLE, None, because="no limit in this profile"
        )
    if criterion.key in NOT_COMPUTED:
        return ComplianceRow(
            criterion, Verdict.NOT_CHECKED, limit, because=NOT_COMPUTED[criterion.key]
        )
    if criterion.key == "vessel-connections-max":
        return ComplianceRow(
            criterion, Verdict.NOT_APPLICABLE, limit, because="no vessel is entered"
        )
    narrow = criterion.key.endswith("-high-specific-speed")
    longer_fire = criterion.key.startswith("fire-duration-above")
    if narrow or longer_fire or criterion.key in NO_SUCH_CASE:
        return ComplianceRow(criterion, Verdict.NOT_APPLICABLE, limit, because="no such case")
    missing = findings[0].mend[0] if findings and findings[0].mend else ""
    return ComplianceRow(criterion, Verdict.NOT_CHECKED, limit, subject=missing,
                         because="what it needs is not given or not solved")  # fmt: skip


def departures(rows: Iterable[ComplianceRow]) -> tuple[ComplianceRow, ...]:
    """Return the rows that depart from their profile."""
    return tuple(row for row in rows if row.criterion.departs)


def is_ratio(row: ComplianceRow) -> bool:
    """Return whether a row's numbers are read in per cent."""
    return row.criterion.dimension is Dimension.RATIO
