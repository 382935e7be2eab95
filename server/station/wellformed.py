"""What is never saved: wrong units, numbers outside their range, ids and references that fail.

The shape of the document is the models' work; whether the station makes sense is the studies'.
"""

import math
import re
from collections.abc import Callable, Iterator
from datetime import datetime
from functools import lru_cache

from server.entry_text import allowed_units, wrong_unit
from server.station.canonical import number
from server.station.changes import item_id, items_of
from server.station.entry import Entry, Quantity, Source
from server.station.faults import Fault, quoted
from server.station.fields import Node, root
from server.station.ids import ID_IN_WORDS, LONGEST_ID, LONGEST_RULE_KEY, is_id
from server.station.pump import CurveTable
from server.station.station import Station
from server.station.supply import FlowTest
from server.station.table_rules import table_faults
from server.station.titles import subject
from server.units import UNITS, Dimension, Unit, display_unit, symbols

LONGEST_SHORT_TEXT, LONGEST_TEXT, MOST_ITEMS = 300, 20_000, 500
_CONTROL = re.compile(r"[\x00-\x08\x0b-\x1f\x7f\u2028\u2029\ufffe\uffff]")
_DATE = re.compile(r"[0-9]{4}(-[0-9]{2}(-[0-9]{2})?)?")
_MOMENT = re.compile(r"[0-9]{4}-[0-9]{2}-[0-9]{2}([ T][0-9]{2}:[0-9]{2})?")
_HOURS, _LARGEST_FACTOR = 24, 20.0
# relative slack of a limit, so that a limit typed in another unit is inside
_SLACK = 1e-9


def faults(station: Station) -> tuple[Fault, ...]:
    """Return everything in `station` that is not well-formed, in the order of the document."""
    return tuple(_Check(station).run())


