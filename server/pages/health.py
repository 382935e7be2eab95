"""A page for whatever watches the program: does it answer, and can it read its stations."""

from fastapi import APIRouter, Request

from server import __version__
from server.pages.rights import needs

router = APIRouter()


@router.get("/healthz", dependencies=[needs("public")])
def healthz(request: Request) -> dict[str, str]:
    """Say that the program runs and its store can be read."""
    request.app.state.store.list_stations(archived=False)
    return {"status": "running", "version": __version__}
