"""Addresses in a document: the only place that reads, sets, inserts, moves, removes by path.

A path is `/zone/points/pt-c6n2vh/elevation`; the segments behind a list are ids. Every function
returns a new document that shares what did not change with the old one.
"""

import json

from pydantic import BaseModel, JsonValue, ValidationError

from server.station.canonical import nfc, plain
from server.station.changes import Change, diff, item_id, items_of, with_criterion
from server.station.entry import Record
from server.station.faults import BadStation, Fault, quoted
from server.station.fields import Node, find
from server.station.ids import LONGEST_RULE_KEY, is_id
from server.station.refusals import faults_of
from server.station.station import CriteriaRow, Station
from server.station.titles import item_title, place_of, subject, words

__all__ = [
    "Change", "all_ids", "diff", "get", "get_json", "has", "html_id", "insert", "item_title",
    "move", "path_of", "put", "remove", "subject", "words",
]  # fmt: skip

_CRITERIA = "/criteria/rows"
_NO_FIELD = "the address of a field of a station"


def html_id(path: str) -> str:
    """Return the id of the HTML element of a path: `zone--points--pt-c6n2vh--elevation`."""
    return path[1:].replace("/", "--")


def path_of(element: str) -> str:
    """Return the path that `html_id` made `element` from."""
    return "/" + element.replace("--", "/")


def _refused(path: str, given: object, allowed: str, sentence: str) -> BadStation:
    node = find(path)
    sheet = node.sheet if node is not None and node.pattern else ""
    return BadStation([Fault(path, sheet, quoted(given), allowed, sentence)])


def _node(path: str) -> Node:
    node = find(path)
    if node is None:
        raise _refused(path, path, _NO_FIELD, f"A station has no field {quoted(path)}.")
    return node


def _gone(station: Station, path: str, segment: str) -> BadStation:
    node = find(path)
    name = node.title.lower() if node is not None else "list"
    return _refused(
        path, segment, "an item that is still there",
        f"The {name} list has no item {quoted(segment)}; it may have been removed.",
    )  # fmt: skip


def _is_new_criterion(list_path: str, segment: str) -> bool:
    return list_path == _CRITERIA and is_id(segment, LONGEST_RULE_KEY)


def _descend(station: Station, path: str) -> list[tuple[object, str]]:
    """Return each holder on the way with the segment that leads on; BadStation if gone."""
    _node(path)
    way: list[tuple[object, str]] = []
    holder: object = station
    here = ""
    for segment in path.split("/")[1:]:
        way.append((holder, segment))
        if isinstance(holder, tuple):
            place = _place(holder, segment)
            if place is not None:
                holder = holder[place]
            elif _is_new_criterion(here, segment):
                # a rule that still has its profile's limit has no row of its own yet
                holder = CriteriaRow(id=segment)
            else:
                raise _gone(station, here, segment)
        else:
            holder = vars(holder)[segment]
        here = f"{here}/{segment}"
    way.append((holder, ""))
    return way


def _place(items: tuple[Record, ...], key: str) -> int | None:
    return None if key.isdigit() else place_of(items, key)


def get(station: Station, path: str) -> object:
    """Return the value at `path`: a `Quantity`, text, number, tuple, record or None.

    Raises
    ------
    BadStation
        If a station has no such field, or the item was removed.
    """
    return _descend(station, path)[-1][0]


def get_json(station: Station, path: str) -> JsonValue:
    """Return the value at `path` as JSON data."""
    return plain(get(station, path))


def has(station: Station, path: str) -> bool:
    """Whether `path` leads to a field, group, list or item that is there."""
    try:
        _descend(station, path)
    except BadStation:
        return False
    return True


def _clean(value: JsonValue) -> JsonValue:
    if isinstance(value, str):
        return nfc(value)
    if isinstance(value, list):
        return [_clean(member) for member in value]
    if isinstance(value, dict):
        return {nfc(key): _clean(member) for key, member in value.items()}
    return value


def _read(station: Station, path: str, node: Node, value: JsonValue) -> object:
    """Return `value` as what the document holds at `path`."""
    if value is None and not node.is_field:
        raise _refused(
            path, "nothing", "a value", f"{subject(station, path)} must have a value."
        )
    if value is None:
        # empty and absent are one thing: a text goes back to "", a choice to its default
        return node.default
    try:
        text = json.dumps(_clean(value), allow_nan=False)
    except (ValueError, TypeError, RecursionError):
        allowed = "finite numbers"
        name = subject(station, path)
        raise _refused(
            path, "a number that is not finite", allowed, f"{name} must hold {allowed} only."
        ) from None
    try:
        return node.check().validate_json(text)
    except ValidationError as error:
        raise BadStation(faults_of(error, station, path, value)) from None


