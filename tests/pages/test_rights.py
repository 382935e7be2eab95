"""Every address declares the right it needs, and a missing right is refused."""

import pytest
from fastapi import APIRouter, FastAPI
from fastapi.routing import APIRoute
from fastapi.testclient import TestClient

from server.pages import rights, routers
from server.pages.links import named_routes
from server.pages.rights import RIGHTS, Actor, Needs, needs

UNSAFE = {"POST", "PUT", "DELETE", "PATCH"}
# these change nothing that is kept
READING_POSTS = {"/api/solve"}


def declared(route: APIRoute) -> list[str]:
    """Return the rights that a route's dependencies ask for."""
    return [d.dependency.right for d in route.dependencies if isinstance(d.dependency, Needs)]


def every_route() -> list[APIRoute]:
    return [route for router in routers() for route in router.routes]


@pytest.mark.parametrize(
    "route", every_route(), ids=lambda route: f"{route.methods} {route.path}"
)
def test_a_route_declares_one_right_of_the_known_ones(route):
    assert isinstance(route, APIRoute)
    found = declared(route)

    assert len(found) == 1, f"{route.path} declares {found}"
    assert found[0] in RIGHTS


@pytest.mark.parametrize(
    "route", every_route(), ids=lambda route: f"{route.methods} {route.path}"
)
def test_a_route_that_changes_something_needs_more_than_reading(route):
    if route.methods & UNSAFE and route.path not in READING_POSTS:
        assert declared(route)[0] not in ("read", "public")


def test_the_application_serves_no_route_that_is_in_no_router(app):
    own = {route.path for route in every_route()}
    served = {route.path for route in app.routes if hasattr(route, "path")}

    assert served <= own
    assert own == {route.path for route in named_routes().values()}


def test_a_route_without_a_right_is_caught():
    router = APIRouter()

    @router.get("/bare")
    def bare() -> None:
        return None

    (route,) = router.routes
    assert declared(route) == []


def test_an_actor_without_the_right_is_refused_in_a_sentence(monkeypatch):
    monkeypatch.setattr(rights, "LOCAL", Actor("reader", frozenset({"read"})))
    application = FastAPI()

    @application.get("/look", dependencies=[needs("read")])
    def look() -> str:
        return "seen"

    @application.get("/change", dependencies=[needs("edit")])
    def change() -> str:
        return "changed"

    with TestClient(application) as browser:
        refused = browser.get("/change")
        assert browser.get("/look").json() == "seen"

    assert refused.status_code == 403
    assert (
        refused.json()["detail"] == "This needs the right to edit, which reader does not have."
    )
