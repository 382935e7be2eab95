"""Sheet 10, History: what changed, when and by whom; old revisions to see, compare, restore."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from datetime import timedelta
from typing import Annotated

from fastapi import APIRouter, Form, HTTPException, Request
from fastapi.responses import HTMLResponse, RedirectResponse, Response
from pydantic import JsonValue

from server.pages.forms import OWN_CHOICES
from server.pages.frame import SheetPage, register, show, when
from server.pages.rendering import render
from server.pages.rights import actor_of, needs
from server.pages.sheet import SheetView, open_sheet
from server.pages.store_of import store_of
from server.station import fields, paths
from server.station.changes import Change
from server.station.faults import BadStation
from server.station.station import Station
from server.store.revisions import RevisionRow
from server.studies.findings import words
from server.units import UNITS

router = APIRouter()

TOGETHER = timedelta(minutes=10)
CHANGES_SHOWN = 6
KIND_WORDS = {
    "new": "Made",
    "copy": "Made as a copy",
    "demo": "Made as the demo",
    "import": "Brought in from a file",
    "edit": "",
    "merge": "Merged with changes made elsewhere",
    "undo": "Undone",
    "redo": "Made again",
    "restore": "Restored",
    "upgrade": "Brought to the newer form of the file",
}


@dataclass(frozen=True, slots=True)
class ChangeLine:
    """One change in words: what, from what, to what."""

    words: str
    was: str
    now: str
    href: str


@dataclass(frozen=True, slots=True)
class RevisionLine:
    """One revision."""

    number: int
    made: str
    kind: str
    changes: tuple[ChangeLine, ...]
    more: int
    href: str
    compare: str
    newest: bool


@dataclass(frozen=True, slots=True)
class RevisionGroup:
    """The revisions of one author within ten minutes, the newest first."""

    made: str
    author: str
    summary: str
    first: int
    last: int
    revisions: tuple[RevisionLine, ...]


@dataclass(frozen=True, slots=True)
class HistoryPage:
    """All that the sheet's template reads."""

    groups: tuple[RevisionGroup, ...]
    newest: int
    restore: str
    compare: str
    can_restore: bool


@dataclass(frozen=True, slots=True)
class ComparePage:
    """Two revisions side by side."""

    left: int
    right: int
    left_made: str
    right_made: str
    changes: tuple[ChangeLine, ...]
    left_href: str
    right_href: str


def build(sheet: SheetView) -> HistoryPage:
    """Return the content of the sheet."""
    rows = store_of(sheet.request).history(sheet.station_id)
    newest = rows[0].number
    return HistoryPage(
        tuple(_group(sheet, rows_) for rows_ in grouped(rows)),
        newest,
        sheet.action("restore"),
        sheet.action("compare_form"),
        not sheet.read_only,
    )


def grouped(rows: Sequence[RevisionRow]) -> Iterable[tuple[RevisionRow, ...]]:
    """Yield the revisions, newest first, those of one author within ten minutes together."""
    group: list[RevisionRow] = []
    for row in rows:
        if group and (
            row.author != group[0].author or group[0].made_at - row.made_at > TOGETHER
        ):
            yield tuple(group)
            group = []
        group.append(row)
    if group:
        yield tuple(group)


def _group(sheet: SheetView, rows: Sequence[RevisionRow]) -> RevisionGroup:
    lines = tuple(_line(sheet, row) for row in rows)
    return RevisionGroup(
        made=when(rows[0].made_at),
        author=rows[0].author,
        summary=_summary(lines),
        first=rows[-1].number,
        last=rows[0].number,
        revisions=lines,
    )


def _summary(lines: Sequence[RevisionLine]) -> str:
    """Return the first words of a group: the fields changed, in short."""
    told = list(dict.fromkeys(change.words for line in lines for change in line.changes)) or [
        line.kind for line in lines if line.kind
    ]
    left = len(told) - 3
    return "; ".join(told[:3]) + (f"; and {left} more" if left > 0 else "")


def _line(sheet: SheetView, row: RevisionRow) -> RevisionLine:
    kind = KIND_WORDS[row.kind]
    if row.of is not None:
        kind = f"{kind}: revision {row.of}"
    return RevisionLine(
        row.number,
        when(row.made_at),
        kind,
        tuple(_change(sheet, sheet.station, change) for change in row.changes[:CHANGES_SHOWN]),
        max(0, len(row.changes) - CHANGES_SHOWN),
        sheet.href("summary", at=f"r{row.number}"),
        sheet.action("compare", left=str(row.number - 1), right=str(row.number)),
        row.number == sheet.loaded.newest,
    )


def _change(sheet: SheetView, station: Station, change: Change) -> ChangeLine:
    told = words.field_words(station, change.path)
    match change.op:
        case "insert":
            title = _title(change.value)
            return ChangeLine(
                f"{told if not title else _place(change.path, title)}: added", "", "", ""
            )
        case "remove":
            return ChangeLine(f"{_place(change.path, _title(change.was))}: removed", "", "", "")
        case "move":
            return ChangeLine(f"{told}: moved", "", "", "")
    href = sheet.field_href(change.path) if paths.has(sheet.station, change.path) else ""
    return ChangeLine(
        told,
        shown_value(station, change.path, change.was),
        shown_value(station, change.path, change.value),
        href,
    )


