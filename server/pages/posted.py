"""What a form of a sheet asked for, turned into edits of the document."""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Annotated

from fastapi import Form
from pydantic import JsonValue

from server.pages.curve_grid import table_from_cells
from server.pages.default_scenarios import default_scenarios
from server.pages.defaults import default_of
from server.pages.forms import Look, entry_at
from server.station import fields, paths
from server.station.edits import Edit, apply_edits
from server.station.faults import BadStation, Fault, quoted
from server.station.fresh import copy_item, new_item
from server.station.station import Station
from server.station.typed_text import value_from_text
from server.units import UNITS, View, display_unit

LONGEST_PASTE = 500


@dataclass(frozen=True, slots=True)
class Posted:
    """The fields of a posted form, as text."""

    path: str
    op: str
    text: str
    base: str
    was: str | None
    unit: str
    look: str
    before: str
    keep: str
    grid: str | None
    cells: tuple[str, ...]
    units: tuple[str, ...]
    item: str
    columns: str
    rows: str
    source: tuple[str, str, str] | None

    @property
    def shape(self) -> Look:
        """How the field stands on its sheet."""
        return "cell" if self.look == "cell" else "choice" if self.look == "choice" else "line"


@dataclass(frozen=True, slots=True)
class Asked:
    """Edits, with the item that should take the focus afterwards."""

    edits: tuple[Edit, ...]
    focus: str = ""


def posted_form(
    path: Annotated[str, Form()] = "",
    op: Annotated[str, Form()] = "set",
    text: Annotated[str, Form()] = "",
    base: Annotated[str, Form()] = "",
    was: Annotated[str | None, Form()] = None,
    unit: Annotated[str, Form()] = "",
    look: Annotated[str, Form()] = "line",
    before: Annotated[str, Form()] = "",
    keep: Annotated[str, Form()] = "",
    grid: Annotated[str | None, Form()] = None,
    cell: Annotated[list[str] | None, Form()] = None,
    units: Annotated[list[str] | None, Form()] = None,
    item: Annotated[str, Form()] = "",
    columns: Annotated[str, Form()] = "",
    rows: Annotated[str, Form()] = "",
    source_kind: Annotated[str | None, Form()] = None,
    source_text: Annotated[str, Form()] = "",
    source_date: Annotated[str, Form()] = "",
) -> Posted:
    """Return the form as posted; whatever is absent is empty."""
    source = None if source_kind is None else (source_kind, source_text, source_date)
    return Posted(
        path, op, text, base, was, unit, look, before, keep, grid, tuple(cell or ()),
        tuple(units or ()), item, columns, rows, source,
    )  # fmt: skip


def asked(posted: Posted, station: Station, view: View) -> Asked:
    """Return the edits that a form asks for, made from the document `station` that it showed.

    Raises
    ------
    BadStation
        If the address is not one, or what was typed is not a value of the field.
    """
    if fields.find(posted.path) is None or not posted.path:
        raise BadStation([_fault(posted.path, posted.path, "a field of a station",
                                 f"A station has no field {quoted(posted.path)}.")])  # fmt: skip
    match posted.op:
        case "insert":
            new = new_item(station, posted.path)
            return Asked((Edit("insert", posted.path, new),), _focus(posted.path, new))
        case "copy":
            list_path, _, own = posted.path.rpartition("/")
            new = copy_item(station, posted.path)
            after = _after(station, list_path, own)
            return Asked((Edit("insert", list_path, new, before=after),), _focus(list_path, new))
        case "remove":
            return Asked((Edit("remove", posted.path),))
        case "move":
            return Asked((Edit("move", posted.path, before=posted.before or None),))
        case "scenarios":
            edits = default_scenarios(station)
            return Asked(edits)
        case "paste":
            return _pasted(posted, station, view)
        case "default":
            return Asked((_default_edit(posted.path, view),))
        case "sort":
            return Asked((_grid_edit(posted, station, sort=True),))
    if posted.source is not None:
        return Asked((_source_edit(posted, station),))
    if posted.look == "grid":
        return Asked((_grid_edit(posted, station, sort=False),))
    return Asked((Edit("set", posted.path, typed_value(station, posted.path, posted.text, view=view, unit=posted.unit)),))


def typed_value(
    station: Station, path: str, text: str, *, view: View, unit: str = ""
) -> JsonValue:
    """Return the JSON value of a text typed in the field at `path`; `unit` when it names none."""
    node = fields.node_at(path)
    known = unit if node.kind == "quantity" and unit in UNITS else None
    dimension = entry_at(path).dimension
    return value_from_text(station, path, text, view=view, unit=known, dimension=dimension)


