"""A station assessed: its sets solved and judged, kept while the document is the same."""

from collections import OrderedDict
from dataclasses import dataclass
from functools import cached_property
from threading import Lock

from server.station import fields
from server.station.canonical import canonical_bytes
from server.station.canonical import document_hash as hash_of
from server.station.entry import Sheet
from server.station.station import Station
from server.studies.duty import duty
from server.studies.duty_result import DutyResult, NotSolved
from server.studies.findings.compliance import ComplianceRow, compliance_rows
from server.studies.findings.criteria import Criterion, criteria_of
from server.studies.findings.judge import Judgement, judge
from server.studies.findings.registry import CODES
from server.studies.findings.requirement_words import lead
from server.studies.findings.requirements import RequirementRow, requirement_rows
from server.studies.limits import limits_by
from server.studies.shapes import Finding, Path, Severity
from server.units import View

KEPT = 16  # assessments in memory: a station's last edits, or as many stations


@dataclass(frozen=True, eq=False)
class Assessment:
    """Everything that is known of a station without being entered.

    The two tables are made when they are first read: most edits show neither.
    """

    station: Station
    document_hash: str
    results: dict[str, DutyResult | NotSolved]
    criteria: dict[str, Criterion]
    judgement: Judgement

    @property
    def findings(self) -> tuple[Finding, ...]:
        """Every finding, worst first."""
        return self.judgement.findings

    @cached_property
    def requirements(self) -> tuple[RequirementRow, ...]:
        """Requirements of the proposed set by horizon; empty while it is not solved."""
        solved = self._solved
        if solved is None:
            return ()
        return requirement_rows(self.station, solved, self.judgement.readings, self.criteria)

    @cached_property
    def compliance(self) -> tuple[ComplianceRow, ...]:
        """Each criterion with what is required, what is provided and the verdict."""
        solved = self._solved
        judged = None if solved is None else solved.pump_set
        return compliance_rows(
            self.criteria, self.judgement.readings, self.findings, judged, self.station
        )

    @property
    def _solved(self) -> DutyResult | None:
        result = self.results.get(self.proposed) if self.proposed is not None else None
        return result if isinstance(result, DutyResult) else None

    @property
    def proposed(self) -> str | None:
        """Id of the set that is judged: the proposed one, else the only one."""
        return proposed_of(self.station)

    def for_set(self, set_id: str) -> DutyResult | NotSolved | None:
        """Return the duty of a set, what stands in its way, or None: no such set."""
        return self.results.get(set_id)

    def findings_for(self, set_id: str | None) -> tuple[Finding, ...]:
        """Return the findings of a set and those of the station itself, worst first."""
        return tuple(f for f in self.findings if f.pump_set in (None, set_id))

    def findings_on(self, sheet: Sheet) -> tuple[Finding, ...]:
        """Return the findings that a sheet can mend, worst first; Summary and Duty show all."""
        if sheet in ("summary", "duty", "memo"):
            return self.findings
        return tuple(f for f in self.findings if sheet in _sheets(f))

    @property
    def missing(self) -> tuple[Path, ...]:
        """Paths of the inputs that are missing, each once."""
        paths = (p for f in self.findings if f.severity is Severity.NOT_CHECKED for p in f.mend)
        return tuple(dict.fromkeys(paths))

    @property
    def holds(self) -> bool | None:
        """Whether the proposed set holds; None while something it needs is not checked."""
        set_id = self.proposed
        if set_id is None or not isinstance(self.results.get(set_id), DutyResult):
            return None
        found = self.findings_for(set_id)
        if any(f.severity in (Severity.STOP, Severity.FAIL) for f in found):
            return False
        if any(f.severity is Severity.NOT_CHECKED and CODES[f.code].required for f in found):
            return None
        return True

    def lead(self, view: View) -> str:
        """Return the sentence that the Summary and the memo begin with."""
        return lead(self.station, self.proposed, self.holds, self.findings, view)


def proposed_of(station: Station) -> str | None:
    """Return the id of the proposed set, or of the only set there is."""
    ids = [each.id for each in station.sets]
    if station.proposed_set in ids:
        return station.proposed_set
    return ids[0] if len(ids) == 1 else None


def _sheets(finding: Finding) -> set[str]:
    sheets: set[str] = set()
    for path in finding.mend:
        try:
            sheets.add(fields.sheet_of(path))
        except KeyError:
            sheets.add(CODES[finding.code].sheet)
    return sheets


_kept: OrderedDict[str, Assessment] = OrderedDict()
_lock = Lock()


def assess(station: Station, document_hash: str = "") -> Assessment:
    """Return the assessment of a station: solved, judged, in tables; the last few are kept.

    Parameters
    ----------
    station : Station
        The document.
    document_hash : str
        Of its canonical bytes; computed when left out.
    """
    key = document_hash or hash_of(canonical_bytes(station))
    with _lock:
        if key in _kept:
            _kept.move_to_end(key)
            return _kept[key]
    found = _assessed(station, key)
    with _lock:
        _kept[key] = found
        while len(_kept) > KEPT:
            _kept.popitem(last=False)
    return found


def forget() -> None:
    """Drop every kept assessment, for measurements from cold."""
    with _lock:
        _kept.clear()


def _assessed(station: Station, key: str) -> Assessment:
    criteria = criteria_of(station)
    limits = limits_by(criteria)
    results = {
        each.id: duty(station, each.id, limits, document_hash=key) for each in station.sets
    }
    return Assessment(station, key, results, criteria, judge(station, results, criteria))
