"""What stands round a sheet: spine, strip, scenario row, findings margin, the way on."""

from collections.abc import Callable
from dataclasses import dataclass
from datetime import datetime
from functools import cache

from fastapi.responses import HTMLResponse

from server.pages.items import items_of
from server.pages.rendering import render
from server.pages.rights import actor_of
from server.pages.sheet import OPEN, SHEET_NUMBERS, SHEETS, SheetView
from server.pages.store_of import store_of
from server.pages.strip_view import (
    FindingLine,
    ScenarioTab,
    StripView,
    scenario_row,
    strip_view,
)
from server.pages.strip_view import findings_list as lines_of
from server.station import fields, paths
from server.station.entry import Sheet
from server.station.titles import lowered
from server.studies.shapes import Severity

WITHOUT_STRIP: tuple[Sheet, ...] = ("history", "memo")
INPUT_SHEETS: tuple[Sheet, ...] = ("supply", "main-and-zone", "demand", "pumps", "sets")
MISSING_SHOWN = 8


@dataclass(frozen=True, slots=True)
class SpineEntry:
    """One sheet in the spine with its state."""

    number: int
    title: str
    href: str
    current: bool
    state: str
    css: str


@dataclass(frozen=True, slots=True)
class Choice:
    """One set that can be looked at."""

    title: str
    href: str
    current: bool


@dataclass(frozen=True, slots=True)
class Next:
    """What is still missing here, or where the work goes on."""

    title: str
    links: tuple[tuple[str, str], ...]
    more: str


@dataclass(frozen=True, slots=True)
class Frame:
    """Everything round the content of a sheet."""

    spine: tuple[SpineEntry, ...]
    strip: StripView | None
    has_strip: bool
    tabs: tuple[ScenarioTab, ...]
    margin: tuple[FindingLine, ...]
    margin_empty: str
    sets: tuple[Choice, ...]
    next: Next | None
    edited: str
    can_undo: bool
    can_redo: bool
    merged: str
    under_title: str
    sources_sheet: Sheet
    refusals: tuple[tuple[str, str], ...]


@dataclass(frozen=True, slots=True)
class SheetPage:
    """What a sheet shows in its frame.

    `results` names a template of fragments that follow an edit of a field; it reads `follow`.
    """

    sheet: Sheet
    build: Callable[[SheetView], object]
    results: str | None = None
    follow: Callable[[SheetView], object] | None = None

    @property
    def folder(self) -> str:
        """The folder of the sheet's templates."""
        return self.sheet.replace("-", "_")


_PAGES: dict[Sheet, SheetPage] = {}


def register(page: SheetPage) -> SheetPage:
    """Make a sheet known to the edits, which answer with its fragments."""
    _PAGES[page.sheet] = page
    return page


def page_of(sheet: Sheet) -> SheetPage | None:
    """Return the registered page of a sheet."""
    return _PAGES.get(sheet)


def frame_of(sheet: SheetView, merged: str = "") -> Frame:
    """Return what stands round an opened sheet."""
    has_strip = sheet.sheet not in WITHOUT_STRIP
    own = store_of(sheet.request).own_steps(sheet.station_id, actor_of(sheet.request).name)
    return Frame(
        spine=spine(sheet),
        strip=strip_view(sheet) if has_strip else None,
        has_strip=has_strip,
        tabs=scenario_row(sheet) if has_strip else (),
        margin=tuple(lines_of(sheet, sheet.findings)),
        margin_empty="Nothing found that this sheet could mend.",
        sets=tuple(
            Choice(item.title or "Set", sheet.set_href(item.id), item.id == sheet.set_id)
            for item in sheet.station.sets
        ),
        next=next_of(sheet),
        edited=when(sheet.loaded.edited_at),
        can_undo=bool(own.undoable),
        can_redo=bool(own.redoable),
        merged=merged,
        under_title=", ".join(
            part
            for part in (sheet.station.identity.client, sheet.station.identity.place)
            if part
        ),
        sources_sheet=sheet.sheet,
        refusals=tuple(
            (f"#{paths.html_id(path)}", refusal.sentence)
            for path, refusal in sheet.refused.items()
        ),
    )


