"""All judges of a station in one pass: the only place where results meet limits."""

from dataclasses import dataclass

from server.station.station import Station
from server.studies.duty_result import DutyResult, NotSolved
from server.studies.findings.criteria import Criterion
from server.studies.findings.judge_after_trip import judge_after_trip
from server.studies.findings.judge_capacity import judge_capacity
from server.studies.findings.judge_control import judge_control
from server.studies.findings.judge_drives import judge_drives
from server.studies.findings.judge_inputs import judge_inputs, judge_missing
from server.studies.findings.judge_npsh import judge_npsh
from server.studies.findings.judge_pipes import judge_pipes
from server.studies.findings.judge_pressures import judge_pressures
from server.studies.findings.judge_pumps import judge_pumps
from server.studies.findings.judge_region import judge_region
from server.studies.findings.judge_shut_off import judge_shut_off, levels_not_given
from server.studies.findings.judge_staging import judge_staging
from server.studies.findings.judge_suction import judge_suction
from server.studies.findings.judge_supply import draws_of, judge_supply
from server.studies.findings.judge_tank import judge_tank
from server.studies.findings.judged_set import JudgedSet
from server.studies.findings.reading import Reading, broken, findings_from
from server.studies.findings.registry import order_of
from server.studies.shapes import SEVERITY_ORDER, Finding

REQUIREMENTS = frozenset(
    {"pressure_low", "fire_pressure_low", "hydrant_residual_low", "no_water_at_point"}
)


@dataclass(frozen=True, slots=True)
class Judgement:
    """Every comparison made, and what was found, worst first."""

    readings: tuple[Reading, ...]
    findings: tuple[Finding, ...]


def judge(
    station: Station, results: dict[str, DutyResult | NotSolved], criteria: dict[str, Criterion]
) -> Judgement:
    """Return the judgement of a station whose sets are solved or not.

    Parameters
    ----------
    station : Station
        The document.
    results : dict of str to DutyResult or NotSolved
        The duty of each set by its id.
    criteria : dict of str to Criterion
        The limits that hold.
    """
    solved = [result for result in results.values() if isinstance(result, DutyResult)]
    readings, findings = judge_inputs(station, criteria)
    findings.extend(judge_missing(results))
    more, found = judge_supply(station, criteria, draws_of(solved))
    readings.extend(more)
    findings.extend(found)
    entered = {each.id: each for each in station.sets}
    for result in solved:
        judged = JudgedSet(station, criteria, entered[result.pump_set], result)
        more, found = _of_set(judged)
        readings.extend(more)
        findings.extend(found)
    findings.extend(findings_from(readings))
    return Judgement(tuple(readings), tuple(_in_order(_once(findings))))


def _of_set(judged: JudgedSet) -> tuple[list[Reading], list[Finding]]:
    """Return readings and direct findings of one set."""
    readings = judge_pressures(judged)
    failing = frozenset(
        reading.case
        for reading in readings
        if reading.case is not None and reading.code in REQUIREMENTS and broken(reading)
    )
    suction = judge_suction(judged)
    for more in (suction, judge_npsh(judged), judge_shut_off(judged), judge_region(judged)):
        readings.extend(more)
    findings = [*levels_not_given(judged), *judge_staging(judged)]
    for more, found in (
        judge_control(judged, failing),
        judge_capacity(judged, suction),
        judge_after_trip(judged),
        judge_pumps(judged),
        judge_pipes(judged),
        judge_tank(judged),
        judge_drives(judged),
    ):
        readings.extend(more)
        findings.extend(found)
    return readings, findings


def _once(findings: list[Finding]) -> list[Finding]:
    """Return findings with one for each key: a field absent for two reasons is named once."""
    by_key: dict[tuple[str, str, str | None, str | None], Finding] = {}
    for finding in findings:
        by_key.setdefault(finding.key, finding)
    return list(by_key.values())


def _in_order(findings: list[Finding]) -> list[Finding]:
    return sorted(
        findings,
        key=lambda f: (
            SEVERITY_ORDER.index(f.severity),
            order_of(f.code),
            f.pump_set or "",
            f.subject,
        ),
    )
