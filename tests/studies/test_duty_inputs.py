"""What is absent is named by its path; what it does not touch is computed all the same."""

import json
from typing import Any

import numpy as np
import pytest

from server.hydraulics.states import State
from server.station.station import Station
from server.studies.duty import duty
from server.studies.duty_result import DutyResult, Missing, NotSolved
from server.studies.limits import limits_of
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

LEG, PUMP, CURVE = "/legs/lg-m2n6wd", "/pumps/pu-m5x8qd", "/pumps/pu-m5x8qd/curves/cu-m1a2bc"
TEST = "/supply/flow_tests/ft-a5t2rv"
SLOT = f"/sets/{SET}/slots/sl-p1d4fg"
CONTROL = f"/sets/{SET}/control"
HELD = "/zone/points/pt-t3r8nw"
STOPS = [
    "/supply/kind",
    f"{TEST}/gauge_level",
    f"{TEST}/static_pressure",
    f"{TEST}/residual_pressure",
    f"{TEST}/test_flow",
    "/suction_line/reaches/rc-s7n3de/length",
    "/suction_line/reaches/rc-s7n3de/bore",
    "/suction_line/reaches/rc-s7n3de/k",
    "/suction_line/reaches/rc-s7n3de/roughness/aged",
    "/discharge_main/reaches/rc-d1f5my/length",
    "/discharge_main/reaches/rc-d2g7pz/bore",
    "/discharge_main/reaches/rc-d2g7pz/roughness/aged",
    f"{LEG}/suction_branch/bore",
    f"{LEG}/suction_branch/k",
    f"{LEG}/discharge_branch/bore",
    f"{LEG}/discharge_branch/k",
    "/zone/kind",
    f"{HELD}/elevation",
    f"{HELD}/loss/loss",
    f"{HELD}/loss/at_flow",
    f"{PUMP}/speed",
    f"{SLOT}/pump",
    f"{SLOT}/leg",
    f"{CONTROL}/kind",
    f"{CONTROL}/pressure",
    f"{CONTROL}/point",
]
LISTS = [
    "/supply/flow_tests",
    "/suction_line/reaches",
    "/discharge_main/reaches",
    "/zone/points",
    "/scenarios",
    f"/sets/{SET}/slots",
    f"{PUMP}/curves",
]
PARTS = [
    "/site/altitude",
    "/site/eye_level",
    "/site/suction_gauge_level",
    "/site/discharge_gauge_level",
    "/supply/connection_level",
    "/supply/states/low",
    "/supply/states/normal",
    "/supply/states/high",
    "/zone/points/pt-g4h9ka/elevation",
    "/zone/points/pt-h7f2cs/loss/loss",
    "/horizons/hz-0pn8ra/demand/minimum_night",
    "/horizons/hz-d8gn4k/demand/peak_hour",
    "/horizons/hz-d8gn4k/year",
    "/scenarios/sc-n1gh7a/horizon",
    "/scenarios/sc-n1gh7a/demand",
    "/fires/fr-f6c1rs/flow",
    "/fires/fr-f6c1rs/point",
    f"{PUMP}/motor_efficiency",
    f"{PUMP}/allowable_region/low",
    f"{PUMP}/allowable_region/high",
]
NOT_YET = [(f"{CONTROL}/running_rule", "least_power")]


def absent(result: DutyResult) -> dict[str, str]:
    return dict(result.needs_missing)


@pytest.mark.parametrize("path", STOPS)
def test_an_absent_input_that_stops_the_study_is_named(path: str) -> None:
    result = solve(station_with(**{path: None}))
    assert isinstance(result, NotSolved)
    assert Missing(path, "absent") in result.missing
    # and nothing is blamed that is there
    assert len(result.missing) == 1


@pytest.mark.parametrize("path", LISTS)
def test_an_empty_list_that_stops_the_study_is_named(path: str) -> None:
    result = solve(station_with(**{path: []}))
    assert isinstance(result, NotSolved)
    assert Missing(path, "absent") in result.missing


@pytest.mark.parametrize("path", PARTS)
def test_an_absent_input_that_touches_a_part_is_named_and_the_rest_is_had(path: str) -> None:
    result = solved(station_with(**{path: None}))
    assert absent(result) == {path: "absent"}
    c = case_index(result, "sc-a2vg5f", "high") if path != "/supply/states/high" else 0
    k = result.chosen[c]
    assert k >= 0
    assert result.state[c, k] == State.SOLVED


@pytest.mark.parametrize(("path", "value"), NOT_YET)
def test_a_kind_that_is_not_computed_yet_is_named_and_not_faked(path: str, value: str) -> None:
    result = solve(station_with(**{path: value}))
    assert isinstance(result, NotSolved)
    assert Missing(path, "not_in_this_version") in result.missing


def test_an_empty_station_names_all_that_it_lacks() -> None:
    tree = {"sets": [{"id": SET, "slots": [{"id": "sl-aaaaaa"}]}]}
    result = solve(Station.model_validate_json(json.dumps(tree)))
    assert isinstance(result, NotSolved)
    paths = {one.path for one in result.missing}
    assert paths >= {
        "/supply/kind",
        "/zone/kind",
        "/zone/points",
        "/scenarios",
        "/suction_line/reaches",
        "/discharge_main/reaches",
        f"/sets/{SET}/slots/sl-aaaaaa/pump",
        f"/sets/{SET}/slots/sl-aaaaaa/leg",
        f"{CONTROL}/kind",
    }


