"""Rows pasted from a spreadsheet into a list of the document, and one typed cell."""

from collections.abc import Sequence

from pydantic import JsonValue

from server.entry_text import EntryRefused, read_entry
from server.pages.forms import entry_at, usual_unit
from server.station import fields, paths
from server.station.edits import Edit, apply_edits
from server.station.faults import BadStation, Fault, quoted
from server.station.fresh import new_item
from server.station.station import Station
from server.station.typed_text import value_from_text
from server.units import UNITS, View

LONGEST_PASTE = 500
# a wall that is pasted by one law alone is read by that law
BY_LAW = {
    "roughness/new": "colebrook", "roughness/aged": "colebrook",
    "roughness/coefficient_new": "hazen_williams",
    "roughness/coefficient_aged": "hazen_williams",
}  # fmt: skip


def typed_value(
    station: Station, path: str, text: str, *, view: View, unit: str = ""
) -> JsonValue:
    """Return the JSON value of a text typed in a field; `unit` when it names none."""
    node = fields.node_at(path)
    known = unit if node.kind == "quantity" and unit in UNITS else None
    dimension = entry_at(path).dimension
    return value_from_text(station, path, text, view=view, unit=known, dimension=dimension)


def pasted_rows(
    station: Station, list_path: str, first: str, names: list[str], text: str, view: View
) -> tuple[Edit, ...]:
    """Return the edits that fill cells from rows: from the item `first` on, then new items.

    Raises
    ------
    BadStation
        With a fault for every bad cell; then nothing is stored.
    """
    lines = [
        line.split("\t") for line in text.replace("\r\n", "\n").split("\n") if line.strip()
    ]
    if not lines or not names:
        raise _refused(list_path, "", "rows", "There are no rows to store.")
    if len(lines) > LONGEST_PASTE:
        raise _refused(
            list_path,
            str(len(lines)),
            f"{LONGEST_PASTE} rows",
            f"More than {LONGEST_PASTE} rows cannot be pasted at once.",
        )
    units: dict[str, str] = {}
    first_row = 1
    if len(lines) > 1 and _is_head(list_path, names, lines[0]):
        names, units = _head_read(list_path, names, lines[0])
        lines = lines[1:]
        first_row = 2
    items = [f"{list_path}/{i}" for i in ids_of(station, list_path)]
    at = items.index(first) if first in items else len(items)
    edits: list[Edit] = []
    faults: list[Fault] = []
    for number, cells in enumerate(lines):
        if at + number >= len(items):
            new = new_item(station, list_path)
            edits.append(Edit("insert", list_path, new))
            station = apply_edits(station, edits[-1:])
            items.append(f"{list_path}/{new['id']}")
        for column, (name, cell) in enumerate(zip(names, cells, strict=False)):
            path = f"{items[at + number]}/{name}"
            try:
                edit = Edit(
                    "set",
                    path,
                    typed_value(
                        station,
                        path,
                        cell,
                        view=view,
                        unit=units.get(name) or _column_unit(path, view),
                    ),
                )
                station = apply_edits(station, [edit])
                edits.append(edit)
            except BadStation as bad:
                faults.extend(
                    _fault(
                        path,
                        cell,
                        fault.allowed,
                        f"Row {number + first_row}: {fault.sentence}",
                        (number, column),
                    )
                    for fault in bad.faults
                )
        laws = {
            BY_LAW[name]
            for name, cell in zip(names, cells, strict=False)
            if name in BY_LAW and cell.strip()
        }
        if len(laws) == 1:
            edits.append(Edit("set", f"{items[at + number]}/roughness/law", laws.pop()))
    if faults:
        raise BadStation(faults)
    return tuple(edits)


def _column_unit(path: str, view: View) -> str:
    """Return the unit in the head of a column, for a pasted number without its own."""
    entry = fields.entry_for(path)
    if fields.kind_of(path) != "quantity" or entry.dimension is None:
        return ""
    return usual_unit(path, entry, view).symbol


def _is_head(list_path: str, names: Sequence[str], cells: Sequence[str]) -> bool:
    """Whether a pasted line is a head: the columns' own titles, or words for numbers."""
    titles = [_title(f"{list_path}/*/{name}").lower() for name in names]
    if all(
        cell.strip().lower().startswith(title)
        for title, cell in zip(titles, cells, strict=False)
    ):
        return True
    numeric = [
        cell.strip()
        for name, cell in zip(names, cells, strict=False)
        if fields.kind_of(f"{list_path}/*/{name}") in ("quantity", "number", "integer")
    ]
    starts = {cell.strip()[:1] for cell in cells}
    return any(numeric) and not any(s.isdigit() or s in ("-", "+", ".") for s in starts if s)


def _head_read(
    list_path: str, names: Sequence[str], cells: Sequence[str]
) -> tuple[list[str], dict[str, str]]:
    """Return the columns that a head names, and the units that it gives them.

    Raises
    ------
    BadStation
        For a head or a unit that cannot be read: neither is ever guessed.
    """
    titles = {_title(f"{list_path}/*/{name}").lower(): name for name in names}
    every = {title: set(title.replace(",", " ").split()) for title in titles}
    found: list[str] = []
    units: dict[str, str] = {}
    for number, cell in enumerate(cells):
        said, _, unit = cell.strip().lower().partition("(")
        if not any(c.strip() for c in cells[number:]):
            break
        words = set(said.replace(",", " ").split())
        like = (
            [said.strip()]
            if said.strip() in titles
            else [title for title in titles if words and words <= every[title]]
        )
        if len(like) != 1 or titles[like[0]] in found:
            known = ", ".join(titles)
            raise _refused(
                list_path,
                cell,
                known,
                f"Row 1 has the heading {quoted(cell.strip())}, which names no one column. "
                f"There are: {known}. Change it, or paste the rows without headings.",
            )
        name = titles[like[0]]
        found.append(name)
        dimension = fields.entry_for(f"{list_path}/*/{name}").dimension
        if unit.strip(" )") and dimension is not None:
            try:
                units[name] = read_entry(f"1 {unit.strip(' )')}", dimension, "").unit
            except EntryRefused as refused:
                raise _refused(
                    list_path,
                    cell,
                    refused.allowed,
                    f"Row 1, heading {quoted(cell.strip())}: {refused.sentence}",
                ) from None
    return found, units


def _title(pattern: str) -> str:
    node = fields.node_at(pattern)
    return f"{node.group_title}, {node.title}" if node.with_group else node.title


def ids_of(station: Station, list_path: str) -> list[str]:
    """Return the ids of the items of a list."""
    items = paths.get(station, list_path)
    return [str(item.id) for item in items] if isinstance(items, tuple) else []


def _refused(path: str, given: str, allowed: str, sentence: str) -> BadStation:
    return BadStation([_fault(path, given, allowed, sentence)])


def _fault(
    path: str, given: str, allowed: str, sentence: str, cell: tuple[int, int] | None = None
) -> Fault:
    return Fault(path, fields.sheet_of(path), quoted(given), allowed, sentence, cell)
