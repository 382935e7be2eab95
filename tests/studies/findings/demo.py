"""The demo station of a closed zone, and edits on it, for the tests of findings."""

from collections.abc import Callable
from functools import cache
from pathlib import Path

from server.station import paths
from server.station.reader import read_station
from server.station.station import Station
from server.studies.assess import Assessment, assess
from server.studies.shapes import Finding

FILE = Path(__file__).parents[3] / "seed_demo" / "closed_zone.json"
SET = "/sets/st-v3a7pe"
MAIN, JOCKEY = "/pumps/pu-m5x8qd", "/pumps/pu-j3y6re"
MAIN_TABLE = f"{MAIN}/curves/cu-m1a2bc/table"
JOCKEY_TABLE = f"{JOCKEY}/curves/cu-j4d5ef/table"
TOP, HYDRANT, GATE = (f"/zone/points/pt-{p}" for p in ("t3r8nw", "h7f2cs", "g4h9ka"))
OPENING, DESIGN = "/horizons/hz-0pn8ra", "/horizons/hz-d8gn4k"
TEST_A, TEST_B = "/supply/flow_tests/ft-a5t2rv", "/supply/flow_tests/ft-b8w4kx"
LOW = "/supply/states/low"
Step = Callable[[Station], Station]


@cache
def demo() -> Station:
    """Return the demo as it is delivered."""
    return read_station(FILE.read_bytes())


def q(value: float, unit: str) -> dict[str, object]:
    """Return a quantity as an edit carries it."""
    return {"value": value, "unit": unit}


def put(path: str, value: object) -> Step:
    """Return the edit that sets one field; None clears it."""
    return lambda station: paths.put(station, path, value)  # type: ignore[arg-type]


def remove(*items: str) -> Step:
    """Return the edit that removes items."""

    def step(station: Station) -> Station:
        for item in items:
            station = paths.remove(station, item)
        return station

    return step


def insert(list_path: str, item: dict[str, object]) -> Step:
    """Return the edit that adds an item to a list."""
    return lambda station: paths.insert(station, list_path, item)  # type: ignore[arg-type]


def edited(*steps: Step) -> Station:
    """Return the demo after some edits."""
    station = demo()
    for step in steps:
        station = step(station)
    return station


def found(station: Station, code: str) -> list[Finding]:
    """Return the findings of a code."""
    return [finding for finding in assessed(station).findings if finding.code == code]


def assessed(station: Station) -> Assessment:
    """Return the assessment of a station."""
    return assess(station)


def table(
    of: str, *, flow: float = 1.0, head: float = 1.0, steep: float = 1.0
) -> dict[str, object]:
    """Return a curve of the demo with flows, heads or its fall about the sixth row scaled."""
    given = paths.get_json(demo(), of)
    rows = [list(row) for row in given["rows"]]  # type: ignore[index, call-overload, union-attr, arg-type]
    pivot = float(rows[5][1])  # type: ignore[arg-type]
    for row in rows:
        row[0] = float(row[0]) * flow  # type: ignore[arg-type]
        row[1] = (pivot + (float(row[1]) - pivot) * steep) * head  # type: ignore[arg-type]
    return {**given, "rows": rows}  # type: ignore[dict-item]


def rows_of(
    of: str, change: Callable[[list[list[float | None]]], list[list[float | None]]]
) -> dict[str, object]:
    """Return a curve of the demo with its rows changed."""
    given = paths.get_json(demo(), of)
    return {**given, "rows": change([list(row) for row in given["rows"]])}  # type: ignore
