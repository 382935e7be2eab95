"""The demo station that fills a tank, and copies of it with fields changed."""

import copy
import json
from functools import lru_cache
from pathlib import Path
from typing import Any

import numpy as np

from server.station.station import Station
from server.studies.duty import duty
from server.studies.duty_result import DutyResult, NotSolved
from server.studies.limits import limits_of
from tests.studies.demo import put

DEMO = Path(__file__).parents[2] / "seed_demo" / "tank_filling.json"
SET = "st-w5g2ld"
BASE = f"/sets/{SET}"
T1, T2, T3 = (f"{BASE}/slots/sl-{name}" for name in ("t1c7pn", "t2f9qx", "t3m4vd"))
PUMP, CURVE = "/pumps/pu-t6h4zs", "/pumps/pu-t6h4zs/curves/cu-t2x8mk"
HARDEST, NORMAL, EASIEST = "sc-m2yd3r", "sc-a2tw9f", "sc-e1fz6n"
THIRD_STAGE = {
    "id": "ls-c3t5wb",
    "start": {"value": 180.7, "unit": "m"},
    "stop": {"value": 181.9, "unit": "m"},
}


@lru_cache(maxsize=1)
def _document() -> dict[str, Any]:
    return json.loads(DEMO.read_text(encoding="utf-8"))


def tank_document() -> dict[str, Any]:
    """Return the demo as JSON, to be changed freely."""
    return copy.deepcopy(_document())


def tank_station(**fields: Any) -> Station:
    """Return the demo with fields changed."""
    tree = tank_document()
    for path, value in fields.items():
        put(tree, path, value)
    return Station.model_validate_json(json.dumps(tree))


def three_stages(**fields: Any) -> Station:
    """Return the demo with the standby as a third pump of its own stage."""
    stages = [*_document()["sets"][0]["control"]["stages"], THIRD_STAGE]
    changed = {f"{T3}/role": "duty", f"{BASE}/control/stages": stages, **fields}
    return tank_station(**changed)


def solve(station: Station) -> DutyResult | NotSolved:
    """Return the duty of the demo's set in a station."""
    return duty(station, SET, limits_of(station))


def solved(station: Station) -> DutyResult:
    """Return the duty, which must be had."""
    result = solve(station)
    assert isinstance(result, DutyResult), result
    return result


@lru_cache(maxsize=1)
def tank_result() -> DutyResult:
    """Return the duty of the demo as it is."""
    return solved(tank_station())


@lru_cache(maxsize=1)
def three_stage_result() -> DutyResult:
    """Return the duty with three stages."""
    return solved(three_stages())


def place(result: DutyResult, scenario: str, supply: str, units: int) -> tuple[int, int]:
    """Return the case in which some number of units runs, and its combination."""
    for c, case in enumerate(result.cases):
        if (case.scenario, case.supply, case.units) == (scenario, supply, units):
            return c, int(result.chosen[c])
    raise AssertionError(f"no case of {units} units in {scenario}, {supply} supply")


def first_running(result: DutyResult, k: int) -> int:
    """Return the first slot that runs in a combination."""
    return int(np.flatnonzero(result.combinations[k])[0])
