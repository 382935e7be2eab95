"""Strategies of whole, well-formed stations, built from the registry of fields.

Each draw has items in every list, references that resolve, quantities in any unit of their
field and inside its range, and any field left empty. A new field of the models is drawn without
a change here.
"""

import json
from typing import Any

from hypothesis import Phase, settings
from hypothesis import strategies as st

from server.station import fields
from server.station.canonical import nfc
from server.station.fields import Node
from server.station.reader import read_station
from server.station.station import Station
from server.station.table_rules import COLUMNS
from server.station.wellformed import inside
from server.units import UNITS, Dimension, symbols

Item = dict[str, Any]

# a whole station has hundreds of draws: what fails is shown as found, not shrunk for minutes
whole_stations = settings(
    deadline=None, max_examples=15, phases=(Phase.explicit, Phase.reuse, Phase.generate)
)

short_texts = st.text(
    st.characters(codec="utf-8", categories=("L", "N", "P", "S", "Zs", "M")), max_size=12
).map(nfc)
sources = st.fixed_dictionaries(
    {
        "kind": st.sampled_from(
            ["survey", "test", "code", "standard", "maker", "office", "default"]
        )
    },
    optional={"text": short_texts, "date": st.sampled_from(["2026-02-11", "2025-07", "2024"])},
)


def numbers(low: float, high: float) -> st.SearchStrategy[float]:
    """Numbers of a range, round ones and those with every digit."""
    exact = st.floats(low, high, allow_nan=False, allow_infinity=False)
    return st.one_of(
        exact, exact.map(lambda value: round(value, 2)).filter(lambda v: low <= v <= high)
    )


@st.composite
def quantities(draw: st.DrawFn, node: Node) -> Item:
    """Draw a value in any unit of the field, perhaps with its source and the sum it was."""
    entry = node.entry
    assert entry is not None
    dimension = entry.dimension or Dimension.PRESSURE
    unit = UNITS[draw(st.sampled_from(symbols(dimension)))]
    low = -1e6 if entry.low is None else entry.low
    high = 1e6 if entry.high is None else entry.high
    value = draw(numbers(unit.from_si(low), unit.from_si(high)))
    if not inside(entry, unit.to_si(value)):
        value = unit.from_si((low + high) / 2)
    made: Item = {"value": value, "unit": unit.symbol}
    if draw(st.integers(0, 3)) == 0:
        made["source"] = draw(sources)
    if draw(st.integers(0, 9)) == 0:
        made["typed"] = f"{value!r} + 0"
    return made


@st.composite
def tables(draw: st.DrawFn) -> Item:
    """Draw rows with rising flows in any columns and units."""
    extra = draw(st.lists(st.sampled_from([column[0] for column in COLUMNS[2:]]), unique=True))
    columns = [
        column for column in COLUMNS if column[0] in ("flow", "head") or column[0] in extra
    ]
    units = {column[0]: draw(st.sampled_from(symbols(column[2]))) for column in columns}
    # whole numbers of the larger units would lie outside the range of a pump's flow
    units["flow"] = draw(st.sampled_from(["L/s", "m3/h", "gpm_us"]))
    flows = sorted(draw(st.sets(st.integers(0, 60), max_size=5)))
    heads = draw(st.lists(st.integers(1, 90), min_size=len(flows), max_size=len(flows)))
    rows = []
    for flow, head in zip(flows, heads, strict=True):
        rest = [draw(st.sampled_from([None, 0.0, 0.5, 0.75])) for _ in columns[2:]]
        rows.append([flow, head, *rest])
    return {"units": units, "rows": rows}


class _Drawing:
    """One station being drawn; remembers the ids for the references, filled in last."""

    def __init__(self, draw: st.DrawFn, items: int) -> None:
        self.draw, self.items = draw, items
        self.count = 0
        self.ids: dict[str, list[str]] = {}
        self.waiting: list[tuple[Item, str, str]] = []

    def group(self, node: Node) -> Item:
        made: Item = {}
        for name, child in node.children.items():
            if child.kind == "list":
                made[name] = self.list(child)
            elif child.kind == "group":
                made[name] = self.group(child)
            elif self.draw(st.integers(0, 2)) == 0:
                self.field(made, name, child)
        return made

    def list(self, node: Node) -> list[Item]:
        assert node.item is not None
        made = []
        for _ in range(self.draw(st.integers(0, self.items))):
            key = self.new_id(node)
            # the group itself, not a copy: references are written into it last
            item = self.group(node.item)
            item["id"] = key
            made.append(item)
        if node.pattern == "/criteria/rows":
            made.sort(key=lambda row: str(row["id"]))
        return made

    def new_id(self, node: Node) -> str:
        self.count += 1
        made = f"x{self.count}-a" if node.pattern == "/criteria/rows" else f"i{self.count}"
        self.ids.setdefault(node.pattern, []).append(made)
        return made

    def field(self, made: Item, name: str, node: Node) -> None:
        entry = node.entry
        assert entry is not None
        if node.kind == "reference":
            assert entry.refers_to is not None
            if node.pattern != "/sets/*/slots/*/curve":
                self.waiting.append((made, name, entry.refers_to))
        elif node.kind == "text":
            dates = {
                "/supply/flow_tests/*/made_at": "2025-05-14 07:30",
                "/memo/date": "2026-05",
            }
            given = dates.get(node.pattern)
            made[name] = given if given is not None else self.draw(short_texts)
        elif node.kind in ("number", "integer"):
            low, high = entry.low or 0.0, entry.high or 1e6
            whole = st.integers(int(low), int(high))
            made[name] = self.draw(whole if node.kind == "integer" else numbers(low, high))
        else:
            made[name] = self.draw(self.simple(node))

    def simple(self, node: Node) -> st.SearchStrategy[Any]:
        entry = node.entry
        assert entry is not None
        if node.kind == "quantity":
            return quantities(node)
        if node.kind == "choice":
            return st.sampled_from([key for key, _ in entry.choices])
        if node.kind == "flag":
            return st.booleans()
        if node.kind == "source":
            return sources
        if node.kind == "table":
            return tables()
        return st.lists(numbers(0, 20), min_size=24, max_size=24)

    def refer(self) -> None:
        for holder, name, to in self.waiting:
            known = self.ids.get(to)
            if known:
                holder[name] = self.draw(st.sampled_from(known))


@st.composite
def station_trees(draw: st.DrawFn, items: int = 2) -> Item:
    """Draw the raw JSON of a well-formed station with at most `items` items in each list."""
    drawing = _Drawing(draw, items)
    tree = drawing.group(fields.root())
    drawing.refer()
    for test in tree["supply"]["flow_tests"]:
        # a residual pressure is below the static one
        if "static_pressure" in test:
            test.pop("residual_pressure", None)
    return {"format": "firmhead-station", "version": 1, **tree}


def stations(items: int = 2) -> st.SearchStrategy[Station]:
    """Well-formed stations."""
    return station_trees(items).map(lambda tree: read_station(json.dumps(tree).encode()))


def field_paths(station: Station) -> list[str]:
    """Return the path of every field of every item that a station has."""
    found: list[str] = []

    def walk(node: Node, path: str, holder: object) -> None:
        for name, child in node.children.items():
            value = getattr(holder, name)
            if child.kind == "group":
                walk(child, f"{path}/{name}", value)
            elif child.kind == "list":
                for item in value:
                    walk(child.item, f"{path}/{name}/{item.id}", item)
            else:
                found.append(f"{path}/{name}")

    walk(fields.root(), "", station)
    return found
