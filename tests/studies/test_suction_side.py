"""The suction side is judged whatever the pumps do, and no pressure lies below a vacuum.

Sources: a gauge pressure has its floor at vapour pressure less that of the air; the air at
-400 m is 106.2 kPa by the U.S. Standard Atmosphere 1976. The rest are identities.
"""

import json
import re

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.hydraulics import water
from server.hydraulics.states import State
from server.station.station import Station
from server.studies.assess import Assessment, assess
from server.studies.duty_result import DutyResult, Place
from server.studies.findings import requirement_words, words
from server.studies.results_json import results_bytes
from server.studies.shapes import Finding, Severity, Verdict
from tests.studies.demo import SET, case_index, quantity, solved, station_with

FIRE = "/fires/fr-f6c1rs/flow"
TEST = "/supply/flow_tests/ft-a5t2rv"
LOW = "/supply/states/low"
EYE, ALTITUDE = "/site/eye_level", "/site/altitude"
TOP = "/zone/points/pt-t3r8nw"
DESIGN_FIRE = "sc-f2re9k"
PRINTED = re.compile(r"-(\d+(?:\.\d+)?)\u00a0kPa")  # a pressure below that of the air


def found(assessment: Assessment, code: str) -> Finding:
    (finding,) = [f for f in assessment.findings if f.code == code]
    return finding


def pressures(result: DutyResult) -> np.ndarray:
    made = result.made
    assert made.zero_flow is not None
    assert made.after_trip is not None
    assert made.one_pump_alone is not None
    return np.concatenate(
        [
            np.ravel(each)
            for each in (
                result.connection_pressure, result.suction_pressure,
                result.discharge_pressure, result.point_pressure, result.held_pressure,
                made.zero_flow.point_pressure_held, made.zero_flow.point_pressure_all,
                made.zero_flow.discharge_pressure_all, made.after_trip.point_pressure,
                made.one_pump_alone.suction_pressure,
            )
        ]
    )  # fmt: skip


@settings(max_examples=20, deadline=None)
@given(
    fire=st.floats(0, 200),
    low=st.floats(-400, 0),
    eye=st.floats(90, 180),
    top=st.floats(100, 420),
    altitude=st.one_of(st.none(), st.floats(-400, 4000)),
)
def test_no_pressure_below_a_vacuum_is_ever_stated(
    fire: float, low: float, eye: float, top: float, altitude: float | None
) -> None:
    station = station_with(
        **{
            FIRE: quantity(fire + 0.1, "L/s"), LOW: quantity(low, "kPa"),
            EYE: quantity(eye, "m"), f"{TOP}/elevation": quantity(top, "m"),
            ALTITUDE: None if altitude is None else quantity(altitude, "m"),
        }
    )  # fmt: skip
    result = solved(station)
    known = pressures(result)[np.isfinite(pressures(result))]
    assert np.all(known >= result.lowest_pressure)
    assert not np.any(result.npsh_available < 0)
    assert not np.any(np.isinf(known))
    for finding in assess(station).findings:
        said = words.sentence(finding, station, "si")
        deepest = max(map(float, PRINTED.findall(said)), default=0.0)
        assert 1e3 * deepest <= -result.lowest_pressure + 500, said
    bottom = -result.lowest_pressure / (result.density * water.GRAVITY)
    dry = result.suction_breaks_at != Place.NOWHERE
    assert np.all(np.isnan(result.suction_grade[dry]))
    assert np.all(np.isnan(result.npsh_available[dry]))
    grade = result.suction_grade[~dry & np.isfinite(result.suction_grade)]
    assert np.all(grade >= eye - bottom - 1e-9)


WEAK = {FIRE: quantity(45, "L/s"), f"{TEST}/residual_pressure": quantity(170, "kPa")}


def test_a_main_that_gives_out_has_no_water_instead_of_a_number() -> None:
    station = station_with(**WEAK)
    result, assessment = solved(station), assess(station)
    c = case_index(result, DESIGN_FIRE, "low")
    assert result.suction_breaks_at[c] == Place.CONNECTION
    assert result.state[c, result.available[c]].tolist().count(State.NO_WATER) > 0
    for values in (result.connection_pressure, result.suction_pressure, result.required_head):
        assert np.isnan(values[c])
    finding = found(assessment, "no_water_at_suction")
    assert finding.severity is Severity.STOP
    assert finding.cases[0].scenario == DESIGN_FIRE
    said = words.sentence(finding, station, "si")
    assert said.startswith("No water at the connection to the supplying main in maximum day")
    rows = {row.key: row for row in assessment.requirements}
    for key in ("suction_main", "npsh", "maximum_day_fire"):
        assert rows[key].cells[1].verdict is Verdict.DOES_NOT_MEET
    assert requirement_words.cell_words(rows["npsh"].cells[1], "si") == "no water to pump"
    criteria = {row.criterion.key: row for row in assessment.compliance}
    main = criteria["suction-main-minimum"]
    assert main.verdict is Verdict.DOES_NOT_MEET
    assert requirement_words.compliance_words(main, station, "si")[1] == ""


