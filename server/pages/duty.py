"""Sheet 7, Duty: a row a scenario, the worst of three supply states, the figure."""

from dataclasses import dataclass

from fastapi import APIRouter, Request
from fastapi.responses import HTMLResponse

from server.figures.case_words import judged_set
from server.figures.duty_rows import scenario_duties
from server.pages.charts import FigureView, duty_figure, figure_view
from server.pages.duty_table import (
    ColumnView,
    RowView,
    columns_of,
    scenario_row,
    state_row,
)
from server.pages.frame import SheetPage, register, show
from server.pages.links import link
from server.pages.rights import needs
from server.pages.sheet import SheetView, open_sheet
from server.studies.duty_result import DutyResult
from server.studies.findings import words
from server.studies.findings.judged_set import JudgedSet
from server.units import Dimension as D
from server.units import shown_with_unit

router = APIRouter()


@dataclass(frozen=True, slots=True)
class GroupView:
    """One choice of columns, shown by itself from a width of the table on."""

    key: str
    title: str
    shown_from: int


@dataclass(frozen=True, slots=True)
class DutyPage:
    """All that the sheet's template reads."""

    meta: str
    unsolved: tuple[tuple[str, str, str], ...]  # words, href, why
    caption: str
    columns: tuple[ColumnView, ...]
    groups: tuple[GroupView, ...]
    rows: tuple[RowView, ...]
    states: tuple[RowView, ...]
    figure: FigureView | None
    csv_href: str
    svg_href: str


GROUPS = (
    GroupView("running", "running and speed", 540),
    GroupView("heads", "head asked and set point", 1000),
    GroupView("suction", "suction and NPSH", 760),
    GroupView("points", "pressures at points", 1200),
    GroupView("power", "power and energy", 1380),
    GroupView("findings", "findings", 1600),
)


def build(sheet: SheetView) -> DutyPage:
    """Return the content of the sheet."""
    judged = judged_set(sheet.assessment, sheet.set_id)
    if judged is None:
        return DutyPage("", _missing(sheet), "", (), (), (), (), None, "", "")
    columns = columns_of(sheet, judged)
    duties = scenario_duties(judged)
    chart = duty_figure(sheet)
    query: dict[str, str | None] = {
        "set": sheet.set_id,
        "units": sheet.view,
        "case": sheet.scenario_id,
        "at": sheet.chosen.get("at"),
    }
    return DutyPage(
        meta=_meta(sheet, judged),
        unsolved=(),
        caption=f"Duty by scenario, {judged.title}",
        columns=columns,
        groups=GROUPS,
        rows=tuple(scenario_row(sheet, judged, duty, columns) for duty in duties),
        states=tuple(
            state_row(sheet, judged, row, columns) for duty in duties for row in duty.all_rows
        ),
        figure=None if chart is None else figure_view(chart, sheet.view, live=True),
        csv_href=link(
            sheet.request, "table-csv", station_id=sheet.station_id, table="duty", **query
        ),
        svg_href=link(
            sheet.request, "chart-svg", station_id=sheet.station_id, chart="duty", **query
        ),
    )


def _meta(sheet: SheetView, judged: JudgedSet) -> str:
    held = "the discharge gauge"
    for point in judged.points:
        if point.id == judged.result.held_point:
            held = point.title
    set_point = judged.result.set_point
    if set_point is None:
        return judged.title
    pressure = shown_with_unit(set_point, D.PRESSURE, sheet.view)
    return f"{judged.title}, holds {pressure} at {held}"


def _missing(sheet: SheetView) -> tuple[tuple[str, str, str], ...]:
    answer = sheet.assessment.for_set(sheet.set_id) if sheet.set_id else None
    if answer is None or isinstance(answer, DutyResult):
        return (("Enter a set of pumps", sheet.href("sets"), ""),)
    said = {
        finding.subject: words.sentence(finding, sheet.station, sheet.view)
        for finding in sheet.assessment.findings
    }
    return tuple(
        (
            sheet.field_words(m.path),
            sheet.field_href(m.path),
            "" if m.reason == "absent" else said.get(m.path, ""),
        )
        for m in answer.missing
    )


register(SheetPage("duty", build))


@router.get("/stations/{station_id}/duty", name="duty", dependencies=[needs("read")])
def duty(request: Request, station_id: str) -> HTMLResponse:
    """Show the sheet."""
    return show(open_sheet(request, station_id, "duty"))
