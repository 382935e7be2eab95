"""Stations drawn from the two demos by random edits: well-formed, often absurd."""

import copy
import json
import random
from collections.abc import Iterator
from typing import Any

from server.station import fields
from server.station.fields import Node
from server.station.station import Station
from server.station.wellformed import faults
from server.units import display_unit
from tests.studies.demo import document
from tests.studies.tank_demo import tank_document

Tree = dict[str, Any]
CONTROLS = (
    "fixed_speed", "levels", "held_flow", "reducing_valve", "flow_compensated",
    "discharge_pressure", "zone_point_pressure",
)  # fmt: skip
SUPPLY_TANK = ("cut_out", "low", "normal", "top")
LEFT_ALONE = ("memo", "answers", "display", "identity")


def absurd_station(seed: int) -> Station | None:
    """Return the station of a seed; None where the edits made it ill-formed."""
    draw = random.Random(seed)
    tree = draw.choice([document, tank_document])()
    _kinds(tree, draw)
    places = list(_leaves(fields.root(), tree, []))
    for _ in range(draw.randint(0, 6)):
        path, node = draw.choice(places)
        if path[0] not in LEFT_ALONE:
            _change(tree, path, node, draw)
    try:
        station = Station.model_validate_json(json.dumps(tree))
    except ValueError:
        return None
    return None if faults(station) else station


def _kinds(tree: Tree, draw: random.Random) -> None:
    """Mix kinds of supply, zone, control and drive, with the figures that they need."""
    if draw.random() < 0.4:
        tree["zone"]["kind"] = draw.choice(["tank", "both", "closed"])
    if draw.random() < 0.4:
        tree["supply"]["kind"] = draw.choice(["tank", "grade_line", "main"])
    low = draw.choice([150.0, 175.0, 185.0])
    tree["zone"].setdefault("tank", {
        "low": _m(low), "normal": _m(low + 1), "top": _m(low + 2),
        "use": draw.choice(["floating", "fire_only"]),
    })  # fmt: skip
    deep = draw.choice([0.0, 20.0, 30.0])
    tree["supply"].setdefault("tank", {
        name: _m(level - deep)
        for name, level in zip(SUPPLY_TANK, (140.5, 141.0, 142.0, 144.0), strict=True)
    })  # fmt: skip
    tree["supply"].setdefault(
        "grade_line", {"low": _m(140.0), "normal": _m(142.0), "high": _m(145.0)}
    )
    for each in tree["sets"]:
        control = each["control"]
        if draw.random() < 0.5:
            control["kind"] = draw.choice(CONTROLS)
        for name, unit, value in (
            ("pressure", "kPa", draw.choice([100, 300, 700])),
            ("pressure_at_no_flow", "kPa", 90), ("flow", "L/s", draw.choice([5, 30, 90])),
            ("valve_loss", "m", 1.5), ("valve_loss_at", "L/s", 30),
        ):  # fmt: skip
            if draw.random() < 0.8:
                control.setdefault(name, {"value": value, "unit": unit})
        for slot in each["slots"]:
            if draw.random() < 0.3:
                slot["drive"] = draw.choice(["fixed", "variable"])


def _m(level: float) -> Tree:
    return {"value": level, "unit": "m"}


def _leaves(node: Node, tree: Any, path: list[Any]) -> Iterator[tuple[list[Any], Node]]:
    for name, child in node.children.items():
        value = tree.get(name) if isinstance(tree, dict) else None
        if child.kind == "list":
            assert child.item is not None
            for i, item in enumerate(value or []):
                yield from _leaves(child.item, item, [*path, name, i])
        elif child.kind == "group":
            yield from _leaves(child, value or {}, [*path, name])
        else:
            yield [*path, name], child


def _change(tree: Tree, path: list[Any], node: Node, draw: random.Random) -> None:
    holder: Any = tree
    for step in path[:-1]:
        holder = holder[step] if isinstance(holder, list) else holder.setdefault(step, {})
    old = holder.get(path[-1])
    new = None if draw.random() < 0.15 else _value(node, old, draw)
    if new is None:
        holder.pop(path[-1], None)
    else:
        holder[path[-1]] = new


def _value(node: Node, old: Any, draw: random.Random) -> Any:
    entry = node.entry
    assert entry is not None
    if node.kind == "choice":
        return draw.choice([key for key, _ in entry.choices])
    if node.kind == "flag":
        return draw.random() < 0.5
    if node.kind == "quantity" and isinstance(old, dict):
        return {**old, "value": old["value"] * draw.choice([0, 0.1, 0.5, 0.9, 1.1, 2, 20, -1])}
    if node.kind == "quantity" and entry.dimension is not None:
        low, high = entry.low or 0.0, 10.0 if entry.high is None else entry.high
        unit = display_unit(entry.dimension, "si")
        si = draw.choice([low, 0.5 * (low + high), draw.uniform(low, min(high, low + 300))])
        return {"value": unit.from_si(si), "unit": unit.symbol}
    if node.kind == "table" and old:
        return _rows(copy.deepcopy(old), draw)
    return old


def _rows(table: Tree, draw: random.Random) -> Tree:
    """Return a pump's rows scaled, cut short, humped or flat."""
    rows, how = table["rows"], draw.choice(["scale", "drop", "hump", "flat", "late"])
    flow, head = draw.choice([0.3, 0.7, 1.5, 3]), draw.choice([0.3, 0.7, 1.5, 3])
    last = rows[-1][1]
    for row in rows:
        if how == "scale":
            row[0], row[1] = row[0] * flow, row[1] * head
        if how == "flat":
            row[1] = last + (row[1] - last) * 0.02
    if how == "hump":
        rows[0][1] *= 0.93
    kept = {"drop": rows[: draw.randint(1, len(rows))], "late": rows[1:]}.get(how, rows)
    return {**table, "rows": kept}
