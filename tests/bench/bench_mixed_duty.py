"""Whole duty studies of forty scenarios, three supply states, six slots of unlike pumps."""

import copy
from time import process_time
from typing import Any

from server.station.station import Station
from server.studies.duty import duty
from server.studies.duty_result import DutyResult
from server.studies.limits import limits_of
from tests.bench.registry import Measurement, bench
from tests.studies.demo import SET, document
from tests.studies.tank_demo import SET as TANK_SET
from tests.studies.tank_demo import tank_document

SCENARIOS, REPEATS = 40, 15
BUDGET = 60.0  # processor time of one study, closed zone [ms]
TANK_BUDGET = 120.0  # towards a tank every stage of every scenario is a case of its own [ms]


def _mixed(tree: dict[str, Any], *, flow: float, head: float, jockeys: int) -> Station:
    """Return a station with three pumps of its own, the rest of another, and its jockeys."""
    scenarios, given = [], tree["scenarios"]
    for i in range(SCENARIOS):
        one = copy.deepcopy(given[i % len(given)])
        scenarios.append({**one, "id": f"sc-b{i:05d}", "out": "none"})
    tree["scenarios"] = scenarios
    other = copy.deepcopy(tree["pumps"][0])
    other["id"], other["curves"][0]["id"] = "pu-b0ther", "cu-b0ther"
    for row in other["curves"][0]["table"]["rows"]:
        row[0], row[1] = row[0] * flow, row[1] * head
    tree["pumps"].append(other)
    slots = tree["sets"][0]["slots"]
    main = next(slot for slot in slots if slot["role"] == "duty")
    small = [slot for slot in slots if slot["role"] == "jockey"][:jockeys]
    made = []
    for i in range(6 - len(small)):
        slot = {**copy.deepcopy(main), "id": f"sl-b{i:05d}", "title": f"B{i + 1}"}
        if i >= 3:
            slot["pump"], slot["curve"] = "pu-b0ther", "cu-b0ther"
        made.append(slot)
    tree["sets"][0]["slots"] = [*made, *small]
    return Station.model_validate(tree, strict=False)


def _spent(station: Station, pump_set: str) -> tuple[list[float], DutyResult]:
    limits, spent = limits_of(station), []
    for _ in range(REPEATS):
        start = process_time()
        result = duty(station, pump_set, limits)
        spent.append(1e3 * (process_time() - start))
    assert isinstance(result, DutyResult), result
    return sorted(spent), result


@bench("duty of mixed sets")
def duty_of_mixed_sets() -> list[Measurement]:
    """Measure processor time of whole studies, made cases and firm capacity included."""
    tank = tank_document()
    tank["sets"][0]["control"] = {"kind": "fixed_speed", "running_rule": "fewest_units"}
    told = []
    for name, station, pump_set, budget in (
        ("closed zone", _mixed(document(), flow=1.15, head=1.03, jockeys=1), SET, BUDGET),
        ("towards a tank", _mixed(tank, flow=0.6, head=0.97, jockeys=0), TANK_SET, TANK_BUDGET),
    ):
        spent, result = _spent(station, pump_set)
        cases, mixtures = result.state.shape
        told.append(
            Measurement(
                name=f"duty study of forty scenarios, mixed set, {name}",
                value=spent[REPEATS // 2],
                unit="ms",
                budget=budget,
                note=f"{cases} cases, {mixtures} mixtures, least {spent[0]:.1f} ms",
            )
        )
    return told
