"""The JSON API of stations: files in and out, edits on a revision, revisions, findings.

A revision is an entity tag, as `"r17"`. A write names in If-Match the one it was made from;
what was changed elsewhere since is merged, and a true conflict is 409 with both values.
"""

import re

from fastapi import APIRouter, HTTPException, Request, Response
from fastapi.responses import JSONResponse
from pydantic import JsonValue

from server.pages.json_body import JsonBytes, edits_in
from server.pages.links import link
from server.pages.rights import actor_of, needs
from server.pages.store_of import store_of
from server.station.changes import Change
from server.station.reader import read_station
from server.store.revisions import RevisionRow
from server.store.store import Loaded, StationRow, Store
from server.studies.assess import assess
from server.studies.results_json import findings_json

router = APIRouter(tags=["stations"])

NO_STATION = "There is no such station, or no such revision of it."
STATION_BODY: dict[str, JsonValue] = {
    "requestBody": {
        "required": True,
        "content": {"application/json": {"schema": {"$ref": "/api/schema/station"}}},
    }
}
EDITS_BODY: dict[str, JsonValue] = {
    "requestBody": {
        "required": True,
        "content": {
            "application/json": {
                "schema": {
                    "type": "object",
                    "required": ["edits"],
                    "properties": {"edits": {"type": "array", "items": {"type": "object"}}},
                }
            }
        },
    }
}


@router.get("/api/stations", dependencies=[needs("read")])
def api_stations(request: Request, archived: bool = False) -> JSONResponse:
    """Return the stations in use, or the archived ones, the last edited first."""
    rows = store_of(request).list_stations(archived)
    return JSONResponse({"stations": [_station_row(row) for row in rows]})


@router.post(
    "/api/stations", status_code=201, dependencies=[needs("edit")], openapi_extra=STATION_BODY
)
def api_create(request: Request, body: JsonBytes) -> JSONResponse:
    """Keep a station file as a new station."""
    store = store_of(request)
    station_id = store.create(read_station(body), actor_of(request).name, "import")
    headers = {"Location": link(request, "api_station", station_id=station_id)}
    return _written(store.load(station_id), False, 201, headers)


@router.get("/api/stations/{station_id}", dependencies=[needs("read")])
def api_station(request: Request, station_id: str, at: str | None = None) -> Response:
    """Return the station file, of the newest revision or of the one named."""
    store = store_of(request)
    loaded = _loaded(store, station_id, _revision(at))
    tag = _tag(loaded.number)
    headers = {"ETag": tag}
    if tag in request.headers.get("if-none-match", ""):
        return Response(status_code=304, headers=headers)
    body = store.body(station_id, loaded.number)
    return Response(body, media_type="application/json", headers=headers)


@router.put(
    "/api/stations/{station_id}", dependencies=[needs("edit")], openapi_extra=STATION_BODY
)
def api_replace(request: Request, station_id: str, body: JsonBytes) -> JSONResponse:
    """Put a station file in a station's place; If-Match names the revision it was made from."""
    store = store_of(request)
    base = _base(request, store, station_id)
    document = read_station(body)
    newest = _loaded(store, station_id, None).number
    loaded = store.replace(station_id, document, base, actor_of(request).name)
    return _written(loaded, base < newest)


@router.post(
    "/api/stations/{station_id}/edits", dependencies=[needs("edit")], openapi_extra=EDITS_BODY
)
def api_edits(request: Request, station_id: str, body: JsonBytes) -> JSONResponse:
    """Apply edits, all or none; If-Match names the revision they were made from."""
    store = store_of(request)
    base = _base(request, store, station_id)
    newest = _loaded(store, station_id, None).number
    loaded = store.save(station_id, edits_in(body), base, actor_of(request).name)
    return _written(loaded, base < newest)


@router.get("/api/stations/{station_id}/revisions", dependencies=[needs("read")])
def api_revisions(request: Request, station_id: str) -> JSONResponse:
    """Return every revision, the newest first, with what it changed."""
    try:
        rows = store_of(request).history(station_id)
    except KeyError:
        raise HTTPException(404, NO_STATION) from None
    return JSONResponse({"revisions": [_revision_row(row) for row in rows]})


@router.get("/api/stations/{station_id}/findings", dependencies=[needs("read")])
def api_findings(request: Request, station_id: str, at: str | None = None) -> JSONResponse:
    """Return what was found in a station, worst first."""
    loaded = _loaded(store_of(request), station_id, _revision(at))
    assessment = assess(loaded.station, loaded.hash)
    answer = {
        "revision": f"r{loaded.number}",
        "holds": assessment.holds,
        "findings": findings_json(assessment),
    }
    return JSONResponse(answer, headers={"ETag": _tag(loaded.number)})


def _written(
    loaded: Loaded, merged: bool, status: int = 200, headers: dict[str, str] | None = None
) -> JSONResponse:
    answer = {"id": loaded.id, "revision": f"r{loaded.number}", "merged": merged}
    return JSONResponse(
        answer, status, headers={"ETag": _tag(loaded.number), **(headers or {})}
    )


def _loaded(store: Store, station_id: str, at: int | None) -> Loaded:
    try:
        return store.load(station_id, at)
    except KeyError:
        raise HTTPException(404, NO_STATION) from None


def _tag(number: int) -> str:
    return f'"r{number}"'


def _revision(text: str | None) -> int | None:
    if text is None:
        return None
    found = re.fullmatch(r"r?([0-9]{1,9})", text)
    if found is None:
        raise HTTPException(
            404, f"“{text[:20]}” is not a revision; revisions are written as r17."
        )
    return int(found[1])


def _base(request: Request, store: Store, station_id: str) -> int:
    """Return the revision that a write was made from."""
    given = request.headers.get("if-match", "").strip()
    newest = _loaded(store, station_id, None).number
    if not given:
        raise HTTPException(
            428,
            "Say in If-Match which revision this was made from, as the ETag gave it: "
            f"{_tag(newest)} is the newest.",
        )
    found = re.fullmatch(r'(?:W/)?"r([1-9][0-9]{0,8})"', given)
    if found is None or int(found[1]) > newest:
        raise HTTPException(
            412,
            f"{given[:40]} is not a revision of this station; {_tag(newest)} is the newest.",
        )
    return int(found[1])


def _station_row(row: StationRow) -> dict[str, JsonValue]:
    return {
        "id": row.id,
        "title": row.title,
        "number": row.job_number,
        "place": row.place,
        "revision": f"r{row.newest}",
        "archived": row.archived,
        "edited_at": row.edited_at.isoformat(timespec="seconds"),
        "author": row.author,
    }


def _revision_row(row: RevisionRow) -> dict[str, JsonValue]:
    return {
        "revision": f"r{row.number}",
        "parent": None if row.parent is None else f"r{row.parent}",
        "of": None if row.of is None else f"r{row.of}",
        "document": row.hash,
        "author": row.author,
        "made_at": row.made_at.isoformat(timespec="seconds"),
        "kind": row.kind,
        "changes": [_change(change) for change in row.changes],
    }


def _change(change: Change) -> dict[str, JsonValue]:
    return {
        "op": change.op,
        "path": change.path,
        "was": change.was,
        "value": change.value,
        "before": change.before,
    }
