"""What holds of every page that the router has: it answers, and works under a prefix."""

import re

import pytest
from fastapi.testclient import TestClient

from server.demo import load_demo
from server.pages.links import named_routes

ADDRESS = re.compile(r'\b(?:href|src|action|hx-post|hx-get)="(/[^"]*)"')
# parts of an address that are not the station, with one that exists
PARTS = {"left": "1", "right": "1", "sheet": "supply"}


def pages():
    """Return every page of a station or of the program that needs no more than `PARTS`."""
    found = []
    for name, route in sorted(named_routes().items()):
        known = {"station_id", *PARTS}
        if "GET" in route.methods and set(route.param_convertors) <= known:
            found.append(name)
    return found


@pytest.fixture(scope="module")
def under_prefix(tmp_path_factory):
    from server.app import create_app
    from server.settings import Settings

    app = create_app(Settings(tmp_path_factory.mktemp("prefix")))
    station_id = load_demo(app.state.store)[0]
    with TestClient(app, base_url="http://localhost", root_path="/pumps") as client:
        yield client, station_id


def test_the_router_has_the_pages_of_every_sheet():
    assert {"summary", "supply", "main-and-zone", "demand", "pumps", "sets", "duty", "criteria",
            "memo", "history"} <= set(pages())  # fmt: skip


@pytest.mark.parametrize("name", pages())
def test_a_page_answers_and_every_address_on_it_has_the_prefix(under_prefix, name):
    client, station_id = under_prefix
    route = named_routes()[name]
    address = route.path_format.format(station_id=station_id, **PARTS)
    answer = client.get(f"/pumps{address}", follow_redirects=True)
    # a page that is asked for without its choice says so, and is no fault
    assert answer.status_code in (200, 404)

    wrong = [found for found in ADDRESS.findall(answer.text) if not found.startswith("/pumps/")]
    assert wrong == []
