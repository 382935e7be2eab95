"""Kinds of supply, pipe, point, pump and control that a duty is solved for.

Sources: hand calculation by the laws named beside each; no published figures.
"""

import copy
import json
from typing import Any

import numpy as np
import pytest

from server.hydraulics.states import State
from server.station.station import Station
from server.studies.duty_result import DutyResult, NotSolved
from tests.studies.demo import (
    SET,
    case_index,
    demo_result,
    document,
    put,
    quantity,
    solve,
    solved,
    station_with,
)


def of(tree: dict[str, Any]) -> DutyResult:
    return solved(Station.model_validate_json(json.dumps(tree)))


def with_slots(*slots: dict[str, Any]) -> dict[str, Any]:
    tree = document()
    tree["sets"][0]["slots"] = list(slots)
    return tree


def slot(name: str) -> dict[str, Any]:
    return next(copy.deepcopy(s) for s in document()["sets"][0]["slots"] if s["title"] == name)


def chosen(result: DutyResult, values: np.ndarray) -> np.ndarray:
    return values[np.arange(len(result.cases)), result.chosen]


def test_holding_the_discharge_gauge_at_the_pressure_it_had_gives_the_same_state() -> None:
    result = demo_result()
    c = case_index(result, "sc-p2kh2h", "normal")
    gauge = float(result.discharge_pressure[c, result.chosen[c]])
    other = solved(
        station_with(
            **{
                f"/sets/{SET}/control/kind": "discharge_pressure",
                f"/sets/{SET}/control/point": None,
                f"/sets/{SET}/control/pressure": quantity(gauge, "Pa"),
            }
        )
    )
    assert other.held_point is None
    assert other.held_pressure[c, other.chosen[c]] == pytest.approx(gauge)
    assert other.speed[c, other.chosen[c], 0] == pytest.approx(
        result.speed[c, result.chosen[c], 0], rel=1e-9
    )


def test_a_grade_line_at_the_mains_grade_gives_the_same_state() -> None:
    result = demo_result()
    c = case_index(result, "sc-a2vg5f", "normal")
    tree = document()
    put(tree, "/supply/kind", "grade_line")
    level = float(result.supply_grade[c])
    tree["supply"]["grade_line"] = {
        "low": quantity(level - 2, "m"),
        "normal": quantity(level, "m"),
        "high": quantity(level + 3, "m"),
    }
    other = of(tree)
    assert other.station_head[c, other.chosen[c]] == pytest.approx(
        result.station_head[c, result.chosen[c]], rel=1e-9
    )
    low = case_index(other, "sc-a2vg5f", "low")
    assert other.supply_grade[low] == pytest.approx(level - 2)
    assert other.supply_grade[low + 2] == pytest.approx(level + 3)


def test_without_friction_the_static_head_alone_is_asked() -> None:
    tree = document()
    for line in ("suction_line", "discharge_main"):
        for reach in tree[line]["reaches"]:
            reach["length"], reach["k"] = quantity(0, "m"), 0
    for point in tree["zone"]["points"]:
        point["loss"]["loss"] = quantity(0, "m")
    result = of(tree)
    weight = result.density * 9.80665
    static = 156.0 + 250e3 / weight - result.supply_grade
    assert result.required_head == pytest.approx(static, rel=1e-12)


def test_the_hazen_williams_law_is_used_where_it_is_entered() -> None:
    tree = document()
    for line in ("suction_line", "discharge_main"):
        for reach in tree[line]["reaches"]:
            reach["roughness"] = {
                "law": "hazen_williams",
                "coefficient_new": 140,
                "coefficient_aged": 110,
            }
    result = of(tree)
    c = case_index(result, "sc-p2kh2h", "low")
    # V = 0.849 C R^0.63 S^0.54 for reach 1, plus K V^2/2g, by hand
    area, radius = np.pi / 4 * 0.3**2, 0.3 / 4
    speed = 0.036 / area
    slope = (speed / (1.318 * 0.3048**0.37 * 110 * radius**0.63)) ** (1 / 0.54)
    first = 820 * slope + 6 * speed**2 / (2 * 9.80665)
    area = np.pi / 4 * 0.246**2
    speed = 0.036 / area
    slope = (speed / (1.318 * 0.3048**0.37 * 110 * (0.246 / 4) ** 0.63)) ** (1 / 0.54)
    second = 330 * slope + 4 * speed**2 / (2 * 9.80665)
    k = result.chosen[c]
    lost = result.discharge_grade[c, k] - result.zone_entry_grade[c, k]
    assert lost == pytest.approx(first + second, rel=1e-9)


