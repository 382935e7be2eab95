"""Drives the sheets of a station as a person does: by labels, keys and buttons."""

import re
from typing import Any

from playwright.sync_api import Locator, Page

from server.station.paths import html_id
from server.station.station import Station
from tests.conftest import LiveServer

# nothing asked for, nothing being put in its place
QUIET = "() => !document.querySelector('.htmx-request, .htmx-swapping, .htmx-settling')"
# looked at in every frame, which is sooner than an expectation that waits between its tries
STORED = f"""(before) => ({QUIET})()
  && document.getElementById("revision")?.dataset.number !== before"""


class Driver:
    """A browser's page on one station; every change waits until it is stored and drawn."""

    def __init__(self, page: Page, live: LiveServer, station_id: str) -> None:
        self.page, self.live, self.id = page, live, station_id

    def open(self, sheet: str, query: str = "") -> "Driver":
        self.page.goto(f"/stations/{self.id}/{sheet}{query}")
        return self

    def without_live_figures(self) -> "Driver":
        """Leave the charting script empty, which takes seconds; the server's drawings stand."""
        self.page.route(
            "**/plotly.min.js",
            lambda route: route.fulfill(body="", content_type="text/javascript"),
        )
        return self

    def at(self, path: str) -> Locator:
        """Return the control of the field at a path of the document."""
        return self.page.locator(f"[id='{html_id(path)}']")

    def field(self, path: str) -> Locator:
        """Return a field with its label and what is said under it."""
        return self.page.locator(f"[id='{html_id(path)}--field']")

    def labelled(self, words: str, within: Locator | None = None) -> Locator:
        """Return the control whose label begins with `words`."""
        place = within if within is not None else self.page.locator("#content-slot")
        return place.get_by_label(re.compile(f"^{re.escape(words)}(,|$)"))

    @property
    def revision(self) -> int:
        return int(self.page.locator("#revision").get_attribute("data-number") or 0)

    @property
    def stored(self) -> Station:
        return self.live.store.load(self.id).station

    def saved(self, action: Any, *arguments: Any) -> None:
        """Do something that stores an edit, and wait until all that follows is drawn."""
        before = self.revision
        action(*arguments)
        self.page.wait_for_function(STORED, arg=str(before))

    def refused(self, status: int, action: Any, *arguments: Any) -> None:
        """Do something that the server refuses, and wait until it is said."""
        with self.page.expect_response(lambda answer: answer.status == status):
            action(*arguments)
        self.page.wait_for_function(QUIET)
        self.page.watch.forget_refusals()  # type: ignore[attr-defined]

    def enter(self, control: Locator, text: str) -> None:
        """Type a value, or choose it by its words unless it stands there; Enter saves."""
        if control.evaluate("(element) => element.tagName") == "SELECT":
            if control.evaluate("(element) => element.selectedOptions[0]?.label") != text:
                self.saved(lambda: control.select_option(label=text))
        else:
            control.fill(text)
            self.saved(control.press, "Enter")

    def press(self, name: str, within: Locator | None = None) -> None:
        """Press a button that stores an edit."""
        place = within if within is not None else self.page.locator("#content-slot")
        self.saved(place.get_by_role("button", name=name, exact=True).click)

    def choose(self, legend: str, words: str) -> None:
        """Choose one of a row of choices."""
        group = self.page.get_by_role("group", name=legend, exact=True)
        self.saved(group.get_by_label(words, exact=True).check)
