"""The rows of a curve table as text, as a spreadsheet copies and pastes them."""

import re

from pydantic import JsonValue

from server.entry_text import EntryRefused, allowed_units, read_entry
from server.station.canonical import number
from server.station.faults import BadStation, Fault, quoted
from server.station.pump import CurveTable, CurveUnits
from server.station.table_rules import COLUMNS, MOST_ROWS
from server.units import UNITS

_SPACES = re.compile(r"[ ;]+")
_EMPTY = ("", "-", "–")


def rows_from_text(
    text: str, units: CurveUnits, name: str, path: str, sheet: str
) -> list[JsonValue]:
    """Return the rows of a pasted text: one a line, cells apart by tabs (else by spaces or ;).

    Raises
    ------
    BadStation
        With one fault for each cell that is not a number of its column; `Fault.cell` says
        which.
    """
    columns = [column for column in COLUMNS if getattr(units, column[0]) is not None]
    rows: list[JsonValue] = []
    found: list[Fault] = []
    lines = [line for line in text.replace("\r\n", "\n").split("\n") if line.strip(" \t;")]
    if len(lines) > MOST_ROWS:
        rule = f"at most {MOST_ROWS} rows"
        sentence = f"{name} may have {rule}; {len(lines)} were given."
        raise BadStation([Fault(path, sheet, f"{len(lines)} rows", rule, sentence)])
    for place, line in enumerate(lines):
        cells = line.split("\t") if "\t" in line else _SPACES.split(line.strip(" ;"))
        # a spreadsheet leaves off empty cells at the end, or adds some
        while len(cells) > len(columns) and not cells[-1].strip():
            cells.pop()
        cells += [""] * (len(columns) - len(cells))
        row: list[JsonValue] = []
        for at, cell in enumerate(cells):
            if cell.strip() in _EMPTY:
                row.append(None)
                continue
            if at >= len(columns):
                sentence = (
                    f"{name}, row {place + 1}, has more cells than the table has columns."
                )
                found.append(
                    Fault(
                        path,
                        sheet,
                        quoted(cell),
                        f"{len(columns)} cells",
                        sentence,
                        (place, at),
                    )
                )
                continue
            key, words, dimension, _, _ = columns[at]
            unit = getattr(units, key)
            try:
                typed = read_entry(cell, dimension, unit)
            except EntryRefused as refusal:
                sentence = f"{name}, row {place + 1}, {words}: {refusal.sentence}"
                allowed = allowed_units(dimension)
                found.append(Fault(path, sheet, quoted(cell), allowed, sentence, (place, at)))
                continue
            if typed.unit != unit:
                sentence = (
                    f"{name}, row {place + 1}, {words}: the column is in {_printed(unit)}, "
                    f"not in {_printed(typed.unit)}."
                )
                found.append(
                    Fault(
                        path, sheet, quoted(cell), f"a number in {unit}", sentence, (place, at)
                    )
                )
                continue
            row.append(typed.value)
        rows.append(row)
    if found:
        raise BadStation(found)
    return rows


def _printed(unit: str) -> str:
    return UNITS[unit].printed or "plain numbers"


def text_of_rows(table: CurveTable) -> str:
    """Return the rows as tab-separated lines; an empty cell is empty."""
    return "\n".join(
        "\t".join("" if cell is None else number(cell) for cell in row) for row in table.rows
    )
