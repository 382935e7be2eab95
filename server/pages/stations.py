"""The list of stations: make, open, copy, rename, import, export, put away and take back."""

import re
import unicodedata
from collections.abc import Callable
from dataclasses import dataclass
from typing import Annotated

from fastapi import APIRouter, File, Form, HTTPException, Request, UploadFile
from fastapi.responses import HTMLResponse, RedirectResponse, Response

from server.pages.frame import when
from server.pages.links import link
from server.pages.rendering import render
from server.pages.rights import actor_of, needs
from server.pages.store_of import store_of
from server.station.faults import BadStation, Fault
from server.station.fields import SHEET_TITLES
from server.station.reader import read_station
from server.station.station import Criteria, Display, Identity, Station

router = APIRouter()

UNNAMED = "Station without a name"


@dataclass(frozen=True, slots=True)
class StationLine:
    """One station in the list."""

    id: str
    title: str
    about: str
    edited: str
    revision: int


@dataclass(frozen=True, slots=True)
class FaultLine:
    """One fault of a file that could not be imported."""

    where: str
    sentence: str


@dataclass(frozen=True, slots=True)
class StationsPage:
    """All that the list's template reads."""

    stations: tuple[StationLine, ...]
    archived: bool
    other: int
    refused_file: str
    faults: tuple[FaultLine, ...]
    said: str
    us: bool


@router.get("/", name="root", dependencies=[needs("read")])
def root(request: Request) -> Response:
    """Lead to the list of stations."""
    return RedirectResponse(link(request, "stations"), 303)


@router.get("/stations", name="stations", dependencies=[needs("read")])
def stations(request: Request, archived: str = "") -> HTMLResponse:
    """Show the stations, or those put away."""
    return _list(request, archived=archived == "1")


@router.post("/stations", name="make_station", dependencies=[needs("edit")])
def make_station(
    request: Request, title: Annotated[str, Form()] = "", units: Annotated[str, Form()] = "si"
) -> Response:
    """Make an empty station and open it."""
    name = unicodedata.normalize("NFC", " ".join(title.split()))
    us = units == "us"
    if not name:
        return _list(request, said="Enter a name for the new station.", us=us, status=422)
    station = Station(
        identity=Identity(title=name[:300]),
        display=Display(units="us" if us else "si", paper="letter" if us else "a4"),
        criteria=Criteria(profile="us_municipal" if us else "si_municipal"),
    )
    return _open(request, store_of(request).create(station, actor_of(request).name), "supply")


@router.post("/stations/import", name="import_station", dependencies=[needs("edit")])
def import_station(
    request: Request, file: Annotated[UploadFile | None, File()] = None
) -> Response:
    """Take a station file in; a file that is not one is refused with every fault."""
    if file is None or not file.filename:
        return _list(request, said="Choose a station file first.", status=422)
    try:
        station = read_station(file.file.read())
    except BadStation as bad:
        return _list(request, refused_file=file.filename, faults=bad.faults, status=422)
    return _open(
        request, store_of(request).create(station, actor_of(request).name, "import"), "summary"
    )


@router.get("/stations/{station_id}/file", name="station_file", dependencies=[needs("read")])
def station_file(request: Request, station_id: str, at: str = "") -> Response:
    """Give the station file out, as stored."""
    number = int(at.removeprefix("r")) if at.removeprefix("r").isdecimal() else None
    try:
        store = store_of(request)
        loaded = store.load(station_id, number)
        body = store.body(station_id, number)
    except KeyError as missing:
        raise HTTPException(
            404, "There is no such station, or no such revision of it."
        ) from missing
    name = file_name(loaded.station.identity.title or "station")
    return Response(
        body,
        media_type="application/json",
        headers={"Content-Disposition": f'attachment; filename="{name}.json"'},
    )


@router.post("/stations/{station_id}/copy", name="copy", dependencies=[needs("edit")])
def copy(request: Request, station_id: str) -> Response:
    """Make a station like this one, and go back to the list."""
    _do(request, station_id, lambda: store_of(request).copy(station_id, actor_of(request).name))
    return RedirectResponse(link(request, "stations"), 303)


@router.post("/stations/{station_id}/rename", name="rename", dependencies=[needs("edit")])
def rename(request: Request, station_id: str, title: Annotated[str, Form()] = "") -> Response:
    """Give a station another name."""
    name = " ".join(title.split())
    if not name:
        return _list(request, said="A station must have a name.", status=422)
    try:
        _do(
            request,
            station_id,
            lambda: store_of(request).rename(station_id, name, actor_of(request).name),
        )
    except BadStation as bad:
        return _list(request, said=bad.faults[0].sentence, status=422)
    return RedirectResponse(link(request, "stations"), 303)


@router.post("/stations/{station_id}/archive", name="archive", dependencies=[needs("edit")])
def archive(request: Request, station_id: str, away: Annotated[str, Form()] = "1") -> Response:
    """Put a station away, or take it back; nothing is lost either way."""
    _do(request, station_id, lambda: store_of(request).archive(station_id, away == "1"))
    return RedirectResponse(link(request, "stations"), 303)


def file_name(title: str) -> str:
    """Return a file's name for a title: plain letters, digits and dashes.

    >>> file_name("Upper Fold booster, Rev. 1")
    'upper-fold-booster-rev-1'
    """
    plain = unicodedata.normalize("NFKD", title).encode("ascii", "ignore").decode().lower()
    return re.sub(r"[^a-z0-9]+", "-", plain).strip("-")[:80] or "station"


def _list(
    request: Request,
    *,
    archived: bool = False,
    refused_file: str = "",
    faults: tuple[Fault, ...] = (),
    said: str = "",
    us: bool = False,
    status: int = 200,
) -> HTMLResponse:
    store = store_of(request)
    lines = tuple(
        StationLine(
            row.id,
            row.title or UNNAMED,
            ", ".join(part for part in (row.job_number, row.place) if part),
            when(row.edited_at),
            row.newest,
        )
        for row in store.list_stations(archived)
    )
    page = StationsPage(
        lines,
        archived,
        len(store.list_stations(not archived)),
        refused_file,
        tuple(FaultLine(_where(fault), fault.sentence) for fault in faults),
        said,
        us,
    )
    return render(request, "stations/page.html", {"page": page}, status=status)


def _where(fault: Fault) -> str:
    """Return the sheet of a fault and its address in the file, to be found there."""
    sheet = next(
        (title for name, title in SHEET_TITLES.items() if name == fault.sheet), "The file"
    )
    return f"{sheet}, {fault.path}" if fault.path else sheet


def _open(request: Request, station_id: str, sheet: str) -> RedirectResponse:
    return RedirectResponse(link(request, sheet, station_id=station_id), 303)


def _do(request: Request, station_id: str, action: Callable[[], object]) -> None:
    try:
        action()
    except KeyError as missing:
        raise HTTPException(404, "There is no such station.") from missing