def show(
    sheet: SheetView, status: int = 200, *, context: dict[str, object] | None = None
) -> HTMLResponse:
    """Return the whole page of a registered sheet."""
    page = _PAGES[sheet.sheet]
    return render(
        sheet.request,
        f"{page.folder}/page.html",
        {
            "sheet": sheet,
            "frame": frame_of(sheet),
            "page": page.build(sheet),
            **(context or {}),
        },
        status=status,
    )


def spine(sheet: SheetView) -> tuple[SpineEntry, ...]:
    """Return the sheets with what is missing or found on each."""
    entries = []
    for name, title in SHEETS:
        state, css = state_of(sheet, name)
        entries.append(
            SpineEntry(
                SHEET_NUMBERS[name], title, sheet.href(name), name == sheet.sheet, state, css
            )
        )
    return tuple(entries)


def state_of(sheet: SheetView, name: Sheet) -> tuple[str, str]:
    """Return what the spine says of a sheet, and its class."""
    if name in ("summary", "memo", "history"):
        return "", ""
    needed = len(needed_on(sheet, name))
    if needed:
        return f"{needed} missing", "missing"
    findings = sheet.findings_of(name)
    open_ = sum(finding.severity in OPEN for finding in findings)
    if open_:
        return f"{open_} finding{'s' if open_ > 1 else ''}", "open"
    if any(finding.severity is Severity.NOT_CHECKED for finding in findings):
        return "not checked", ""
    return "complete", ""


def needed_on(sheet: SheetView, name: Sheet) -> tuple[str, ...]:
    """Return the fields and lists of a sheet that the duty waits for, in order."""
    found = [
        path
        for path in sheet.needed
        if (node := fields.find(path)) is not None and node.sheet == name
    ]
    return tuple(
        sorted(
            found,
            key=lambda path: (_order()[fields.node_at(path).pattern], _places(sheet, path)),
        )
    )


def _places(sheet: SheetView, path: str) -> tuple[int, ...]:
    """Return where the items on the way to a path stand in their lists, outermost first."""
    parts = path.split("/")
    found = []
    for end in range(2, len(parts)):
        ids = [item.rpartition("/")[2] for item in items_of(sheet, "/".join(parts[:end]))]
        if parts[end] in ids:
            found.append(ids.index(parts[end]))
    return tuple(found)


@cache
def _order() -> dict[str, int]:
    return {node.pattern: place for place, node in enumerate(fields.walk(fields.root()))}


def next_of(sheet: SheetView) -> Next | None:
    """Return what this sheet or the next one waits for; None once it is solved."""
    if sheet.read_only:
        return None
    here = needed_on(sheet, sheet.sheet)
    if here:
        links = tuple(
            (needed_words(sheet, p), sheet.field_href(p)) for p in here[:MISSING_SHOWN]
        )
        left = len(here) - len(links)
        return Next(
            "Still missing here, before the duty can be solved",
            links,
            f"and {left} more" if left else "",
        )
    for name, title in SHEETS:
        there = needed_on(sheet, name)
        if there:
            first = needed_words(sheet, there[0])
            place = f"{SHEET_NUMBERS[name]} {title}"
            link = (
                place if first == title else f"{place}: {first}",
                sheet.field_href(there[0]),
            )
            entered_here = sheet.sheet in INPUT_SHEETS
            told = "Nothing is missing here" if entered_here else "The duty is not solved yet"
            return Next(f"{told}; the work goes on at", (link,), "")
    return None


def needed_words(sheet: SheetView, path: str) -> str:
    """Return what the duty waits for at a path; a kind not computed is said to be so."""
    told = words_of(sheet, path)
    match sheet.needed.get(path):
        case "absent":
            return told
        case "not_in_this_version":
            return f"{told}: what is chosen is kept, but not computed in this version"
    return f"{told}: it cannot be used as entered; the finding says why"


def words_of(sheet: SheetView, path: str) -> str:
    """Return a field in words, without the name of the sheet it stands on."""
    told = paths.words(sheet.station, path)
    node = fields.node_at(path)
    if node.kind == "list" and node.group_title:
        return f"{node.group_title}: {lowered(node.title)}"
    title = fields.SHEET_TITLES[node.sheet]
    short = told.removeprefix(f"{title}, ")
    return short[:1].upper() + short[1:]


def when(moment: datetime) -> str:
    """Return a moment as a person reads it, to the minute: "14 May 2026, 07:30"."""
    local = moment.astimezone()
    return f"{local.day} {local:%b %Y, %H:%M}"
