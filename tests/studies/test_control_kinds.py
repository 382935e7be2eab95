"""Every kind of control in a closed zone: what it holds, and what follows where it cannot.

Sources: closed forms from the leg's own curve and the pipes' losses; no figure is pinned.
"""

import json
from typing import Any

import numpy as np
import pytest

from server.hydraulics.parallel import leg_flows
from server.hydraulics.states import State
from server.station.station import Station
from server.studies.duty_result import Binding, DutyResult, Missing, NotSolved
from server.studies.limits import limits_of
from server.studies.lowering import lower
from server.studies.lowering.lowered import LoweredSet
from tests.studies.demo import (
    SET,
    case_index,
    document,
    quantity,
    solve,
    solved,
    station_with,
)

CONTROL = f"/sets/{SET}/control"
SLOTS = [f"/sets/{SET}/slots/sl-{name}" for name in ("p1d4fg", "p2e5gh", "p3f6hj", "p4g7jk")]
JOCKEY = f"/sets/{SET}/slots/sl-j5h8kq"


def low(**fields: Any) -> LoweredSet:
    station = station_with(**fields)
    lowered = lower(station, SET, limits_of(station))
    assert isinstance(lowered, LoweredSet), lowered
    return lowered


def controlled(kind: str, **fields: Any) -> dict[str, Any]:
    return {f"{CONTROL}/kind": kind, **{f"{CONTROL}/{k}": v for k, v in fields.items()}}


def running(result: DutyResult, c: int) -> tuple[int, list[int]]:
    k = int(result.chosen[c])
    return k, [int(n) for n in np.flatnonzero(result.combinations[k])]


def stated(result: DutyResult) -> list[tuple[int, int]]:
    return [
        (c, int(k))
        for c, k in enumerate(result.chosen)
        if k >= 0 and result.state[c, k] in (State.SOLVED, State.TOP_SPEED, State.LOW_SPEED)
    ]


def test_at_fixed_speed_the_pressure_follows_from_the_demand() -> None:
    fields = controlled("fixed_speed", pressure=None, point=None)
    result, of = solved(station_with(**fields)), low(**fields)
    assert result.set_point is None
    assert stated(result)
    for c, k in stated(result):
        n = running(result, c)[1]
        legs = [of.units[of.slots[i].unit].leg for i in n]
        found = leg_flows(result.station_head[c, k], legs=legs, speeds=1.0)
        assert found.flow.sum() == pytest.approx(result.demand[c], rel=1e-9)
        assert result.speed[c, k, n] == pytest.approx(1.0)


def test_at_fixed_speed_solved_means_that_every_point_gets_what_it_requires() -> None:
    result = solved(station_with(**controlled("fixed_speed", pressure=None, point=None)))
    least = {"critical": (250e3, 140e3), "lowest": (200e3, 140e3)}
    for c in range(len(result.cases)):
        for k in range(len(result.combinations)):
            state = result.state[c, k]
            if state not in (State.SOLVED, State.TOP_SPEED) or result.is_fire[c]:
                continue
            spare = min(
                result.point_pressure[c, k, p] - least[point.role][0]
                for p, point in enumerate(result.points)
                if point.role in least
            )
            assert (state == State.SOLVED) == (spare > -1e-4), (c, k, spare)


def test_a_set_point_that_rises_with_flow_is_full_at_its_flow_and_above() -> None:
    fields = controlled(
        "flow_compensated", pressure=quantity(700, "kPa"),
        pressure_at_no_flow=quantity(600, "kPa"), flow=quantity(36, "L/s"), point=None,
    )  # fmt: skip
    result = solved(station_with(**fields))
    share = np.minimum(result.demand / 0.036, 1.0) ** 2
    assert result.set_pressure == pytest.approx(600e3 + 100e3 * share)
    held = [(c, k) for c, k in stated(result) if result.state[c, k] == State.SOLVED]
    assert len(held) > 10
    for c, k in held:
        assert result.discharge_pressure[c, k] == pytest.approx(
            result.set_pressure[c], rel=1e-9
        )


def test_a_reducing_valve_holds_its_pressure_and_tells_the_head_it_takes() -> None:
    valve = {"valve_loss": quantity(2, "m"), "valve_loss_at": quantity(40, "L/s")}
    fields = controlled("reducing_valve", **valve)
    result, of = solved(station_with(**fields)), low(**fields)
    critical = [p.role for p in result.points].index("critical")
    seen = set()
    for c, k in stated(result):
        wide_open = 2.0 * (result.demand[c] / 0.040) ** 2
        n = running(result, c)[1]
        legs = [of.units[of.slots[i].unit].leg for i in n]
        before = result.station_head[c, k] + result.valve_loss[c, k]
        found = leg_flows(before, legs=legs, speeds=1.0)
        assert found.flow.sum() == pytest.approx(result.demand[c], rel=1e-9)
        seen.add(State(int(result.state[c, k])))
        if result.state[c, k] == State.SOLVED:
            assert result.point_pressure[c, k, critical] == pytest.approx(250e3, rel=1e-9)
            assert result.valve_loss[c, k] >= wide_open - 1e-9
        else:
            assert result.valve_loss[c, k] == pytest.approx(wide_open)
            assert result.lack[c, k] > 0
    assert State.SOLVED in seen