def _rebuild(way: list[tuple[object, str]], value: object) -> Station:
    """Return the document with `value` at the end of `way`, its holders made new."""
    for holder, segment in reversed(way[:-1]):
        if isinstance(holder, tuple):
            place = _place(holder, segment)
            if place is not None:
                value = (*holder[:place], value, *holder[place + 1 :])
            elif isinstance(value, Record):
                value = with_criterion(holder, value)
        elif isinstance(holder, BaseModel):
            value = holder.model_copy(update={segment: value})
    if not isinstance(value, Station):
        raise TypeError(f"a station was wanted; got {type(value).__name__}")
    return value


def without_empty_criteria(station: Station) -> Station:
    """Return the document without criteria that say nothing: they are their profile's."""
    rows = station.criteria.rows
    if all(row != CriteriaRow(id=row.id) for row in rows):
        return station
    kept = tuple(row for row in rows if row != CriteriaRow(id=row.id))
    return _rebuild(_descend(station, _CRITERIA), kept)


def put(station: Station, path: str, value: JsonValue) -> Station:
    """Return the document with the field at `path` set to `value`, given as JSON data.

    Only the shape of the value is checked; `wellformed.faults` judges units, ranges and
    references.

    Raises
    ------
    BadStation
        If there is no such field, its item was removed, or `value` has another shape.
    """
    node = _node(path)
    if not node.is_field:
        raise _refused(
            path, path, _NO_FIELD, f"{subject(station, path)} is not one field; set its fields."
        )
    way = _descend(station, path)
    new = _read(station, path, node, value)
    old = way[-1][0]
    if new is old or (type(new) is type(old) and new == old):
        return station
    changed = _rebuild(way, new)
    return without_empty_criteria(changed) if path.startswith(_CRITERIA) else changed


def all_ids(station: Station) -> set[str]:
    """Return every id in use in the document."""
    found: set[str] = set()
    _collect(station, found)
    return found


def _collect(holder: object, found: set[str]) -> None:
    if isinstance(holder, tuple):
        for item in holder:
            if not isinstance(item, Record):
                return
            found.add(item_id(item))
            _collect(item, found)
    elif isinstance(holder, Record):
        for member in vars(holder).values():
            if isinstance(member, Record) or (isinstance(member, tuple) and member):
                _collect(member, found)


def _list_at(station: Station, list_path: str) -> tuple[list[tuple[object, str]], Node]:
    node = _node(list_path)
    if node.kind != "list" or node.item is None:
        raise _refused(
            list_path, list_path, "a list", f"{subject(station, list_path)} is not a list."
        )
    return _descend(station, list_path), node.item


def _spot(
    station: Station, list_path: str, items: tuple[Record, ...], before: str | None
) -> int:
    if before is None:
        return len(items)
    place = _place(items, before)
    if place is None:
        raise _gone(station, list_path, before)
    return place


def insert(
    station: Station, list_path: str, item: JsonValue, before: str | None = None
) -> Station:
    """Return the document with a new item in a list, in front of `before` or at the end.

    Raises
    ------
    BadStation
        If there is no such list, `before` is gone, or the item has another shape or no id.
    """
    way, node = _list_at(station, list_path)
    key = item.get("id") if isinstance(item, dict) else None
    path = f"{list_path}/{key}"
    longest = LONGEST_RULE_KEY if list_path == _CRITERIA else 32
    if not is_id(key, longest):
        raise _refused(list_path, key, "an id", f"A new {node.title.lower()} must have an id.")
    new = _read(station, path, node, item)
    items = items_of(way[-1][0])
    if _place(items, str(key)) is not None:
        raise _refused(
            path, key, "an id that is not in use", f"{subject(station, path)} is already there."
        )
    place = _spot(station, list_path, items, before)
    return _rebuild(way, (*items[:place], new, *items[place:]))


def _item_at(station: Station, path: str) -> tuple[list[tuple[object, str]], str, str]:
    node = _node(path)
    if node.name != "*":
        raise _refused(
            path,
            path,
            "an item of a list",
            f"{subject(station, path)} is not an item of a list.",
        )
    list_path, _, key = path.rpartition("/")
    return _descend(station, list_path), list_path, key


def remove(station: Station, item_path: str) -> Station:
    """Return the document without an item; BadStation if it is not there."""
    way, list_path, key = _item_at(station, item_path)
    items = items_of(way[-1][0])
    place = _place(items, key)
    if place is None:
        raise _gone(station, list_path, key)
    return _rebuild(way, (*items[:place], *items[place + 1 :]))


def move(station: Station, item_path: str, before: str | None) -> Station:
    """Return the document with an item in front of `before`, or last; BadStation if gone."""
    way, list_path, key = _item_at(station, item_path)
    items = items_of(way[-1][0])
    place = _place(items, key)
    if place is None:
        raise _gone(station, list_path, key)
    if before == key:
        return station
    rest = (*items[:place], *items[place + 1 :])
    spot = _spot(station, list_path, rest, before)
    return _rebuild(way, (*rest[:spot], items[place], *rest[spot:]))
