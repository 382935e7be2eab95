"""The demo of a closed zone shows its two faults and its listed true warnings, and no other.

Source of the list and the figures: the station's own description, computed beside the program '
                                               'with a
scalar calculator (one root at a time), not with this program.
"""

import pytest

from server.studies.findings import requirement_words, words
from server.studies.shapes import Finding, Severity, Verdict
from tests.studies.findings.demo import (
    GATE,
    JOCKEY,
    LOW,
    MAIN,
    SET,
    TEST_A,
    TEST_B,
    assessed,
    demo,
)

STOP, FAIL, NOT_CHECKED = Severity.STOP, Severity.FAIL, Severity.NOT_CHECKED
CAUTION, NOTE = Severity.CAUTION, Severity.NOTE
J, P1, P2 = (f"{SET}/slots/{each}" for each in ("sl-j5h8kq", "sl-p1d4fg", "sl-p2e5gh"))
VALVES = ("/legs/lg-j9c3ht", "/legs/lg-m2n6wd")

FAULTS = {
    ("suction_main_low", FAIL, "/supply"),
    ("region_outside", FAIL, J),
}
WARNINGS = {
    ("supplying_zone_not_checked", NOT_CHECKED, "/supply/supplying_zone"),
    ("shutoff_pressure_high", CAUTION, GATE),
    ("speed_cannot_tell_night", CAUTION, J),
    ("station_off_relies_on_standby", CAUTION, "/zone"),
    ("after_trip_end_of_curve", CAUTION, SET),
    ("handover_by_share", CAUTION, P1),
    ("flow_test_small_drop", CAUTION, TEST_B),
    ("flow_test_extrapolated", CAUTION, TEST_A),
    ("handover_gap_narrow", NOTE, P2),
    ("set_point_not_held_in_fire", NOTE, f"{SET}/control"),
    ("pressure_by_speed", NOTE, f"{SET}/control"),
    ("low_state_estimated", NOTE, LOW),
}
# facts that any station of this kind shows: valves under their full-open velocity, a slow main
# in the first years, and the defaults that stand in
PLAIN_FACTS = {
    ("main_slow", NOTE, "/discharge_main/reaches/rc-d1f5my"),
    *(
        ("rating_level_not_given", NOTE, f"/discharge_main/reaches/{reach.id}")
        for reach in demo().discharge_main.reaches
    ),
    *(("check_valve_not_fully_open", NOTE, leg) for leg in VALVES),
    *(("default_used", NOTE, f"{leg}/discharge_branch/full_open_velocity") for leg in VALVES),
    *(("default_used", NOTE, f"{pump}/npsh_exponent") for pump in (MAIN, JOCKEY)),
    ("default_used", NOTE, f"{MAIN}/minimum_flow"),
    *(
        ("default_used", NOTE, f"/zone/points/{point.id}/fire_share")
        for point in demo().zone.points
    ),
}


def _one(code: str) -> Finding:
    (finding,) = [f for f in assessed(demo()).findings if f.code == code]
    return finding


def _amounts(finding: Finding) -> dict[str, float | None]:
    return {each.name: each.value for each in finding.others}


def test_demo_shows_its_two_faults_its_true_warnings_and_nothing_else() -> None:
    found = [(f.code, f.severity, f.subject) for f in assessed(demo()).findings]
    assert len(found) == len(set(found))
    assert set(found) == FAULTS | WARNINGS | PLAIN_FACTS


def test_findings_stand_worst_first() -> None:
    order = list(Severity)
    ranks = [order.index(f.severity) for f in assessed(demo()).findings]
    assert ranks == sorted(ranks)


def test_suction_fault_is_one_finding_with_main_gauge_and_firm_capacity() -> None:
    finding = _one("suction_main_low")
    others = _amounts(finding)
    assert finding.provided is not None
    assert finding.provided.value == pytest.approx(119e3, rel=0.005)
    assert others["gauge"] == pytest.approx(128.9e3, rel=0.005)
    assert others["firm"] == pytest.approx(56.4e-3, rel=0.005)
    assert others["short"] == pytest.approx(3.6e-3, abs=0.06e-3)
    assert [(c.scenario, c.supply) for c in finding.cases] == [("sc-f2re9k", "low")]
    assert finding.mend[0] == LOW


def test_suction_fault_reads_as_one_sentence() -> None:
    said = words.sentence(_one("suction_main_low"), demo(), "si")
    assert said.startswith("Mill Lane street main falls to 119.")
    for part in ("at the connection in maximum day and fire, design, low supply",
                 "128.9\u00a0kPa",
                 "at least 140\u00a0kPa", "firm capacity ends at 56.4\u00a0L/s",
                 "3.6\u00a0L/s short of 60.0\u00a0L/s"):  # fmt: skip
        assert part in said


def test_jockey_is_left_of_its_region_at_opening_night_in_all_supply_states() -> None:
    finding = _one("region_outside")
    assert finding.provided is not None
    assert finding.provided.value == pytest.approx(0.333, abs=0.01)
    assert {(c.scenario, c.supply) for c in finding.cases} == {
        ("sc-n1gh7a", state) for state in ("low", "normal", "high")
    }
    said = words.sentence(finding, demo(), "si")
    assert "outside, left of its preferred region" in said
    assert "minimum night, opening, low supply" in said


