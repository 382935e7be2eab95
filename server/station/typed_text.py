"""Between a field and what a person types in it: text to a value for an edit, and back."""

import re
from typing import get_args

from pydantic import JsonValue

from server.entry_text import EntryRefused, Typed, allowed_units, alternatives, read_entry
from server.station.canonical import nfc, number, plain
from server.station.changes import item_id, items_of
from server.station.entry import Entry, Quantity, Source, SourceKind
from server.station.faults import BadStation, Fault, quoted
from server.station.fields import Node, find
from server.station.paths import get
from server.station.pump import CurveTable
from server.station.station import Station
from server.station.table_text import rows_from_text, text_of_rows
from server.station.titles import item_title, subject
from server.station.wellformed import range_words
from server.units import UNITS, Dimension, View, dimensions_of, display_unit

_KINDS: tuple[str, ...] = get_args(SourceKind)
_GAPS = re.compile(r"[\s;]+")


def value_from_text(
    station: Station,
    path: str,
    text: str,
    *,
    view: View | None = None,
    unit: str | None = None,
    dimension: Dimension | None = None,
) -> JsonValue:
    """Return the JSON value that `text`, typed in the field at `path`, means.

    Parameters
    ----------
    view : "si" or "us", optional
        Unit view that the field was shown in; decides the unit of an empty field. The station's
        own view if not given.
    unit : str, optional
        Symbol taken when the text names no unit, instead of the field's own.
    dimension : Dimension, optional
        For the limit of a criterion only, whose dimension its rule knows.

    Returns
    -------
    JsonValue
        None for an empty text. A quantity keeps the unit typed, its sum, and the source it had
        (unless that was a default: then the number is now the person's own).

    Raises
    ------
    BadStation
        With one fault (a table: one for each bad cell); also if the field is not there.
    """
    node = find(path)
    old = get(station, path)
    if node is None or not node.is_field:
        raise _refused(station, path, text, "a field", "is not a field to type in")
    text = nfc(text.replace("\r\n", "\n").replace("\r", "\n")).strip()
    if node.kind == "text":
        return text
    if text == "" and node.kind != "table":
        return [] if node.kind == "pattern" else None
    if node.kind == "quantity":
        return _quantity(station, path, node, text, old, view, unit, dimension)
    if node.kind in ("number", "integer"):
        return _number(station, path, node, text)
    if node.kind in ("choice", "flag"):
        return _choice(station, path, node, text)
    if node.kind == "reference":
        return _reference(station, path, node, text)
    if node.kind == "source":
        return _source(text, old)
    if node.kind == "pattern":
        return [_entry(station, path, node, cell, Dimension.NUMBER, "1").value
                for cell in _GAPS.split(text)]  # fmt: skip
    return _table(station, path, text, old)


def text_of(station: Station, path: str, view: View | None = None) -> tuple[str, str | None]:
    """Return what the field at `path` shows: its text as entered, and the symbol of its unit.

    An empty quantity has the unit in which it would be read: that of `view`, or of the
    station's own view. A value without a unit has None.
    """
    node = find(path)
    value = get(station, path)
    if isinstance(value, Quantity):
        return value.typed or number(value.value), value.unit
    if node is not None and node.kind == "quantity":
        dimension = node.entry.dimension if node.entry is not None else None
        if dimension is None:
            return "", None
        return "", display_unit(dimension, view or station.display.units).symbol
    if value is None:
        return "", None
    if isinstance(value, bool):
        return ("true" if value else "false"), None
    if isinstance(value, Source):
        return f"{value.kind}: {value.text}".removesuffix(": "), None
    if isinstance(value, CurveTable):
        return text_of_rows(value), None
    if isinstance(value, tuple):
        return " ".join(number(v) for v in value if isinstance(v, int | float)), None
    return (number(value) if isinstance(value, int | float) else str(value)), None


def _refused(station: Station, path: str, given: str, allowed: str, tail: str) -> BadStation:
    node = find(path)
    sheet = node.sheet if node is not None else ""
    sentence = f"{subject(station, path)} {tail}."
    return BadStation([Fault(path, sheet, quoted(given), allowed, sentence)])


