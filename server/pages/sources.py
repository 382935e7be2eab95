"""Where the values of a sheet come from: every quantity entered on it, with its source."""

from collections.abc import Iterator
from dataclasses import dataclass
from typing import get_args

from fastapi import APIRouter, HTTPException, Request
from fastapi.responses import HTMLResponse

from server.pages.forms import SOURCE_WORDS
from server.pages.frame import words_of
from server.pages.rendering import render
from server.pages.rights import needs
from server.pages.sheet import SHEET_TITLES, SheetView, open_sheet
from server.station import fields, paths
from server.station.canonical import number
from server.station.entry import Quantity, Record, SourceKind
from server.station.fields import Node
from server.units import UNITS

router = APIRouter()

KINDS: tuple[tuple[str, str], ...] = (
    ("", "not named"),
    *((kind, SOURCE_WORDS[kind]) for kind in get_args(SourceKind)),
)


@dataclass(frozen=True, slots=True)
class SourceRow:
    """One entered value with its source."""

    path: str
    html_id: str
    words: str
    href: str
    value: str
    kind: str
    text: str
    date: str


@dataclass(frozen=True, slots=True)
class SourcesPage:
    """All that the page's template reads."""

    rows: tuple[SourceRow, ...]
    named: int
    kinds: tuple[tuple[str, str], ...]
    action: str
    base: int
    locked: bool


@router.get(
    "/stations/{station_id}/{sheet}/sources", name="sources", dependencies=[needs("read")]
)
def sources(request: Request, station_id: str, sheet: str) -> HTMLResponse:
    """Show every entered value of a sheet with where it comes from."""
    name = next((known for known in SHEET_TITLES if known == sheet), None)
    if name is None:
        raise HTTPException(404, "There is no such sheet.")
    view = open_sheet(request, station_id, name)
    return render(request, "sources.html", {"sheet": view, "page": build(view)})


def build(sheet: SheetView) -> SourcesPage:
    """Return the rows of the sheet's entered quantities."""
    rows = tuple(
        _row(sheet, path, value)
        for path, value in quantities(fields.root(), sheet.station, "")
        if fields.sheet_of(path) == sheet.sheet and not path.startswith("/criteria")
    )
    return SourcesPage(
        rows,
        sum(bool(row.kind) for row in rows),
        KINDS,
        sheet.action("edits"),
        sheet.loaded.number,
        sheet.read_only,
    )


def quantities(node: Node, holder: object, path: str) -> Iterator[tuple[str, Quantity]]:
    """Yield path and value of every quantity entered below a node, in the document's order."""
    for name, child in node.children.items():
        value = getattr(holder, name)
        here = f"{path}/{name}"
        if isinstance(value, Quantity):
            yield here, value
        elif child.kind == "group" and isinstance(value, Record):
            yield from quantities(child, value, here)
        elif child.kind == "list" and child.item is not None and isinstance(value, tuple):
            for item in value:
                yield from quantities(child.item, item, f"{here}/{item.id}")


def _row(sheet: SheetView, path: str, value: Quantity) -> SourceRow:
    source = value.source
    return SourceRow(
        path=path,
        html_id=paths.html_id(path),
        words=words_of(sheet, path),
        href=sheet.field_href(path),
        value=f"{value.typed or number(value.value)}\u00a0{UNITS[value.unit].printed}",
        kind=source.kind if source else "",
        text=source.text if source else "",
        date=(source.date or "") if source else "",
    )
