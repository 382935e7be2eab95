"""Edits of a station from its pages: one field, one item or one table, and the answers.

A form sent by htmx is answered with out-of-band fragments, each named as the place it fills; a
plain form that stores ends in 303, one that is refused shows its sheet again as typed.
"""

import json
from collections.abc import Callable
from dataclasses import dataclass
from typing import Annotated

from fastapi import APIRouter, Depends, Header, HTTPException, Request
from fastapi.responses import HTMLResponse, RedirectResponse, Response

from server.pages.came_from import came_from
from server.pages.forms import GOVERNING, field_view, pattern_of, with_rule_title
from server.pages.frame import SheetPage, frame_of, page_of, show
from server.pages.history import shown_value
from server.pages.posted import Asked, Posted, asked, posted_form
from server.pages.renamed import renamed
from server.pages.rendering import render
from server.pages.rights import actor_of, needs
from server.pages.sheet import Refusal, SheetView, view_of
from server.pages.store_of import store_of
from server.station import fields, paths
from server.station.edits import Conflict
from server.station.faults import BadStation
from server.station.typed_text import text_of
from server.store.store import Loaded

router = APIRouter()

NO_BASE = (
    "The form did not say which revision it was made from. Load the page again; what you typed "
    "stays in it."
)


@router.post("/stations/{station_id}/edits", name="edits", dependencies=[needs("edit")])
def save_edit(
    request: Request,
    station_id: str,
    posted: Annotated[Posted, Depends(posted_form)],
    hx_request: Annotated[bool, Header()] = False,
) -> Response:
    """Store one edit: 200 with fragments (303 without script), else 409, 422 or 428 and why."""
    store = store_of(request)
    place = came_from(request, station_id, posted.path)
    try:
        newest = store.load(station_id)
    except KeyError as missing:
        raise HTTPException(404, "There is no such station.") from missing
    sheet = view_of(request, newest, place.sheet, place.query, None)
    if posted.keep == "theirs":
        return _stored(sheet, posted, Asked(()), newest, hx_request)
    base = _base(newest, lambda number: store.load(station_id, number), posted)
    if base is None:
        return _refused(sheet, posted, Refusal(_typed(posted), NO_BASE), 428, hx_request)
    try:
        wanted = asked(posted, base.station, sheet.view)
        stale = _stale(posted, base, newest)
        if stale is not None:
            return _refused(sheet, posted, stale, 409, hx_request)
        loaded = store.save(station_id, wanted.edits, base.number, actor_of(request).name)
    except BadStation as bad:
        sentence = ("\n" if posted.op == "paste" else " ").join(
            dict.fromkeys(with_rule_title(posted.path, fault.sentence) for fault in bad.faults)
        )
        cells = frozenset(fault.cell for fault in bad.faults if fault.cell is not None)
        return _refused(
            sheet, posted, Refusal(_typed(posted), sentence, cells=cells), 422, hx_request
        )
    except Conflict as conflict:
        return _refused(sheet, posted, _conflict(posted, conflict, newest), 409, hx_request)
    return _stored(
        view_of(request, loaded, place.sheet, place.query, None),
        posted,
        wanted,
        base,
        hx_request,
    )


@router.post("/stations/{station_id}/undo", name="undo", dependencies=[needs("edit")])
def undo(request: Request, station_id: str) -> Response:
    """Take back one's own last edit, on the newest document."""
    return _step_back(request, station_id, "undo")


@router.post("/stations/{station_id}/redo", name="redo", dependencies=[needs("edit")])
def redo(request: Request, station_id: str) -> Response:
    """Make one's own last undone edit again."""
    return _step_back(request, station_id, "redo")


