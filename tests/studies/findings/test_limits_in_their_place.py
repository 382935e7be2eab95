"""Ratings at the lowest level, the test that is used, a stated best-efficiency flow, starts.

Sources: hydrostatics; EI 11C201 table 7-1 (least cycle 10, 15 and 20 min by motor); the rest
common practice.
"""

import pytest

from server.hydraulics import water
from server.studies.findings import words
from server.studies.findings.profiles import RULES
from server.studies.shapes import Severity
from tests.studies.findings.demo import MAIN_TABLE, SET, edited, found, insert, put, q

CURVE = MAIN_TABLE.removesuffix("/table")


def reaches() -> list[str]:
    return [f"/discharge_main/reaches/{r.id}" for r in edited().discharge_main.reaches]


def test_a_main_is_rated_at_its_lowest_known_level() -> None:
    first, second = reaches()
    station = edited(put(f"{first}/end_level", q(50, "m")))
    by_subject = {f.subject: f for f in found(station, "rating_exceeded")}
    assert set(by_subject) == {f"{first}/rating", f"{second}/rating"}
    finding = by_subject[f"{first}/rating"]
    assert finding.provided is not None
    deeper = float(water.density(14)) * water.GRAVITY * (110.9 - 50)
    assert finding.provided.value == pytest.approx(1234e3 + deeper, rel=0.005)
    # the trip at 900 kPa at the gauge acts before the main sees its rating
    assert finding.severity is Severity.CAUTION
    assert "trip at 900" in words.sentence(finding, station, "si")


def test_a_trip_above_what_the_lowest_place_bears_is_no_protection() -> None:
    first, _ = reaches()
    station = edited(
        put(f"{first}/end_level", q(50, "m")),
        put(f"{SET}/trips/high_discharge_trip", q(1100, "kPa")),
    )
    assert {f.severity for f in found(station, "rating_exceeded")} == {Severity.STOP}


def test_a_level_above_the_gauge_takes_nothing_off() -> None:
    first, second = reaches()
    station = edited(
        put(f"{first}/end_level", q(150, "m")), put(f"{second}/end_level", q(150, "m"))
    )
    assert not found(station, "rating_exceeded")
    assert not found(station, "rating_level_not_given")


def _second_basis(flow: float) -> dict[str, object]:
    return {
        "id": "ft-c1c1c1", "title": "C", "use": "basis", "made_at": "2025-06-20 10:00",
        "gauge_level": q(112, "m"), "static_pressure": q(350, "kPa"),
        "residual_pressure": q(230, "kPa"), "test_flow": q(flow, "L/s"),
        "station_draw": q(0, "L/s"),
    }  # fmt: skip


def test_extrapolation_is_judged_on_the_furthest_of_several_basis_tests() -> None:
    assert found(edited(), "flow_test_extrapolated")
    station = edited(insert("/supply/flow_tests", _second_basis(50)))
    assert not found(station, "flow_test_extrapolated")


def test_several_basis_tests_are_each_held_against_their_one_curve() -> None:
    station = edited(insert("/supply/flow_tests", _second_basis(40)))
    apart = {f.subject for f in found(station, "flow_tests_disagree")}
    assert {"/supply/flow_tests/ft-a5t2rv", "/supply/flow_tests/ft-c1c1c1"} <= apart


@pytest.mark.parametrize(
    ("stated", "warns"), [(17.66, False), (18.5, False), (18.7, True), (16.7, True)]
)
def test_a_stated_best_efficiency_flow_is_compared_with_that_of_the_rows(
    stated: float, warns: bool
) -> None:
    station = edited(put(f"{CURVE}/best_efficiency_flow", q(stated, "L/s")))
    findings = found(station, "best_efficiency_disagrees")
    assert bool(findings) is warns
    for finding in findings:
        assert finding.severity is Severity.CAUTION
        assert "from the 17.7\u00a0L/s of its rows" in words.sentence(finding, station, "si")


def test_rows_without_a_top_leave_the_stated_flow_alone() -> None:
    assert not found(edited(), "best_efficiency_disagrees")


@pytest.mark.parametrize(
    ("key", "minutes"),
    [("starts-small-max", 10), ("starts-15-kw-max", 15), ("starts-75-kw-max", 20)],
)
def test_starts_an_hour_are_those_of_the_published_cycle(key: str, minutes: int) -> None:
    rule = RULES[key]
    assert rule.basis == "published"
    assert rule.si is not None
    assert rule.si.value == 60 / minutes
    assert f"{minutes} to" in rule.source


def test_starts_of_the_largest_motors_are_not_called_published() -> None:
    assert RULES["starts-185-kw-max"].basis == "common_practice"
    assert "as the maker says" in RULES["starts-185-kw-max"].source