def test_the_results_say_why_a_number_is_null_where_there_is_no_water() -> None:
    station = station_with(**WEAK)
    (solved_set,) = json.loads(results_bytes(assess(station)))["sets"]
    (case,) = [
        each
        for each in solved_set["cases"]
        if (each["case"]["scenario"], each["case"]["supply"]) == (DESIGN_FIRE, "low")
    ]
    assert case["connection_pressure_pa"] is None
    assert case["null_because"] == dict.fromkeys(
        ("required_head_m", "supply_grade_m", "connection_pressure_pa", "suction_pressure_pa",
         "suction_grade_m"), "no_water") | {"tank_level_m": "not_applicable"}  # fmt: skip
    states = {each["state"] for each in case["combinations"]}
    assert states <= {"no_water", "end_of_curve", "not_available"}
    dry = next(each for each in case["combinations"] if each["state"] == "no_water")
    assert set(dry["null_because"].values()) == {"no_water", "not_applicable"}
    assert set(dry["units"][0]["null_because"].values()) == {"no_water"}
    assert set(dry["points"][0]["null_because"].values()) == {"no_water"}


def test_water_that_breaks_in_the_suction_line_leaves_the_main_with_its_pressure() -> None:
    reach = "/suction_line/reaches/rc-s7n3de"
    result = solved(station_with(**{f"{reach}/k": 400}))
    c = case_index(result, DESIGN_FIRE, "low")
    assert result.suction_breaks_at[c] == Place.SUCTION_GAUGE
    assert result.connection_pressure[c] == pytest.approx(119e3, rel=0.005)
    assert np.isnan(result.suction_pressure[c])


def test_a_suction_branch_that_breaks_the_column_leaves_no_duty() -> None:
    branch = "/legs/lg-m2n6wd/suction_branch"
    station = station_with(**{f"{branch}/k": 500})
    result = solved(station)
    c = case_index(result, DESIGN_FIRE, "low")
    assert result.suction_breaks_at[c] == Place.NOWHERE
    assert State.NO_WATER in result.state[c]
    assert "the pump eye" in words.sentence(
        found(assess(station), "no_water_at_suction"), station, "si"
    )


def test_the_other_supply_states_are_chosen_for_when_one_gives_no_water() -> None:
    result = solved(station_with(**{LOW: quantity(-400, "kPa")}))
    c = case_index(result, "sc-p2kh2h", "low")
    assert result.suction_breaks_at[c] != Place.NOWHERE
    demo = solved(station_with())
    assert result.chosen[c] == demo.chosen[case_index(demo, "sc-p2kh2h", "low")]


def test_below_atmosphere_is_told_where_no_requirement_is_asked() -> None:
    hydrant = "/zone/points/pt-h7f2cs"
    station = station_with(**{f"{hydrant}/elevation": quantity(185, "m")})
    finding = next(
        f for f in assess(station).findings
        if f.code == "below_atmosphere" and f.subject == hydrant
    )  # fmt: skip
    assert finding.severity is Severity.FAIL
    said = words.sentence(finding, station, "si")
    assert "below atmosphere, where dirty water can be drawn in" in said


def test_without_an_altitude_the_heaviest_air_is_the_bound_and_npsh_is_not_checked() -> None:
    station = station_with(**{**WEAK, ALTITUDE: None})
    result, assessment = solved(station), assess(station)
    bound = float(water.atmospheric_pressure(-400)) - float(water.vapour_pressure(20))
    assert bound == pytest.approx(103.9e3, rel=0.002)
    assert result.lowest_pressure == pytest.approx(-bound)
    assert np.all(np.isnan(result.npsh_available))
    assert found(assessment, "no_water_at_suction")
    assert ALTITUDE in assessment.missing


def test_a_case_without_a_duty_is_judged_on_the_supply_side() -> None:
    station = station_with(
        **{
            FIRE: quantity(80, "L/s"),
            f"{TEST}/test_flow": quantity(100, "L/s"),
            f"{TEST}/residual_pressure": quantity(130, "kPa"),
        }
    )
    assessment = assess(station)
    result = solved(station)
    c = case_index(result, DESIGN_FIRE, "low")
    assert found(assessment, "end_of_curve").governing == result.cases[c]
    finding = found(assessment, "suction_main_low")
    assert finding.governing == result.cases[c]
    assert finding.provided is not None
    assert finding.provided.value == pytest.approx(90e3, rel=0.01)


def test_a_demand_beyond_water_and_curve_is_told_as_both() -> None:
    codes = {f.code for f in assess(station_with(**{FIRE: quantity(140, "L/s")})).findings}
    assert {"end_of_curve", "no_water_at_suction"} <= codes
    assert "no_unit" not in codes


def test_a_curve_that_ends_at_low_speed_is_told_at_that_speed() -> None:
    low = {
        f"{TOP}/elevation": quantity(100, "m"),
        "/zone/points/pt-h7f2cs/elevation": quantity(95, "m"),
        "/zone/points/pt-g4h9ka/elevation": quantity(90, "m"),
    }
    station = station_with(**low)
    finding = found(assess(station), "end_of_curve")
    assert finding.provided is not None
    assert finding.required is not None
    assert finding.required.value == pytest.approx(60e-3)
    assert finding.provided.value == pytest.approx(0.55 * 75.6e-3, rel=1e-6)
    assert "at 55\u00a0% speed" in words.sentence(finding, station, "si")


def test_every_row_of_requirements_counts_a_case_without_a_duty() -> None:
    station: Station = station_with(
        **{f"/sets/{SET}/slots/{s}/from_horizon": "hz-d8gn4k"
           for s in ("sl-p1d4fg", "sl-p2e5gh", "sl-p3f6hj", "sl-p4g7jk", "sl-j5h8kq")}
    )  # fmt: skip
    rows = {row.key: row for row in assess(station).requirements}
    for key in ("peak_hour", "maximum_day", "maximum_day_fire", "minimum_night"):
        cell = rows[key].cells[0]
        assert cell.verdict is Verdict.DOES_NOT_MEET
        assert requirement_words.cell_words(cell, "si") == "no unit can run"