def _default_edit(path: str, view: View) -> Edit:
    default = default_of(path)
    if default is None:
        raise BadStation([_fault(path, "", "a value", "This value is never assumed; enter it.")])
    quantity: dict[str, JsonValue] = dict(default.quantity(view))
    return Edit("set", path, quantity)


def _source_edit(posted: Posted, station: Station) -> Edit:
    """Set or drop the source of a quantity that stands there already."""
    value = paths.get_json(station, posted.path)
    if not isinstance(value, dict) or posted.source is None:
        raise BadStation([_fault(posted.path, "", "a value with a unit",
                                 "Enter the value first, then where it comes from.")])  # fmt: skip
    kind, text, date = (part.strip() for part in posted.source)
    new = {key: member for key, member in value.items() if key != "source"}
    if kind:
        new["source"] = {"kind": kind, "text": text} | ({"date": date} if date else {})
    elif text or date:
        raise BadStation([_fault(posted.path, text or date, "a kind of source",
                                 "Choose what kind of source this is.")])  # fmt: skip
    return Edit("set", posted.path, new)


def _grid_edit(posted: Posted, station: Station, *, sort: bool) -> Edit:
    if posted.grid is not None:
        rows = [line.split("\t") for line in posted.grid.split("\n")]
    else:
        width = max(1, len(posted.units))
        rows = [list(posted.cells[at : at + width]) for at in range(0, len(posted.cells), width)]
    return Edit("set", posted.path, table_from_cells(station, posted.path, rows, posted.units, sort=sort))


def _pasted(posted: Posted, station: Station, view: View) -> Asked:
    """Fill cells from pasted rows, from the item named on and then into new items; all or none."""
    names = posted.columns.split()
    lines = [line.split("\t") for line in posted.rows.replace("\r\n", "\n").split("\n") if line.strip()]
    if not lines or not names:
        raise BadStation([_fault(posted.path, "", "rows", "There are no rows to store.")])
    if len(lines) > LONGEST_PASTE:
        raise BadStation([_fault(posted.path, str(len(lines)), f"{LONGEST_PASTE} rows",
                                 f"More than {LONGEST_PASTE} rows cannot be pasted at once.")])  # fmt: skip
    if _is_head(posted.path, names, lines[0]):
        lines = lines[1:]
    items = [f"{posted.path}/{i}" for i in _ids(station, posted.path)]
    at = items.index(posted.item) if posted.item in items else len(items)
    edits: list[Edit] = []
    faults: list[Fault] = []
    for number, cells in enumerate(lines):
        if at + number >= len(items):
            new = new_item(station, posted.path)
            edits.append(Edit("insert", posted.path, new))
            station = apply_edits(station, edits[-1:])
            items.append(f"{posted.path}/{new['id']}")
        for column, (name, cell) in enumerate(zip(names, cells, strict=False)):
            path = f"{items[at + number]}/{name}"
            try:
                edit = Edit("set", path, typed_value(station, path, cell, view=view, unit=_column_unit(path, view)))
                station = apply_edits(station, [edit])
                edits.append(edit)
            except BadStation as bad:
                title = fields.label(path)
                faults.extend(
                    _fault(path, cell, fault.allowed, f"Row {number + 1}, {title}: {fault.sentence}",
                           (number, column))
                    for fault in bad.faults
                )  # fmt: skip
    if faults:
        raise BadStation(faults)
    return Asked(tuple(edits))


def _column_unit(path: str, view: View) -> str:
    """Return the unit that stands in the head of a column, for a pasted number without its own."""
    entry = fields.entry_for(path)
    if fields.kind_of(path) != "quantity" or entry.dimension is None:
        return ""
    return display_unit(entry.dimension, view).symbol


def _is_head(list_path: str, names: Sequence[str], cells: Sequence[str]) -> bool:
    """Whether a pasted line is the head of the table: each cell begins with its column's title."""
    titles = [fields.label(f"{list_path}/*/{name}").lower() for name in names]
    return all(cell.strip().lower().startswith(title) for title, cell in zip(titles, cells, strict=False))


def _ids(station: Station, list_path: str) -> list[str]:
    items = paths.get(station, list_path)
    return [str(item.id) for item in items] if isinstance(items, tuple) else []


def _after(station: Station, list_path: str, own: str) -> str | None:
    """Return the id of the item behind `own`, None when it is the last."""
    ids = _ids(station, list_path)
    at = ids.index(own) + 1 if own in ids else len(ids)
    return ids[at] if at < len(ids) else None


def _focus(list_path: str, item: JsonValue) -> str:
    return paths.html_id(f"{list_path}/{item['id']}") if isinstance(item, dict) else ""


def _fault(
    path: str, given: str, allowed: str, sentence: str, cell: tuple[int, int] | None = None
) -> Fault:
    node = fields.find(path)
    return Fault(path, node.sheet if node is not None else "", quoted(given), allowed, sentence, cell)
