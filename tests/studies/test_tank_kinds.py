"""Stations that fill a tank: held flow, tanks for fire only, levels, trims, other diameters.

Sources: closed forms from the leg's own curve and the rules of trimming; no figure is pinned.
"""

from typing import Any

import numpy as np
import pytest

from server.hydraulics.states import State
from server.studies.duty_curves import duty_curves
from server.studies.duty_result import Binding, Missing, NotSolved
from tests.studies.demo import SET as CLOSED
from tests.studies.demo import case_index, quantity, station_with
from tests.studies.demo import solve as solve_closed
from tests.studies.demo import solved as solved_closed
from tests.studies.tank_demo import (
    BASE,
    CURVE,
    HARDEST,
    PUMP,
    T1,
    T2,
    T3,
    place,
    solve,
    solved,
    tank_document,
    tank_result,
    tank_station,
)

CONTROL = f"{BASE}/control"
DRIVES: dict[str, Any] = {f"{slot}/drive": "variable" for slot in (T1, T2, T3)}
BOTH = {"/zone/kind": "both", "/zone/tank/use": "fire_only"}


@pytest.mark.parametrize(
    "kind", ["zone_point_pressure", "discharge_pressure", "flow_compensated", "reducing_valve"]
)
def test_no_pressure_is_held_where_a_tank_floats(kind: str) -> None:
    result = solve(tank_station(**{f"{CONTROL}/kind": kind}))
    assert isinstance(result, NotSolved)
    wanted = Missing(f"{CONTROL}/kind", "pressure_held_at_floating_tank")
    assert wanted in result.missing


def test_a_held_flow_is_passed_at_the_speed_that_the_system_asks() -> None:
    fields = {**DRIVES, f"{CONTROL}/kind": "held_flow", f"{CONTROL}/flow": quantity(60, "L/s")}
    result = solved(tank_station(**fields))
    held = [
        (c, int(k)) for c, k in enumerate(result.chosen)
        if k >= 0 and result.state[c, k] == State.SOLVED
    ]  # fmt: skip
    assert len(held) == len(result.cases)
    for c, k in held:
        assert result.flow[c, k] == pytest.approx(0.060, rel=1e-9)
        assert result.speed[c, k, 0] < 1.0
        assert result.station_head[c, k] == pytest.approx(result.required_head[c], rel=1e-9)
    firm = result.made.firm_capacity[-1]
    assert firm.by_all == pytest.approx(0.060)
    assert firm.by_all_limit == "held_flow"


def test_a_held_flow_out_of_reach_passes_what_the_highest_speed_gives() -> None:
    fields = {**DRIVES, f"{CONTROL}/kind": "held_flow", f"{CONTROL}/flow": quantity(120, "L/s")}
    result, fixed = solved(tank_station(**fields)), tank_result()
    c, k = place(fixed, HARDEST, "low", 2)
    own = case_index(result, HARDEST, "low")
    j = int(result.chosen[own])
    assert result.state[own, j] == State.TOP_SPEED
    assert result.flow[own, j] == pytest.approx(fixed.flow[c, k], rel=1e-9)
    assert result.binding[own, j] == Binding.HEAD


def test_a_tank_above_what_the_pumps_give_passes_nothing_and_says_how_much_lacks() -> None:
    result = solved(tank_station(**{"/zone/tank/top": quantity(209.5, "m")}))
    own = [
        c for c, case in enumerate(result.cases)
        if (case.scenario, case.supply) == (HARDEST, "low") and result.chosen[c] >= 0
    ]  # fmt: skip
    assert own
    for c in own:
        k = int(result.chosen[c])
        assert result.state[c, k] == State.BELOW_STATIC
        assert result.binding[c, k] == Binding.STATIC_HEAD
        assert result.nearest_flow[c, k] == 0.0
        assert result.lack[c, k] == pytest.approx(209.5 - 121.6 - 87.1, abs=1e-6)


def test_run_out_against_a_low_tank_is_no_duty_but_the_end_of_the_curve_is_told() -> None:
    result = solved(tank_station(**{"/zone/tank/low": quantity(160, "m")}))
    c, k = place(result, "sc-e1fz6n", "high", 1)
    assert result.state[c, k] == State.END_OF_CURVE
    assert np.isnan(result.flow[c, k])
    assert result.nearest_flow[c, k] == pytest.approx(0.070)
    assert result.lack[c, k] < 0