def test_laws_may_differ_from_reach_to_reach() -> None:
    tree = document()
    put(
        tree,
        "/discharge_main/reaches/rc-d2g7pz/roughness",
        {"law": "hazen_williams", "coefficient_aged": 150},
    )
    result = of(tree)
    assert result.needs_missing == ()
    assert result.main_velocity.shape == (30, 2)
    assert result.suction_line_velocity.shape == (30, 1)


def test_new_pipes_lose_less_than_aged_ones() -> None:
    new = solved(station_with(**{"/scenarios/sc-p2kh2h/pipes": "new"}))
    aged = demo_result()
    c = case_index(new, "sc-p2kh2h", "low")
    assert new.required_head[c] < aged.required_head[c] - 0.1
    other = case_index(new, "sc-p1kh2e", "low")
    assert new.required_head[other] == aged.required_head[other]


def test_a_hydrant_branch_loses_at_the_fire_flow_only() -> None:
    branch = {"loss": quantity(2, "m"), "at_flow": quantity(20, "L/s")}
    result, plain = (
        solved(station_with(**{"/zone/points/pt-h7f2cs/branch": branch})),
        demo_result(),
    )
    weight = plain.density * 9.80665
    fire = case_index(result, "sc-f2re9k", "low")
    peak = case_index(result, "sc-p2kh2h", "low")
    k = result.chosen[fire]
    lost = (plain.point_pressure - result.point_pressure)[fire, k] / weight
    assert lost == pytest.approx([0, 2 * 2**1.852, 0], abs=1e-9)
    assert np.array_equal(
        plain.point_pressure[peak], result.point_pressure[peak], equal_nan=True
    )


def test_share_of_the_fire_flow_on_a_path_lessens_its_loss() -> None:
    result = solved(station_with(**{"/zone/points/pt-t3r8nw/fire_share": 0.25}))
    fire = case_index(result, "sc-f2re9k", "low")
    k = result.chosen[fire]
    lost = result.zone_entry_grade[fire, k] - result.point_grade[fire, k, 0]
    assert lost == pytest.approx(3.5 * ((20 + 0.25 * 40) / 40) ** 1.852)


def test_unlike_pumps_at_one_speed_share_by_their_curves() -> None:
    small = slot("J") | {"role": "duty"}
    tree = with_slots(slot("P1"), small)
    put(tree, f"/sets/{SET}/control/pressure", quantity(150, "kPa"))
    put(tree, "/scenarios/sc-p1kh2e/out", "none")
    result = of(tree)
    assert result.combinations.tolist() == [[True, False], [False, True], [True, True]]
    both = result.combinations.all(axis=1).nonzero()[0][0]
    running = result.state[:, both] == State.SOLVED
    assert running.any()
    assert np.all(result.energy_residual[running, both] < 1e-9)
    assert result.leg_flow[running, both].sum(axis=1) == pytest.approx(result.demand[running])
    assert np.all(result.speed[running, both, 0] == result.speed[running, both, 1])


def test_a_pump_held_shut_by_the_other_is_never_chosen() -> None:
    tree = with_slots(slot("P1"), slot("P2"), slot("J") | {"role": "duty"})
    result = of(tree)
    shut = (result.state == State.HELD_SHUT) & result.available
    assert shut.any()
    assert not chosen(result, shut).any()
    at = np.argwhere(shut)[0]
    flow = result.leg_flow[at[0], at[1]]
    assert flow[2] == 0
    assert np.isnan(result.shaft_power[at[0], at[1], 2])


