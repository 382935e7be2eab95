"""Figures of a sheet, and each chart by its own address as SVG or as data."""

from collections.abc import Callable
from dataclasses import dataclass

import orjson
from fastapi import APIRouter, HTTPException, Request, Response
from markupsafe import Markup

from server.figures.case_words import case_index, case_words, judged_set
from server.figures.chart import BehindTable, Chart, Column, cell_text
from server.figures.duty_charts import duty_chart, head_chart
from server.figures.look import PAPER, SCREEN
from server.figures.strip import grade_strip
from server.figures.strip_svg import strip_svg
from server.figures.supply_chart import supply_chart
from server.figures.to_plotly import to_plotly
from server.figures.to_svg import to_svg
from server.pages.rights import needs
from server.pages.sheet import SheetView, open_sheet
from server.studies.duty_curves import duty_curves
from server.studies.shapes import SupplyState
from server.studies.supply_curve import SupplyCurve, supply_curve
from server.units import View, display_unit

router = APIRouter()


@dataclass(frozen=True, slots=True)
class Head:
    """Head of a column of numbers."""

    title: str
    unit: str


@dataclass(frozen=True, slots=True)
class TableView:
    """A table behind a figure, as it is printed."""

    caption: str
    heads: tuple[Head, ...]
    rows: tuple[tuple[str, ...], ...]


@dataclass(frozen=True, slots=True)
class FigureView:
    """A figure as a page shows it: the server's drawing, and the data of the live one."""

    key: str
    title: str
    caption: str
    alt: str
    svg: Markup
    live: bool
    data: str
    tables: tuple[TableView, ...]
    reason: str = ""


def figure_view(chart: Chart, view: View, *, live: bool, scale: float = 1.0) -> FigureView:
    """Return a chart ready for `parts/figure.html`.

    Parameters
    ----------
    chart : Chart
        What is drawn.
    view : {"si", "us"}
        Units that are read.
    live : bool
        Whether the page loads plotly and draws the figure again with hover.
    scale : float
        Stretches the panels' height. [-]
    """
    return FigureView(
        key=chart.key,
        title=chart.title,
        caption=chart.caption,
        alt=chart.alt,
        svg=Markup(to_svg(chart, view, width=820, scale=scale, palette=SCREEN)),
        live=live,
        data=orjson.dumps(to_plotly(chart, view, scale=scale)).decode() if live else "",
        tables=tuple(table_view(table, view) for table in chart.tables),
    )


def no_figure(key: str, title: str, reason: str) -> FigureView:
    """Return the place of a figure that cannot be drawn, with the reason."""
    return FigureView(key, title, "", "", Markup(""), False, "", (), reason)


def table_view(table: BehindTable, view: View) -> TableView:
    """Return a table behind a chart as it is printed."""
    return TableView(
        table.caption,
        tuple(Head(column.title, _unit(column, view)) for column in table.columns),
        tuple(
            tuple(
                cell_text(cell, column, view)
                for cell, column in zip(row, table.columns, strict=True)
            )
            for row in table.rows
        ),
    )


def _unit(column: Column, view: View) -> str:
    return "" if column.dimension is None else display_unit(column.dimension, view).printed


def duty_figure(sheet: SheetView) -> Chart | None:
    """Return the duty figure of the chosen set, None while it is not solved."""
    judged = judged_set(sheet.assessment, sheet.set_id)
    if judged is None:
        return None
    curves = duty_curves(sheet.station, judged.result, _state(sheet))
    return duty_chart(curves, judged, sheet.scenario_id)


def _state(sheet: SheetView) -> SupplyState:
    for scenario in sheet.station.scenarios:
        if scenario.id == sheet.scenario_id:
            return scenario.supply
    return "low"


def _head_figure(sheet: SheetView) -> Chart | None:
    judged = judged_set(sheet.assessment, sheet.set_id)
    if judged is None:
        return None
    return head_chart(duty_curves(sheet.station, judged.result), judged, sheet.scenario_id)


def supply_figure_chart(sheet: SheetView) -> Chart | None:
    """Return the supply figure, None while the supply is not known."""
    curve = supply_curve(sheet.station, sheet.result)
    return (
        supply_chart(curve, sheet.station, sheet.view)
        if isinstance(curve, SupplyCurve)
        else None
    )


CHARTS: dict[str, Callable[[SheetView], Chart | None]] = {
    "duty": duty_figure,
    "head": _head_figure,
    "supply": supply_figure_chart,
}


@router.get(
    "/stations/{station_id}/charts/{chart}.svg", name="chart-svg", dependencies=[needs("read")]
)
def chart_svg(request: Request, station_id: str, chart: str) -> Response:
    """Answer one chart, or the grade-line strip, as an SVG file."""
    sheet = open_sheet(request, station_id, "duty")
    if chart == "strip":
        return _svg(_strip(sheet))
    return _svg(to_svg(_chart(sheet, chart), sheet.view, palette=PAPER))


@router.get(
    "/stations/{station_id}/charts/{chart}.json",
    name="chart-json",
    dependencies=[needs("read")],
)
def chart_json(request: Request, station_id: str, chart: str) -> Response:
    """Answer one chart as the data that the live figure is drawn from."""
    sheet = open_sheet(request, station_id, "duty")
    data = orjson.dumps(to_plotly(_chart(sheet, chart), sheet.view))
    return Response(data, media_type="application/json")


def _chart(sheet: SheetView, name: str) -> Chart:
    if name not in CHARTS:
        raise HTTPException(
            404, f"There is no such chart. There are: {', '.join([*CHARTS, 'strip'])}."
        )
    chart = CHARTS[name](sheet)
    if chart is None:
        raise HTTPException(
            404, "This chart cannot be drawn yet: inputs that it needs are missing."
        )
    return chart


def _strip(sheet: SheetView) -> str:
    judged = judged_set(sheet.assessment, sheet.set_id)
    case = None if judged is None else case_index(judged.result, sheet.scenario_id)
    if judged is None or case is None:
        raise HTTPException(
            404, "The grade line cannot be drawn yet: inputs that it needs are missing."
        )
    return strip_svg(
        grade_strip(sheet.station, judged.result, case), sheet.view, case_words(judged, case)
    )


def _svg(drawn: str) -> Response:
    return Response(
        '<?xml version="1.0" encoding="UTF-8"?>\n' + drawn, media_type="image/svg+xml"
    )
