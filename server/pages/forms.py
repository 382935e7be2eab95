"""Fields as a page shows them: label, text as entered, unit, what was understood, missing."""

from collections.abc import Iterable
from dataclasses import dataclass, replace
from typing import Literal

from server.memo.notes import NOTE_SECTIONS
from server.pages.defaults import default_of, default_words
from server.pages.sheet import Refusal, SheetView
from server.station import fields, paths
from server.station.entry import Entry, Quantity, Source
from server.station.typed_text import text_of
from server.studies.findings import words
from server.studies.findings.profiles import RULES
from server.units import (
    UNITS,
    Dimension,
    Unit,
    View,
    display_decimals,
    display_unit,
    shown,
    to_si,
)

Look = Literal["line", "cell", "choice"]
# what decides which other fields are asked for, or how other fields of the same sheet read
GOVERNING = frozenset(
    {
        "/supply/kind",
        "/supply/bypass/fitted",
        "/zone/kind",
        "/zone/points/*/role",
        "/sets/*/control/kind",
        "/sets/*/slots/*/pump",
        "/sets/*/title",
        "/legs/*/title",
        "/horizons/*/title",
        "/fires/*/title",
        "/display/units",
        "/suction_line/reaches/*/roughness/law",
        "/discharge_main/reaches/*/roughness/law",
        "/suction_line/reaches/*/fittings/*/loss/by",
        "/discharge_main/reaches/*/fittings/*/loss/by",
        "/criteria/profile",
        "/criteria/rows/*/limit",
    }
)
# what an empty choice means, where it means something
EMPTY_WORDS = {
    "/sets/*/slots/*/curve": "its first curve",
    "/sets/*/slots/*/from_horizon": "the first horizon",
    "/scenarios/*/fire": "no fire",
    "/horizons/*/pipes": "by the year",
}
# a text of the document that is chosen here: a file may hold another
OWN_CHOICES = {"/memo/notes/*/section": NOTE_SECTIONS}
# where the unit of the dimension would be read wrongly
OWN_UNITS = {"/fires/*/duration": "h"}
SIGNED = (Dimension.LEVEL, Dimension.TEMPERATURE)
SOURCE_WORDS = {
    "survey": "survey",
    "test": "test",
    "code": "code",
    "standard": "standard",
    "maker": "maker",
    "office": "office",
    "default": "a default, listed in the memo",
}


