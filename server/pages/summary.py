"""Sheet 1, Summary: whether the set holds, by horizon, and what stands before signing."""

from collections.abc import Callable
from dataclasses import dataclass

from fastapi import APIRouter, Request
from fastapi.responses import HTMLResponse

from server.figures.band import BandMark, band_mark
from server.figures.case_words import judged_set
from server.pages.forms import FieldView, field_view, field_views
from server.pages.frame import SheetPage, register, show
from server.pages.rights import needs
from server.pages.sheet import SheetView, open_sheet
from server.pages.strip_view import FindingLine, findings_list
from server.studies.findings import words
from server.studies.findings.answers import answer_key
from server.studies.findings.requirement_words import (
    cell_words,
    requirement_title,
    runs_out_words,
    verdict_words,
)
from server.studies.findings.requirements import RequirementCell
from server.studies.shapes import Finding, Region, Severity

router = APIRouter()

IDENTITY = ("title", "number", "place", "client", "purpose")


@dataclass(frozen=True, slots=True)
class Answer:
    """The verdict on one requirement at one horizon."""

    css: str
    verdict: str
    told: str
    mark: BandMark | None


@dataclass(frozen=True, slots=True)
class Requirement:
    """One requirement at every horizon."""

    title: str
    answers: tuple[Answer, ...]
    runs_out: str


@dataclass(frozen=True, slots=True)
class Standing:
    """One kind of thing that stands before signing, folded: how many, and each."""

    title: str
    bad: bool
    words: str
    lines: tuple[FindingLine, ...]


@dataclass(frozen=True, slots=True)
class Answering:
    """The engineer's answer to a finding, or the form that begins one."""

    sentence: str
    key: str
    field: FieldView | None


@dataclass(frozen=True, slots=True)
class SummaryPage:
    """All that the sheet's template reads."""

    lead: tuple[str, str, str]  # before, what is stressed, after
    horizons: tuple[str, ...]
    requirements: tuple[Requirement, ...]
    caption: str
    standing: tuple[Standing, ...]
    names: tuple[tuple[str, str], ...]  # what of the memo's names is not filled: words, address
    identity: tuple[FieldView, ...]
    units: FieldView
    answering: tuple[Answering, ...]
    action: str
    base: int
    read_only: bool


def build(sheet: SheetView) -> SummaryPage:
    """Return the content of the sheet."""
    station, assessment = sheet.station, sheet.assessment
    grows = any(row.grows for row in assessment.requirements)
    return SummaryPage(
        lead=stressed(assessment.lead(sheet.view)),
        horizons=tuple(
            " ".join(p for p in (str(h.year) if h.year else "", h.title.lower()) if p)
            or "horizon"
            for h in station.horizons
        ),
        requirements=_requirements(sheet),
        caption="Requirements by horizon" + (", largest unit out" if grows else ""),
        standing=_standing(sheet),
        names=_names(sheet),
        identity=field_views(sheet, "/identity", IDENTITY),
        units=field_view(sheet, "/display/units", "choice"),
        answering=_answering(sheet),
        action=sheet.action("edits"),
        base=sheet.loaded.number,
        read_only=sheet.read_only,
    )


def stressed(lead: str) -> tuple[str, str, str]:
    """Return the lead cut in three, the words that say it does not hold in the middle."""
    for said in ("does not hold", "is not known"):
        if said in lead:
            before, _, after = lead.partition(said)
            return before, said, after
    return lead, "", ""


def _requirements(sheet: SheetView) -> tuple[Requirement, ...]:
    judged = judged_set(sheet.assessment, sheet.assessment.proposed)
    preferred = None if judged is None or not judged.slots else judged.preferred(0)

    def answer(cell: RequirementCell) -> Answer:
        mark = None
        if cell.region not in (None, Region.NOT_CHECKED) and cell.provided is not None:
            mark = band_mark(cell.provided.value, preferred, cell.region or Region.NOT_CHECKED)
        told = "" if mark is not None else cell_words(cell, sheet.view)
        return Answer(cell.verdict.value, verdict_words(cell), told, mark)

    return tuple(
        Requirement(
            requirement_title(row, sheet.view),
            tuple(answer(cell) for cell in row.cells),
            runs_out_words(row, sheet.station),
        )
        for row in sheet.assessment.requirements
    )


def _standing(sheet: SheetView) -> tuple[Standing, ...]:
    found = sheet.assessment.findings_for(sheet.assessment.proposed)
    kinds: tuple[tuple[str, str, Callable[[Finding], bool], bool], ...] = (
        ("stops the design", "stop the design", lambda f: f.severity is Severity.STOP, True),
        (
            "does not meet its requirement",
            "do not meet their requirements",
            lambda f: f.severity is Severity.FAIL,
            True,
        ),
        (
            "is not checked",
            "are not checked",
            lambda f: f.severity is Severity.NOT_CHECKED,
            True,
        ),
        ("wants a look", "want a look", lambda f: f.severity is Severity.CAUTION, False),
        ("rests on a default", "rest on defaults", _is_default, False),
        (
            "is noted",
            "are noted",
            lambda f: f.severity is Severity.NOTE and not _is_default(f),
            False,
        ),
    )
    standing = []
    for one, many, keep, bad in kinds:
        kept = [f for f in found if keep(f)]
        if kept:
            noun = "thing" if len(kept) == 1 else "things"
            title = f"{len(kept)} {noun} {one if len(kept) == 1 else many}"
            shorts = dict.fromkeys(words.short(f) for f in kept if not _is_default(f))
            standing.append(Standing(title, bad, "; ".join(shorts), findings_list(sheet, kept)))
    return tuple(standing)


def _is_default(finding: Finding) -> bool:
    return finding.code == "default_used"


def _names(sheet: SheetView) -> tuple[tuple[str, str], ...]:
    memo = sheet.station.memo
    wanted = (
        ("issue", memo.issue),
        ("date of issue", memo.date),
        ("prepared by", memo.prepared),
        ("checked by", memo.checked),
        ("approved by", memo.approved),
    )
    paths = {
        "issue": "issue",
        "date of issue": "date",
        "prepared by": "prepared",
        "checked by": "checked",
        "approved by": "approved",
    }
    return tuple(
        (name, sheet.field_href(f"/memo/{paths[name]}")) for name, value in wanted if not value
    )


def _answering(sheet: SheetView) -> tuple[Answering, ...]:
    """Return every finding that wants an answer, and every answer that stands."""
    found = [
        f
        for f in sheet.assessment.findings_for(sheet.assessment.proposed)
        if f.severity in (Severity.STOP, Severity.FAIL)
    ]
    given = {a.finding: a.id for a in sheet.station.answers}
    rows = [
        Answering(
            line.sentence,
            answer_key(finding),
            field_view(sheet, f"/answers/{given[answer_key(finding)]}/text")
            if answer_key(finding) in given
            else None,
        )
        for finding, line in zip(found, findings_list(sheet, found), strict=True)
    ]
    asked = {answer_key(finding) for finding in found}
    rows.extend(
        Answering(
            "To a finding that no longer stands.",
            a.finding,
            field_view(sheet, f"/answers/{a.id}/text"),
        )
        for a in sheet.station.answers
        if a.finding not in asked
    )
    return tuple(rows)


register(SheetPage("summary", build))


@router.get("/stations/{station_id}/summary", name="summary", dependencies=[needs("read")])
def summary(request: Request, station_id: str) -> HTMLResponse:
    """Show the sheet."""
    return show(open_sheet(request, station_id, "summary"))
