"""The demo station of the closed zone is reproduced, cell by cell.

Sources: `closed_zone_expected.csv` is the table of expected results of the demo's page,
"computed" there by an independent scalar calculator. A cell is met within 0.5 % (per cent of
best-efficiency flow within 1 point), its own printed rounding on top; `scalar_calculator.py`, a
calculator of the same kind written again here, gives the figures unrounded and is met within
0.5 % without allowance.
"""

import csv
from pathlib import Path

import numpy as np
import pytest

from server.hydraulics.states import State
from server.studies.duty_result import DutyResult
from tests.studies.demo import SLOTS, case_index, demo_result
from tests.studies.scalar_calculator import JOCKEY, MAIN, state

TABLE = Path(__file__).parent / "closed_zone_expected.csv"
ROWS = list(csv.DictReader(TABLE.read_text(encoding="utf-8").splitlines()))
SUPPLIES = ("low", "normal", "high")
COLUMNS = ("speed", "head", "share", "power", "suction", "critical", "lowest")
CELLS = [(row, supply) for row in ROWS for supply in SUPPLIES]
NAMES = [f"{row['scenario']}-{supply}" for row, supply in CELLS]


def figures(result: DutyResult, scenario: str, supply: str) -> dict[str, float]:
    """Return a case as the table prints it."""
    c = case_index(result, scenario, supply)
    k = result.chosen[c]
    on = result.combinations[k]
    critical, _, lowest = result.point_pressure[c, k] / 1e3
    return {
        "speed": float(result.speed[c, k, on].max()),
        "head": float(result.station_head[c, k]),
        "share": float(result.best_efficiency_share[c, k, on].max() * 100),
        "power": float(result.shaft_power[c, k, on].sum() / 1e3),
        "suction": float(result.suction_pressure[c] / 1e3),
        "critical": float(critical),
        "lowest": float(lowest),
    }


def half_a_digit(cell: str) -> float:
    return 0.5 * 10.0 ** -len(cell.partition(".")[2])


@pytest.mark.parametrize(("row", "supply"), CELLS, ids=NAMES)
def test_every_cell_of_the_table_is_met(row: dict[str, str], supply: str) -> None:
    found = figures(demo_result(), row["scenario"], supply)
    for column in COLUMNS:
        cell = row[f"{column}_{supply}"]
        allowed = 1.0 if column == "share" else 0.005 * float(cell) + half_a_digit(cell)
        assert found[column] == pytest.approx(float(cell), abs=allowed, rel=0), column


@pytest.mark.parametrize(("row", "supply"), CELLS, ids=NAMES)
def test_a_second_calculator_agrees_unrounded_and_prints_the_table(
    row: dict[str, str], supply: str
) -> None:
    kind = JOCKEY if row["on"] == "J" else MAIN
    expected = state(float(row["flow"]) / 1e3, kind, len(row["on"].split("+")), supply)
    found = figures(demo_result(), row["scenario"], supply)
    for column in COLUMNS:
        allowed = 1.0 if column == "share" else 0.005 * expected[column]
        assert found[column] == pytest.approx(expected[column], abs=allowed, rel=0), column
        cell = row[f"{column}_{supply}"]
        assert expected[column] == pytest.approx(float(cell), abs=half_a_digit(cell)), column


@pytest.mark.parametrize("row", ROWS, ids=[row["scenario"] for row in ROWS])
def test_the_running_set_is_the_demos_in_all_supply_states(row: dict[str, str]) -> None:
    result = demo_result()
    for supply in SUPPLIES:
        c = case_index(result, row["scenario"], supply)
        on = result.combinations[result.chosen[c]]
        assert "+".join(np.array(SLOTS)[on]) == row["on"]
        assert result.demand[c] == pytest.approx(float(row["flow"]) / 1e3)


def test_the_missing_largest_unit_is_the_standby() -> None:
    result = demo_result()
    out = {case.out for case in result.cases}
    assert out == {None, "sl-p4g7jk"}


def test_the_set_point_is_held_in_all_but_the_design_fire_at_low_and_normal_supply() -> None:
    result = demo_result()
    broken = [
        (result.cases[c].scenario, result.cases[c].supply)
        for c, k in enumerate(result.chosen)
        if not result.set_point_held[c, k]
    ]
    assert broken == [("sc-f2re9k", "low"), ("sc-f2re9k", "normal")]
    for scenario, supply in broken:
        c = case_index(result, scenario, supply)
        assert result.state[c, result.chosen[c]] == State.TOP_SPEED


