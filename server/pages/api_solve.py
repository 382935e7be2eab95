"""Solving over the API, nothing stored, and what the API says of itself."""

from fastapi import APIRouter, Request, Response
from fastapi.openapi.utils import get_openapi
from fastapi.responses import JSONResponse

from server import __version__
from server.pages import api
from server.pages.json_body import JsonBytes
from server.pages.rights import needs
from server.station.reader import read_station
from server.station.schema import station_schema
from server.studies.assess import assess
from server.studies.results_json import results_bytes
from server.studies.results_schema import results_schema

router = APIRouter(tags=["solve"])


@router.post("/api/solve", dependencies=[needs("read")], openapi_extra=api.STATION_BODY)
def api_solve(body: JsonBytes) -> Response:
    """Return results and findings of a station file, as `firmhead solve -o` writes them."""
    assessment = assess(read_station(body))
    return Response(results_bytes(assessment), media_type="application/json")


@router.get("/api/schema/station", dependencies=[needs("public")])
def api_schema_station() -> JSONResponse:
    """Return the JSON schema of a station file."""
    return JSONResponse(station_schema())


@router.get("/api/schema/results", dependencies=[needs("public")])
def api_schema_results() -> JSONResponse:
    """Return the JSON schema of the results."""
    return JSONResponse(results_schema())


@router.get("/api/openapi.json", dependencies=[needs("public")], include_in_schema=False)
def api_openapi(request: Request) -> JSONResponse:
    """Return the description of the API, in OpenAPI form."""
    described = get_openapi(
        title="Firmhead",
        version=__version__,
        description=(api.__doc__ or "").strip(),
        routes=[*api.router.routes, *router.routes],
    )
    prefix = str(request.scope.get("root_path", "")).rstrip("/")
    if prefix:
        described["servers"] = [{"url": prefix}]
    return JSONResponse(described)
