"""What the tests of pages share: a way to read a page and to send its forms."""

from collections.abc import Callable
from typing import Any

import pytest
from fastapi.testclient import TestClient

from server.station.reader import read_station
from server.station.station import Station
from tests.pages.page_reader import ReadPage

Open = Callable[..., ReadPage]


@pytest.fixture
def opened(client: TestClient, demo_id: str) -> Open:
    """Open a sheet of the demo station and read it."""

    def open_sheet(sheet: str, station: str = demo_id, **query: str) -> ReadPage:
        answer = client.get(f"/stations/{station}/{sheet}", params=query)
        assert answer.status_code == 200, answer.text[:2000]
        return ReadPage(answer.text)

    return open_sheet


@pytest.fixture
def send(client: TestClient, demo_id: str) -> Callable[..., Any]:
    """Send one edit of the demo station, as htmx does or as a plain form does."""

    def sent(
        path: str, text: str = "", *, sheet: str = "supply", htmx: bool = True,
        station: str = demo_id, **more: Any,
    ) -> Any:  # fmt: skip
        address = f"http://127.0.0.1/stations/{station}/{sheet}"
        names = (
            {"HX-Request": "true", "HX-Current-URL": address} if htmx else {"Referer": address}
        )
        return client.post(
            f"/stations/{station}/edits",
            data={"path": path, "text": text, **more},
            headers=names,
        )

    return sent


@pytest.fixture
def now(client: TestClient, demo_id: str) -> Callable[..., Station]:
    """Return the document as stored."""

    def document(station: str = demo_id) -> Station:
        return read_station(client.get(f"/stations/{station}/file").content)

    return document
