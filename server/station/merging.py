"""Three-way merge of documents: what one side changed goes with what the other changed."""

from collections.abc import Iterable, Sequence

from pydantic import JsonValue

from server.station.canonical import number, plain
from server.station.changes import item_id, items_of, with_all_criteria
from server.station.entry import Quantity, Record
from server.station.fields import Node, root
from server.station.station import CriteriaRow, Station
from server.station.titles import lowered, subject
from server.units import UNITS


class Conflict(Exception):
    """Two people changed the same thing differently; nothing was saved.

    `base`, `yours` and `theirs` are JSON data; None where the value or item is not there.
    """

    def __init__(
        self, path: str, base: JsonValue, yours: JsonValue, theirs: JsonValue, sentence: str
    ) -> None:
        self.path, self.base, self.yours, self.theirs = path, base, yours, theirs
        self.sentence = sentence
        super().__init__(sentence)

    def as_json(self) -> dict[str, JsonValue]:
        """Return what the API answers with 409."""
        return {
            "path": self.path,
            "base": self.base,
            "yours": self.yours,
            "theirs": self.theirs,
            "sentence": self.sentence,
        }


def merged(base: Station, mine: Station, theirs: Station) -> Station:
    """Return the merge of two documents that both came from `base`; Conflict if there is none.

    The result is the same with the sides exchanged, but for an order of items that both
    changed: there `mine` decides.
    """
    result = _Merge(base, mine, theirs).value(root(), "", base, mine, theirs)
    if not isinstance(result, Station):
        raise TypeError(f"a station was wanted; got {type(result).__name__}")
    return result


class _Merge:
    def __init__(self, base: Station, mine: Station, theirs: Station) -> None:
        self.base, self.mine, self.theirs = base, mine, theirs

    def value(
        self, node: Node, path: str, base: object, mine: object, theirs: object
    ) -> object:
        if mine is base or mine is theirs or _same(mine, base):
            return theirs
        if theirs is base or _same(theirs, base):
            return mine
        if _same(mine, theirs):
            return theirs
        if node.kind == "list":
            return self.items(node, path, items_of(base), items_of(mine), items_of(theirs))
        if not node.is_field and base is not None and isinstance(theirs, Record):
            changed = {}
            for name, child in node.children.items():
                was, right = getattr(base, name), getattr(theirs, name)
                new = self.value(child, f"{path}/{name}", was, getattr(mine, name), right)
                if new is not right:
                    changed[name] = new
            return theirs.model_copy(update=changed)
        raise Conflict(
            path,
            plain(base),
            plain(mine),
            plain(theirs),
            self.sentence(node, path, mine, theirs),
        )

    def sentence(self, node: Node, path: str, mine: object, theirs: object) -> str:
        name = subject(self.theirs if theirs is not None else self.mine, path)
        return (
            f"{name} was changed to {in_words(theirs, node)} by another edit, while you "
            f"changed it to {in_words(mine, node)}."
        )

    def items(
        self,
        node: Node,
        path: str,
        base: tuple[Record, ...],
        mine: tuple[Record, ...],
        theirs: tuple[Record, ...],
    ) -> tuple[Record, ...]:
        inner = node.item
        if inner is None:
            raise TypeError(f"{path} is not a list of items")
        if inner.model is CriteriaRow:
            every = with_all_criteria(with_all_criteria(base, mine), theirs)
            base, mine, theirs = (
                with_all_criteria(rows, every) for rows in (base, mine, theirs)
            )
        was, left, right = ({item_id(i): i for i in side} for side in (base, mine, theirs))
        together: dict[str, Record] = {}
        for key in dict.fromkeys([*was, *left, *right]):
            here = f"{path}/{key}"
            new: object
            if key in left and key in right:
                new = self.value(inner, here, was.get(key), left[key], right[key])
            elif key not in was:
                new = left[key] if key in left else right[key]
            else:
                # one side removed it, the other must have left it as it was
                if key in left and not _same(left[key], was[key]):
                    raise self.removed(inner, here, was[key], left[key], None)
                if key in right and not _same(right[key], was[key]):
                    raise self.removed(inner, here, was[key], None, right[key])
                continue
            if isinstance(new, Record):
                together[key] = new
        order = _order(list(was), list(left), list(right), together)
        items = tuple(together[key] for key in order)
        if inner.model is CriteriaRow:
            items = tuple(row for row in items if row != CriteriaRow(id=item_id(row)))
        return items

    def removed(
        self, node: Node, path: str, was: Record, mine: Record | None, theirs: Record | None
    ) -> Conflict:
        name = subject(self.base, path)
        if mine is not None:
            sentence = f"{name} was removed by another edit, while you changed it."
            # the field that was edited, so that the page can show the refusal there
            path = _first_difference(node, path, was, mine)
        else:
            sentence = f"{name} was changed by another edit, while you removed it."
        return Conflict(path, plain(was), plain(mine), plain(theirs), sentence)


def _same(one: object, other: object) -> bool:
    return type(one) is type(other) and one == other


def _first_difference(node: Node, path: str, was: object, now: object) -> str:
    for name, child in node.children.items():
        left, right = getattr(was, name), getattr(now, name)
        if not _same(left, right):
            here = f"{path}/{name}"
            return (
                here if child.kind != "group" else _first_difference(child, here, left, right)
            )
    return path


def _order(was: list[str], left: list[str], right: list[str], kept: Iterable[str]) -> list[str]:
    """Return the order of the merged items: old ones first, then each new one in its gap."""
    keep = set(kept)
    old = [key for key in was if key in keep]
    mine, theirs = (
        [key for key in side if key in keep and key in set(old)] for side in (left, right)
    )
    order = theirs if mine == old else mine
    gaps: dict[str | None, list[list[str]]] = {}
    for side in (left, right):
        for following, run in _runs(side, set(old), keep).items():
            gaps.setdefault(following, []).append(run)
    result: list[str] = []
    for key in (*order, None):
        # which side is merged into which must not show: runs of both go by their first id
        for run in sorted(gaps.get(key, [])):
            result += [new for new in run if new not in result]
        if key is not None:
            result.append(key)
    return result


def _runs(side: Sequence[str], old: set[str], keep: set[str]) -> dict[str | None, list[str]]:
    """Return the new items of one side by the old item that they stand in front of."""
    runs: dict[str | None, list[str]] = {}
    waiting: list[str] = []
    for key in side:
        if key in old:
            if waiting:
                runs[key] = waiting
            waiting = []
        elif key in keep:
            waiting.append(key)
    if waiting:
        runs[None] = waiting
    return runs


def in_words(value: object, node: Node) -> str:
    """Return a value of the document inside a sentence: "157 m", "closed", "nothing"."""
    if value is None or value == "" or value == ():
        return "nothing"
    if isinstance(value, Quantity):
        unit = UNITS[value.unit].printed if value.unit in UNITS else value.unit
        return f"{number(value.value)} {unit}".rstrip()
    if isinstance(value, str) and node.entry is not None:
        chosen = dict(node.entry.choices).get(value)
        return lowered(chosen) if chosen is not None else f'"{value}"'
    if isinstance(value, bool):
        return (
            dict(node.entry.choices).get(str(value).lower(), str(value))
            if node.entry
            else str(value)
        )
    if isinstance(value, int | float):
        return number(value)
    return "another content"