@dataclass(frozen=True, slots=True)
class FieldView:
    """One field, ready to be drawn."""

    path: str
    html_id: str
    label: str
    words: str
    unit_words: str
    kind: str
    text: str
    stored: str
    unit: str
    unit_symbol: str
    hint: str
    said: str
    state: str
    refusal: Refusal | None
    choices: tuple[tuple[str, str], ...]
    action: str
    base: int
    locked: bool
    default: str
    long: bool
    signed: bool
    governs: bool
    look: Look

    @property
    def cell(self) -> bool:
        """Whether the field stands in a table, where its column says label and unit."""
        return self.look == "cell"

    @property
    def wide(self) -> bool:
        """Whether the field takes a line of its own."""
        return self.long or self.kind == "pattern"

    @property
    def described(self) -> str:
        """Ids of the lines that describe the field, for `aria-describedby`."""
        told = (
            ("--error", self.refusal is not None),
            ("--said", bool(self.said or self.default)),
            ("--hint", bool(self.hint) and not self.cell),
        )
        return " ".join(self.html_id + ending for ending, there in told if there)

    @property
    def rows(self) -> int:
        """Lines of a long text's box."""
        return max(2, min(12, self.text.count("\n") + len(self.text) // 80 + 1))


def entry_at(path: str) -> Entry:
    """Return what a field says about itself; a criterion's limit as its rule measures it."""
    entry = fields.entry_for(path)
    if fields.node_at(path).pattern != "/criteria/rows/*/limit":
        return entry
    rule = RULES.get(path.split("/")[3])
    return (
        entry
        if rule is None
        else replace(entry, dimension=rule.dimension, decimals=rule.decimals)
    )


def with_rule_title(path: str, sentence: str) -> str:
    """Return a sentence of the station with a criterion called by its title, not its key."""
    key = path.split("/")[3] if path.startswith("/criteria/rows/") else ""
    rule = RULES.get(key)
    if rule is None:
        return sentence
    return sentence.replace(f"criterion {key.replace('-', ' ')}", f"“{rule.title}”")


def pattern_of(path: str) -> str:
    """Return the pattern of a path: ids become `*`."""
    return fields.node_at(path).pattern


def field_view(sheet: SheetView, path: str, look: Look = "line") -> FieldView:
    """Return the field at `path`, as a line, a table's cell or a row of choices."""
    node = fields.node_at(path)
    entry = entry_at(path)
    stored, symbol = text_of(sheet.station, path, sheet.view)
    value = paths.get(sheet.station, path)
    if node.kind == "quantity" and not stored and entry.dimension is not None:
        symbol = usual_unit(path, entry, sheet.view).symbol
    refusal = sheet.refused.get(path)
    cell = look == "cell"
    told = words.field_words(sheet.station, path) if cell else node.title
    missing = path in sheet.missing and not stored
    default = default_of(path) if not stored and not sheet.read_only else None
    return FieldView(
        path=path,
        html_id=paths.html_id(path),
        label=node.title,
        words=told + unit_words(entry, symbol),
        unit_words=unit_words(entry, symbol),
        kind=node.kind,
        text=refusal.text if refusal is not None else stored,
        stored=stored,
        unit=_printed(sheet, path, entry, symbol, cell=cell),
        unit_symbol=symbol or "",
        hint=entry.guidance,
        said=""
        if missing and refusal
        else _missing_words(sheet, path, cell=cell)
        if missing
        else _said(sheet, path, entry, value, cell=cell),
        state="refused" if refusal else "missing" if missing else "",
        refusal=refusal,
        choices=choices_of(sheet, path),
        action=sheet.action("edits"),
        base=sheet.loaded.number,
        locked=sheet.read_only,
        default=default_words(default, sheet.view) if default else "",
        long=entry.long,
        signed=_may_be_negative(entry),
        governs=node.pattern in GOVERNING,
        look=look,
    )


def field_views(sheet: SheetView, base: str, names: Iterable[str]) -> tuple[FieldView, ...]:
    """Return the fields `names` (relative paths) below `base`."""
    return tuple(field_view(sheet, f"{base}/{name}") for name in names)


def unit_words(entry: Entry, symbol: str | None) -> str:
    """Return ", in kilopascals" for a label that a screen reader speaks."""
    return f", in {UNITS[symbol].words}" if symbol and UNITS[symbol].printed else ""


def choices_of(sheet: SheetView, path: str) -> tuple[tuple[str, str], ...]:
    """Return value and words of each choice of a field; empty for a field that is typed."""
    node = fields.node_at(path)
    entry = fields.entry_for(path)
    if node.pattern in OWN_CHOICES:
        return OWN_CHOICES[node.pattern]
    if node.kind == "reference":
        return (
            ("", EMPTY_WORDS.get(node.pattern, "none chosen")),
            *_items_referred(sheet, path, entry),
        )
    if not entry.choices:
        return ()
    return (
        (("", EMPTY_WORDS.get(node.pattern, "not chosen")), *entry.choices)
        if node.default is None
        else entry.choices
    )


def _items_referred(sheet: SheetView, path: str, entry: Entry) -> tuple[tuple[str, str], ...]:
    station = sheet.station
    lists = [entry.refers_to or ""]
    if lists == ["/pumps/*/curves"]:
        pump = paths.get(station, path.rsplit("/", 1)[0] + "/pump")
        lists = [f"/pumps/{p.id}/curves" for p in station.pumps if p.id == pump]
    found: list[tuple[str, str]] = []
    for list_path in lists:
        items = paths.get(station, list_path)
        if not isinstance(items, tuple):
            continue
        for item in items:
            id_ = str(getattr(item, "id", ""))
            found.append((id_, paths.item_title(station, f"{list_path}/{id_}")))
    return tuple(found)


def _dimension(entry: Entry) -> Dimension:
    return entry.dimension or Dimension.NUMBER


def _may_be_negative(entry: Entry) -> bool:
    return entry.dimension in SIGNED or (entry.low is not None and entry.low < 0)


def usual_unit(path: str, entry: Entry, view: View) -> Unit:
    """Return the unit of a field while nothing is entered: a fire lasts hours, not seconds.

    A criterion's limit is typed in the unit that its profile says it in.
    """
    pattern = fields.node_at(path).pattern
    own = OWN_UNITS.get(pattern)
    rule = RULES.get(path.split("/")[3]) if pattern == "/criteria/rows/*/limit" else None
    limit = rule and (rule.us if view == "us" else rule.si)
    if limit:
        own = limit.unit
    return UNITS[own] if own else display_unit(_dimension(entry), view)


def _printed(
    sheet: SheetView, path: str, entry: Entry, symbol: str | None, *, cell: bool
) -> str:
    """Return the unit beside the entry; in a table only where it is not the column's."""
    if not symbol or (cell and symbol == usual_unit(path, entry, sheet.view).symbol):
        return ""
    return UNITS[symbol].printed


def _missing_words(sheet: SheetView, path: str, *, cell: bool) -> str:
    if cell:
        return "missing"
    if path in sheet.needed:
        return "Missing: the duty waits for it."
    return "Missing: its checks are not made."


def _said(sheet: SheetView, path: str, entry: Entry, value: object, *, cell: bool) -> str:
    """Return what was understood: the reading in the other unit, and the source."""
    if sheet.needed.get(path) == "not_in_this_version":
        return "Kept, but not computed in this version: the duty is not checked."
    if not isinstance(value, Quantity):
        return ""
    if cell:
        own = value.unit == usual_unit(path, entry, sheet.view).symbol
        return "" if own and not value.typed else reading(entry, value, sheet.view)
    told = [reading(entry, value, sheet.view), source_words(value.source)]
    return "; ".join(part for part in told if part)


def reading(entry: Entry, value: Quantity, view: View) -> str:
    """Return "= 20.3 psi" for an entry in kPa; the reader's own unit first, if it differs."""
    dimension = _dimension(entry)
    other: View = "si" if view == "us" else "us"
    told = []
    if value.typed:
        told.append(f"{value.value:g}\u00a0{UNITS[value.unit].printed}")
    # a time is read as it stands
    for reader in () if dimension is Dimension.TIME else (view, other):
        unit = display_unit(dimension, reader)
        if unit.symbol != value.unit and (value.value or unit.offset):
            decimals = entry.decimals
            if decimals is None:
                decimals = display_decimals(dimension, reader)
            number = shown(to_si(value.value, value.unit), dimension, reader, decimals)
            told.append(f"{number}\u00a0{unit.printed}")
            break
    return " ".join(f"= {reading}" for reading in told)


def source_words(source: Source | None) -> str:
    """Return where a value comes from, as it stands under its field."""
    if source is None:
        return ""
    # a date is not torn apart at the end of a line
    date = (source.date or "").replace("-", "\u2011")
    return ", ".join(part for part in (SOURCE_WORDS[source.kind], source.text, date) if part)
