"""Fixtures of the whole suite: demo station, application, live server, browser.

A test that drives Chromium takes `page` (or `new_page` for several browsers) and is marked
`browser`. Its page fails at the end on a request to another server, a console error, a script
error, a violation of the content security policy, or a 5xx.
"""

import os
import shutil
import socket
import threading
import time
from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import pytest
from fastapi import FastAPI
from fastapi.testclient import TestClient
from hypothesis import settings as hypothesis_settings

from server.app import create_app
from server.demo import load_demo
from server.settings import LOOPBACK_HOSTS, Settings
from server.station.reader import read_station
from server.station.station import Station
from server.store.store import Store
from tests.seconds_by_folder import pytest_terminal_summary

__all__ = ["pytest_terminal_summary"]  # a hook is found by its name here

# a busy machine is not a failure of a law
hypothesis_settings.register_profile("suite", deadline=None)
hypothesis_settings.load_profile("suite")

ROOT = Path(__file__).parents[1]
DEMO_FILE = ROOT / "seed_demo" / "closed_zone.json"
CHROMIUM_ARGUMENTS = [
    "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run",
    "--disable-background-networking", "--disable-component-update", "--disable-sync",
]  # fmt: skip
NO_CHROMIUM = "no Chromium found; apt-get install chromium, or name one in CHROMIUM"
INSIDE = ("data:", "blob:", "about:")


@pytest.fixture(scope="session")
def demo_bytes() -> bytes:
    return DEMO_FILE.read_bytes()


@pytest.fixture(scope="session")
def demo(demo_bytes: bytes) -> Station:
    return read_station(demo_bytes)


@pytest.fixture
def store(tmp_path: Path) -> Iterator[Store]:
    made = Store(tmp_path / "data")
    yield made
    made.close()


@pytest.fixture
def app(tmp_path: Path) -> FastAPI:
    return create_app(Settings(tmp_path / "data"))


@pytest.fixture
def client(app: FastAPI) -> Iterator[TestClient]:
    """Return a browser without script on the application; redirections are not followed."""
    headers = {"Sec-Fetch-Site": "same-origin"}
    with TestClient(
        app, base_url="http://127.0.0.1", headers=headers, follow_redirects=False
    ) as made:
        yield made


@pytest.fixture
def demo_id(client: TestClient, app: FastAPI) -> str:
    """Id of the demo station, loaded in the application of `client`."""
    return load_demo(app.state.store)[0]


@dataclass(frozen=True)
class LiveServer:
    """An application that is really served, for browsers and the command line."""

    url: str
    store: Store

    def demo_copy(self) -> str:
        """Return the id of a new station with the demo's content, so that tests do not meet."""
        return self.store.create(read_station(DEMO_FILE.read_bytes()), "local", "demo")


@pytest.fixture(scope="session")
def live(tmp_path_factory: pytest.TempPathFactory) -> Iterator[LiveServer]:
    import uvicorn

    settings = Settings(tmp_path_factory.mktemp("live"), allowed_hosts=LOOPBACK_HOSTS)
    application = create_app(settings)
    listening = socket.socket()
    listening.bind(("127.0.0.1", 0))
    server = uvicorn.Server(uvicorn.Config(application, log_level="warning", ws="none"))
    thread = threading.Thread(target=server.run, kwargs={"sockets": [listening]}, daemon=True)
    thread.start()
    end = time.monotonic() + 20
    while not server.started:
        if not thread.is_alive() or time.monotonic() > end:
            pytest.fail("the server did not start")
        time.sleep(0.01)
    yield LiveServer(f"http://127.0.0.1:{listening.getsockname()[1]}", application.state.store)
    server.should_exit = True
    thread.join(10)
    listening.close()


def chromium_path() -> str | None:
    names = ("chromium", "google-chrome", "chromium-browser")
    for name in (os.environ.get("CHROMIUM"), "/usr/bin/chromium", *map(shutil.which, names)):
        if name and Path(name).exists():
            return name
    return None


@pytest.fixture(scope="session")
def chromium() -> str:
    """Path of the browser; without one the tests that need it are skipped, but not under CI."""
    found = chromium_path()
    if found is None:
        if os.environ.get("CI") or os.environ.get("REQUIRE_BROWSER"):
            pytest.fail(NO_CHROMIUM)
        pytest.skip(NO_CHROMIUM)
    return found


@pytest.fixture(scope="session")
def browser(chromium: str) -> Iterator[Any]:
    from playwright.sync_api import sync_playwright

    with sync_playwright() as playwright:
        opened = playwright.chromium.launch(executable_path=chromium, args=CHROMIUM_ARGUMENTS)
        yield opened
        opened.close()


@dataclass
class Watch:
    """What went wrong in a browser's page. A test takes out what it provokes itself."""

    outside: list[str] = field(default_factory=list)
    errors: list[str] = field(default_factory=list)
    console: list[str] = field(default_factory=list)

    def on(self, page: Any, home: str) -> None:
        page.on("request", lambda request: self._asked(request.url, home))
        page.on("pageerror", lambda error: self.errors.append(str(error)))
        page.on("console", lambda message: self._said(message.type, message.text))
        page.on("response", lambda answer: self._answered(answer.status, answer.url))

    def _asked(self, url: str, home: str) -> None:
        if not url.startswith((home, *INSIDE)):
            self.outside.append(url)

    def _said(self, kind: str, text: str) -> None:
        if kind == "error" or "Content Security Policy" in text:
            self.console.append(text)

    def _answered(self, status: int, url: str) -> None:
        if status >= 500:
            self.errors.append(f"{status} {url}")

    @property
    def bad(self) -> list[str]:
        """All that went wrong."""
        return [*self.outside, *self.errors, *self.console]

    def forget_refusals(self) -> None:
        """Take out what Chromium says of an answer 4xx that the test wanted."""
        said = "Failed to load resource: the server responded with a status of 4"
        self.console = [text for text in self.console if not text.startswith(said)]


def new_context(browser: Any, home: str, **options: Any) -> Any:
    """Make a browser of its own, with nothing in its storage and its cache."""
    context = browser.new_context(base_url=home, **options)
    # told on the console, so that a violation without a visible effect fails too
    context.add_init_script(
        "document.addEventListener('securitypolicyviolation', (e) => console.error("
        "'Content Security Policy: ' + e.violatedDirective + ' ' + e.blockedURI));"
    )
    return context


def watched_page(context: Any, home: str) -> Any:
    """Open a page; `page.watch` tells what went wrong in it."""
    page = context.new_page()
    page.watch = Watch()
    page.watch.on(page, home)
    return page


@pytest.fixture
def new_page(browser: Any, live: LiveServer) -> Iterator[Callable[..., Any]]:
    """Open watched pages, each in a browser of its own."""
    pages: list[Any] = []

    def opened(**options: Any) -> Any:
        pages.append(watched_page(new_context(browser, live.url, **options), live.url))
        return pages[-1]

    yield opened
    for page in pages:
        page.context.close()
    assert [page.watch for page in pages if page.watch.bad] == []


@pytest.fixture
def page(new_page: Callable[..., Any]) -> Any:
    """Open a page of 1440 by 900."""
    return new_page(viewport={"width": 1440, "height": 900})
