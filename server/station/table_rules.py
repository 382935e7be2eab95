"""Rules of a curve table: its columns, its units, flows that rise."""

import math
from collections.abc import Iterator

from server.entry_text import allowed_units, wrong_unit
from server.station.canonical import number
from server.station.faults import Fault, quoted
from server.station.pump import CurveTable, CurveUnits
from server.units import UNITS, Dimension, symbols

MOST_ROWS = 200
# name of the column, words, dimension, least and greatest value in SI
COLUMNS: tuple[tuple[str, str, Dimension, float, float], ...] = (
    ("flow", "flow", Dimension.FLOW, 0.0, 20.0),
    ("head", "head", Dimension.HEAD, -50.0, 3000.0),
    ("efficiency", "efficiency", Dimension.RATIO, 0.0, 1.0),
    ("shaft_power", "shaft power", Dimension.POWER, 0.0, 5e7),
    ("npsh_required", "NPSH required", Dimension.HEAD, 0.0, 100.0),
)
_SLACK = 1e-9


def columns_of(units: CurveUnits) -> tuple[str, ...]:
    """Return the names of the columns that a table with these units has."""
    return tuple(name for name, *_ in COLUMNS if getattr(units, name) is not None)


def table_faults(table: CurveTable, name: str, path: str, sheet: str) -> Iterator[Fault]:
    """Yield what is not well-formed in a table; `name` is the subject of the sentences."""
    columns = [column for column in COLUMNS if getattr(table.units, column[0]) is not None]
    good = True
    for key, words, dimension, _, _ in columns:
        symbol = getattr(table.units, key)
        if symbol in symbols(dimension):
            continue
        good = False
        why = (
            f": {wrong_unit(symbol, dimension)}" if symbol in UNITS
            else f", which is not known; write {', '.join(symbols(dimension))}"
        )  # fmt: skip
        yield Fault(
            path, sheet, quoted(symbol), allowed_units(dimension),
            f"{name} has its {words} in {quoted(symbol)}{why}.",
        )  # fmt: skip
    if len(table.rows) > MOST_ROWS:
        yield Fault(
            path, sheet, f"{len(table.rows)} rows", f"at most {MOST_ROWS} rows",
            f"{name} may have at most {MOST_ROWS} rows; {len(table.rows)} were given.",
        )  # fmt: skip
        return
    if not good:
        return
    last: float | None = None
    for place, row in enumerate(table.rows):
        where = f"{name}, row {place + 1},"
        if len(row) != len(columns):
            yield Fault(
                path, sheet, f"{len(row)} cells", f"{len(columns)} cells",
                f"{where} must have {len(columns)} cells, one a unit; it has {len(row)}.",
                (place, 0),
            )  # fmt: skip
            continue
        for column, cell in enumerate(row):
            fault = _cell(table.units, columns[column], cell, where)
            if fault is not None:
                given, allowed, sentence = fault
                yield Fault(path, sheet, given, allowed, sentence, (place, column))
        flow = row[0]
        if flow is not None and last is not None and flow <= last:
            same = "is the same as" if flow == last else "is below"
            yield Fault(
                path, sheet, number(flow), f"more than {number(last)}",
                f"{where} has a flow of {number(flow)}, which {same} the one before; sort the "
                "rows so that every flow is greater than the one before.",
                (place, 0),
            )  # fmt: skip
        last = flow if flow is not None else last


def _cell(
    units: CurveUnits,
    column: tuple[str, str, Dimension, float, float],
    cell: float | None,
    where: str,
) -> tuple[str, str, str] | None:
    key, words, _, low, high = column
    if cell is None:
        if key in ("flow", "head"):
            return (
                "nothing",
                f"a {words}",
                f"{where} has no {words}; every row needs flow and head.",
            )
        return None
    unit = UNITS[getattr(units, key)]
    si = unit.to_si(cell)
    if math.isfinite(si) and low - _SLACK <= si <= high * (1 + _SLACK):
        return None
    least, most = (number(float(f"{unit.from_si(limit):.5g}")) for limit in (low, high))
    printed = f" {unit.printed}".rstrip()
    allowed = f"{least}{printed} to {most}{printed}"
    return (
        f"{number(cell)}{printed}", allowed,
        f"{where} has its {words} outside {allowed}; {number(cell)}{printed} was given.",
    )  # fmt: skip