class _Check:
    """One pass over the document; ids are gathered on the way, references judged at the end."""

    def __init__(self, station: Station) -> None:
        self.station = station
        self.found: list[Fault] = []
        self.ids: dict[str, str] = {}
        self.lists: dict[str, set[str]] = {}
        self.references: list[tuple[Node, str, str]] = []
        self.by_kind: dict[str, Callable[[Node, str, object], None]] = {
            "quantity": self.quantity,
            "number": self.plain_number,
            "integer": self.plain_number,
            "text": self.text,
            "reference": self.reference,
            "source": self.source,
            "table": self.table,
            "pattern": self.pattern,
        }

    def run(self) -> Iterator[Fault]:
        self.group(root(), "", self.station)
        for node, path, given in self.references:
            self.resolve(node, path, given)
        self.curves_of_slots()
        yield from self.found

    def add(self, node: Node, path: str, given: object, allowed: str, tail: str) -> None:
        """Note a fault; `tail` goes on from the subject: "must be ...; ... was given."."""
        sentence = f"{subject(self.station, path)} {tail}"
        self.found.append(Fault(path, node.sheet, quoted(given), allowed, sentence))

    def group(self, node: Node, path: str, holder: object) -> None:
        values = vars(holder)
        for name, child in node.children.items():
            value = values[name]
            if value is None or value is child.default:
                continue
            kind = child.kind
            if kind == "group":
                self.group(child, f"{path}/{name}", value)
            elif kind == "list":
                self.items(child, f"{path}/{name}", value)
            elif (check := self.by_kind.get(kind)) is not None:
                check(child, f"{path}/{name}", value)
        if isinstance(holder, FlowTest):
            self.flow_test(node, path, holder)

    def items(self, node: Node, path: str, value: object) -> None:
        items = items_of(value)
        inner = node.item
        if inner is None:
            return
        if len(items) > MOST_ITEMS:
            self.add(node, path, len(items), f"at most {MOST_ITEMS} items",
                     f"may have at most {MOST_ITEMS} items; {len(items)} were given.",
            )  # fmt: skip
            return
        criteria = path == "/criteria/rows"
        # rules are keyed by names of their own, apart from the ids of items
        taken = {} if criteria else self.ids
        known = self.lists.setdefault(node.pattern, set())
        for item in items:
            key = item_id(item)
            here = f"{path}/{key}"
            if not is_id(key, LONGEST_RULE_KEY if criteria else LONGEST_ID):
                self.add(inner, here, key, ID_IN_WORDS,
                         f"has the id {quoted(key)}; an id is {ID_IN_WORDS}.",
                )  # fmt: skip
            elif key in taken:
                self.add(inner, here, key, "an id of its own",
                         f"has the id {key}, which is in use already; every id is used once.",
                )  # fmt: skip
            taken[key] = here
            known.add(key)
            self.group(inner, here, item)

    def quantity(self, node: Node, path: str, value: object) -> None:
        if not isinstance(value, Quantity) or node.entry is None:
            return
        unit = UNITS.get(value.unit)
        dimension = node.entry.dimension
        if unit is None or (dimension is not None and value.unit not in symbols(dimension)):
            self.wrong_unit(node, path, value, dimension)
            return
        self.range(node, path, value.value, unit)
        if value.typed is not None and (len(value.typed) > 120 or _CONTROL.search(value.typed)):
            self.add(node, path, value.typed, "a sum of at most 120 signs",
                     "keeps the sum it was typed as, of at most 120 signs.",
            )  # fmt: skip
        if value.source is not None:
            self.source(node, path, value.source)

    def wrong_unit(
        self, node: Node, path: str, value: Quantity, dimension: Dimension | None
    ) -> None:
        unit = UNITS.get(value.unit)
        allowed = allowed_units(dimension) if dimension else "a unit that is known here"
        if unit is None:
            shown = ", ".join(symbols(dimension)) if dimension else "a known symbol"
            self.add(node, path, value.unit, allowed,
                     f"has the unit {quoted(value.unit)}, which is not known; write {shown}.",
            )  # fmt: skip
        elif dimension is not None:
            self.add(
                node, path, f"{number(value.value)} {value.unit}", allowed,
                f"cannot be in {unit.printed or '1'}: {wrong_unit(value.unit, dimension)}.",
            )  # fmt: skip

    def plain_number(self, node: Node, path: str, value: object) -> None:
        if isinstance(value, int | float):
            try:
                self.range(node, path, float(value), UNITS["1"])
            except OverflowError:
                self.range(node, path, math.inf, UNITS["1"])

    def range(self, node: Node, path: str, value: float, unit: Unit) -> None:
        entry = node.entry
        si = unit.to_si(value)
        if entry is None or (inside(entry, si) and math.isfinite(si)):
            return
        given = with_unit(value, unit)
        allowed, rule = range_words(entry, unit)
        self.add(node, path, given, allowed, f"must be {rule}; {given} was given.")

    def text(self, node: Node, path: str, value: object) -> None:
        if not isinstance(value, str):
            return
        entry = node.entry
        longest = LONGEST_TEXT if entry is not None and entry.long else LONGEST_SHORT_TEXT
        if len(value) > longest:
            self.add(node, path, f"{len(value)} signs", f"at most {longest} signs",
                     f"may have at most {longest} signs; {len(value)} were given.",
            )  # fmt: skip
        elif _CONTROL.search(value) or (longest == LONGEST_SHORT_TEXT and "\n" in value):
            lines = "" if longest == LONGEST_TEXT else " on one line"
            self.add(node, path, value, f"text{lines}",
                     f"must be text{lines}, without control signs.",
            )  # fmt: skip
        if node.pattern == "/supply/flow_tests/*/made_at":
            self.date(
                node, path, value, _MOMENT, "a date, or date and hour, as 2025-05-14 07:30"
            )
        elif node.pattern == "/memo/date":
            self.date(node, path, value, _DATE, "a date, as 2026-05-14")

    def date(self, node: Node, path: str, value: str, form: re.Pattern[str], rule: str) -> None:
        if value and not (form.fullmatch(value) and _is_date(value)):
            self.add(node, path, value, rule, f"must be {rule}; {quoted(value)} was given.")

    def source(self, node: Node, path: str, value: object) -> None:
        if not isinstance(value, Source):
            return
        if len(value.text) > LONGEST_SHORT_TEXT or _CONTROL.search(value.text):
            rule = f"text of at most {LONGEST_SHORT_TEXT} signs"
            self.add(node, path, value.text, rule, f"must name its source in {rule}.")
        if value.date is not None and not (
            _DATE.fullmatch(value.date) and _is_date(value.date)
        ):
            self.add(node, path, value.date, "a date, as 2026-05-14",
                     "must have the date of its source as 2026-05-14; "
                     f"{quoted(value.date)} was given.",
            )  # fmt: skip

    def table(self, node: Node, path: str, value: object) -> None:
        if isinstance(value, CurveTable):
            name = subject(self.station, path)
            self.found.extend(table_faults(value, name, path, node.sheet))

    def pattern(self, node: Node, path: str, value: object) -> None:
        if not isinstance(value, tuple):
            return
        if len(value) not in (0, _HOURS):
            self.add(node, path, f"{len(value)} numbers", "24 numbers, or none",
                     f"must be 24 numbers from midnight, or none; it has {len(value)}.",
            )  # fmt: skip
            return
        for hour, factor in enumerate(value):
            if not 0 <= factor <= _LARGEST_FACTOR:
                tail = f"must be between 0 and 20; {number(factor)} was given for hour {hour}."
                self.add(node, path, number(factor), "0 to 20", tail)

    def reference(self, node: Node, path: str, value: object) -> None:
        if isinstance(value, str):
            self.references.append((node, path, value))

    def resolve(self, node: Node, path: str, given: str) -> None:
        to = node.entry.refers_to if node.entry is not None else None
        if to is not None and given not in self.lists.get(to, ()):
            name = to.rpartition("/")[2]
            tail = f"names {quoted(given)}, which is not among the {name} of this station."
            self.add(node, path, given, f"the id of one of the {name}", tail)

    def flow_test(self, node: Node, path: str, test: FlowTest) -> None:
        static, residual = test.static_pressure, test.residual_pressure
        if static is None or residual is None:
            return
        if not {static.unit, residual.unit} <= set(symbols(Dimension.PRESSURE)):
            return
        before, while_open = UNITS[static.unit], UNITS[residual.unit]
        if while_open.to_si(residual.value) >= before.to_si(static.value):
            given = with_unit(residual.value, while_open)
            limit = with_unit(static.value, before)
            self.add(node.children["residual_pressure"], f"{path}/residual_pressure", given,
                     f"less than {limit}",
                     f"must be below the static pressure of {limit}; {given} was given.",
            )  # fmt: skip

    def curves_of_slots(self) -> None:
        curves = {pump.id: {curve.id for curve in pump.curves} for pump in self.station.pumps}
        everywhere = {curve for ids in curves.values() for curve in ids}
        for pump_set in self.station.sets:
            for slot in pump_set.slots:
                own = curves.get(slot.pump or "", set())
                if slot.curve in everywhere and slot.curve not in own and slot.pump in curves:
                    path = f"/sets/{pump_set.id}/slots/{slot.id}/curve"
                    self.found.append(
                        Fault(
                            path, "sets", slot.curve or "", "a curve of the slot's own pump",
                            f"{subject(self.station, path)} is of another pump; choose a curve "
                            "of the slot's own pump, or leave it empty.",
                        )
                    )  # fmt: skip


