"""Lists of the document as a page shows them: a table with a row an item, or a card an item."""

from collections.abc import Sequence
from dataclasses import dataclass

from server.pages.forms import FieldView, field_view, usual_unit
from server.pages.sheet import Refusal, SheetView
from server.station import fields, paths
from server.station.titles import lowered


@dataclass(frozen=True, slots=True)
class Column:
    """One column of a table of items: its field's name below the item, head and unit."""

    name: str
    title: str
    unit: str
    numeric: bool


@dataclass(frozen=True, slots=True)
class Steps:
    """What can be done with one item: the ids it moves before, None where it cannot."""

    path: str
    html_id: str
    title: str
    word: str
    up: str | None
    down: str | None
    action: str
    base: int
    locked: bool


@dataclass(frozen=True, slots=True)
class Row:
    """One item of a table."""

    steps: Steps
    cells: tuple[FieldView, ...]


@dataclass(frozen=True, slots=True)
class Adding:
    """The button that adds an item to a list."""

    path: str
    label: str
    action: str
    base: int
    locked: bool
    main: bool = False


@dataclass(frozen=True, slots=True)
class ItemTable:
    """A list as a table: a field a cell, an item a row."""

    path: str
    html_id: str
    caption: str
    note: str
    columns: tuple[Column, ...]
    pasted: tuple[Column, ...]
    rows: tuple[Row, ...]
    adding: Adding
    empty: str
    missing: bool
    action: str
    base: int
    refusal: Refusal | None
    owner: Steps | None


def items_of(sheet: SheetView, list_path: str) -> tuple[str, ...]:
    """Return the paths of the items of a list."""
    items = paths.get(sheet.station, list_path)
    if not isinstance(items, tuple):
        return ()
    return tuple(f"{list_path}/{item.id}" for item in items)


def steps_of(sheet: SheetView, item_path: str) -> Steps:
    """Return what can be done with the item at `item_path`."""
    list_path, _, own = item_path.rpartition("/")
    ids = [path.rpartition("/")[2] for path in items_of(sheet, list_path)]
    at = ids.index(own)
    up = ids[at - 1] if at > 0 else None
    down = None if at + 1 >= len(ids) else ids[at + 2] if at + 2 < len(ids) else ""
    return Steps(
        path=item_path,
        html_id=paths.html_id(item_path),
        title=paths.item_title(sheet.station, item_path),
        word=fields.part_for(list_path).item.lower(),
        up=up,
        down=down,
        action=sheet.action("edits"),
        base=sheet.loaded.number,
        locked=sheet.read_only,
    )


def adding(sheet: SheetView, list_path: str, label: str = "", *, main: bool = False) -> Adding:
    """Return the button that adds an item to the list at `list_path`."""
    word = fields.part_for(list_path).item.lower()
    return Adding(
        list_path,
        label or f"Add {_article(word)} {word}",
        sheet.action("edits"),
        sheet.loaded.number,
        sheet.read_only,
        main,
    )


def item_table(
    sheet: SheetView,
    list_path: str,
    names: Sequence[str],
    caption: str,
    *,
    note: str = "",
    empty: str = "",
    pasted: Sequence[str] = (),
    owner: Steps | None = None,
) -> ItemTable:
    """Return the list at `list_path` as a table with a column for each of `names`.

    `pasted` names fields that rows from a spreadsheet may bring behind those shown; `owner` is
    the item whose name ends the caption.
    """
    columns = tuple(_column(sheet, f"{list_path}/*/{name}", name) for name in names)
    rows = tuple(
        Row(
            steps_of(sheet, item),
            tuple(field_view(sheet, f"{item}/{name}", "cell") for name in names),
        )
        for item in items_of(sheet, list_path)
    )
    return ItemTable(
        path=list_path,
        html_id=paths.html_id(list_path),
        caption=caption,
        note=note,
        columns=columns,
        pasted=columns
        + tuple(_column(sheet, f"{list_path}/*/{name}", name) for name in pasted),
        rows=rows,
        adding=adding(sheet, list_path),
        empty=empty or f"No {fields.part_for(list_path).item.lower()} yet.",
        missing=list_path in sheet.missing,
        action=sheet.action("edits"),
        base=sheet.loaded.number,
        refusal=sheet.refused.get(list_path),
        owner=owner,
    )


def _column(sheet: SheetView, pattern: str, name: str) -> Column:
    node, entry = fields.node_at(pattern), fields.entry_for(pattern)
    kind = node.kind
    title = f"{node.group_title}, {lowered(node.title)}" if node.with_group else node.title
    unit = ""
    if kind == "quantity" and entry.dimension is not None:
        unit = usual_unit(pattern, entry, sheet.view).printed
    return Column(name, title, unit, kind in ("quantity", "number", "integer"))


def _article(word: str) -> str:
    return "an" if word[:1] in "aeiou" else "a"
