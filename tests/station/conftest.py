"""The demo station of a closed zone, as read from its file."""

from pathlib import Path

import pytest

from server.station.reader import read_station
from server.station.station import Station

DEMO = Path(__file__).parents[2] / "seed_demo" / "closed_zone.json"


@pytest.fixture(scope="session")
def demo() -> Station:
    return read_station(DEMO.read_bytes())
