"""Reaches in series: a table of what each has, and a card for its wall and fittings."""

from dataclasses import dataclass

from server.pages.forms import FieldView, field_views
from server.pages.items import ItemTable, Steps, item_table, items_of, steps_of
from server.pages.sheet import SheetView
from server.station import paths

COLUMNS = ("title", "length", "bore", "barrels", "material", "k", "rating", "end_level")
LAW = ("roughness/law",)
COLEBROOK = ("roughness/new", "roughness/aged")
HAZEN_WILLIAMS = ("roughness/coefficient_new", "roughness/coefficient_aged")
FITTING = ("kind", "count", "loss/by", "loss/value", "loss/length", "loss/loss", "loss/at_flow")


@dataclass(frozen=True, slots=True)
class ReachCard:
    """The wall and the fittings of one reach; the law that is not chosen is folded away."""

    steps: Steps
    wall: tuple[FieldView, ...]
    other_wall: tuple[FieldView, ...]
    fittings: ItemTable


@dataclass(frozen=True, slots=True)
class ReachesView:
    """A conduit's reaches."""

    table: ItemTable
    cards: tuple[ReachCard, ...]


def reaches_view(sheet: SheetView, list_path: str, caption: str) -> ReachesView:
    """Return the reaches of the conduit's list at `list_path`."""
    return ReachesView(
        item_table(
            sheet,
            list_path,
            COLUMNS,
            caption,
            note="Reaches in series, in the direction of flow.",
            pasted=COLEBROOK + HAZEN_WILLIAMS,
        ),
        tuple(_card(sheet, item) for item in items_of(sheet, list_path)),
    )


def _card(sheet: SheetView, item: str) -> ReachCard:
    law = paths.get(sheet.station, f"{item}/roughness/law")
    first, second = COLEBROOK, HAZEN_WILLIAMS
    if law == "hazen_williams":
        first, second = second, first
    steps = steps_of(sheet, item)
    return ReachCard(
        steps,
        field_views(sheet, item, LAW + first),
        field_views(sheet, item, second),
        item_table(
            sheet,
            f"{item}/fittings",
            FITTING,
            "Fittings",
            owner=steps,
            empty="No fittings listed singly; the sum of K above holds them all.",
        ),
    )
