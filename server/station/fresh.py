"""New items of lists: sensible when empty, and copies with ids of their own."""

import re
from collections.abc import Callable

from pydantic import JsonValue

from server.station.canonical import plain
from server.station.changes import items_of
from server.station.conduit import Reach
from server.station.entry import Record
from server.station.fields import node_at
from server.station.ids import new_id
from server.station.paths import all_ids, get
from server.station.pump_set import Slot
from server.station.station import Station

Item = dict[str, JsonValue]


def new_item(station: Station, list_path: str) -> Item:
    """Return an empty item for the list at `list_path`, as JSON data, with a fresh id.

    Where the list tells it, a choice is made that the person then sees: the role of a point
    that is still missing, the pump of the slot before, the friction law of
    the reach before. No engineering number is ever filled in.

    Raises
    ------
    BadStation
        If the station has no such list.
    """
    items = items_of(get(station, list_path))
    taken = all_ids(station)
    item: Item = {"id": new_id(list_path, taken)}
    fill = _FILL.get(node_at(list_path).pattern)
    if fill is not None:
        fill(station, items, item, taken)
    return item


def copy_item(station: Station, item_path: str) -> Item:
    """Return a copy of an item as JSON data: new ids on it and inside, "copy" behind its name.

    Raises
    ------
    BadStation
        If the item is not there.
    """
    item = plain(get(station, item_path))
    if not isinstance(item, dict):
        raise TypeError(f"{item_path} is not an item of a list")
    taken = all_ids(station)
    renamed: dict[str, str] = {}
    list_path = item_path.rpartition("/")[0]
    _new_ids(item, list_path, taken, renamed)
    _refer(item, renamed)
    if list_path == "/supply/flow_tests":
        _flow_test(station, (), item, taken)
    title = item.get("title")
    if isinstance(title, str) and title:
        items = items_of(get(station, list_path))
        short = re.fullmatch(r"[A-Z]?[0-9]*", title) is not None
        item["title"] = _next_short_name(items) if short else f"{title}, copy"
    return item


def _new_ids(item: Item, list_path: str, taken: set[str], renamed: dict[str, str]) -> None:
    old = item.get("id")
    made = new_id(list_path, taken)
    taken.add(made)
    if isinstance(old, str):
        renamed[old] = made
    item["id"] = made
    _inside(item, list_path, taken, renamed)


def _inside(holder: Item, path: str, taken: set[str], renamed: dict[str, str]) -> None:
    for name, value in holder.items():
        if isinstance(value, dict):
            _inside(value, f"{path}/{name}", taken, renamed)
        elif isinstance(value, list):
            for member in value:
                if isinstance(member, dict) and "id" in member:
                    _new_ids(member, f"{path}/{name}", taken, renamed)


def _refer(holder: Item, renamed: dict[str, str]) -> None:
    """Let references inside a copy name the copied items."""
    for name, value in holder.items():
        if isinstance(value, str) and value in renamed and name != "id":
            holder[name] = renamed[value]
        elif isinstance(value, dict):
            _refer(value, renamed)
        elif isinstance(value, list):
            for member in value:
                if isinstance(member, dict):
                    _refer(member, renamed)


def _next_short_name(items: tuple[Record, ...]) -> str:
    titles = {getattr(item, "title", "") for item in items}
    number = 1
    while f"P{number}" in titles:
        number += 1
    return f"P{number}"


def _flow_test(
    station: Station, items: tuple[Record, ...], item: Item, taken: set[str]
) -> None:
    has_basis = any(test.use == "basis" for test in station.supply.flow_tests)
    item["use"] = "compared" if has_basis else "basis"


def _point(station: Station, items: tuple[Record, ...], item: Item, taken: set[str]) -> None:
    roles = {point.role for point in station.zone.points}
    missing = [role for role in ("critical", "lowest", "hydrant") if role not in roles]
    item["role"] = missing[0] if missing else "customer"


def _scenario(station: Station, items: tuple[Record, ...], item: Item, taken: set[str]) -> None:
    if station.horizons:
        item["horizon"] = station.horizons[-1].id
    item["supply"] = "low"


def _fire(station: Station, items: tuple[Record, ...], item: Item, taken: set[str]) -> None:
    hydrants = [point.id for point in station.zone.points if point.role == "hydrant"]
    if len(hydrants) == 1:
        item["point"] = hydrants[0]


def _reach(station: Station, items: tuple[Record, ...], item: Item, taken: set[str]) -> None:
    # one job has one friction law: that of the reach before, else of the other line
    lines = (items, station.discharge_main.reaches, station.suction_line.reaches)
    before = next((reaches[-1] for reaches in lines if reaches), None)
    if isinstance(before, Reach):
        item["roughness"] = {"law": before.roughness.law}


def _pump(station: Station, items: tuple[Record, ...], item: Item, taken: set[str]) -> None:
    item["curves"] = [{"id": new_id("/pumps/*/curves", taken)}]


def _slot(station: Station, items: tuple[Record, ...], item: Item, taken: set[str]) -> None:
    item["title"] = _next_short_name(items)
    if items:
        duty = [slot for slot in items if isinstance(slot, Slot) and slot.role == "duty"]
        last = plain((duty or items)[-1])
        if isinstance(last, dict):
            item.update({k: last[k] for k in ("pump", "curve", "leg", "drive") if k in last})
        return
    if len(station.pumps) == 1:
        item["pump"] = station.pumps[0].id
    if len(station.legs) == 1:
        item["leg"] = station.legs[0].id


_FILL: dict[str, Callable[[Station, tuple[Record, ...], Item, set[str]], None]] = {
    "/supply/flow_tests": _flow_test,
    "/suction_line/reaches": _reach,
    "/discharge_main/reaches": _reach,
    "/zone/points": _point,
    "/fires": _fire,
    "/scenarios": _scenario,
    "/pumps": _pump,
    "/sets/*/slots": _slot,
}