def _entry(
    station: Station, path: str, node: Node, text: str, dimension: Dimension, unit: str
) -> Typed:
    try:
        return read_entry(text, dimension, unit)
    except EntryRefused as refusal:
        sentence = f"{subject(station, path)}: {refusal.sentence}"
        allowed = _allowed(node.entry, dimension, unit)
        raise BadStation([Fault(path, node.sheet, quoted(text), allowed, sentence)]) from None


def _allowed(entry: Entry | None, dimension: Dimension, unit: str) -> str:
    if entry is None or (entry.low is None and entry.high is None):
        return allowed_units(dimension)
    return f"{allowed_units(dimension)}, {range_words(entry, UNITS[unit])[0]}"


def _quantity(
    station: Station,
    path: str,
    node: Node,
    text: str,
    old: object,
    view: View | None,
    unit: str | None,
    dimension: Dimension | None,
) -> JsonValue:
    had = old if isinstance(old, Quantity) else None
    of = node.entry.dimension if node.entry is not None and node.entry.dimension else dimension
    if of is None and had is not None and had.unit in UNITS:
        of = dimensions_of(had.unit)[0]
    if of is None:
        raise ValueError(f"the dimension of {path} must be given; only its rule knows it")
    own = (
        had.unit if had is not None else display_unit(of, view or station.display.units).symbol
    )
    typed = _entry(station, path, node, text, of, unit or own)
    made: dict[str, JsonValue] = {"value": typed.value, "unit": typed.unit}
    if typed.typed is not None:
        made["typed"] = typed.typed
    if had is not None and had.source is not None:
        same = (had.value, had.unit) == (typed.value, typed.unit)
        if same or had.source.kind != "default":
            made["source"] = plain(had.source)
    return made


def _number(station: Station, path: str, node: Node, text: str) -> JsonValue:
    value = _entry(station, path, node, text, Dimension.NUMBER, "1").value
    if node.kind == "number":
        return value
    if not value.is_integer():
        raise _refused(
            station, path, text, "a whole number", f"must be a whole number; {text} was given"
        )
    return int(value)


def _choice(station: Station, path: str, node: Node, text: str) -> JsonValue:
    choices = node.entry.choices if node.entry is not None else ()
    wanted = text.casefold()
    for key, words in choices:
        if wanted in (key.casefold(), words.casefold()):
            return key == "true" if node.kind == "flag" else key
    allowed = alternatives([words for _, words in choices])
    raise _refused(station, path, text, allowed, f"must be {allowed}; {quoted(text)} was given")


def _reference(station: Station, path: str, node: Node, text: str) -> JsonValue:
    to = node.entry.refers_to if node.entry is not None else None
    titles = _titles(station, to or "")
    if text in titles:
        return text
    named = [key for key, title in titles.items() if title.casefold() == text.casefold()]
    if len(named) == 1:
        return named[0]
    allowed = (
        alternatives(list(titles.values())) if titles else "nothing yet: the list is empty"
    )
    tail = f"must be {allowed}" if titles else "has nothing to choose from yet"
    raise _refused(station, path, text, allowed, f"{tail}; {quoted(text)} was given")


def _titles(station: Station, to: str) -> dict[str, str]:
    """Return id and title of what a field may refer to."""
    start, _, inner = to.partition("/*/")
    lists = [start]
    if inner:
        lists = [f"{start}/{item_id(item)}/{inner}" for item in items_of(get(station, start))]
    return {
        item_id(item): item_title(station, f"{path}/{item_id(item)}")
        for path in lists
        for item in items_of(get(station, path))
    }


def _source(text: str, old: object) -> JsonValue:
    had = old if isinstance(old, Source) else None
    kind, colon, rest = text.partition(":")
    if colon and kind.strip().casefold() in _KINDS:
        made: dict[str, JsonValue] = {"kind": kind.strip().casefold(), "text": rest.strip()}
    elif text.casefold() in _KINDS:
        made = {"kind": text.casefold()}
    else:
        made = {"kind": had.kind if had is not None else "office", "text": text}
    if had is not None and had.date is not None and had.text == made.get("text", ""):
        made["date"] = had.date
    return made


def _table(station: Station, path: str, text: str, old: object) -> JsonValue:
    table = old if isinstance(old, CurveTable) else CurveTable()
    node = find(path)
    sheet = node.sheet if node is not None else ""
    rows = rows_from_text(text, table.units, subject(station, path), path, sheet)
    return {"units": plain(table.units), "rows": rows}
