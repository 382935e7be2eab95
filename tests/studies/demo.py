"""The demo station of the closed zone, and copies of it with a field changed."""

import copy
import json
from functools import lru_cache
from pathlib import Path
from typing import Any

from server.station.station import Station
from server.studies.duty import duty
from server.studies.duty_result import DutyResult, NotSolved
from server.studies.limits import limits_of

DEMO = Path(__file__).parents[2] / "seed_demo" / "closed_zone.json"
SET = "st-v3a7pe"
SLOTS = ("P1", "P2", "P3", "P4", "J")


@lru_cache(maxsize=1)
def _document() -> dict[str, Any]:
    return json.loads(DEMO.read_text(encoding="utf-8"))


def document() -> dict[str, Any]:
    """Return the demo as JSON, to be changed freely."""
    return copy.deepcopy(_document())


def put(tree: Any, path: str, value: Any) -> None:
    """Set a field by its path; list items are named by id. None takes the field away."""
    *way, last = path.strip("/").split("/")
    for step in way:
        tree = _item(tree, step) if isinstance(tree, list) else tree.setdefault(step, {})
    if isinstance(tree, list):
        tree.remove(_item(tree, last))
    elif value is None:
        tree.pop(last, None)
    else:
        tree[last] = value


def _item(items: list[Any], name: str) -> Any:
    return next(item for item in items if item["id"] == name)


def station_with(**fields: Any) -> Station:
    """Return the demo with fields changed: station_with(**{"/site/altitude": None})."""
    tree = document()
    for path, value in fields.items():
        put(tree, path, value)
    return Station.model_validate_json(json.dumps(tree))


def solve(station: Station) -> DutyResult | NotSolved:
    """Return the duty of the demo's set in a station."""
    return duty(station, SET, limits_of(station))


def solved(station: Station) -> DutyResult:
    """Return the duty, which must be had."""
    result = solve(station)
    assert isinstance(result, DutyResult), result
    return result


@lru_cache(maxsize=1)
def demo_result() -> DutyResult:
    """Return the duty of the demo as it is."""
    return solved(station_with())


def quantity(value: float, unit: str) -> dict[str, Any]:
    """Return an entered quantity."""
    return {"value": value, "unit": unit}


def case_index(result: DutyResult, scenario: str, supply: str) -> int:
    """Return the index of a scenario's case at a supply state."""
    return next(
        i
        for i, case in enumerate(result.cases)
        if case.scenario == scenario and case.supply == supply
    )
