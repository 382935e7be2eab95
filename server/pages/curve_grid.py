"""The grid of a pump's tested rows: the table on the page, and the page's cells read back."""

from collections.abc import Sequence
from dataclasses import dataclass

from pydantic import JsonValue

from server.entry_text import EntryRefused, read_entry
from server.pages.sheet import SheetView
from server.station import fields, paths
from server.station.faults import BadStation, Fault
from server.station.pump import CurveTable
from server.station.station import Station
from server.units import UNITS, Dimension, View, display_unit, symbols

SPARE_ROWS = 2
COLUMNS: tuple[tuple[str, str, Dimension], ...] = (
    ("flow", "Flow", Dimension.FLOW),
    ("head", "Head", Dimension.HEAD),
    ("efficiency", "Efficiency", Dimension.RATIO),
    ("shaft_power", "Shaft power", Dimension.POWER),
    ("npsh_required", "NPSH required", Dimension.HEAD),
)


@dataclass(frozen=True, slots=True)
class GridColumn:
    """One column: title, unit chosen, units there are."""

    name: str
    title: str
    unit: str
    units: tuple[tuple[str, str], ...]


@dataclass(frozen=True, slots=True)
class GridCell:
    """One cell as typed."""

    text: str
    label: str
    bad: bool


@dataclass(frozen=True, slots=True)
class CurveGrid:
    """The rows of one curve, with two empty ones to type in."""

    path: str
    html_id: str
    caption: str
    hint: str
    columns: tuple[GridColumn, ...]
    rows: tuple[tuple[GridCell, ...], ...]
    said: str
    refused: bool
    theirs: str
    missing: bool
    action: str
    base: int
    locked: bool


def curve_grid(sheet: SheetView, path: str, caption: str) -> CurveGrid:
    """Return the grid of the table at `path`; what was refused stands in it as typed."""
    table = paths.get(sheet.station, path)
    if not isinstance(table, CurveTable):
        raise TypeError(f"{path} is not a table of curve rows")
    refusal = sheet.refused.get(path)
    columns = _columns(table, sheet.view)
    texts = _typed_rows(refusal.text) if refusal else _stored_rows(table)
    spare = 0 if sheet.read_only else SPARE_ROWS
    empty = [""] * len(COLUMNS)
    texts = [(row + empty)[: len(COLUMNS)] for row in texts] + [empty] * spare
    rows = tuple(
        tuple(
            GridCell(
                text,
                f"{columns[c].title}, row {r + 1}",
                bool(refusal and (r, c) in refusal.cells),
            )
            for c, text in enumerate(row)
        )
        for r, row in enumerate(texts)
    )
    entry = fields.entry_for(path)
    return CurveGrid(
        path=path,
        html_id=paths.html_id(path),
        caption=caption,
        hint=entry.guidance,
        columns=columns,
        rows=rows,
        said=refusal.sentence if refusal else "",
        refused=refusal is not None,
        theirs=(refusal.theirs or "") if refusal else "",
        missing=path in sheet.missing and not table.rows,
        action=sheet.action("edits"),
        base=sheet.loaded.number,
        locked=sheet.read_only,
    )


def table_from_cells(
    station: Station,
    path: str,
    rows: Sequence[Sequence[str]],
    units: Sequence[str],
    *,
    sort: bool = False,
) -> JsonValue:
    """Return the table that the cells say; empty rows and empty columns are left out.

    Raises
    ------
    BadStation
        With one fault a bad cell, each naming row and column.
    """
    chosen = [_unit(number, units) for number in range(len(COLUMNS))]
    faults: list[Fault] = []
    read: list[list[float | None]] = []
    for number, cells in enumerate(rows):
        if not any(cell.strip() for cell in cells):
            continue
        row: list[float | None] = []
        for column, (_, title, dimension) in enumerate(COLUMNS):
            text = cells[column].strip() if column < len(cells) else ""
            try:
                row.append(_number(text, dimension, chosen[column]) if text else None)
            except EntryRefused as refused:
                row.append(None)
                faults.append(
                    Fault(
                        path,
                        "pumps",
                        refused.given,
                        refused.allowed,
                        f"Row {number + 1}, {title.lower()}: {refused.sentence}",
                        (number, column),
                    )
                )
            if not text and column < 2:
                faults.append(
                    Fault(
                        path,
                        "pumps",
                        "",
                        "a number",
                        f"Row {number + 1} has no {title.lower()}.",
                        (number, column),
                    )
                )
        read.append(row)
    if faults:
        raise BadStation(faults)
    used = [c for c in range(len(COLUMNS)) if c < 2 or any(row[c] is not None for row in read)]
    if sort:
        read.sort(key=lambda row: row[0] or 0.0)
    return {
        "units": {COLUMNS[c][0]: chosen[c] for c in used},
        "rows": [[row[c] for c in used] for row in read],
    }


def _number(text: str, dimension: Dimension, unit: str) -> float:
    """Return a cell's number in its column's unit, whatever unit was typed with it."""
    typed = read_entry(text, dimension, unit)
    if typed.unit == unit:
        return typed.value
    return UNITS[unit].from_si(UNITS[typed.unit].to_si(typed.value))


def _unit(number: int, units: Sequence[str]) -> str:
    dimension = COLUMNS[number][2]
    given = units[number] if number < len(units) else ""
    return given if given in symbols(dimension) else symbols(dimension)[0]


def _columns(table: CurveTable, view: View) -> tuple[GridColumn, ...]:
    return tuple(
        GridColumn(
            name,
            title,
            _unit_of(table, name, dimension, view),
            tuple((symbol, UNITS[symbol].printed or "ratio") for symbol in symbols(dimension)),
        )
        for name, title, dimension in COLUMNS
    )


def _unit_of(table: CurveTable, name: str, dimension: Dimension, view: View) -> str:
    """Return the column's own unit; an empty table takes the units of the view."""
    entered = getattr(table.units, name) if table.rows else None
    return str(entered) if entered else display_unit(dimension, view).symbol


def _stored_rows(table: CurveTable) -> list[list[str]]:
    present = [name for name, _, _ in COLUMNS if getattr(table.units, name)]
    rows = []
    for stored in table.rows:
        by_name = dict(zip(present, stored, strict=False))
        rows.append([_text(by_name.get(name)) for name, _, _ in COLUMNS])
    return rows


def _text(value: float | None) -> str:
    return "" if value is None else f"{value:.15g}"


def _typed_rows(text: str) -> list[list[str]]:
    return [line.split("\t") for line in text.split("\n") if line.strip()]
