"""What changed between two documents, field by field, in an order that can be applied."""

from bisect import bisect_left
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from pydantic import JsonValue

from server.station.canonical import plain
from server.station.entry import Record
from server.station.fields import Node, root
from server.station.station import CriteriaRow, Station

Op = Literal["set", "insert", "remove", "move"]


@dataclass(frozen=True, slots=True)
class Change:
    """One change: a field set, or an item of a list inserted, removed or moved.

    `path` is the field or the item; `before` is the id of the item that an inserted or moved
    item stands in front of, None at the end of its list.
    """

    op: Op
    path: str
    was: JsonValue = None
    value: JsonValue = None
    before: str | None = None


def diff(old: Station, new: Station) -> tuple[Change, ...]:
    """Return the changes that lead from `old` to `new`; applied in order they give `new`."""
    found: list[Change] = []
    _group(root(), old, new, "", found)
    return tuple(found)


def item_id(item: object) -> str:
    """Return the id of an item of a list."""
    found = vars(item)["id"]
    if not isinstance(found, str):
        raise TypeError(f"an item's id must be text; got {found!r}")
    return found


def items_of(holder: object) -> tuple[Record, ...]:
    """Return a list of the document as a tuple of items."""
    if not isinstance(holder, tuple):
        raise TypeError(f"a list was wanted; got {type(holder).__name__}")
    return holder


def _group(node: Node, old: object, new: object, path: str, found: list[Change]) -> None:
    if old is new:
        return
    before, after = vars(old), vars(new)
    for name, child in node.children.items():
        left, right = before[name], after[name]
        if left is right or left == right:
            continue
        here = f"{path}/{name}"
        if child.kind == "group":
            _group(child, left, right, here, found)
        elif child.kind == "list" and child.item is not None:
            _list(child.item, items_of(left), items_of(right), here, found)
        else:
            found.append(Change("set", here, plain(left), plain(right)))


def _list(
    node: Node, old: tuple[Record, ...], new: tuple[Record, ...], path: str, found: list[Change]
) -> None:
    if node.model is CriteriaRow:
        old, new = with_all_criteria(old, new), with_all_criteria(new, old)
    was = {item_id(item): item for item in old}
    now = {item_id(item): item for item in new}
    for place, (key, item) in enumerate(was.items()):
        if key not in now:
            following = item_id(old[place + 1]) if place + 1 < len(old) else None
            found.append(Change("remove", f"{path}/{key}", plain(item), None, following))
    for key, item in was.items():
        if key in now:
            _group(node, item, now[key], f"{path}/{key}", found)
    order = list(was)
    stay = longest_rise([order.index(key) for key in now if key in was])
    kept = {order[place] for place in stay}
    following = None
    # from the end, so that the item in front of which another is put already stands there
    for key in reversed(list(now)):
        if key not in was:
            found.append(Change("insert", f"{path}/{key}", None, plain(now[key]), following))
        elif key not in kept:
            place = order.index(key)
            stood = order[place + 1] if place + 1 < len(order) else None
            found.append(Change("move", f"{path}/{key}", stood, None, following))
        following = key


def with_all_criteria(
    rows: tuple[Record, ...], others: tuple[Record, ...]
) -> tuple[Record, ...]:
    """Return `rows` with an empty row for each rule that only `others` has.

    A rule without a row has its profile's limit, so that a row appearing is a field being set.
    """
    for key in sorted({item_id(row) for row in others} - {item_id(row) for row in rows}):
        rows = with_criterion(rows, CriteriaRow(id=key))
    return rows


def with_criterion(rows: tuple[Record, ...], row: Record) -> tuple[Record, ...]:
    """Put a row before the first of a later key, so that the order of edits is no matter."""
    key = item_id(row)
    place = next((i for i, other in enumerate(rows) if item_id(other) > key), len(rows))
    return (*rows[:place], row, *rows[place:])


def longest_rise(places: Sequence[int]) -> list[int]:
    """Return a longest rising part of `places`: the items that need not be moved.

    >>> longest_rise([3, 0, 1, 2])
    [0, 1, 2]
    """
    ends: list[int] = []
    last: list[int] = []
    links: list[int | None] = []
    for index, place in enumerate(places):
        at = bisect_left(ends, place)
        links.append(last[at - 1] if at else None)
        if at == len(ends):
            ends.append(place)
            last.append(index)
        else:
            ends[at] = place
            last[at] = index
    rise: list[int] = []
    step = last[-1] if last else None
    while step is not None:
        rise.append(places[step])
        step = links[step]
    return rise[::-1]
