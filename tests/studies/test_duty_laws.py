"""Laws that every duty keeps, whatever the station: mass, energy, sameness, monotony.

Sources: continuity and energy between the manifolds; the affinity laws. No published figures.
"""

import json
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.hydraulics.states import State
from server.station.station import Station
from server.studies.duty_result import DutyResult
from tests.studies.demo import (
    SET,
    case_index,
    demo_result,
    document,
    quantity,
    solved,
    station_with,
)

MEANT = (State.SOLVED, State.TOP_SPEED, State.LOW_SPEED)


def of(tree: dict[str, Any]) -> DutyResult:
    return solved(Station.model_validate_json(json.dumps(tree)))


def largest(values: np.ndarray) -> np.ndarray:
    return np.nan_to_num(values, nan=-np.inf).max(axis=-1)


def chosen(result: DutyResult, values: np.ndarray) -> np.ndarray:
    return values[np.arange(len(result.cases)), result.chosen]


@settings(max_examples=15, deadline=None)
@given(
    night=st.floats(0.1, 12),
    average=st.floats(1, 30),
    peak=st.floats(5, 70),
    set_point=st.floats(60, 420),
    low=st.floats(-120, 0),
    high=st.floats(0, 250),
)
def test_every_state_keeps_mass_and_energy(
    night: float, average: float, peak: float, set_point: float, low: float, high: float
) -> None:
    result = solved(
        station_with(
            **{
                "/horizons/hz-0pn8ra/demand/minimum_night": quantity(night, "L/s"),
                "/horizons/hz-0pn8ra/demand/average_day": quantity(average, "L/s"),
                "/horizons/hz-d8gn4k/demand/peak_hour": quantity(peak, "L/s"),
                f"/sets/{SET}/control/pressure": quantity(set_point, "kPa"),
                "/supply/states/low": quantity(low, "kPa"),
                "/supply/states/high": quantity(high, "kPa"),
            }
        )
    )
    meant = np.isin(result.state, MEANT) & result.available
    assert np.all(np.isfinite(result.station_head[meant]))
    assert np.all(result.energy_residual[meant] < 1e-9)
    assert np.all(result.mass_residual[meant] < 1e-9)
    flow = result.leg_flow.sum(axis=2)
    wanted = np.broadcast_to(result.demand[:, None], flow.shape)
    assert flow[meant] == pytest.approx(wanted[meant], rel=1e-9, abs=1e-12)
    held = result.state == State.SOLVED
    assert result.held_pressure[held] == pytest.approx(set_point * 1e3, rel=1e-9)
    short = (result.state == State.TOP_SPEED) & result.available
    assert np.all(result.held_pressure[short] <= set_point * 1e3)
    over = (result.state == State.LOW_SPEED) & result.available
    assert np.all(result.held_pressure[over] >= set_point * 1e3 * (1 - 1e-12))
    hidden = ~np.isin(result.state, (*MEANT, State.HELD_SHUT))
    for values in (result.station_head, result.held_pressure, result.flow):
        assert np.all(np.isnan(values[hidden]))
    assert np.all(np.isnan(result.shaft_power[hidden]))


def test_equal_pumps_share_the_flow_and_run_as_one_does_at_its_share() -> None:
    result = demo_result()
    c = case_index(result, "sc-p2kh2h", "low")
    k = result.chosen[c]
    assert np.ptp(result.leg_flow[c, k, :3]) == 0
    assert result.leg_flow[c, k, 0] == pytest.approx(result.demand[c] / 3)
    assert np.ptp(result.shaft_power[c, k, :3]) == 0


def test_slots_in_another_order_give_the_same_states() -> None:
    tree = document()
    tree["sets"][0]["slots"].reverse()
    other, result = of(tree), demo_result()
    for name in ("station_head", "held_pressure", "point_pressure"):
        first, second = (
            chosen(result, getattr(result, name)),
            chosen(other, getattr(other, name)),
        )
        assert second == pytest.approx(first, rel=1e-12)
    for name in ("speed", "shaft_power", "npsh_required"):
        first = np.nansum(chosen(result, getattr(result, name)), axis=1)
        second = np.nansum(chosen(other, getattr(other, name)), axis=1)
        assert second == pytest.approx(first, rel=1e-12)
    for first, second in zip(result.made.firm_capacity, other.made.firm_capacity, strict=True):
        assert second.by_head == pytest.approx(first.by_head)
        assert second.by_all == pytest.approx(first.by_all)
        assert (second.by_all_limit, second.runs_out) == (first.by_all_limit, first.runs_out)


def test_more_supply_head_means_less_speed_and_more_of_best_efficiency_flow() -> None:
    result = demo_result()
    solved_cases = chosen(result, result.state) == State.SOLVED
    speed = np.nanmax(chosen(result, result.speed), axis=1).reshape(-1, 3)
    share = np.nanmax(chosen(result, result.best_efficiency_share), axis=1).reshape(-1, 3)
    held = solved_cases.reshape(-1, 3).all(axis=1)
    assert held.sum() == 9
    assert np.all(np.diff(speed[held], axis=1) < 0)
    assert np.all(np.diff(share[held], axis=1) > 0)


def test_a_higher_set_point_means_more_speed_and_power() -> None:
    higher = solved(station_with(**{f"/sets/{SET}/control/pressure": quantity(270, "kPa")}))
    result = demo_result()
    both = (result.state == State.SOLVED) & (higher.state == State.SOLVED)
    assert both.sum() > 40
    assert np.all(largest(higher.speed[both]) > largest(result.speed[both]))
    assert np.all(
        np.nansum(higher.shaft_power, axis=2)[both]
        > np.nansum(result.shaft_power, axis=2)[both]
    )