def _step_back(request: Request, station_id: str, step: str) -> Response:
    store = store_of(request)
    place = came_from(request, station_id)
    try:
        before = store.load(station_id)
    except KeyError as missing:
        raise HTTPException(404, "There is no such station.") from missing
    try:
        take = store.undo if step == "undo" else store.redo
        loaded = take(station_id, actor_of(request).name)
    except Conflict as conflict:
        sheet = view_of(request, before, place.sheet, place.query, None)
        return show(sheet.with_refusal(conflict.path, _conflict_of(before, conflict)), 409)
    except BadStation:
        # nothing of one's own is left, or the station is archived, which its sheets say
        sheet = view_of(request, before, place.sheet, place.query, None)
        return RedirectResponse(sheet.href(said=None if before.archived else step), 303)
    sheet = view_of(request, loaded, place.sheet, place.query, None)
    changed = paths.diff(before.station, loaded.station)
    if changed and fields.find(changed[0].path) is not None:
        path = changed[0].path
        return RedirectResponse(sheet.href(fields.sheet_of(path), paths.html_id(path)), 303)
    return RedirectResponse(sheet.href(), 303)


def _base(newest: Loaded, load: Callable[[int], Loaded], posted: Posted) -> Loaded | None:
    """Return the revision a form was made from, None when it does not say a real one."""
    if posted.keep == "mine":
        return newest
    if not posted.base.isdecimal() or len(posted.base) > 9:
        return None
    number = int(posted.base)
    if number == newest.number:
        return newest
    try:
        return load(number)
    except KeyError:
        return None


def _stale(posted: Posted, base: Loaded, newest: Loaded) -> Refusal | None:
    """Return a refusal when the field no longer shows what the form says it had shown."""
    if (
        posted.was is None
        or posted.keep
        or posted.op != "set"
        or posted.look in ("source", "grid")
    ):
        return None
    if not paths.has(base.station, posted.path):
        return None
    shown, _ = text_of(base.station, posted.path)
    if shown == posted.was.replace("\r\n", "\n"):
        return None
    theirs = (
        text_of(newest.station, posted.path)[0]
        if paths.has(newest.station, posted.path)
        else ""
    )
    if theirs == posted.text.strip():
        return None
    return Refusal(
        posted.text, "This field was changed elsewhere since the page was drawn.", theirs
    )


def _conflict(posted: Posted, conflict: Conflict, newest: Loaded) -> Refusal:
    """Return the refusal of an edit that meets another; both values if of one field."""
    own = _conflict_of(newest, conflict)
    if posted.look == "grid":
        stands = paths.has(newest.station, posted.path)
        theirs = (
            shown_value(
                newest.station, posted.path, paths.get_json(newest.station, posted.path)
            )
            if stands
            else None
        )
        return Refusal(_typed(posted), own.sentence, theirs)
    theirs = own.theirs if conflict.path == posted.path and posted.op == "set" else None
    return Refusal(_typed(posted), own.sentence, theirs)


def _conflict_of(newest: Loaded, conflict: Conflict) -> Refusal:
    theirs = None
    node = fields.find(conflict.path)
    if (
        node is not None
        and node.is_field
        and node.kind != "table"
        and paths.has(newest.station, conflict.path)
    ):
        text, symbol = text_of(newest.station, conflict.path)
        theirs = f"{text} {symbol}" if symbol and text else text
    return Refusal("", conflict.sentence, theirs)


def _typed(posted: Posted) -> str:
    """Return what the form held, so that it is shown again as typed."""
    if posted.op == "paste":
        return posted.rows
    if posted.look == "grid":
        if posted.grid is not None:
            return posted.grid
        width = max(1, len(posted.units))
        rows = (posted.cells[at : at + width] for at in range(0, len(posted.cells), width))
        return "\n".join("\t".join(row) for row in rows)
    return posted.text


def _refused(
    sheet: SheetView, posted: Posted, refusal: Refusal, status: int, fragments: bool
) -> HTMLResponse:
    """Answer that nothing was stored; what was typed stays in its place."""
    refused = sheet.with_refusal(posted.path, refusal)
    if not fragments:
        return (
            show(refused, status)
            if page_of(sheet.sheet)
            else HTMLResponse(refusal.sentence, status)
        )
    answer = _Answer(refused, posted)
    node = fields.find(posted.path)
    if posted.look == "grid":
        answer.grid(refusal)
    elif posted.op == "set" and posted.look != "source" and node is not None and node.is_field:
        answer.fields = (posted.path,) if paths.has(sheet.station, posted.path) else ()
    answer.message = "" if answer.fields else refusal.sentence
    return answer.response(status)


