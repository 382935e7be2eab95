"""Edits of a document: applied, merged with what others did meanwhile, and taken back."""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import Final, cast, get_args

from pydantic import JsonValue

from server.station.changes import Change, Op
from server.station.edit_rules import following_edits, refusals_of_removed
from server.station.faults import BadStation, Fault, quoted
from server.station.merging import Conflict, merged
from server.station.paths import diff, get_json, has, insert, move, put, remove
from server.station.station import Station
from server.station.wellformed import faults

__all__ = ["UNKNOWN", "Conflict", "Edit", "apply_edits", "inverse", "merge"]


class _Unknown:
    """The value of `was` in an edit that does not say what it saw."""

    def __repr__(self) -> str:
        return "UNKNOWN"


UNKNOWN: Final = _Unknown()
_OPS: tuple[str, ...] = get_args(Op)


@dataclass(frozen=True, slots=True)
class Edit:
    """One edit: a field set, or an item inserted, removed or moved.

    `path` is the field for set, the list for insert, and the item for remove and move. `value`
    is the new value or item as JSON data; `was` the value that the person saw, if known;
    `before` the id of the item in front of which an item is put, None for the end.
    """

    op: Op
    path: str
    value: JsonValue = None
    was: JsonValue | _Unknown = UNKNOWN
    before: str | None = None

    def as_json(self) -> dict[str, JsonValue]:
        """Return the edit as the API takes it."""
        made: dict[str, JsonValue] = {"op": self.op, "path": self.path}
        if self.op in ("set", "insert"):
            made["value"] = self.value
        if not isinstance(self.was, _Unknown):
            made["was"] = self.was
        if self.op in ("insert", "move"):
            made["before"] = self.before
        return made

    @staticmethod
    def from_json(data: object) -> "Edit":
        """Return the edit that JSON data of the API says; BadStation if it is not one."""
        if not isinstance(data, Mapping):
            raise _not_an_edit(data, "an edit is an object with op and path")
        op, path, before = data.get("op"), data.get("path"), data.get("before")
        if op not in _OPS:
            raise _not_an_edit(op, f"op is one of {', '.join(_OPS)}")
        if not isinstance(path, str):
            raise _not_an_edit(path, "path is the address of a field, as text")
        if before is not None and not isinstance(before, str):
            raise _not_an_edit(before, "before is the id of an item, or null")
        unknown = set(data) - {"op", "path", "value", "was", "before"}
        if unknown:
            raise _not_an_edit(
                sorted(map(str, unknown))[0], "an edit has op, path, value, was, before"
            )
        if op in ("set", "insert") and "value" not in data:
            raise _not_an_edit("nothing", f"{op} needs a value; null empties a field")
        was = cast(JsonValue, data["was"]) if "was" in data else UNKNOWN
        return Edit(cast(Op, op), path, cast(JsonValue, data.get("value")), was, before)


def _not_an_edit(given: object, rule: str) -> BadStation:
    sentence = f"The edit cannot be read: {rule}; {quoted(given)} was given."
    return BadStation([Fault("", "", quoted(given), rule, sentence)])


def _apply(station: Station, edit: Edit) -> Station:
    if edit.op == "set":
        return put(station, edit.path, edit.value)
    if edit.op == "insert":
        return insert(station, edit.path, edit.value, edit.before)
    if edit.op == "remove":
        return remove(station, edit.path)
    return move(station, edit.path, edit.before)


def _applied(station: Station, edits: Iterable[Edit]) -> Station:
    for edit in edits:
        station = _apply(station, edit)
        for path in following_edits(station, edit.op, edit.path):
            station = put(station, path, None)
    return station


def apply_edits(station: Station, edits: Sequence[Edit]) -> Station:
    """Return `station` with all edits applied, or with none.

    Setting the pump of a slot empties the slot's curve if that is a curve of another pump.

    Raises
    ------
    BadStation
        If an edit cannot be applied, or the document would not be well-formed after the last
        one.
    """
    new = _applied(station, edits)
    found = faults(new)
    if found:
        raise BadStation(refusals_of_removed(station, new, found))
    return new


def merge(base: Station, edits: Sequence[Edit], newest: Station) -> Station:
    """Return `newest` with the edits that were made on `base`.

    Fields that only one side changed take that side's value. An edit's `was`, where it is
    given, is taken for what stood in the base: the person saw that value, whatever the base
    says.

    Raises
    ------
    Conflict
        If a field was changed to different values, an item was edited that the other side
        removed, or the two together would not be well-formed.
    BadStation
        If the edits are not good on their own base.
    """
    if newest is base and all(isinstance(edit.was, _Unknown) for edit in edits):
        return apply_edits(base, edits)
    mine = apply_edits(base, edits)
    seen = base
    told: set[str] = set()
    for edit in edits:
        if edit.op == "set" and not isinstance(edit.was, _Unknown) and edit.path not in told:
            told.add(edit.path)
            if has(seen, edit.path) and not _is_what(edit.was, get_json(seen, edit.path)):
                seen = put(seen, edit.path, edit.was)
    result = merged(seen, mine, newest)
    if result is mine or result is newest:
        return result
    found = faults(result)
    if found:
        first = refusals_of_removed(seen, result, found)[0]
        raise Conflict(
            first.path, None, _value(mine, first.path), _value(newest, first.path),
            f"Your edit and another person's do not go together: {first.sentence}",
        )  # fmt: skip
    return result


def _is_what(was: JsonValue, stored: JsonValue) -> bool:
    """Whether a person who saw `was` saw `stored`; a page need not know the source."""
    if isinstance(was, dict) and isinstance(stored, dict):
        return all(stored.get(name) == value for name, value in was.items())
    return was == stored or (was in (None, "") and stored in (None, ""))


def _value(station: Station, path: str) -> JsonValue:
    return get_json(station, path) if has(station, path) else None


def inverse(before: Station, after: Station) -> tuple[Edit, ...]:
    """Return the edits that lead from `after` back to `before`, to be merged into newer."""
    return tuple(_edit_of(change) for change in diff(after, before))


def _edit_of(change: Change) -> Edit:
    if change.op == "set":
        return Edit("set", change.path, change.value, change.was)
    if change.op == "insert":
        list_path = change.path.rpartition("/")[0]
        return Edit("insert", list_path, change.value, before=change.before)
    return Edit(change.op, change.path, before=change.before if change.op == "move" else None)
