"""Turns what the models refuse into our own sentences: path, given, allowed."""

import json
import re
from collections.abc import Mapping, Sequence

from pydantic import JsonValue, ValidationError
from pydantic_core import ErrorDetails

from server.entry_text import alternatives
from server.station.entry import Entry, Source
from server.station.faults import Fault, quoted
from server.station.fields import Node, find
from server.station.titles import lowered, member, subject

_SHAPES = {
    "quantity": 'a value with its unit, as {"value": 12.5, "unit": "m"}',
    "number": "a number",
    "integer": "a whole number",
    "text": "text",
    "reference": "the id of an item, as text",
    "flag": "true or false",
    "source": 'a source, as {"kind": "survey", "text": "levels, sheet 3"}',
    "table": 'a table, as {"units": {...}, "rows": [[0, 50], [10, 45]]}',
    "pattern": "a list of numbers",
    "list": "a list of items, each with an id",
    "group": "a group of fields in braces",
}


def path_of_loc(loc: Sequence[int | str], tree: object, start: str = "") -> str:
    """Return the path of the smallest field, item or group that holds a pydantic location.

    Places in lists become the ids that stand there; an item without an id keeps its place. A
    key that cannot be a part of a path ends it: the path is then that of what holds the key.
    """
    path, holder = start, tree
    for step in loc:
        node = find(path)
        if (node is not None and node.is_field) or step == "" or "/" in str(step):
            return path
        if isinstance(step, int):
            items = holder if isinstance(holder, list) else []
            holder = items[step] if step < len(items) else None
            item_id = member(holder, "id")
            usable = isinstance(item_id, str) and item_id and "/" not in item_id
            path = f"{path}/{item_id if usable else step}"
        else:
            holder = holder.get(step) if isinstance(holder, Mapping) else None
            path = f"{path}/{step}"
    return path


def _known_part(path: str) -> str:
    while path and find(path) is None:
        path = path.rpartition("/")[0]
    return path


def _given(value: object) -> str:
    if value is None:
        return "nothing"
    try:
        return quoted(json.dumps(value, ensure_ascii=False))
    except (TypeError, ValueError):
        return quoted(value)


def allowed_at(node: Node) -> str:
    """Return in words what shape of JSON a place takes."""
    if node.kind == "choice":
        return alternatives([key for key, _ in _choices(node.entry)])
    return _SHAPES[node.kind]


def _choices(entry: Entry | None) -> tuple[tuple[str, str], ...]:
    return entry.choices if entry is not None else ()


def _numbers_only(error: ErrorDetails) -> str | None:
    if error["type"] == "finite_number":
        return "a finite number"
    return None


def fault_of(error: ErrorDetails, tree: object, start: str = "", raw: object = None) -> Fault:
    """Return one refusal of the models as a fault.

    Parameters
    ----------
    error : ErrorDetails
        As pydantic gives it.
    tree : object
        The raw JSON of the whole document, for ids and titles.
    start : str
        Path at which `raw`, the JSON that was checked, stands; the whole document if empty.
    """
    loc, kind = error["loc"], error["type"]
    inside = tree if not start else raw
    path = path_of_loc(loc, inside, start)
    node = find(path)
    known = _known_part(path)
    holder = find(known)
    sheet = holder.sheet if holder is not None and known else ""
    name = subject(tree, known) if known else "The file"
    last = str(loc[-1]) if loc else ""

    if kind == "extra_forbidden":
        inner = f"{last or 'An empty key'} is not a field of {_owner(name, holder)}"
        return Fault(
            path, sheet, last, _members(holder, loc),
            f"{inner}; take it out or correct its name.",
        )  # fmt: skip
    if kind == "missing":
        what = {"id": "has no id", "value": "has no value", "unit": "has no unit"}.get(
            last, f"has no {last}"
        )
        target = path if node is not None and node.is_field else path.rpartition("/")[0]
        owner = subject(tree, target) if target else "The file"
        return Fault(
            target, sheet, "nothing", f"an {last}" if last == "id" else f"a {last}",
            f"{owner} {what}.",
        )  # fmt: skip
    if node is None:
        allowed = "text" if last == "id" else "another value"
        given = _given(error["input"])
        return Fault(
            known or path, sheet, given, allowed,
            f"{name}: {last} must be {allowed}; {given} was given.",
        )  # fmt: skip
    allowed = _numbers_only(error) or _inside(node, loc, error) or allowed_at(node)
    given = _given(error["input"])
    return Fault(path, sheet, given, allowed, f"{name} must be {allowed}; {given} was given.")


def _inside(node: Node, loc: Sequence[int | str], error: ErrorDetails) -> str | None:
    """Return what is allowed at a member of a field that is replaced whole."""
    if not node.is_field or not loc or loc[-1] == node.name:
        return None
    if node.kind == "quantity" and loc[-1] in ("value", "unit"):
        return "a number" if loc[-1] == "value" else "given with the symbol of its unit"
    if node.kind == "table":
        rows = [step for step in loc if isinstance(step, int)]
        if "rows" not in loc or not rows:
            return _SHAPES["table"]
        cell = f", cell {rows[-1] + 1}" if loc[-2] != "rows" else ""
        row = rows[-2] if cell else rows[-1]
        return f"rows of numbers, empty cells null, also in row {row + 1}{cell}"
    if node.kind == "pattern":
        return _SHAPES["pattern"]
    if error["type"] == "literal_error":
        kinds = Source.model_fields["kind"].annotation
        return "given with a source of kind " + alternatives(list(_literals(kinds)))
    return _SHAPES[node.kind] if node.kind in ("quantity", "source") else None


def _literals(annotation: object) -> tuple[str, ...]:
    return tuple(re.findall(r"'([a-z_]+)'", str(annotation)))


def _members(holder: Node | None, loc: Sequence[int | str]) -> str:
    if holder is None or not holder.children:
        return "only known fields"
    return "one of " + ", ".join(holder.children)


def _owner(name: str, holder: Node | None) -> str:
    """Return the owner of an unknown field inside a sentence."""
    if holder is None or not holder.pattern:
        return "a station file"
    return name if holder.name == "*" else lowered(name)


def faults_of(
    error: ValidationError, tree: object, start: str = "", raw: JsonValue = None
) -> tuple[Fault, ...]:
    """Return all refusals of one check, each place once."""
    found: dict[str, Fault] = {}
    for detail in error.errors(include_url=False, include_context=True):
        fault = fault_of(detail, tree, start, raw)
        found.setdefault(fault.path + "|" + fault.sentence, fault)
    return tuple(found.values())