def test_a_set_that_is_not_there_is_an_error_of_the_caller() -> None:
    station = station_with()
    with pytest.raises(KeyError):
        duty(station, "st-none00", limits_of(station))


@pytest.mark.parametrize(
    ("path", "value", "field", "reason"),
    [
        (
            f"{TEST}/residual_pressure",
            quantity(360, "kPa"),
            f"{TEST}/residual_pressure",
            "residual_not_below_static",
        ),
        (
            f"{CURVE}/table",
            {"units": {"flow": "L/s", "head": "m"}, "rows": [[0, 50], [5, 45], [5, 40]]},
            f"{CURVE}/table",
            "flows_equal",
        ),
        (
            f"{CURVE}/best_efficiency_flow",
            quantity(40, "L/s"),
            f"{CURVE}/best_efficiency_flow",
            "bep_outside_rows",
        ),
        (
            "/discharge_main/reaches/rc-d2g7pz/roughness/aged",
            quantity(19, "mm"),
            "/discharge_main/reaches/rc-d2g7pz/roughness/aged",
            "outside_friction_law",
        ),
        (
            f"{CONTROL}/lowest_speed",
            quantity(110, "%"),
            f"{CONTROL}/lowest_speed",
            "lowest_speed_above_highest",
        ),
    ],
)
def test_what_the_physics_refuses_is_named_at_its_field(
    path: str, value: Any, field: str, reason: str
) -> None:
    result = solve(station_with(**{path: value}))
    assert isinstance(result, NotSolved)
    assert result.missing == (Missing(field, reason),)


@pytest.mark.parametrize(
    ("column", "reason"),
    [("npsh_required", "no_npsh_rows"), ("efficiency", "best_efficiency_unknown")],
)
def test_a_column_that_the_rows_lack_is_said_and_its_figures_stay_out(
    column: str, reason: str
) -> None:
    tree = document()
    table = tree["pumps"][0]["curves"][0]["table"]
    names = list(table["units"])
    at = names.index(column)
    del table["units"][column]
    table["rows"] = [row[:at] + row[at + 1 :] for row in table["rows"]]
    result = solved(Station.model_validate_json(json.dumps(tree)))
    assert (f"{CURVE}/table", reason) in result.needs_missing
    c = case_index(result, "sc-a2vg5f", "low")
    k = result.chosen[c]
    plain = demo_result()
    assert result.station_head[c, k] == pytest.approx(39.6, abs=0.05)
    if column == "npsh_required":
        assert np.isnan(result.npsh_required[c, k, 0])
        assert result.npsh_available[c, k, 0] == plain.npsh_available[c, plain.chosen[c], 0]
        assert all("npsh" in firm.not_counted for firm in result.made.firm_capacity)
    else:
        assert np.isnan(result.best_efficiency_share[c, k, 0])
        assert np.isnan(result.shaft_power[c, k, 0])
        assert result.choice_class[c] == 2


def test_an_empty_temperature_takes_its_default_and_says_so() -> None:
    result = solved(station_with(**{"/site/water_temperature/normal": None}))
    assert absent(result) == {"/site/water_temperature/normal": "default_used"}
    assert result.density == pytest.approx(999.7, abs=0.05)


def test_a_state_that_is_not_stated_is_not_available_and_the_choice_does_without() -> None:
    result, plain = solved(station_with(**{"/supply/states/low": None})), demo_result()
    low = np.array([case.supply == "low" for case in result.cases])
    assert np.all(result.state[low] == State.NOT_AVAILABLE)
    assert np.all(np.isnan(result.point_pressure[low]))
    assert np.array_equal(result.chosen, plain.chosen)
    assert result.made.firm_capacity == ()


def test_a_fire_that_storage_carries_is_left_out_and_said() -> None:
    result = solved(station_with(**{"/fires/fr-f6c1rs/carried_by": "storage"}))
    assert absent(result) == {"/fires/fr-f6c1rs/carried_by": "not_in_this_version"}
    assert not result.is_fire.any()
    assert len(result.cases) == 24


def test_without_aged_walls_new_pipes_are_solved_and_firm_capacity_is_not_had() -> None:
    tree = document()
    for scenario in tree["scenarios"]:
        scenario["pipes"] = "new"
    put(tree, "/discharge_main/reaches/rc-d1f5my/roughness/aged", None)
    result = solved(Station.model_validate_json(json.dumps(tree)))
    assert absent(result) == {"/discharge_main/reaches/rc-d1f5my/roughness/aged": "absent"}
    assert result.made.firm_capacity == ()
    assert (result.choice_class < 4).all()


def test_a_scenario_that_is_left_out_of_use_is_not_solved() -> None:
    result = solved(station_with(**{"/scenarios/sc-n1gh7a/on": False}))
    assert "sc-n1gh7a" not in {case.scenario for case in result.cases}
    assert len(result.cases) == 27
