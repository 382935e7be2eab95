"""Sheet 9, Memo: issue, date, names, notes; the memo as it prints from the browser."""

from dataclasses import dataclass

from fastapi import APIRouter, Request, Response
from fastapi.responses import HTMLResponse
from markupsafe import Markup

from server.memo.book import memo_book
from server.memo.to_html import memo_body, memo_html, page_css
from server.pages.forms import FieldView, field_view, field_views
from server.pages.frame import SheetPage, register, show
from server.pages.items import Adding, Steps, adding, items_of, steps_of
from server.pages.links import link
from server.pages.rendering import render
from server.pages.rights import needs
from server.pages.sheet import SheetView, open_sheet
from server.pages.summary import stressed
from server.studies.shapes import Severity

router = APIRouter()

FIELDS = ("issue", "date", "prepared", "checked", "approved")
NOTES = "/memo/notes"


@dataclass(frozen=True, slots=True)
class NoteView:
    """A note of the engineer's."""

    steps: Steps
    section: FieldView
    text: FieldView


@dataclass(frozen=True, slots=True)
class MemoPage:
    """All that the sheet's template reads."""

    lead: tuple[str, str, str]
    holds: bool | None
    unchecked: int
    fields: tuple[FieldView, ...]
    paper: FieldView
    notes: tuple[NoteView, ...]
    adding: Adding
    paper_href: str
    file_href: str


@dataclass(frozen=True, slots=True)
class PaperPage:
    """All that the paper's template reads."""

    title: str
    css_href: str
    back_href: str
    file_href: str
    body: Markup


def build(sheet: SheetView) -> MemoPage:
    """Return the content of the sheet."""
    found = sheet.assessment.findings_for(sheet.assessment.proposed)
    return MemoPage(
        lead=stressed(sheet.assessment.lead(sheet.view)),
        holds=sheet.assessment.holds,
        unchecked=sum(f.severity is Severity.NOT_CHECKED for f in found),
        fields=field_views(sheet, "/memo", FIELDS),
        paper=field_view(sheet, "/display/paper", "choice"),
        notes=tuple(
            NoteView(
                steps_of(sheet, path),
                field_view(sheet, f"{path}/section"),
                field_view(sheet, f"{path}/text"),
            )
            for path in items_of(sheet, NOTES)
        ),
        adding=adding(sheet, NOTES),
        paper_href=_href(sheet, "memo-paper"),
        file_href=_href(sheet, "memo-file"),
    )


def _href(sheet: SheetView, name: str) -> str:
    return link(
        sheet.request,
        name,
        station_id=sheet.station_id,
        units=sheet.view,
        at=sheet.chosen.get("at"),
    )


register(SheetPage("memo", build))


@router.get("/stations/{station_id}/memo", name="memo", dependencies=[needs("read")])
def memo(request: Request, station_id: str) -> HTMLResponse:
    """Show the sheet."""
    return show(open_sheet(request, station_id, "memo"))


@router.get(
    "/stations/{station_id}/memo/paper", name="memo-paper", dependencies=[needs("read")]
)
def memo_paper(request: Request, station_id: str) -> HTMLResponse:
    """Show the memo as it prints; page numbers come with its own stylesheet."""
    sheet = open_sheet(request, station_id, "memo")
    book = memo_book(sheet.station, sheet.assessment, sheet.view)
    page = PaperPage(
        title=f"{book.head.title} · {book.head.station}",
        css_href=_href(sheet, "memo-page-css"),
        back_href=sheet.href("memo"),
        file_href=_href(sheet, "memo-file"),
        body=Markup(memo_body(book, sheet.view, sheet.station.display.paper)),
    )
    return render(request, "memo/paper.html", {"page": page})


@router.get(
    "/stations/{station_id}/memo/page.css", name="memo-page-css", dependencies=[needs("read")]
)
def memo_page_css(request: Request, station_id: str) -> Response:
    """Answer the paper's size, running line and page numbers as a stylesheet."""
    sheet = open_sheet(request, station_id, "memo")
    head = memo_book(sheet.station, sheet.assessment, sheet.view).head
    return Response(
        page_css(head, sheet.station.display.paper),
        media_type="text/css; charset=utf-8",
        headers={"Cache-Control": "no-store"},
    )


@router.get("/stations/{station_id}/memo/file", name="memo-file", dependencies=[needs("read")])
def memo_file(request: Request, station_id: str) -> Response:
    """Answer the memo as one HTML file that needs no other."""
    sheet = open_sheet(request, station_id, "memo")
    text = memo_html(
        sheet.station, sheet.view, sheet.station.display.paper, document_hash=sheet.loaded.hash
    )
    name = f"memo-{station_id}-r{sheet.loaded.number}.html"
    return Response(
        text,
        media_type="text/html; charset=utf-8",
        headers={"Content-Disposition": f'attachment; filename="{name}"'},
    )
