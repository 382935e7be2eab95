"""What stands on every sheet of a station: grade-line strip, scenario row, list of findings.

A sheet is anything with the few attributes of `OpenedSheet`; the strip never fails: what is not
solved is said in its place.
"""

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Protocol

import numpy as np
from markupsafe import Markup

from server.figures.band import BandMark, worst_mark
from server.figures.case_words import (
    case_index,
    case_words,
    judged_set,
    no_duty_words,
    running_words,
)
from server.figures.look import SCREEN
from server.figures.strip import grade_strip
from server.figures.strip_svg import strip_svg
from server.station.station import Station
from server.studies.assess import Assessment
from server.studies.duty_result import DutyResult
from server.studies.findings import words
from server.studies.findings.answers import answer_to
from server.studies.findings.judged_set import JudgedSet
from server.studies.shapes import Finding, Severity
from server.units import Dimension, View, shown_with_unit

SCALE_WORDS = (
    "Grade line to scale in height, not in length; pressures are gauge, at each place's own"
    " level."
)
MOST_MENDS = 4  # links under one finding; the sheet they lead to shows the rest
SEVERITY_CSS = {
    Severity.STOP: "stop",
    Severity.FAIL: "stop",
    Severity.NOT_CHECKED: "note",
    Severity.CAUTION: "warn",
    Severity.NOTE: "note",
}


class OpenedSheet(Protocol):
    """What the parts of a page need of an opened sheet."""

    @property
    def station(self) -> Station:
        """The station as stored."""

    @property
    def assessment(self) -> Assessment:
        """Its results and findings."""

    @property
    def view(self) -> View:
        """Units in which results are read."""

    @property
    def set_id(self) -> str | None:
        """The set that is looked at."""

    @property
    def scenario_id(self) -> str | None:
        """The scenario that is looked at."""

    def case_href(self, scenario_id: str) -> str:
        """Return the address of this sheet with another scenario chosen."""

    def field_href(self, path: str) -> str:
        """Return the address of the field at a path, on its own sheet."""

    def field_words(self, path: str) -> str:
        """Return the field at a path in words."""


@dataclass(frozen=True, slots=True)
class StripView:
    """The strip: its drawing, or the reason why there is none."""

    title: str
    svg: Markup | None
    said: str


@dataclass(frozen=True, slots=True)
class ScenarioTab:
    """One scenario in the row under the strip."""

    id: str
    title: str
    href: str
    current: bool
    telling: str
    mark: BandMark | None


@dataclass(frozen=True, slots=True)
class FindingLine:
    """A finding as it stands in a list."""

    code: str
    css: str
    grade: str
    sentence: str
    basis: str
    mends: tuple[tuple[str, str], ...]
    answer: str
    folds: bool  # a note: many of them are folded behind their number


def strip_view(sheet: OpenedSheet) -> StripView | None:
    """Return the strip of the chosen scenario, or what is missing for it; None without a set.

    Parameters
    ----------
    sheet : OpenedSheet
        The opened sheet.
    """
    judged = _judged(sheet)
    if judged is None:
        missing = _missing_words(sheet)
        return None if missing is None else StripView("not solved", None, missing)
    case = case_index(judged.result, sheet.scenario_id)
    if case is None:
        return StripView(
            "no scenario", None, "No scenario is used, so there is no grade line yet."
        )
    title = case_words(judged, case)
    strip = grade_strip(sheet.station, judged.result, case)
    said = SCALE_WORDS
    if int(judged.result.chosen[case]) < 0 or strip.lift is None:
        said = f"{no_duty_words(judged, case)} The supply's side is drawn alone. {said}"
    return StripView(
        title, Markup(strip_svg(strip, sheet.view, title, palette=SCREEN)), f"{title}. {said}"
    )


def scenario_row(sheet: OpenedSheet) -> tuple[ScenarioTab, ...]:
    """Return a tab for every used scenario, solved or not."""
    judged = _judged(sheet)
    return tuple(
        _tab(sheet, judged, scenario.id, scenario.title or "Scenario")
        for scenario in sheet.station.scenarios
        if scenario.on
    )


def findings_list(sheet: OpenedSheet, findings: Iterable[Finding]) -> tuple[FindingLine, ...]:
    """Return findings as lines with links to the fields that mend them."""
    return tuple(
        FindingLine(
            code=finding.code,
            css=SEVERITY_CSS[finding.severity],
            grade=words.severity_words(finding.severity),
            sentence=words.sentence(finding, sheet.station, sheet.view),
            basis=_basis(sheet, finding),
            mends=tuple(
                (sheet.field_words(path), sheet.field_href(path))
                for path in finding.mend[:MOST_MENDS]
            ),
            answer=answer_to(finding, sheet.station),
            folds=finding.severity is Severity.NOTE,
        )
        for finding in findings
    )


def _basis(sheet: OpenedSheet, finding: Finding) -> str:
    """Return what a finding rests on; of a criterion, its source in this station."""
    criterion = sheet.assessment.criteria.get(finding.basis)
    return words.basis(finding) if criterion is None else criterion.source


def _judged(sheet: OpenedSheet) -> JudgedSet | None:
    return judged_set(sheet.assessment, sheet.set_id)


def _missing_words(sheet: OpenedSheet) -> str | None:
    if not sheet.set_id:
        return None
    answer = sheet.assessment.for_set(sheet.set_id)
    if answer is None or isinstance(answer, DutyResult):
        return None
    count = len(answer.missing)
    return (
        f"The grade line is drawn as soon as the set is solved: {count} entr"
        f"{'y is' if count == 1 else 'ies are'} missing, the first is"
        f" {sheet.field_words(answer.missing[0].path)}."
        if count
        else "The set is not solved."
    )


def _tab(
    sheet: OpenedSheet, judged: JudgedSet | None, scenario: str, title: str
) -> ScenarioTab:
    href = sheet.case_href(scenario)
    current = scenario == sheet.scenario_id
    case = None if judged is None else case_index(judged.result, scenario)
    if judged is None or case is None:
        return ScenarioTab(scenario, title, href, current, "not solved", None)
    chosen = int(judged.result.chosen[case])
    # a tank takes what the pumps give; a closed zone takes its demand, whatever they do
    fills = judged.result.zone_kind == "floating_tank" and chosen >= 0
    flow = float(judged.result.flow[case, chosen] if fills else judged.result.demand[case])
    told = shown_with_unit(flow if np.isfinite(flow) else None, Dimension.FLOW, sheet.view)
    if chosen < 0:
        return ScenarioTab(scenario, title, href, current, f"{told}, no duty", None)
    telling = f"{told}, {running_words(judged, case)}"
    return ScenarioTab(
        scenario, title, href, current, telling, worst_mark(judged, case, chosen)
    )
