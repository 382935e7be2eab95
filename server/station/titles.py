"""Words for a place in the document: the title of an item, the subject of a sentence, a path.

Works on a `Station` and on the raw JSON of a file that could not become one, so that a refusal
of a bad file names "Top Row 31" as every other sentence does.
"""

from collections.abc import Mapping, Sequence

from server.station.fields import SHEET_TITLES, Node, root
from server.units import UNITS

# words that keep their capital inside a sentence
_CAPITALS = ("K", "C", "C,", "NPSH", "BEP")


def member(holder: object, name: str) -> object:
    """Return the member of a record or of raw JSON; None if it has no such member."""
    if isinstance(holder, Mapping):
        return holder.get(name)
    return getattr(holder, name, None)


def _items(holder: object) -> Sequence[object]:
    return holder if isinstance(holder, list | tuple) else ()


def place_of(items: object, item_id: str) -> int | None:
    """Return the place of the item with this id in its list; None if it is not there."""
    for place, item in enumerate(_items(items)):
        if member(item, "id") == item_id:
            return place
    # a raw item without a usable id is addressed by its place
    if item_id.isdigit() and int(item_id) < len(_items(items)):
        return int(item_id)
    return None


def _own_title(item: object) -> str:
    for name in ("title", "kind"):
        text = member(item, name)
        if (
            isinstance(text, str)
            and text
            and (name != "kind" or member(item, "count") is not None)
        ):
            return text
    diameter = member(item, "diameter")
    value, unit = member(diameter, "value"), member(diameter, "unit")
    if isinstance(value, int | float) and isinstance(unit, str) and unit in UNITS:
        return f"{value:g} {UNITS[unit].printed} impeller"
    return ""


def _title(item: object, node: Node, place: int, item_id: str) -> str:
    if node.pattern == "/criteria/rows/*":
        return f"criterion {item_id.replace('-', ' ')}"
    own = _own_title(item)
    return own or f"{lowered(node.title)} {place + 1}"


def lowered(title: str) -> str:
    """Return a title as it stands inside a sentence."""
    first = title.split(" ")[0].rstrip(",")
    return title if first in _CAPITALS else title[:1].lower() + title[1:]


def _shown_place(place: int | None, count: int) -> int:
    """Return the place of an item; one that is not in the list yet would be the last."""
    return count if place is None else place


def _walk(station: object, path: str) -> tuple[Node, list[tuple[Node, str]]] | None:
    """Return the node at `path` and, outermost first, the items on the way with titles."""
    node: Node | None = root()
    holder: object = station
    items: list[tuple[Node, str]] = []
    for segment in path.split("/")[1:]:
        if node is None:
            return None
        if node.kind == "list":
            place = place_of(holder, segment)
            node = node.item
            if node is None:
                return None
            count = len(_items(holder))
            holder = _items(holder)[place] if place is not None else None
            items.append((node, _title(holder, node, _shown_place(place, count), segment)))
        else:
            node = node.children.get(segment)
            holder = member(holder, segment)
    return None if node is None else (node, items)


def item_title(station: object, path: str) -> str:
    """Return the name of the item at `path`, or of the item that `path` lies in.

    An item without a name is told by its place: "point 2". Outside of any item, the title of
    the field, group or list.
    """
    found = _walk(station, path)
    if found is None:
        return path
    node, items = found
    return items[-1][1] if items else node.title


def subject(station: object, path: str) -> str:
    """Return what a sentence about `path` begins with: "Elevation of Top Row 31"."""
    found = _walk(station, path)
    if found is None:
        return path.rpartition("/")[2] or "The file"
    node, items = found
    titles = [title for _, title in reversed(items)]
    if node.name == "*":
        first, *rest = titles
        return " of ".join([first[:1].upper() + first[1:], *rest])
    label = node.title
    if node.with_group:
        label = f"{node.group_title}, {lowered(label)}"
    return " of ".join([label, *titles])


def words(station: object, path: str) -> str:
    """Return a path in words: "Main and zone, Top Row 31, elevation"."""
    found = _walk(station, path)
    if found is None:
        return path
    node, items = found
    parts = [SHEET_TITLES[node.sheet], *(title for _, title in items)]
    if node.with_group or (node.kind == "list" and node.group_title):
        parts.append(lowered(node.group_title))
    if node.name != "*" and node.pattern:
        parts.append(lowered(node.title))
    return ", ".join(parts)