def _place(path: str, title: str) -> str:
    list_path = path.rpartition("/")[0]
    sheet = fields.SHEET_TITLES[fields.sheet_of(list_path)]
    item = fields.part_for(list_path).item.lower()
    return f"{sheet}, {item} {title}".strip()


def _title(item: JsonValue) -> str:
    title = item.get("title") if isinstance(item, dict) else None
    return str(title) if title else ""


def shown_value(station: Station, path: str, value: JsonValue) -> str:
    """Return a stored value in a few words, as History and comparisons print it."""
    if value in (None, "", []):
        return "empty"
    pattern, entry = fields.node_at(path).pattern, fields.node_at(path).entry
    if isinstance(value, dict):
        if "rows" in value:
            rows = value["rows"]
            count = len(rows) if isinstance(rows, list) else 0
            return "1 row" if count == 1 else f"{count} rows"
        if "kind" in value:
            return ", ".join(str(part) for part in (value["kind"], value.get("text")) if part)
        unit = UNITS.get(str(value.get("unit")))
        text = str(value.get("typed") or _number(value.get("value")))
        return f"{text}\u00a0{unit.printed}".strip() if unit else text
    if isinstance(value, list):
        return f"{len(value)} numbers"
    choices = OWN_CHOICES.get(pattern) or (entry.choices if entry is not None else ())
    if choices:
        key = str(value).lower()
        return next((told for known, told in choices if known == key), str(value))
    if entry is not None and entry.refers_to and isinstance(value, str):
        return _referred(station, entry.refers_to, value)
    text = _number(value)
    return text if len(text) <= 80 else f"{text[:79]}…"


def _number(value: JsonValue) -> str:
    return f"{value:.15g}" if isinstance(value, float) else str(value)


def _referred(station: Station, refers_to: str, key: str) -> str:
    start, _, inner = refers_to.partition("/*/")
    lists = [start]
    if inner:
        lists = [f"{start}/{pump.id}/{inner}" for pump in station.pumps]
    for list_path in lists:
        if paths.has(station, f"{list_path}/{key}"):
            return paths.item_title(station, f"{list_path}/{key}")
    return "an item since removed"


register(SheetPage("history", build))


@router.get("/stations/{station_id}/history", name="history", dependencies=[needs("read")])
def history(request: Request, station_id: str) -> HTMLResponse:
    """Show the sheet."""
    return show(open_sheet(request, station_id, "history"))


@router.get("/stations/{station_id}/compare", name="compare_form", dependencies=[needs("read")])
def compare_form(
    request: Request, station_id: str, left: str = "", right: str = ""
) -> Response:
    """Lead from the two numbers of the form to their comparison."""
    if not (left.isdecimal() and right.isdecimal()):
        raise HTTPException(404, "Enter the numbers of two revisions, as 3 and 17.")
    view = open_sheet(request, station_id, "history")
    return RedirectResponse(view.action("compare", left=left, right=right), 303)


@router.get(
    "/stations/{station_id}/history/{left}..{right}",
    name="compare",
    dependencies=[needs("read")],
)
def compare(request: Request, station_id: str, left: int, right: int) -> HTMLResponse:
    """Show what differs between two revisions."""
    sheet = open_sheet(request, station_id, "history")
    store = store_of(request)
    try:
        older, newer = store.load(station_id, left), store.load(station_id, right)
    except KeyError as missing:
        raise HTTPException(404, "There is no such revision of this station.") from missing
    page = ComparePage(
        left,
        right,
        when(older.edited_at),
        when(newer.edited_at),
        tuple(
            _change(sheet, newer.station if change.op != "remove" else older.station, change)
            for change in paths.diff(older.station, newer.station)
        ),
        sheet.href("summary", at=f"r{left}"),
        sheet.href("summary", at=f"r{right}"),
    )
    return render(request, "history/compare.html", {"sheet": sheet, "page": page})


@router.post("/stations/{station_id}/restore", name="restore", dependencies=[needs("edit")])
def restore(request: Request, station_id: str, number: Annotated[int, Form()]) -> Response:
    """Make an old revision the newest; what stood between stays in the history."""
    store = store_of(request)
    try:
        before = store.load(station_id).newest
        restored = store.restore(station_id, number, actor_of(request).name)
    except KeyError as missing:
        raise HTTPException(404, "There is no such station or revision.") from missing
    except BadStation as bad:
        raise HTTPException(409, bad.faults[0].sentence) from bad
    said = "same" if restored.number == before else None
    return RedirectResponse(open_sheet(request, station_id, "history").href(said=said), 303)


@router.get("/stations/{station_id}/undo", name="undo_opened", dependencies=[needs("read")])
@router.get("/stations/{station_id}/redo", name="redo_opened", dependencies=[needs("read")])
def step_opened(request: Request, station_id: str) -> Response:
    """Lead from the address of a step, opened again, to what has been done."""
    return RedirectResponse(open_sheet(request, station_id, "history").href(), 303)
