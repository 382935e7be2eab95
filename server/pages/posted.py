"""What a form of a sheet asked for, turned into edits of the document."""

from dataclasses import dataclass

from fastapi import Request
from pydantic import JsonValue

from server.pages.curve_grid import table_from_cells
from server.pages.default_scenarios import default_scenarios
from server.pages.defaults import default_of
from server.pages.forms import Look
from server.pages.pasted_rows import ids_of, pasted_rows, typed_value
from server.station import fields, paths
from server.station.edits import Edit
from server.station.faults import BadStation, Fault, quoted
from server.station.fresh import copy_item, new_item
from server.station.station import Station
from server.units import View

# a grid of 200 rows and five columns, sent cell by cell without script
MOST_FIELDS = 1500
LONGEST_FINDING = 300


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
    source: tuple[str, str, str]

    @property
    def shape(self) -> Look:
        """How the field stands on its sheet."""
        return "cell" if self.look == "cell" else "choice" if self.look == "choice" else "line"


@dataclass(frozen=True, slots=True)
class Asked:
    """Edits, with the item that should take the focus afterwards."""

    edits: tuple[Edit, ...]
    focus: str = ""


async def posted_form(request: Request) -> Posted:
    """Return the form as posted; whatever is absent is empty, but for `was` and `grid`."""
    form = await request.form(max_fields=MOST_FIELDS)

    def one(name: str, other: str = "") -> str:
        value = form.get(name, other)
        return value if isinstance(value, str) else other

    def every(name: str) -> tuple[str, ...]:
        return tuple(value for value in form.getlist(name) if isinstance(value, str))

    return Posted(
        path=one("path"),
        op=one("op", "set"),
        text=one("text"),
        base=one("base"),
        was=one("was") if "was" in form else None,
        unit=one("unit"),
        look=one("look", "line"),
        before=one("before"),
        keep=one("keep"),
        grid=one("grid") if "grid" in form else None,
        cells=every("cell"),
        units=every("units"),
        item=one("item"),
        columns=one("columns"),
        rows=one("rows"),
        source=(one("source_kind"), one("source_text"), one("source_date")),
    )


def asked(posted: Posted, station: Station, view: View) -> Asked:
    """Return the edits that a form asks for, made from the document `station` that it showed.

    Raises
    ------
    BadStation
        If the address is not one, or what was typed is not a value of the field.
    """
    if fields.find(posted.path) is None or not posted.path:
        raise _refused(
            posted.path,
            posted.path,
            "a field of a station",
            f"A station has no field {quoted(posted.path)}.",
        )
    _expect_place(posted, station)
    match posted.op:
        case "insert":
            new = new_item(station, posted.path)
            edits = (Edit("insert", posted.path, new), *_proposing(station, posted.path, new))
            return Asked(edits, _focus(posted.path, new))
        case "answer":
            answer = {
                **new_item(station, posted.path),
                "finding": posted.item[:LONGEST_FINDING],
            }
            return Asked((Edit("insert", posted.path, answer),), _focus(posted.path, answer))
        case "copy":
            list_path, _, own = posted.path.rpartition("/")
            new = copy_item(station, posted.path)
            after = _after(station, list_path, own)
            return Asked(
                (Edit("insert", list_path, new, before=after),), _focus(list_path, new)
            )
        case "remove":
            return Asked((Edit("remove", posted.path),))
        case "move":
            return Asked((Edit("move", posted.path, before=posted.before or None),))
        case "scenarios":
            return Asked(default_scenarios(station))
        case "paste":
            columns = posted.columns.split()
            edits = pasted_rows(station, posted.path, posted.item, columns, posted.rows, view)
            return Asked(edits)
        case "default":
            return Asked((_default_edit(posted.path, view),))
        case "sort":
            return Asked((_grid_edit(posted, station, sort=True),))
    if posted.look == "source":
        return Asked((_source_edit(posted, station),))
    if posted.look == "grid":
        return Asked((_grid_edit(posted, station, sort=False),))
    return Asked(
        (
            Edit(
                "set",
                posted.path,
                typed_value(station, posted.path, posted.text, view=view, unit=posted.unit),
            ),
        )
    )


def _expect_place(posted: Posted, station: Station) -> None:
    """Refuse an operation that does not go with what stands at its path."""
    node = fields.node_at(posted.path)
    kinds = {
        "insert": node.kind == "list",
        "answer": posted.path == "/answers",
        "paste": node.kind == "list",
        "scenarios": posted.path == "/scenarios",
        "copy": node.name == "*",
        "remove": node.name == "*",
        "move": node.name == "*",
        "default": node.is_field,
        "sort": node.kind == "table",
        "set": node.is_field,
    }
    if not kinds.get(posted.op, False):
        sentence = f"{paths.subject(station, posted.path)} cannot be changed in this way."
        raise _refused(posted.path, posted.op, "another operation", sentence)


def _proposing(station: Station, list_path: str, new: JsonValue) -> tuple[Edit, ...]:
    """Return the edit that proposes the first set made: with one set there is no choice."""
    first = list_path == "/sets" and not station.sets and station.proposed_set is None
    if not first or not isinstance(new, dict):
        return ()
    return (Edit("set", "/proposed_set", new["id"]),)


def _default_edit(path: str, view: View) -> Edit:
    default = default_of(path)
    if default is None:
        raise _refused(path, "", "a value", "This value is never assumed; enter it.")
    return Edit("set", path, default.quantity(view))


def _source_edit(posted: Posted, station: Station) -> Edit:
    """Set or drop the source of a quantity that stands there already."""
    value = paths.get_json(station, posted.path)
    if not isinstance(value, dict):
        raise _refused(
            posted.path,
            "",
            "a value with a unit",
            "Enter the value first, then where it comes from.",
        )
    kind, text, date = (part.strip() for part in posted.source)
    new: dict[str, JsonValue] = {key: value[key] for key in value if key != "source"}
    if kind:
        source: dict[str, JsonValue] = {"kind": kind, "text": text}
        new["source"] = source | {"date": date} if date else source
    elif text or date:
        raise _refused(
            posted.path, text or date, "a kind of source", "Choose what kind of source this is."
        )
    return Edit("set", posted.path, new)


def _grid_edit(posted: Posted, station: Station, *, sort: bool) -> Edit:
    if posted.grid is not None:
        rows = [line.split("\t") for line in posted.grid.split("\n")]
    else:
        width = max(1, len(posted.units))
        rows = [
            list(posted.cells[at : at + width]) for at in range(0, len(posted.cells), width)
        ]
    return Edit(
        "set",
        posted.path,
        table_from_cells(station, posted.path, rows, posted.units, sort=sort),
    )


def _after(station: Station, list_path: str, own: str) -> str | None:
    """Return the id of the item behind `own`, None when it is the last."""
    ids = ids_of(station, list_path)
    at = ids.index(own) + 1 if own in ids else len(ids)
    return ids[at] if at < len(ids) else None


def _focus(list_path: str, item: JsonValue) -> str:
    return paths.html_id(f"{list_path}/{item['id']}") if isinstance(item, dict) else ""


def _refused(path: str, given: str, allowed: str, sentence: str) -> BadStation:
    node = fields.find(path)
    sheet = node.sheet if node is not None and path else ""
    return BadStation([Fault(path, sheet, quoted(given), allowed, sentence)])
