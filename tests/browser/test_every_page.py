"""Every page, found from the routes: accessible, one heading, nothing outside, nothing cut off.

Sources: the rules of axe-core (WCAG 2.2 A and AA, and best practices); that a page needs no
sideways scrolling at 390 px is of the kind of WCAG 2.2 success criterion 1.4.10, Reflow.
"""

import re
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from itertools import product
from typing import Any

import pytest
from axe_playwright_python.base import AXE_SCRIPT
from playwright.sync_api import Page, expect

from server.pages.links import named_routes
from server.station.edits import Edit
from server.station.station import Identity, Station
from tests.browser.driving import Driver
from tests.conftest import LiveServer, watched_page

WIDTHS = (1440, 1024, 390)
# all rules but the slow one, at the least width, where most is in the way of each other
STRUCTURE = {"rules": {"color-contrast": {"enabled": False}}}
# the slow rule looks at two of what is alike in every class: rows, fields, blocks of the memo
CONTRAST = {"runOnly": ["color-contrast", "target-size"]}
THIN = """() => {
  const seen = new Map();
  for (const part of document.querySelectorAll("tbody tr, .field, .memo > *, .findings > li")) {
    const inside = [...part.querySelectorAll("[class]")].map((e) => e.getAttribute("class"));
    const kind = [part.tagName, part.className, ...new Set(inside)].join();
    seen.set(kind, (seen.get(kind) || 0) + 1);
    if (seen.get(kind) > 2) part.hidden = true, part.style.display = "none";
  }
}"""
UNFOLD = """() => {
  for (const part of document.querySelectorAll("details:not(.behind)")) part.open = true;
}"""

# parts of addresses by name; a route with another part stops the collection
PARTS = {
    "sheet": ("supply", "history"),  # of the lists of sources: a long one, an empty one
    "left": ("1",),
    "right": ("2",),
    "chart": ("duty", "head", "supply", "strip"),
    "table": ("duty", "findings"),
}
QUERIES = {"compare_form": "?left=1&right=2"}
# these are loaded by the pages themselves; the last test sees that they were
LOADED = {"vendor_file", "static_file"}
# without inputs there is no figure, and a sentence says so with 404
NEEDS_RESULTS = {("chart-svg", None), ("chart-json", None), ("table-csv", "duty")}
STRIP_IS_NO_DATA = ("chart-json", "strip")


@dataclass(frozen=True)
class Address:
    """One address: its route, which station, the parts of its path, how it is looked at."""

    name: str
    station: str
    parts: tuple[tuple[str, str], ...] = ()
    query: str = ""

    def __str__(self) -> str:
        told = (self.name, self.station, *(part for _, part in self.parts), self.query)
        return " ".join(part for part in told if part)

    def path(self, ids: dict[str, str]) -> str:
        filled = dict(self.parts, station_id=ids.get(self.station, ""))
        return named_routes()[self.name].path.format(**filled) + self.query


def every_address() -> list[Address]:
    """Return each address that is read, as the routes have it."""
    found = []
    for name, route in named_routes().items():
        if "GET" not in route.methods or name in LOADED:
            continue
        names = re.findall(r"{(\w+)}", route.path)
        stations = ("demo", "empty") if "station_id" in names else ("",)
        names = [part for part in names if part != "station_id"]
        for station, values in product(stations, product(*(PARTS[part] for part in names))):
            kind = values[0] if values else None
            if (name, kind) == STRIP_IS_NO_DATA:
                continue
            if station == "empty" and NEEDS_RESULTS & {(name, None), (name, kind)}:
                continue
            parts = tuple(zip(names, values, strict=True))
            found.append(Address(name, station, parts, QUERIES.get(name, "")))
    return found


# the same pages, looked at in another way
OTHER_VIEWS = [
    Address("stations", "", (), "?archived=1"),
    Address("summary", "demo", (), "?units=us"),
    Address("duty", "demo", (), "?units=us&case=sc-f2re9k"),
    Address("sets", "demo", (), "?at=r1"),
]


@pytest.fixture(scope="module")
def ids(live: LiveServer) -> dict[str, str]:
    """Ids of the stations that are looked at; each has two revisions."""
    made = {
        "demo": live.demo_copy(),
        "empty": live.store.create(Station(identity=Identity(title="Empty")), "local"),
    }
    for station_id in made.values():
        edit = Edit("set", "/site/datum", "town datum of the second revision")
        live.store.save(station_id, [edit], 1, "local")
    archived = live.demo_copy()
    live.store.archive(archived, True)
    return made


@pytest.fixture(scope="module")
def swept(contexts: Callable[[str], Any], live: LiveServer) -> Iterator[Any]:
    """Open the one page in which all addresses are looked at."""
    page = watched_page(contexts("first"), live.url)
    page.asked, page.seen = set(), set()
    page.on("request", lambda request: page.asked.add(request.url))
    yield page
    page.close()


def too_wide(page: Page) -> list[str]:
    """Return where the page must be scrolled sideways, at each width."""
    found = []
    for width in WIDTHS:
        page.set_viewport_size({"width": width, "height": 900})
        over = page.evaluate(
            "() => [document.documentElement.scrollWidth - innerWidth,"
            " getComputedStyle(document.body).overflowX]"
        )
        if over[0] > 0 or over[1] != "visible":
            found.append(f"{width}: {over}")
    return found