def test_shut_off_pressure_relies_on_the_trip_and_says_so() -> None:
    finding = _one("shutoff_pressure_high")
    said = words.sentence(finding, demo(), "si")
    assert finding.provided is not None
    assert finding.provided.value == pytest.approx(1047e3, rel=0.005)
    assert {case.supply for case in finding.cases} == {"normal", "high"}
    assert "trip at 900\u00a0kPa after 5\u00a0s" in said
    assert "rests on the trip" in said


def test_station_off_says_no_water_and_names_generator_and_its_seconds() -> None:
    said = words.sentence(_one("station_off_relies_on_standby"), demo(), "si")
    assert "no water" in said
    assert "automatic generator, 15\u00a0s to transfer" in said
    assert "-1" not in said


def test_units_left_after_a_trip_pass_the_end_until_the_standby_has_started() -> None:
    said = words.sentence(_one("after_trip_end_of_curve"), demo(), "si")
    assert "the 2 left would run past the end of their curve" in said
    assert "until P4 has started" in said
    assert "141\u00a0%" in said


def test_set_point_not_held_in_the_fire_is_information() -> None:
    finding = _one("set_point_not_held_in_fire")
    said = words.sentence(finding, demo(), "si")
    assert {case.supply for case in finding.cases} == {"low", "normal"}
    assert "183\u00a0kPa" in said
    assert "fire requirements are met" in said


def test_hand_over_figures_are_those_of_the_description() -> None:
    share, gap = _one("handover_by_share"), _one("handover_gap_narrow")
    assert share.provided is not None
    assert share.required is not None
    assert share.provided.value == pytest.approx(8.36e-3, rel=0.005)
    assert share.required.value == pytest.approx(8.79e-3, rel=0.005)
    assert _amounts(share)["overlap"] == pytest.approx(0.6e-3, abs=0.1e-3)
    assert _amounts(gap)["from"] == pytest.approx(15.5e-3, rel=0.01)
    assert _amounts(gap)["to"] == pytest.approx(16.1e-3, rel=0.01)


def test_speed_span_at_opening_night_is_one_per_cent() -> None:
    finding = _one("speed_cannot_tell_night")
    assert _amounts(finding)["zero"] == pytest.approx(0.830, abs=0.002)
    assert _amounts(finding)["speed"] == pytest.approx(0.840, abs=0.002)


def test_flow_tests_say_how_far_they_reach() -> None:
    extrapolated, drop = _one("flow_test_extrapolated"), _one("flow_test_small_drop")
    assert extrapolated.provided is not None
    assert drop.provided is not None
    assert extrapolated.provided.value == pytest.approx(1.5)
    assert drop.provided.value == pytest.approx(0.13, abs=0.001)


def test_set_does_not_hold_and_the_lead_says_why() -> None:
    assessment = assessed(demo())
    assert assessment.holds is False
    lead = assessment.lead("si")
    assert lead.startswith("Set “Three mains, standby, jockey” does not hold, because:")
    assert "Mill Lane street main falls to 119." in lead
    assert "J runs at 33\u00a0%" in lead


def test_summary_rows_answer_each_horizon() -> None:
    rows = {row.key: row for row in assessed(demo()).requirements}
    verdicts = {key: tuple(cell.verdict for cell in row.cells) for key, row in rows.items()}
    meets, fails, unknown = Verdict.MEETS, Verdict.DOES_NOT_MEET, Verdict.NOT_CHECKED
    assert verdicts == {
        "peak_hour": (meets, meets),
        "maximum_day": (meets, meets),
        "maximum_day_fire": (meets, fails),
        "minimum_night": (fails, meets),
        "npsh": (meets, meets),
        "suction_main": (meets, fails),
        "highest_pressure": (meets, meets),
        "supplying_zone": (unknown, unknown),
    }


def test_summary_rows_read_with_numbers_and_the_year_it_runs_out() -> None:
    station = demo()
    rows = {row.key: row for row in assessed(station).requirements}
    fire, peak, night = rows["maximum_day_fire"], rows["peak_hour"], rows["minimum_night"]
    say = requirement_words
    assert say.requirement_title(peak, "si") == "Peak hour, 250\u00a0kPa at Top Row 31"
    assert say.cell_words(peak.cells[1], "si") == "55.9 for 36.0\u00a0L/s"
    assert say.runs_out_words(peak, station) == "after 2047"
    assert say.cell_words(fire.cells[1], "si") == "56.4 for 60.0\u00a0L/s"
    assert say.runs_out_words(fire, station) == "2039, supplying main"
    assert say.verdict_words(night.cells[0]) == "33\u00a0%, outside"
    assert say.verdict_words(night.cells[1]) == "75\u00a0%, inside"
    assert say.cell_words(rows["supplying_zone"].cells[0], "si") == "its figures are not given"
