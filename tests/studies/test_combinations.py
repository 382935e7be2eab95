"""Which slots may run together, which unit counts as out, and which combination is chosen."""

import copy
import json
from typing import Any

import numpy as np
import pytest

from server.hydraulics.states import State
from server.station.station import Station
from server.studies.cases import largest, may_run
from server.studies.choice import choose
from server.studies.combinations import combinations_of, masks_of
from server.studies.duty_result import DutyResult
from server.studies.limits import limits_of
from server.studies.lowering import lower
from server.studies.lowering.lowered import LoweredSet, Slot
from tests.studies.demo import SET, case_index, demo_result, document, put, solved, station_with


def lowered() -> LoweredSet:
    station = station_with()
    result = lower(station, SET, limits_of(station))
    assert isinstance(result, LoweredSet)
    return result


def slots() -> tuple[Slot, ...]:
    return lowered().slots


def of(tree: dict[str, Any]) -> DutyResult:
    return solved(Station.model_validate_json(json.dumps(tree)))


def test_identical_slots_are_counted_once() -> None:
    assert set(masks_of(slots(), (0, 1, 2))) == {(0,), (0, 1), (0, 1, 2)}


def test_a_jockey_never_runs_with_a_main() -> None:
    masks, available = combinations_of(slots(), [(0, 1, 2)], [(4,)])
    assert masks == ((4,), (0,), (0, 1), (0, 1, 2))
    assert available.all()


def test_unlike_units_give_every_number_of_each() -> None:
    found = set(masks_of(slots(), (0, 1, 4)))
    assert found == {(0,), (4,), (0, 1), (0, 4), (0, 1, 4)}


def test_among_equals_the_last_in_slot_order_is_the_largest() -> None:
    assert largest(slots(), (0, 1, 2, 3, 4)) == 3
    assert largest(slots(), (0, 1)) == 1
    assert largest(slots(), (4,)) == 4
    assert largest(slots(), ()) is None


def test_a_standby_takes_the_place_of_a_duty_unit_out_and_adds_to_none() -> None:
    every = (0, 1, 2, 3, 4)
    assert may_run(slots(), every, None) == ((0, 1, 2), (4,))
    assert may_run(slots(), every, 3) == ((0, 1, 2), (4,))
    assert may_run(slots(), every, 1) == ((0, 2, 3), (4,))
    assert may_run(slots(), every, 4) == ((0, 1, 2), ())


def test_a_slot_is_absent_before_its_horizon() -> None:
    result = solved(station_with(**{f"/sets/{SET}/slots/sl-p3f6hj/from_horizon": "hz-d8gn4k"}))
    opening = case_index(result, "sc-f1re9j", "low")
    design = case_index(result, "sc-f2re9k", "low")
    three = int(np.flatnonzero(result.combinations.sum(axis=1) == 3)[0])
    assert not result.available[opening, three]
    assert np.isnan(result.station_head[opening, three])
    assert result.state[opening, three] == State.NOT_AVAILABLE
    assert result.available[design, three]
    # two mains are left for the opening fire: 141 % of best-efficiency flow at top speed
    assert result.combinations[result.chosen[opening]].sum() == 2
    assert result.choice_class[opening] == 3
    firm = {(f.requirement, f.horizon): f.by_head for f in result.made.firm_capacity}
    assert firm["peak_hour", "hz-0pn8ra"] < firm["peak_hour", "hz-d8gn4k"]


def test_units_that_all_come_later_leave_a_scenario_without_a_running_set() -> None:
    tree = document()
    for slot in tree["sets"][0]["slots"]:
        slot["from_horizon"] = "hz-d8gn4k"
    result = of(tree)
    opening = case_index(result, "sc-p1kh2e", "low")
    assert result.chosen[opening] == -1
    assert result.choice_class[opening] == 4
    assert result.chosen[case_index(result, "sc-p2kh2h", "low")] >= 0
    only = [s for s in tree["scenarios"] if s["horizon"] == "hz-0pn8ra"]
    tree["scenarios"] = only
    result = of(tree)
    assert result.combinations.shape == (0, 5)
    assert np.all(result.chosen == -1)
    assert result.made.after_trip is not None
    assert np.all(result.made.after_trip.running == 0)


def test_a_single_pump_has_no_firm_capacity() -> None:
    tree = document()
    tree["sets"][0]["slots"] = tree["sets"][0]["slots"][:1]
    result = of(tree)
    for firm in result.made.firm_capacity:
        assert (firm.by_head, firm.by_head_limit, firm.by_all) == (0.0, "no_unit", 0.0)
        assert firm.runs_out == 2027
        assert firm.all_running > 0.015


def test_a_set_of_standby_units_alone_is_refused() -> None:
    tree = document()
    for slot in tree["sets"][0]["slots"]:
        slot["role"] = "standby"
    from server.studies.duty_result import Missing, NotSolved
    from tests.studies.demo import solve

    result = solve(Station.model_validate_json(json.dumps(tree)))
    assert isinstance(result, NotSolved)
    assert result.missing == (Missing(f"/sets/{SET}/slots", "only_standby_units"),)


def test_a_limit_without_its_level_is_said_not_to_be_counted() -> None:
    result = solved(station_with(**{"/supply/connection_level": None}))
    fire = next(f for f in result.made.firm_capacity if f.requirement == "maximum_day_fire")
    assert fire.not_counted == ("connection",)
    assert fire.by_all_limit == "suction_gauge"
    # the suction gauge reaches 140 kPa at 58.1 L/s: the demo's page
    assert fire.by_all * 1e3 == pytest.approx(58.1, rel=0.005)


