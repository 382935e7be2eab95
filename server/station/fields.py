"""The registry of the document's fields: every path pattern with its entry, kind and place.

Built once from the models. A pattern has `*` where a path has an item's id:
`/zone/points/*/elevation`. Nothing else in the program spells a label, a range or a sheet.
"""

import types
import typing
from collections.abc import Iterator
from dataclasses import dataclass, field
from functools import cache, lru_cache
from typing import Literal, cast

from pydantic import TypeAdapter

from server.station.entry import Entry, Part, Quantity, Record, Sheet, Source
from server.station.pump import CurveTable
from server.station.station import Station

Kind = Literal[
    "quantity", "number", "integer", "text", "choice", "flag", "reference", "source", "table",
    "pattern", "list", "group",
]  # fmt: skip

SHEET_TITLES: dict[Sheet, str] = {
    "summary": "Summary",
    "supply": "Site and supply",
    "main-and-zone": "Main and zone",
    "demand": "Demand and scenarios",
    "pumps": "Pumps",
    "sets": "Sets",
    "duty": "Duty",
    "criteria": "Criteria",
    "memo": "Memo",
    "history": "History",
}
LONGEST_PATH = 300
# pipe models serve two conduits, and the suction line is shown with the supply
_SHEET_BY_POSITION: tuple[tuple[str, Sheet], ...] = (("/suction_line", "supply"),)


@dataclass(slots=True, eq=False)
class Node:
    """One position of the document: a field, a group, a list, or (named "*") an item of one."""

    name: str
    pattern: str
    kind: Kind
    sheet: Sheet
    title: str
    annotation: object
    default: object
    entry: Entry | None = None
    part: Part | None = None
    model: type[Record] | None = None
    children: dict[str, "Node"] = field(default_factory=dict)
    item: "Node | None" = None
    adapter: TypeAdapter[object] | None = None
    # the title of the group is needed to tell this field from another of the same title
    with_group: bool = False
    group_title: str = ""

    @property
    def is_field(self) -> bool:
        """Whether this is a value replaced whole, with nothing addressed inside it."""
        return self.kind not in ("list", "group")

    def check(self) -> TypeAdapter[object]:
        """Return the strict reader of this position's JSON, made at its first use."""
        if self.adapter is None:
            self.adapter = TypeAdapter(cast("type[object]", self.annotation))
        return self.adapter


def _inner(annotation: object) -> object:
    """Return the annotation without `| None`."""
    if isinstance(annotation, types.UnionType) or typing.get_origin(annotation) is typing.Union:
        (inner,) = (a for a in typing.get_args(annotation) if a is not type(None))
        return inner
    return annotation


def _kind(inner: object, entry: Entry | None) -> Kind:
    simple: dict[object, Kind] = {
        Quantity: "quantity", Source: "source", CurveTable: "table", bool: "flag",
        int: "integer", float: "number",
    }  # fmt: skip
    if inner in simple:
        return simple[inner]
    if inner is str:
        return "reference" if entry is not None and entry.refers_to else "text"
    if typing.get_origin(inner) is Literal:
        return "choice"
    if typing.get_origin(inner) is tuple:
        of = typing.get_args(inner)[0]
        return "list" if isinstance(of, type) and issubclass(of, Record) else "pattern"
    return "group"


def _sheet(pattern: str, given: Sheet) -> Sheet:
    for start, sheet in _SHEET_BY_POSITION:
        if pattern.startswith(start):
            return sheet
    return given


def _build(model: type[Record], pattern: str, group_title: str) -> dict[str, Node]:
    children: dict[str, Node] = {}
    for name, info in model.model_fields.items():
        entry = next((m for m in info.metadata if isinstance(m, Entry)), None)
        part = next((m for m in info.metadata if isinstance(m, Part)), None)
        told = entry or part
        if told is None:
            continue  # format, version and id are not fields that a person fills
        here = f"{pattern}/{name}"
        inner = _inner(info.annotation)
        kind = _kind(inner, entry)
        node = Node(
            name, here, kind, _sheet(here, told.sheet), told.title, info.annotation,
            info.get_default(), entry, part, group_title=group_title,
        )  # fmt: skip
        if kind == "list":
            assert part is not None
            of = typing.get_args(inner)[0]
            node.item = Node(
                "*", f"{here}/*", "group", node.sheet, part.item, of, None, part=part, model=of
            )
            node.item.children = _build(of, node.item.pattern, "")
        elif kind == "group" and isinstance(inner, type):
            node.model = inner
            node.children = _build(inner, here, told.title)
        children[name] = node
    return children


@cache
def root() -> Node:
    """Return the node of the whole document."""
    top = Node("", "", "group", "summary", "Station", Station, Station(), model=Station)
    top.children = _build(Station, "", "")
    seen: dict[tuple[str, str, str], list[Node]] = {}
    for node in walk(top):
        if node.is_field:
            place = node.pattern.rpartition("*")[0]
            seen.setdefault((node.sheet, place, node.title), []).append(node)
    for same in seen.values():
        for node in same:
            node.with_group = len(same) > 1 and node.group_title != ""
    return top


def walk(node: Node) -> Iterator[Node]:
    """Yield every node below `node`, parents first, in the order of the models."""
    for child in node.children.values():
        yield child
        yield from walk(child)
    if node.item is not None:
        yield node.item
        yield from walk(node.item)


def find(path: str) -> Node | None:
    """Return the node at a path or pattern; None if a station has no such place."""
    # what came over the wire is not kept in memory, however long it is
    return _find(path) if len(path) <= LONGEST_PATH else None


@lru_cache(maxsize=8192)
def _find(path: str) -> Node | None:
    if path == "":
        return root()
    if not path.startswith("/"):
        return None
    node: Node | None = root()
    for segment in path[1:].split("/"):
        if node is None or segment == "":
            return None
        node = node.item if node.kind == "list" else node.children.get(segment)
    return node


def node_at(path: str) -> Node:
    """Return the node at a path; KeyError if a station has no such place."""
    node = find(path)
    if node is None:
        raise KeyError(path)
    return node


def entry_for(path: str) -> Entry:
    """Return what the field at `path` says about itself; KeyError if it is not a field."""
    entry = node_at(path).entry
    if entry is None:
        raise KeyError(path)
    return entry


def part_for(path: str) -> Part:
    """Return title and item name of a group, a list or an item; KeyError for anything else."""
    part = node_at(path).part
    if part is None:
        raise KeyError(path)
    return part


def sheet_of(path: str) -> Sheet:
    """Return the sheet that shows `path`, by its position in the document."""
    return node_at(path).sheet


def kind_of(path: str) -> Kind:
    """Return what kind of value stands at `path`; an item of a list is a group."""
    return node_at(path).kind


def label(path: str) -> str:
    """Return the title of the field, group or list at `path`."""
    return node_at(path).title


@cache
def patterns() -> tuple[str, ...]:
    """Return the pattern of every field, in the order of the document."""
    return tuple(node.pattern for node in walk(root()) if node.is_field)
