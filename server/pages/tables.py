"""Tables of a station as files for a spreadsheet."""

import csv
import io
from collections.abc import Callable, Iterable

from fastapi import APIRouter, HTTPException, Request, Response

from server.figures.case_words import judged_set
from server.figures.duty_rows import DutyRow, scenario_duties, wet
from server.pages.rights import needs
from server.pages.sheet import SheetView, open_sheet
from server.studies.findings import words
from server.studies.findings.judged_set import JudgedSet
from server.units import Dimension as D
from server.units import View, display_unit, shown

router = APIRouter()
Column = tuple[str, D | None, Callable[[DutyRow], float | str | None]]

DUTY_COLUMNS: tuple[Column, ...] = (
    ("Scenario", None, lambda r: r.title),
    ("Supply state", None, lambda r: r.of.supply),
    ("Pipes", None, lambda r: r.of.pipes),
    ("State of the scenario itself", None, lambda r: "yes" if r.own else "no"),
    ("Flow", D.FLOW, lambda r: r.flow),
    ("Head asked of the station", D.HEAD, lambda r: r.required_head),
    ("Head delivered", D.HEAD, lambda r: r.head),
    ("Running", None, lambda r: r.running),
    ("Speed", D.RATIO, lambda r: r.speed),
    ("Set point held", None, lambda r: "" if r.held is None else "yes" if r.held else "no"),
    ("Of best-efficiency flow", D.RATIO, lambda r: None if r.mark is None else r.mark.share),
    ("Preferred region", None, lambda r: "" if r.mark is None else r.mark.word),
    ("NPSH available", D.HEAD, lambda r: wet(r, "npsh", r.npsh_available)),
    ("NPSH required", D.HEAD, lambda r: r.npsh_required),
    (
        "Pressure at the connection",
        D.PRESSURE,
        lambda r: wet(r, "connection", r.connection_pressure),
    ),
    (
        "Pressure at the suction gauge",
        D.PRESSURE,
        lambda r: wet(r, "suction", r.suction_pressure),
    ),
    (
        "Pressure at the discharge gauge",
        D.PRESSURE,
        lambda r: wet(r, "discharge", r.discharge_pressure),
    ),
    ("Shaft power", D.POWER, lambda r: r.shaft_power),
    ("Wire power", D.POWER, lambda r: r.wire_power),
    ("Energy", D.SPECIFIC_ENERGY, lambda r: r.energy),
    ("No duty because", None, lambda r: r.reason),
)


def duty_table(judged: JudgedSet, view: View) -> tuple[tuple[str, ...], ...]:
    """Return the duty of every scenario in all three supply states, head row first."""
    points = tuple(
        (f"Pressure at {point.title}", D.PRESSURE, _pressure_at(p))
        for p, point in enumerate(judged.points)
    )
    columns: tuple[Column, ...] = (*DUTY_COLUMNS[:-1], *points, DUTY_COLUMNS[-1])
    heads = tuple(_head(title, dimension, view) for title, dimension, _ in columns)
    rows = (row for duty in scenario_duties(judged) for row in duty.all_rows)
    return (
        heads,
        *(tuple(_cell(read(row), d, view) for _, d, read in columns) for row in rows),
    )


def _pressure_at(point: int) -> Callable[[DutyRow], float | str | None]:
    return lambda row: wet(row, f"point-{point}", row.point_pressures[point])


def _findings_table(sheet: SheetView) -> tuple[tuple[str, ...], ...]:
    rows = (
        (
            words.severity_words(f.severity),
            f.code,
            words.sentence(f, sheet.station, sheet.view),
            words.basis(f, sheet.station),
        )
        for f in sheet.assessment.findings
    )
    return (("Weight", "Finding", "Sentence", "Basis"), *rows)


@router.get(
    "/stations/{station_id}/tables/{table}.csv", name="table-csv", dependencies=[needs("read")]
)
def table_csv(request: Request, station_id: str, table: str) -> Response:
    """Answer one table as a CSV file with units in its heads."""
    sheet = open_sheet(request, station_id, "duty")
    if table == "findings":
        return _csv(_findings_table(sheet), f"{station_id}-findings.csv")
    if table != "duty":
        raise HTTPException(404, "There is no such table. There are: duty, findings.")
    judged = judged_set(sheet.assessment, sheet.set_id)
    if judged is None:
        raise HTTPException(
            404, "The duty table cannot be made yet: inputs that it needs are missing."
        )
    return _csv(duty_table(judged, sheet.view), f"{station_id}-duty.csv")


def _csv(rows: Iterable[tuple[str, ...]], name: str) -> Response:
    written = io.StringIO()
    csv.writer(written, lineterminator="\r\n").writerows(
        [_harmless(cell) for cell in row] for row in rows
    )
    # the mark tells a spreadsheet that the file is UTF-8
    return Response(
        "\ufeff" + written.getvalue(),
        media_type="text/csv; charset=utf-8",
        headers={"Content-Disposition": f'attachment; filename="{name}"'},
    )


def _harmless(cell: str) -> str:
    """Return a cell that a spreadsheet does not take for a formula; numbers stay numbers."""
    if cell[:1] in ("=", "+", "-", "@", "\t", "\r"):
        try:
            float(cell)
        except ValueError:
            return f"'{cell}"
    return cell


def _head(title: str, dimension: D | None, view: View) -> str:
    unit = "" if dimension is None else display_unit(dimension, view).printed
    return f"{title} [{unit}]" if unit else title


def _cell(value: float | str | None, dimension: D | None, view: View) -> str:
    if value is None:
        return ""
    if isinstance(value, str):
        return value
    if dimension is None:
        raise TypeError(f"{value!r} has no dimension")
    return shown(value, dimension, view)
