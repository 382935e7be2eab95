"""Sheet 8, Criteria: every limit with its source; a departure stands beside the profile."""

from dataclasses import dataclass

from fastapi import APIRouter, Request
from fastapi.responses import HTMLResponse

from server.pages.forms import FieldView, field_view
from server.pages.frame import SheetPage, register, show
from server.pages.rights import needs
from server.pages.sheet import SheetView, open_sheet
from server.station import fields
from server.station.entry import Sheet
from server.studies.findings.criteria import Criterion, criteria_of
from server.studies.findings.rule import Sense
from server.units import UNITS

router = APIRouter()

SENSE_WORDS: dict[Sense, str] = {
    "at_least": "at least",
    "at_most": "at most",
    "setting": "set to",
    "stated": "",
}


@dataclass(frozen=True, slots=True)
class CriterionRow:
    """One criterion: what its profile says, and what stands here instead."""

    html_id: str
    title: str
    basis: str
    profile: str
    departs: bool
    limit: FieldView | None
    unit: str
    source: FieldView | None
    reason: FieldView | None


@dataclass(frozen=True, slots=True)
class CriteriaGroup:
    """The criteria that one sheet is judged by."""

    title: str
    html_id: str
    rows: tuple[CriterionRow, ...]


@dataclass(frozen=True, slots=True)
class CriteriaPage:
    """All that the sheet's template reads."""

    profile: FieldView
    groups: tuple[CriteriaGroup, ...]
    departures: int


def build(sheet: SheetView) -> CriteriaPage:
    """Return the content of the sheet."""
    criteria = criteria_of(sheet.station)
    grouped: dict[Sheet, list[CriterionRow]] = {}
    for criterion in criteria.values():
        grouped.setdefault(criterion.rule.sheet, []).append(_row(sheet, criterion))
    order = list(fields.SHEET_TITLES)
    return CriteriaPage(
        field_view(sheet, "/criteria/profile", "choice"),
        tuple(
            CriteriaGroup(fields.SHEET_TITLES[name], f"criteria-{name}", tuple(grouped[name]))
            for name in sorted(grouped, key=order.index)
        ),
        sum(criterion.departs for criterion in criteria.values()),
    )


def _row(sheet: SheetView, criterion: Criterion) -> CriterionRow:
    typed = {row.id: row.limit for row in sheet.station.criteria.rows}
    judged = criterion.sense != "stated"
    own = typed.get(criterion.key) is not None
    path = criterion.path
    limit = field_view(sheet, f"{path}/limit", "cell") if judged else None
    # a column of limits has no unit of its own; a field in another unit prints that one itself
    unit = UNITS[limit.unit_symbol].printed if limit and limit.unit_symbol else ""
    return CriterionRow(
        html_id=f"criterion-{criterion.key}",
        title=criterion.title,
        basis=criterion.rule.source_words,
        profile=_words(criterion),
        departs=criterion.departs,
        limit=limit,
        unit="" if limit and limit.unit else unit,
        source=field_view(sheet, f"{path}/source", "cell") if own else None,
        reason=field_view(sheet, f"{path}/reason", "cell") if own else None,
    )


def _words(criterion: Criterion) -> str:
    """Return what the profile says: "at least 200 kPa"."""
    limit = criterion.profile
    if limit is None:
        return "no number" if criterion.sense != "stated" else ""
    printed = UNITS[limit.unit].printed
    number = f"{limit.value:g}\u00a0{printed}" if printed else f"{limit.value:g}"
    return f"{SENSE_WORDS[criterion.sense]} {number}"


register(SheetPage("criteria", build))


@router.get("/stations/{station_id}/criteria", name="criteria", dependencies=[needs("read")])
def criteria(request: Request, station_id: str) -> HTMLResponse:
    """Show the sheet."""
    return show(open_sheet(request, station_id, "criteria"))