class Given:
    """Arrays of a choice: one scenario, combinations of one, two and three equal pumps."""

    def __init__(self) -> None:
        self.slots = slots()[:3]
        self.combinations = np.tril(np.ones((3, 3), dtype=bool))
        self.state = np.full((3, 3), State.SOLVED, dtype=np.int8)
        self.share = np.where(self.combinations, 0.9, np.nan) * np.ones((3, 1, 1))
        self.held = np.full((3, 3), 250e3)
        self.known = np.ones(3, dtype=bool)

    def chosen(self) -> tuple[int, int]:
        chosen, number = choose(
            self.slots,
            available=np.ones((3, 3), dtype=bool),
            known=self.known,
            state=self.state,
            share=self.share,
            combinations=self.combinations,
            held_pressure=self.held,
            set_point=np.full(len(self.state), 250e3),
            flow_at_end=np.array([0.02, 0.04, 0.06]),
        )
        assert len(set(chosen)) == 1
        assert len(set(number)) == 1
        return int(chosen[0]), int(number[0])


def test_fewest_units_inside_the_preferred_region_are_chosen() -> None:
    assert Given().chosen() == (0, 0)


def test_one_supply_state_outside_the_region_sends_the_choice_on() -> None:
    given = Given()
    given.share[2, 0, 0] = 1.21
    assert given.chosen() == (1, 0)


def test_ends_of_the_region_are_inside() -> None:
    given = Given()
    given.share[:, 0, 0] = given.slots[0].preferred[1]
    assert given.chosen() == (0, 0)


def test_the_allowable_region_comes_next_then_all_that_holds() -> None:
    given = Given()
    given.share[:, 0], given.share[:, 1], given.share[:, 2] = 1.35, 1.25, 0.5
    given.share[:, ~given.combinations] = np.nan
    assert given.chosen() == (1, 1)
    given.share[:] = np.where(given.combinations, 1.4, np.nan)
    assert given.chosen() == (0, 2)


def test_the_nearest_is_the_one_with_least_pressure_missing() -> None:
    given = Given()
    given.state[0, :] = [State.END_OF_CURVE, State.TOP_SPEED, State.TOP_SPEED]
    given.held[0, :] = [np.nan, 180e3, 200e3]
    assert given.chosen() == (2, 3)


def test_past_the_end_everywhere_the_largest_end_is_nearest() -> None:
    given = Given()
    given.state[:] = State.END_OF_CURVE
    given.held[:] = np.nan
    assert given.chosen() == (2, 3)


def test_a_unit_held_shut_in_one_state_bars_its_combination() -> None:
    given = Given()
    given.state[1, 0] = State.HELD_SHUT
    assert given.chosen() == (1, 0)
    given.state[1, :] = State.HELD_SHUT
    assert given.chosen() == (-1, 4)


def test_a_state_that_is_not_stated_is_left_out() -> None:
    given = Given()
    given.known[0] = False
    given.state[0] = State.NOT_AVAILABLE
    given.share[0] = np.nan
    assert given.chosen() == (0, 0)


def test_an_unknown_best_efficiency_point_leaves_only_what_holds() -> None:
    given = Given()
    given.share[:] = np.nan
    assert given.chosen() == (0, 2)


def test_trip_of_the_only_unit_leaves_none() -> None:
    result = demo_result()
    trip = result.made.after_trip
    assert trip is not None
    night = case_index(result, "sc-n1gh7a", "low")
    assert trip.running[night] == 0
    assert trip.lost[night] == "sl-j5h8kq"
    assert trip.state[night] == State.NOT_AVAILABLE
    assert np.all(np.isnan(trip.point_pressure[night]))


def test_a_bypass_that_is_entered_is_the_way_when_the_station_is_off() -> None:
    bypass = {"fitted": True, "bore": {"value": 150, "unit": "mm"}, "k": 4}
    result, plain = solved(station_with(**{"/supply/bypass": bypass})), demo_result()
    off, through = result.made.station_off, plain.made.station_off
    assert off is not None
    assert through is not None
    assert off.path == "bypass"
    c = case_index(result, "sc-p1kh2e", "low")
    velocity_head = (0.020 / (np.pi / 4 * 0.15**2)) ** 2 / (2 * 9.80665)
    lost = (through.arithmetic_pressure - off.arithmetic_pressure)[c] / (
        result.density * 9.80665
    )
    assert lost == pytest.approx([4 * velocity_head] * 3)


def test_copies_of_the_demo_do_not_touch_it() -> None:
    tree = document()
    before = copy.deepcopy(tree)
    put(tree, "/site/altitude", None)
    assert document() == before


def test_passes_of_the_root_finders_stay_few(monkeypatch: pytest.MonkeyPatch) -> None:
    from server.studies import capacity, set_ends

    calls = {"passes": 0, "solves": 0}
    plain = set_ends.falling_root

    def counted(function: Any, low: Any, high: Any) -> Any:
        calls["solves"] += 1

        def one_pass(x: Any) -> Any:
            calls["passes"] += 1
            return function(x)

        return plain(one_pass, low, high)

    monkeypatch.setattr(set_ends, "falling_root", counted)
    monkeypatch.setattr(capacity, "falling_root", counted)
    solved(station_with())
    # one solve each: all firm capacities, weak pumps beside the others, all region ends, all
    # flows at top speed
    assert calls["solves"] == 3
    assert calls["passes"] <= 40