def test_no_demand_leaves_the_pump_at_its_zero_flow_speed() -> None:
    result = solved(station_with(**{"/scenarios/sc-n1gh7a/demand": "none"}))
    c = case_index(result, "sc-n1gh7a", "low")
    k = result.chosen[c]
    assert result.state[c, k] == State.SOLVED
    on = result.combinations[k]
    assert result.speed[c, k, on] == pytest.approx(result.zero_flow_speed[c, k])
    assert result.held_pressure[c, k] == pytest.approx(250e3)
    assert np.all(result.leg_flow[c, k] == 0)


def test_supply_above_the_zone_drives_the_speed_to_its_lowest() -> None:
    result = solved(station_with(**{f"/sets/{SET}/control/pressure": quantity(1, "kPa"),
                                    "/supply/states/high": quantity(400, "kPa")}))  # fmt: skip
    c = case_index(result, "sc-n1gh7a", "high")
    k = result.chosen[c]
    assert result.state[c, k] == State.LOW_SPEED
    assert np.nanmax(result.speed[c, k]) == 0.55
    assert result.held_pressure[c, k] > 1e3
    assert result.choice_class[c] == 3


def test_a_cracking_head_that_a_pump_cannot_lift_holds_it_shut() -> None:
    result = solved(
        station_with(**{"/legs/lg-j9c3ht/discharge_branch/cracking_head": quantity(3, "m")})
    )
    c = case_index(result, "sc-n1gh7a", "low")
    jockey = int(np.flatnonzero(result.combinations[:, 4])[0])
    assert result.state[c, jockey] == State.HELD_SHUT
    assert result.chosen[c] != jockey


def test_a_years_own_low_state_counts_for_its_scenarios_only() -> None:
    result = solved(station_with(**{"/horizons/hz-d8gn4k/low_state": quantity(-70, "kPa")}))
    plain = demo_result()
    opening, design = (
        case_index(plain, "sc-p1kh2e", "low"),
        case_index(plain, "sc-p2kh2h", "low"),
    )
    assert result.connection_pressure[opening] == plain.connection_pressure[opening]
    assert result.connection_pressure[design] == pytest.approx(
        plain.connection_pressure[design] - 30e3
    )
    firm = {(f.requirement, f.horizon): f.by_all for f in result.made.firm_capacity}
    assert firm["maximum_day_fire", "hz-d8gn4k"] < firm["maximum_day_fire", "hz-0pn8ra"]


def test_what_the_station_drew_in_the_test_is_not_counted_twice() -> None:
    result = solved(
        station_with(**{"/supply/flow_tests/ft-a5t2rv/station_draw": quantity(5, "L/s")})
    )
    c = case_index(result, "sc-p2kh2h", "normal")
    drop = 90e3 * (31 / 40) ** (1 / 0.54)
    assert result.connection_pressure[c] == pytest.approx(350e3 - drop)


def test_a_humped_pump_is_not_started_into_a_head_above_its_shut_off() -> None:
    tree = document()
    table = tree["pumps"][0]["curves"][0]["table"]
    table["rows"][0][1] = 80.0
    result = of(tree)
    c = case_index(result, "sc-n1gh7a", "low")
    one = int(np.flatnonzero(result.combinations[:, 0])[0])
    # 2.2 L/s stands left of the peak: head over speed squared is above the shut-off head
    assert result.state[c, one] == State.HELD_SHUT
    peak = case_index(result, "sc-a2vg5f", "low")
    assert result.state[peak, one] == State.SOLVED


def test_the_stamp_follows_what_the_study_reads_and_nothing_else() -> None:
    plain = demo_result().stamp
    titled = solved(station_with(**{"/identity/title": "Another"})).stamp
    warmer = solved(station_with(**{"/site/altitude": quantity(111, "m")})).stamp
    assert (plain.study, plain.study_version) == ("duty", 1)
    assert titled.inputs == plain.inputs != warmer.inputs


def test_a_solve_that_misses_its_tolerance_states_nothing_and_says_so(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    from server.hydraulics.errors import SolutionNotFound
    from server.studies import duty as study

    def missed(*_: object) -> None:
        raise SolutionNotFound("legs in parallel", 1, 1e-3)

    monkeypatch.setattr(study, "duty_of", missed)
    result = solve(station_with())
    assert isinstance(result, NotSolved)
    assert [missing.reason for missing in result.missing] == ["no_solution_found"]
