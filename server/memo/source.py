"""What the sections of a memo are written from."""

from dataclasses import dataclass

from server.figures.case_words import judged_set
from server.figures.duty_rows import ScenarioDuty, scenario_duties
from server.station.station import Station
from server.studies.assess import Assessment
from server.studies.duty_result import DutyResult, NotSolved
from server.studies.findings.judged_set import JudgedSet
from server.studies.shapes import Finding
from server.units import View


@dataclass(frozen=True, slots=True, eq=False)
class MemoSource:
    """The station, its assessment, and the proposed set where it is solved."""

    station: Station
    assessment: Assessment
    view: View
    judged: JudgedSet | None
    duties: tuple[ScenarioDuty, ...]

    @property
    def findings(self) -> tuple[Finding, ...]:
        """The findings of the proposed set and of the station, worst first."""
        return self.assessment.findings_for(self.assessment.proposed)

    @property
    def not_solved(self) -> NotSolved | None:
        """What stands in the way of the proposed set; None when solved, or without one."""
        proposed = self.assessment.proposed
        answer = self.assessment.for_set(proposed) if proposed else None
        return None if answer is None or isinstance(answer, DutyResult) else answer


def memo_source(station: Station, assessment: Assessment, view: View) -> MemoSource:
    """Return the source of a memo on the proposed set."""
    judged = judged_set(assessment, assessment.proposed)
    return MemoSource(
        station, assessment, view, judged, () if judged is None else scenario_duties(judged)
    )