def test_an_impeller_is_trimmed_by_its_ratio_of_diameters() -> None:
    result = solved(tank_station(**{f"{T1}/diameter": quantity(220, "mm")}))
    ratio, cut, full = 220 / 232, result.slots[0], result.slots[1]
    assert cut.trim_ratio == pytest.approx(ratio)
    assert full.trim_ratio is None
    assert cut.shutoff_head == pytest.approx(87.1 * ratio**2)
    assert cut.last_flow == pytest.approx(0.070 * ratio)
    assert cut.best_efficiency_flow == pytest.approx(
        full.best_efficiency_flow * ratio, rel=1e-3
    )


@pytest.mark.parametrize(
    ("diameter", "least", "reason"),
    [(240, None, "trim_ratio_above_one"), (170, None, "trim_below_least"),
     (215, 220, "trim_below_least")],
)  # fmt: skip
def test_a_trim_that_cannot_be_is_refused(
    diameter: float, least: float | None, reason: str
) -> None:
    fields: dict[str, Any] = {f"{T1}/diameter": quantity(diameter, "mm")}
    if least is not None:
        fields[f"{PUMP}/least_diameter"] = quantity(least, "mm")
    result = solve(tank_station(**fields))
    assert isinstance(result, NotSolved)
    assert Missing(f"{T1}/diameter", reason) in result.missing


def test_without_the_tested_diameter_a_trim_names_it() -> None:
    fields = {f"{T1}/diameter": quantity(220, "mm"), f"{CURVE}/diameter": None}
    result = solve(tank_station(**fields))
    assert isinstance(result, NotSolved)
    assert Missing(f"{CURVE}/diameter", "absent") in result.missing


def test_a_diameter_between_two_tested_ones_lies_between_their_curves() -> None:
    tree = tank_document()
    small = tree["pumps"][0]["curves"][0] | {"id": "cu-smal01"}
    small["diameter"] = quantity(212, "mm")
    ratio = 212 / 232
    rows = small["table"]["rows"]
    small["table"] = {
        "units": small["table"]["units"],
        "rows": [[r[0] * ratio, r[1] * ratio**2, *r[2:]] for r in rows],
    }
    curves = [*tree["pumps"][0]["curves"], small]
    fields: dict[str, Any] = {f"{PUMP}/curves": curves}
    for slot in (T1, T2, T3):
        fields |= {f"{slot}/curve": None, f"{slot}/diameter": quantity(222, "mm")}
    result = solved(tank_station(**fields))
    assert result.slots[0].diameter == pytest.approx(0.222)
    assert result.slots[0].trim_ratio is None
    assert result.slots[0].shutoff_head == pytest.approx(87.1 * (222 / 232) ** 2, rel=1e-6)


def test_a_smoothed_curve_tells_how_far_its_rows_lie_from_it() -> None:
    result = solved(tank_station(**{f"{CURVE}/fit": "smoothed"}))
    residual = result.slots[0].smoothing_residual
    assert residual is not None
    assert 0 < residual < 1.0
    c, k = place(result, HARDEST, "low", 2)
    plain = tank_result()
    assert result.flow[c, k] == pytest.approx(plain.flow[c, k], rel=0.01)


def test_a_fire_tank_opens_where_the_grade_would_fall_below_it() -> None:
    fields = {
        **BOTH,
        "/zone/tank/normal": quantity(176, "m"),
        "/zone/tank/top": quantity(184, "m"),
        "/scenarios/sc-f2re9k/tank_state": "top",
    }
    result, closed = solved_closed(station_with(**fields)), solved_closed(station_with())
    assert result.zone_kind == "fire_tank"
    c = case_index(result, "sc-f2re9k", "low")
    k = int(closed.chosen[c])
    # the closed zone's grade at the node in the fire lies under the level, so the tank feeds
    assert closed.zone_entry_grade[c, k] < 184.0
    assert result.zone_entry_grade[c, k] == pytest.approx(184.0, abs=1e-6)
    assert result.tank_flow[c, k] < 0
    assert result.flow[c, k] - result.tank_flow[c, k] == pytest.approx(result.demand[c])
    assert result.flow[c, k] < result.demand[c]
    # where the set point is held above the level the tank stays shut
    other = case_index(result, "sc-p2kh2h", "low")
    j = int(result.chosen[other])
    assert result.tank_flow[other, j] == 0.0
    assert result.station_head[other, j] == pytest.approx(closed.station_head[other, j])