def test_a_pump_without_a_drive_delivers_at_the_held_head_and_the_drives_take_the_rest() -> (
    None
):
    fields = {f"{SLOTS[0]}/drive": "fixed"}
    result, of = solved(station_with(**fields)), low(**fields)
    three = [1, 1, 1, 0, 0]
    (k,) = [k for k, on in enumerate(result.combinations) if on.tolist() == three]
    held = np.flatnonzero(result.state[:, k] == State.SOLVED)
    assert held.size
    leg = of.units[of.slots[0].unit].leg
    for c in held:
        own = float(leg.largest_flow(result.required_head[c]))
        assert result.leg_flow[c, k, 0] == pytest.approx(own, rel=1e-9)
        rest = 0.5 * (result.demand[c] - own)
        assert result.leg_flow[c, k, 1:3] == pytest.approx(rest, rel=1e-6)
        assert result.speed[c, k, 0] == 1.0
        assert (result.speed[c, k, 1:3] < 1.0).all()


def test_what_runs_without_a_drive_beyond_the_demand_is_marked_with_the_pressure() -> None:
    fields: dict[str, Any] = {f"{slot}/drive": "fixed" for slot in SLOTS}
    fields[JOCKEY] = None
    result = solved(station_with(**fields))
    c = case_index(result, "sc-n1gh7a", "low")
    k = int(result.chosen[c])
    assert result.fixed_exceeds[c, k]
    assert result.binding[c, k] == Binding.FIXED_UNIT
    assert result.held_pressure[c, k] > 250e3
    assert result.set_point_held[c, k] == np.False_


@pytest.mark.parametrize("kind", ["levels", "held_flow"])
def test_a_control_that_fills_a_tank_is_refused_without_one(kind: str) -> None:
    result = solve(station_with(**controlled(kind, flow=quantity(20, "L/s"))))
    assert isinstance(result, NotSolved)
    assert Missing(f"{CONTROL}/kind", "control_without_tank") in result.missing


@pytest.mark.parametrize(
    ("kind", "field"),
    [
        ("flow_compensated", "pressure_at_no_flow"),
        ("flow_compensated", "flow"),
        ("reducing_valve", "valve_loss"),
    ],
)
def test_what_a_control_needs_is_named(kind: str, field: str) -> None:
    result = solve(station_with(**controlled(kind)))
    assert isinstance(result, NotSolved)
    assert Missing(f"{CONTROL}/{field}", "absent") in result.missing


def test_a_set_point_that_falls_with_flow_is_refused() -> None:
    fields = controlled(
        "flow_compensated", pressure=quantity(300, "kPa"),
        pressure_at_no_flow=quantity(600, "kPa"), flow=quantity(36, "L/s"),
    )  # fmt: skip
    result = solve(station_with(**fields))
    assert isinstance(result, NotSolved)
    wanted = Missing(f"{CONTROL}/pressure_at_no_flow", "set_point_falls_with_flow")
    assert wanted in result.missing


def test_where_the_set_point_is_not_held_the_flow_that_holds_it_is_told() -> None:
    result = solved(station_with())
    c = case_index(result, "sc-f2re9k", "low")
    k = int(result.chosen[c])
    assert result.binding[c, k] == Binding.HEAD
    assert result.lack[c, k] > 0
    nearest = float(result.nearest_flow[c, k])
    assert 0.040 < nearest < result.demand[c]
    # with that flow asked the set point is held, at the top speed to the last digits
    fire = nearest - 0.020
    again = solved(station_with(**{"/fires/fr-f6c1rs/flow": quantity(fire * 1e3, "L/s")}))
    at = case_index(again, "sc-f2re9k", "low")
    kinds = [set(np.flatnonzero(on)) for on in again.combinations]
    same = kinds.index(set(np.flatnonzero(result.combinations[k])))
    assert again.demand[at] == pytest.approx(nearest, rel=1e-9)
    assert again.held_pressure[at, same] == pytest.approx(250e3, rel=1e-5)


def test_one_barrel_out_loses_more_in_its_reach() -> None:
    reach = "/discharge_main/reaches/rc-d2g7pz"
    twin = {f"{reach}/barrels": 2}
    both = solved(station_with(**twin))
    one = solved(station_with(**twin, **{"/scenarios/sc-p2kh2h/barrel_out": "rc-d2g7pz"}))
    c = case_index(both, "sc-p2kh2h", "low")
    assert one.main_velocity[c, 1] == pytest.approx(2 * both.main_velocity[c, 1])
    assert one.main_velocity[c, 0] == pytest.approx(both.main_velocity[c, 0])
    assert one.required_head[c] > both.required_head[c]
    other = case_index(both, "sc-f2re9k", "low")
    assert one.required_head[other] == pytest.approx(both.required_head[other], rel=1e-12)
    assert "rc-d2g7pz" not in both.made.single_points


def test_a_single_barrel_cannot_be_out() -> None:
    station = station_with(**{"/scenarios/sc-p2kh2h/barrel_out": "rc-d2g7pz"})
    result = solved(station)
    assert ("/scenarios/sc-p2kh2h/barrel_out", "single_barrel") in result.needs_missing
    assert "sc-p2kh2h" not in {case.scenario for case in result.cases}


def test_the_order_of_slots_changes_no_state_of_the_station() -> None:
    tree = document()
    tree["sets"][0]["slots"].reverse()
    turned = solved(Station.model_validate_json(json.dumps(tree)))
    result = solved(station_with())
    for c in range(len(result.cases)):
        k, j = int(result.chosen[c]), int(turned.chosen[c])
        assert turned.state[c, j] == result.state[c, k]
        assert turned.station_head[c, j] == pytest.approx(result.station_head[c, k], rel=1e-9)
        assert turned.wire_power[c, j][turned.combinations[j]].sum() == pytest.approx(
            result.wire_power[c, k][result.combinations[k]].sum(), rel=1e-9
        )
