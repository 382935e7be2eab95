"""Entered values as rows of a table: what, as it was entered, and where it comes from."""

from collections.abc import Iterator

from server.memo.blocks import Cell, Column, Number, Spans, Table
from server.station import fields, paths
from server.station.entry import Entry, Quantity, Source
from server.station.fields import Node
from server.station.station import Station
from server.units import UNITS, Dimension, View, display_decimals, display_unit

SOURCE_WORDS = {
    "survey": "survey",
    "test": "test",
    "code": "code",
    "standard": "standard",
    "maker": "maker",
    "office": "office",
    "default": "DEFAULT",
}
COLUMNS = (
    Column("Input"),
    Column("As entered"),
    Column("Source"),
)
NO_SOURCE = "not stated"
Row = tuple[Cell, ...]


def entered_table(
    station: Station, caption: str, starts: tuple[str, ...], view: View
) -> Table | None:
    """Return everything entered below some paths, None when nothing is.

    Parameters
    ----------
    station : Station
        The document.
    caption : str
        Caption of the table.
    starts : tuple of str
        Paths of groups or lists.
    view : {"si", "us"}
        A value entered in another unit is followed by its reading in this view.
    """
    rows = tuple(row for start in starts for row in _rows(station, start, view))
    return Table(caption, COLUMNS, rows, kind="inputs") if rows else None


def item_table(
    station: Station, caption: str, list_path: str, names: tuple[str, ...], view: View
) -> Table | None:
    """Return the items of a list as rows, some of their fields as columns; None without items.

    Parameters
    ----------
    station : Station
        The document.
    caption : str
        Caption of the table.
    list_path : str
        Path of the list.
    names : tuple of str
        Fields of an item.
    view : {"si", "us"}
        A value entered in another unit is followed by its reading in this view.
    """
    items = paths.get(station, list_path)
    if not isinstance(items, tuple) or not items:
        return None
    pattern = f"{fields.node_at(list_path).pattern}/*"
    columns = (Column("Name"), *(Column(fields.label(f"{pattern}/{name}")) for name in names))
    rows: list[Row] = []
    for item in items:
        path = f"{list_path}/{item.id}"
        cells: list[Cell] = []
        for name in names:
            value = paths.get(station, f"{path}/{name}")
            node = fields.node_at(f"{path}/{name}")
            told = value not in (None, "", ())
            cells.append(_value(station, f"{path}/{name}", node, value, view) if told else None)
        rows.append((paths.item_title(station, path), *cells))
    return Table(caption, columns, tuple(rows))


def _rows(station: Station, path: str, view: View) -> Iterator[Row]:
    if path.endswith("/slots") or (
        path == "/zone/tank" and station.zone.kind in (None, "closed")
    ):
        return  # slots have a table of their own; a closed zone has no tank
    node = fields.node_at(path)
    value = paths.get(station, path)
    if node.kind == "group":
        for name in node.children:
            yield from _rows(station, f"{path}/{name}", view)
    elif node.kind == "list":
        if isinstance(value, tuple):
            for item in value:
                yield from _rows(station, f"{path}/{item.id}", view)
    elif _is_told(node, value):
        yield _name(station, path), _value(station, path, node, value, view), _source(value)


def _is_told(node: Node, value: object) -> bool:
    # a title is the name in front of every other row of its item; curves have tables of
    # their own
    usual = node.name in ("barrels", "stages") and value == node.default
    return (
        not usual
        and value not in (None, "", ())
        and node.name != "title"
        and node.kind not in ("table", "source")
    )


def _name(station: Station, path: str) -> str:
    told = paths.words(station, path)
    title = fields.SHEET_TITLES[fields.sheet_of(path)]
    short = told.removeprefix(f"{title}, ")
    return short[:1].upper() + short[1:]


def _value(station: Station, path: str, node: Node, value: object, view: View) -> Spans:
    entry = node.entry
    if isinstance(value, Quantity):
        return quantity_spans(value, entry, view)
    if node.kind == "reference":
        return (_referred(station, entry, str(value)),)
    if isinstance(value, bool):
        value = "true" if value else "false"
    if entry is not None and entry.choices:
        return (dict(entry.choices).get(str(value), str(value)),)
    if isinstance(value, tuple):
        return (", ".join(f"{v:g}" for v in value if isinstance(v, int | float)),)
    return (f"{value:g}" if isinstance(value, float) else str(value),)


def quantity_spans(value: Quantity, entry: Entry | None, view: View) -> Spans:
    """Return a quantity as entered, and its reading where the view has another unit."""
    unit = UNITS[value.unit]
    typed = f" (typed {value.typed})" if value.typed else ""
    shown = f"{value.value:.10g}\u00a0{unit.printed}".rstrip("\u00a0") + typed
    dimension = (entry.dimension if entry is not None else None) or Dimension.NUMBER
    # seconds beside hours help nobody
    if display_unit(dimension, view).symbol == value.unit or dimension is Dimension.TIME:
        return (shown,)
    places = display_decimals(dimension, view)
    return shown, " = ", Number(value.si, dimension, places)


def _source(value: object) -> str:
    if not isinstance(value, Quantity):
        return ""
    return source_words(value.source)


def source_words(source: Source | None) -> str:
    """Return where a value comes from; a default is marked in capitals."""
    if source is None:
        return NO_SOURCE
    return ", ".join(p for p in (SOURCE_WORDS[source.kind], source.text, source.date) if p)


def _referred(station: Station, entry: Entry | None, item: str) -> str:
    lists = [entry.refers_to] if entry is not None and entry.refers_to else []
    if lists == ["/pumps/*/curves"]:
        lists = [f"/pumps/{pump.id}/curves" for pump in station.pumps]
    for list_path in lists:
        if paths.has(station, f"{list_path}/{item}"):
            return paths.item_title(station, f"{list_path}/{item}")
    return "an item that is gone"
