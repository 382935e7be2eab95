"""Pages of the browser tests: an event by which htmx says that it failed fails the test too."""

from collections.abc import Callable
from typing import Any

import pytest

from tests.browser.driving import Driver
from tests.conftest import LiveServer

# told on the console, where the watch of every page reads it. The served htmx drops a fragment
# without a place and says nothing (it asks whether a list of nodes is true, not whether it is
# empty), so the places of each answer are looked for here.
FAILURES = """
for (const name of [
  "oobErrorNoTarget", "swapError", "targetError", "onLoadError", "sendError", "responseError",
  "evalDisallowedError", "invalidPath",
]) document.addEventListener(`htmx:${name}`, () => console.error(`htmx:${name}`));
document.addEventListener("htmx:afterRequest", (event) => {
  const answer = new DOMParser().parseFromString(event.detail.xhr.responseText, "text/html");
  for (const part of answer.querySelectorAll("[hx-swap-oob]"))
    if (!document.getElementById(part.id)) console.error(`htmx:oobErrorNoTarget ${part.id}`);
});
"""


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    for item in items:
        if "tests/browser/" in item.path.as_posix():
            item.add_marker("browser")


@pytest.fixture
def new_page(new_page: Callable[..., Any]) -> Callable[..., Any]:
    """Open a page in a browser of its own, as every page is watched here."""

    def opened(**options: Any) -> Any:
        page = new_page(**options)
        page.context.add_init_script(FAILURES)
        page.set_default_timeout(15_000)
        return page

    return opened


@pytest.fixture
def demo_driver(page: Any, live: LiveServer) -> Driver:
    """Drive a copy of the demo station of this test's own."""
    return Driver(page, live, live.demo_copy())