def inside(entry: Entry, si: float) -> bool:
    """Whether the SI value lies in the range of an entry."""
    low, high = entry.low, entry.high
    if low is not None:
        if entry.above and si <= low:
            return False
        if si < low - _SLACK * max(abs(low), 1e-3):
            return False
    return high is None or si <= high + _SLACK * abs(high)


def with_unit(value: float, unit: Unit) -> str:
    """Return an entered value with its printed unit, as "90000 m"."""
    if math.isinf(value):
        return "a number too large"
    return f"{number(value)} {unit.printed}".rstrip()


def range_words(entry: Entry, unit: Unit) -> tuple[str, str]:
    """Return the range of an entry in `unit`: short, and as it goes on after "must be"."""
    low = None if entry.low is None else with_unit(_rounded(unit.from_si(entry.low)), unit)
    high = None if entry.high is None else with_unit(_rounded(unit.from_si(entry.high)), unit)
    if low is None and high is None:
        return "a finite number", "a finite number"
    if low is None:
        return f"at most {high}", f"at most {high}"
    if high is None:
        word = "above" if entry.above else "at least"
        return f"{word} {low}", f"{word} {low}"
    if entry.above:
        return f"above {low}, at most {high}", f"above {low} and at most {high}"
    return f"{low} to {high}", f"between {low} and {high}"


def usual_range(entry: Entry, dimension: Dimension) -> str:
    """Return the range of an entry in the unit of the SI view."""
    return range_words(entry, display_unit(dimension, "si"))[0]


def _rounded(value: float) -> float:
    """Return a limit as a person would say it; no limit needs more than five figures."""
    return float(f"{value:.5g}")


@lru_cache(maxsize=1024)
def _is_date(text: str) -> bool:
    text = text.replace("T", " ")
    forms = {4: "%Y", 7: "%Y-%m", 10: "%Y-%m-%d", 16: "%Y-%m-%d %H:%M"}
    try:
        datetime.strptime(text, forms.get(len(text), "%Y"))
    except ValueError:
        return False
    return True