def _stored(
    sheet: SheetView, posted: Posted, wanted: Asked, base: Loaded, fragments: bool
) -> Response:
    """Answer with everything of the sheet that an edit may have changed."""
    if not fragments:
        anchor = wanted.focus or paths.html_id(posted.path)
        return RedirectResponse(sheet.href(anchor=anchor), 303)
    own = {edit.path for edit in wanted.edits} | {posted.path}
    changed = paths.diff(base.station, sheet.station)
    answer = _Answer(sheet, posted)
    answer.saved = posted.path
    answer.frame = posted.look != "source"
    answer.focus = wanted.focus
    theirs_taken = posted.look == "grid" and posted.keep == "theirs"
    if (
        theirs_taken
        or posted.op == "sort"
        or any(
            change.op != "set" or change.path not in own or pattern_of(change.path) in GOVERNING
            for change in changed
        )
    ):
        answer.content = True
    elif posted.look == "grid":
        answer.grid(None)
    elif posted.look != "source":
        answer.fields = (posted.path,)
        answer.renamed = renamed(posted.path, base.station, sheet.station)
    if sheet.loaded.number > base.number + 1:
        answer.merged = "Merged with what was changed elsewhere."
    return answer.response(200)


@dataclass(frozen=True, slots=True)
class Said:
    """What is said beside a grid, a paste box or a row of sources, and where."""

    place: str
    sentence: str
    refused: bool
    theirs: str = ""


class _Answer:
    """The fragments of one answer, gathered and then written by one template."""

    def __init__(self, sheet: SheetView, posted: Posted) -> None:
        self.sheet, self.posted = sheet, posted
        self.fields: tuple[str, ...] = ()
        self.frame = self.content = False
        self.renamed: tuple[str, str] | None = None
        self.message = self.merged = self.saved = self.focus = ""
        self.events: dict[str, object] = {}

    def grid(self, refusal: Refusal | None) -> None:
        """Say beside a grid what became of it, mark its bad cells, leave its inputs alone."""
        self.events["firmhead:cells"] = {
            "id": paths.html_id(self.posted.path),
            "cells": sorted(refusal.cells) if refusal else [],
            "refused": refusal.sentence if refusal else "",
        }

    def response(self, status: int) -> HTMLResponse:
        """Write the answer."""
        sheet, posted = self.sheet, self.posted
        page = page_of(sheet.sheet)
        if self.saved:
            self.events["firmhead:saved"] = {"path": self.saved}
        said = self._said()
        context: dict[str, object] = {
            "sheet": sheet,
            "frame": frame_of(sheet, self.merged) if self.frame else None,
            "page": self._page(page),
            "content": f"{page.folder}/content.html" if page and self.content else None,
            "results": page.results if page and self.frame and not self.content else None,
            "fields": tuple(field_view(sheet, path, posted.shape) for path in self.fields),
            "said": said,
            "renamed": self.renamed,
            "number": sheet.loaded.number if self.saved else None,
            "message": "" if said else self.message,
            "saved": self.saved,
        }
        answer = render(sheet.request, "parts/answer.html", context, status=status)
        if self.events:
            answer.headers["HX-Trigger"] = json.dumps(self.events)
        if self.focus:
            answer.headers["HX-Trigger-After-Settle"] = json.dumps(
                {"firmhead:focus": {"id": self.focus}}
            )
        answer.headers["Vary"] = "HX-Request"
        return answer

    def _page(self, page: SheetPage | None) -> object:
        """Build only what this answer shows of the sheet."""
        if page is None:
            return None
        if self.content:
            return page.build(self.sheet)
        return page.follow(self.sheet) if page.follow and self.frame else None

    def _said(self) -> Said | None:
        """Return what is said beside a grid, a paste box or a row of sources."""
        posted = self.posted
        refusal = self.sheet.refused.get(posted.path)
        name = paths.html_id(posted.path)
        if self.content or (posted.op != "paste" and posted.look not in ("grid", "source")):
            return None
        if posted.op == "paste":
            return Said(
                f"{name}--rows-said", refusal.sentence if refusal else "", refusal is not None
            )
        return Said(
            f"{name}--said",
            refusal.sentence if refusal else "Saved.",
            refusal is not None,
            (refusal.theirs or "") if refusal and posted.look == "grid" else "",
        )