def test_a_fire_tank_above_the_held_grade_is_said_to_feed_always() -> None:
    result = solve_closed(station_with(**BOTH, **{"/zone/tank/normal": quantity(200, "m")}))
    assert not isinstance(result, NotSolved)
    assert result.tank_draws_down.any()
    assert result.pump_set == CLOSED


def test_the_station_draws_from_a_tank_in_a_closed_zone_too() -> None:
    levels = {"cut_out": 140.0, "low": 141.0, "normal": 142.0, "top": 143.0}
    fields: dict[str, Any] = {"/supply/kind": "tank"}
    fields |= {f"/supply/tank/{name}": quantity(v, "m") for name, v in levels.items()}
    fields |= {
        "/supply/tank/outlet_level": quantity(139, "m"),
        "/supply/tank/outlet_bore": quantity(0.35, "m"),
    }
    result = solved_closed(station_with(**fields))
    assert result.supply_kind == "tank"
    c = case_index(result, "sc-p2kh2h", "low")
    assert result.supply_grade[c] == pytest.approx(141.0)
    made = result.made.cut_out
    assert made is not None
    assert made.depth == pytest.approx(1.0)
    # the cut-out lies a metre lower, so does the NPSH of what runs
    at = [m for m, case in enumerate(made.cases) if case.scenario == "sc-p2kh2h"][0]
    n = int(np.flatnonzero(result.combinations[made.combination[at]])[0])
    k = int(made.combination[at])
    less = result.npsh_available[c, k, n] - made.npsh_available[at, n]
    assert less == pytest.approx(1.0, abs=0.01)


def test_the_curves_behind_the_figure_pass_through_the_duty_points() -> None:
    station, result = tank_station(), tank_result()
    curves = duty_curves(station, result)
    c, k = place(result, HARDEST, "low", 2)
    asked = np.interp(result.flow[c, k], curves.flow, curves.required_low)
    assert asked == pytest.approx(result.station_head[c, k], abs=0.02)
    two = next(s for s in curves.sets if s.units == 2)
    given = np.interp(result.flow[c, k], two.flow, two.head)
    assert given == pytest.approx(result.station_head[c, k], abs=0.02)
    along = next(a for a in curves.along if a.combination == k)
    power = np.interp(result.flow[c, k], along.flow, along.shaft_power)
    assert power == pytest.approx(np.nansum(result.shaft_power[c, k]), rel=1e-3)


@pytest.mark.parametrize(
    ("path", "level", "reason"),
    [
        ("/supply/tank/low", 124.9, "tank_levels_out_of_order"),
        ("/supply/tank/outlet_level", 121.5, "tank_level_not_above_outlet"),
        ("/zone/tank/low", 183.0, "tank_levels_out_of_order"),
    ],
)
def test_levels_of_a_tank_out_of_order_are_refused(
    path: str, level: float, reason: str
) -> None:
    result = solve(tank_station(**{path: quantity(level, "m")}))
    assert isinstance(result, NotSolved)
    assert reason in {missing.reason for missing in result.missing}


def test_a_demand_past_the_end_of_the_main_is_refused() -> None:
    result = solve(tank_station(**{"/zone/tank/demand_at": quantity(4000, "m")}))
    assert isinstance(result, NotSolved)
    assert Missing("/zone/tank/demand_at", "past_the_main") in result.missing


@pytest.mark.parametrize(
    "path",
    ["/zone/tank/low", "/zone/tank/normal", "/zone/tank/top", f"{CONTROL}/stages"],
)
def test_what_a_filling_station_cannot_do_without_is_named(path: str) -> None:
    result = solve(tank_station(**{path: [] if path.endswith("stages") else None}))
    assert isinstance(result, NotSolved)
    assert Missing(path, "absent") in result.missing


@pytest.mark.parametrize(
    "path",
    [
        "/supply/tank/cut_out", "/supply/tank/outlet_level", "/supply/tank/outlet_bore",
        "/supply/tank/top", "/zone/tank/area", "/horizons/hz-d4v9ts/demand/maximum_day",
    ],
)  # fmt: skip
def test_what_touches_a_part_is_named_and_the_rest_is_had(path: str) -> None:
    result = solved(tank_station(**{path: None}))
    assert (path, "absent") in result.needs_missing
    assert result.made.one_pump_alone is not None