def test_hydrant_and_street_main_in_the_fires_are_the_demos() -> None:
    result = demo_result()
    at = [case_index(result, "sc-f2re9k", supply) for supply in SUPPLIES]
    hydrant = [result.point_pressure[c, result.chosen[c], 1] / 1e3 for c in at]
    assert hydrant == pytest.approx([231.8, 271.8, 298.4], rel=0.005)
    assert result.connection_pressure[at] / 1e3 == pytest.approx([119, 159, 199], rel=0.005)
    opening = [case_index(result, "sc-f1re9j", supply) for supply in SUPPLIES]
    hydrant = [result.point_pressure[c, result.chosen[c], 1] / 1e3 for c in opening]
    assert hydrant == pytest.approx([301, 301, 301], rel=0.005)
    assert result.connection_pressure[opening] / 1e3 == pytest.approx(
        [174, 214, 254], rel=0.005
    )


def test_net_suction_head_in_the_design_fire_is_the_demos() -> None:
    result = demo_result()
    c = case_index(result, "sc-f2re9k", "low")
    k = result.chosen[c]
    assert result.npsh_available[c, k, 0] == pytest.approx(23.1, rel=0.005)
    assert result.npsh_required[c, k, 0] == pytest.approx(3.7, abs=0.05)


def test_velocities_in_the_design_fire_are_the_demos() -> None:
    result = demo_result()
    c = case_index(result, "sc-f2re9k", "low")
    k = result.chosen[c]
    assert result.suction_branch_velocity[c, k, 0] == pytest.approx(1.13, abs=0.005)
    assert result.discharge_branch_velocity[c, k, 0] == pytest.approx(1.63, abs=0.005)
    assert result.suction_line_velocity[c] == pytest.approx([1.22], abs=0.005)
    assert result.main_velocity[c] == pytest.approx([0.85, 1.26], abs=0.005)


def test_two_mains_at_design_peak_take_what_the_demo_says() -> None:
    result = demo_result()
    at = [case_index(result, "sc-p2kh2h", supply) for supply in SUPPLIES]
    two = next(k for k, on in enumerate(result.combinations) if on.sum() == 2)
    share = result.best_efficiency_share[at, two, 0] * 100
    assert share == pytest.approx([114.0, 117.6, 121.6], abs=1.0)
    power = np.nansum(result.shaft_power[at, two], axis=1) / 1e3
    assert power == pytest.approx([25.28, 23.43, 21.67], rel=0.005)


def test_firm_capacity_and_its_limits_are_the_demos() -> None:
    firm = demo_result().made.firm_capacity
    design = {one.requirement: one for one in firm if one.horizon == "hz-d8gn4k"}
    peak, fire = design["peak_hour"], design["maximum_day_fire"]
    assert peak.by_head * 1e3 == pytest.approx(55.9, rel=0.005)
    assert peak.by_head_limit == "point:pt-t3r8nw"
    assert peak.required_flow * 1e3 == pytest.approx(36.0)
    assert peak.best_efficiency_share * 100 == pytest.approx(105.6, abs=1.0)
    assert peak.all_running * 1e3 == pytest.approx(61.9, rel=0.005)
    assert peak.unit_out == "sl-p4g7jk"
    assert peak.runs_out is None
    assert fire.required_flow * 1e3 == pytest.approx(60.0)
    assert fire.by_head * 1e3 == pytest.approx(62.5, rel=0.005)
    assert fire.by_all * 1e3 == pytest.approx(56.4, rel=0.005)
    assert fire.by_all_limit == "connection"
    assert fire.runs_out == 2039
    assert {one.not_counted for one in firm} == {()}


def test_preferred_flows_of_the_jockey_are_the_demos() -> None:
    result = demo_result()
    handover = result.made.handover
    assert handover is not None
    jockey = next(k for k, on in enumerate(result.combinations) if on[4])
    start, end = handover.preferred_start[jockey] * 1e3, handover.preferred_end[jockey] * 1e3
    assert start == pytest.approx([4.83, 4.56, 4.28], rel=0.005)
    assert end == pytest.approx([9.42, 8.91, 8.36], rel=0.005)