def axe(page: Page, options: dict[str, Any]) -> list[str]:
    """Return the violations that axe finds, each with its places."""
    if page.evaluate("() => typeof axe") == "undefined":
        page.evaluate(AXE_SCRIPT)
    asked = {"resultTypes": ["violations"], **options}
    found = page.evaluate("(options) => axe.run(options).then((r) => r.violations)", asked)
    return [
        f"{violation['id']}: {violation['help']}: "
        + "; ".join(f"{node['target']} {node['html'][:160]}" for node in violation["nodes"][:5])
        for violation in found
    ]


def opened(page: Page, path: str) -> None:
    """Open a page and wait for its live figures."""
    page.set_viewport_size({"width": WIDTHS[0], "height": 900})
    page.goto(path)
    if page.locator(".fig-data").count():
        page.wait_for_function("() => document.documentElement.dataset.figures")


def look_at(page: Any, path: str, colours: bool) -> None:
    """Look at a page with all that is folded opened, but for the long lists of numbers."""
    opened(page, path)
    expect(page.locator("h1")).to_have_count(1)
    assert page.title().strip()
    assert page.evaluate("() => document.documentElement.lang") == "en"
    page.evaluate(UNFOLD)
    assert too_wide(page) == []
    assert axe(page, STRUCTURE) == []
    if colours:
        page.set_viewport_size({"width": WIDTHS[0], "height": 900})
        page.evaluate(THIN)
        assert axe(page, CONTRAST) == []
    assert page.watch.bad == []


@pytest.mark.parametrize("address", every_address() + OTHER_VIEWS, ids=str)
def test_an_address_answers_and_its_page_is_accessible_and_fits(address, swept, ids):
    path = address.path(ids)
    answer = swept.context.request.get(path)
    swept.asked.update((path, answer.url))  # one that leads on was asked for as well

    assert answer.status == 200, answer.text()[:500]
    shown = "attachment" not in answer.headers.get("content-disposition", "")
    assert answer.body()
    if not shown or not answer.headers["content-type"].startswith("text/html"):
        return
    if answer.url not in swept.seen:
        swept.seen.add(answer.url)
        # an empty station and another view of a page have no colours of their own
        look_at(swept, path, address.station != "empty" and address not in OTHER_VIEWS)


def test_a_page_that_does_not_exist_is_a_page_too(swept, ids):
    swept.goto("/stations/nosuch00/summary")
    swept.watch.forget_refusals()
    expect(swept.locator("h1")).to_have_count(1)
    assert too_wide(swept) == []
    assert axe(swept, STRUCTURE) + axe(swept, CONTRAST) == []
    assert swept.watch.bad == []


def test_a_refused_value_and_a_changed_field_are_accessible_and_fit(swept, ids, live):
    driver = Driver(swept, live, ids["demo"]).open("supply")
    swept.set_viewport_size({"width": WIDTHS[0], "height": 900})
    for path, text, status in (
        ("/site/altitude", "99999", 422),
        ("/site/floor_level", "1", 409),
    ):
        if status == 409:
            number = live.store.load(driver.id).number
            theirs = Edit("set", path, {"value": 109.25, "unit": "m"})
            live.store.save(driver.id, [theirs], number, "a colleague")
        driver.at(path).fill(text)
        driver.refused(status, driver.at(path).press, "Enter")

    expect(swept.get_by_role("button", name="Keep theirs")).to_be_visible()
    assert too_wide(swept) == []
    assert axe(swept, STRUCTURE) == []
    swept.evaluate(THIN)
    assert axe(swept, CONTRAST) == []
    assert swept.watch.bad == []


@pytest.mark.parametrize("sheet", ["summary", "supply", "duty", "pumps"])
def test_a_sheet_in_the_dark_has_enough_contrast(sheet, swept, ids):
    swept.emulate_media(color_scheme="dark")
    opened(swept, Address(sheet, "demo").path(ids))

    swept.evaluate(THIN)
    assert axe(swept, CONTRAST) == []
    assert swept.watch.bad == []
    swept.emulate_media(color_scheme="light")


def test_every_route_that_is_read_was_asked_for(swept, live):
    paths = {url.removeprefix(live.url).partition("?")[0] for url in swept.asked}
    unasked = [
        route.path
        for route in named_routes().values()
        if "GET" in route.methods and not any(route.path_regex.match(path) for path in paths)
    ]
    assert unasked == []


def test_the_sweep_sees_a_faint_word_a_nameless_field_and_a_wide_block(swept):
    swept.goto("about:blank")
    swept.set_content(
        '<html lang="en"><title>bad</title><main><h1>Bad</h1><p style="color:#ccc">faint</p>'
        '<input><div style="width:1500px">wide</div></main></html>'
    )

    assert len(too_wide(swept)) == len(WIDTHS)
    (nameless,) = axe(swept, STRUCTURE)
    (faint,) = axe(swept, CONTRAST)
    assert nameless.startswith("label: ")
    assert faint.startswith("color-contrast: ")
