"""Pages of the browser tests: an event by which htmx says that it failed fails the test too."""

from collections.abc import Callable, Iterator
from typing import Any

import pytest

from tests.browser.driving import Driver
from tests.conftest import LiveServer, new_context, watched_page

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
  for (const part of answer.querySelectorAll("[hx-swap-oob]")) {
    const place = part.getAttribute("hx-swap-oob").split(":")[1] || `[id="${part.id}"]`;
    if (!document.querySelector(place)) console.error(`htmx:oobErrorNoTarget ${place}`);
  }
});
"""


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    for item in items:
        if "tests/browser/" in item.path.as_posix():
            item.add_marker("browser")


@pytest.fixture(scope="session")
def contexts(browser: Any, live: LiveServer) -> Iterator[Callable[[str], Any]]:
    """Browsers by name; each keeps its cache for all tests, as scripts are long to load."""
    made: dict[str, Any] = {}

    def named(name: str) -> Any:
        if name not in made:
            size = {"width": 1440, "height": 900}
            made[name] = new_context(
                browser, live.url, viewport=size, offline=name == "offline"
            )
            made[name].add_init_script(FAILURES)
            made[name].set_default_timeout(15_000)
        return made[name]

    yield named
    for context in made.values():
        context.close()


@pytest.fixture
def new_page(contexts: Callable[[str], Any], live: LiveServer) -> Iterator[Callable[..., Any]]:
    """Open a watched page in the browser of a name; its session storage is its own."""
    pages: list[Any] = []

    def opened(name: str = "first") -> Any:
        pages.append(watched_page(contexts(name), live.url))
        return pages[-1]

    yield opened
    for page in pages:
        page.close()
    assert [page.watch for page in pages if page.watch.bad] == []


@pytest.fixture
def page(new_page: Callable[..., Any]) -> Any:
    return new_page()


@pytest.fixture
def demo_driver(page: Any, live: LiveServer) -> Driver:
    """Drive a copy of the demo station of this test's own."""
    return Driver(page, live, live.demo_copy())