def test_hand_over_flows_are_the_demos() -> None:
    handover = demo_result().made.handover
    assert handover is not None
    # jockey to one main, one to two, two to three
    assert len(handover.fewer) == 3
    assert handover.more_start[0, 0] * 1e3 == pytest.approx(8.79, rel=0.005)
    assert handover.fewer_end[0, 2] * 1e3 == pytest.approx(8.36, rel=0.005)
    overlap = (handover.fewer_end[0] - handover.more_start[0]) * 1e3
    assert overlap == pytest.approx([0.6, 0.6, 0.6], abs=0.05)
    assert handover.fewer_end[1] * 1e3 == pytest.approx([17.4, 16.5, 15.5], abs=0.06)
    assert handover.more_start[1] * 1e3 == pytest.approx([18.2, 17.2, 16.1], abs=0.06)


def test_shut_zone_at_full_speed_is_the_demos() -> None:
    shut = demo_result().made.zero_flow
    assert shut is not None
    assert shut.discharge_pressure_all / 1e3 == pytest.approx([1154, 1194, 1234], rel=0.005)
    assert shut.discharge_pressure_largest / 1e3 == pytest.approx([1154, 1194, 1234], rel=0.005)
    assert shut.point_pressure_all[:, 2] / 1e3 == pytest.approx([967, 1007, 1047], rel=0.005)
    assert shut.point_pressure_held[:, 0] / 1e3 == pytest.approx([250, 250, 250], rel=1e-9)
    assert shut.speed_held[0] == pytest.approx(0.830, abs=0.0005)


def test_station_off_leaves_the_hill_without_water_as_the_demo_says() -> None:
    result = demo_result()
    off = result.made.station_off
    assert off is not None
    assert off.path == "through_pumps"
    night = case_index(result, "sc-n1gh7a", "normal")
    assert off.arithmetic_pressure[night, 0] / 1e3 == pytest.approx(-82, rel=0.005)
    assert not off.drains[night, 0]
    peak = case_index(result, "sc-p1kh2e", "low")
    assert off.arithmetic_pressure[peak, 0] / 1e3 == pytest.approx(-162, rel=0.005)
    assert off.drains[peak, 0]
    assert result.lowest_pressure is not None
    assert result.lowest_pressure / 1e3 == pytest.approx(-97.7, abs=0.1)


def test_two_mains_after_a_trip_in_the_fires_are_the_demos() -> None:
    result = demo_result()
    trip = result.made.after_trip
    assert trip is not None
    design = case_index(result, "sc-f2re9k", "low")
    assert trip.running[design] == 2
    assert trip.lost[design] == "sl-p3f6hj"
    assert trip.state[design] == State.END_OF_CURVE
    assert np.isnan(trip.best_efficiency_share[design])
    opening = case_index(result, "sc-f1re9j", "low")
    assert trip.best_efficiency_share[opening] * 100 == pytest.approx(141, abs=1.0)
    spare = trip.flow_at_end[opening] - result.demand[opening]
    assert spare / 2 * 1e3 == pytest.approx(0.25, abs=0.005)


def test_pressure_for_one_per_cent_of_speed_spans_the_demos_range() -> None:
    result = demo_result()
    night = case_index(result, "sc-n1gh7a", "low")
    per_cent = result.pressure_per_speed[night, result.chosen[night]] / 1e3
    assert per_cent == pytest.approx(7.6, abs=0.05)
    peak = case_index(result, "sc-p2kh2h", "normal")
    per_cent = result.pressure_per_speed[peak, result.chosen[peak]] / 1e3
    assert per_cent == pytest.approx(10.6, abs=0.05)


def test_speed_can_hardly_tell_night_from_no_flow() -> None:
    result = demo_result()
    night = case_index(result, "sc-n1gh7a", "low")
    k = result.chosen[night]
    assert result.zero_flow_speed[night, k] == pytest.approx(0.830, abs=0.0005)
    assert result.speed[night, k, 4] == pytest.approx(0.840, abs=0.0005)


def test_residuals_are_rounding_error_and_arrays_are_locked() -> None:
    result = demo_result()
    assert np.nanmax(result.energy_residual) < 1e-9
    assert np.nanmax(result.mass_residual) < 1e-9
    assert result.needs_missing == ()
    with pytest.raises(ValueError, match="read-only"):
        result.speed[0, 0, 0] = 1.0
