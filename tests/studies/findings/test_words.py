"""Words at the edge: units by view, digits that do not contradict, the words of grades."""

import re
from pathlib import Path

from server.studies.findings import words
from server.studies.findings.judged_set import amount
from server.studies.findings.reason_words import REASONS
from server.studies.findings.registry import CODES
from server.studies.shapes import Case, Finding, Region, Severity, Verdict
from server.units import Dimension
from tests.studies.findings.demo import DESIGN, SET, assessed, demo, edited, put, q, remove

# of a search for a trim, and of curves that a station cannot hold
UNSAID = {"duty_past_last_row", "duty_above_full_diameter", "tested_speeds_differ"}
GOLDEN = Path(__file__).with_name("finding_codes.txt")


def _code(code: str) -> Finding:
    return next(f for f in assessed(demo()).findings if f.code == code)


def test_codes_are_those_that_answers_in_station_files_already_name() -> None:
    listed = [f"{code.code}: {code.short} ({code.sheet})" for code in CODES.values()]
    assert listed == GOLDEN.read_text(encoding="utf-8").splitlines()


def test_grades_and_verdicts_have_their_own_words() -> None:
    assert [words.severity_words(each) for each in Severity] == [
        "Stop", "Does not meet", "Not checked", "Caution", "Note",
    ]  # fmt: skip
    assert words.VERDICT_WORDS[Verdict.AT_LIMIT] == "At the limit"
    assert words.REGION_WORDS[Region.EDGE] == "edge"
    everything = " ".join((*words.VERDICT_WORDS.values(), *words.REGION_WORDS.values()))
    assert "OK" not in everything


def test_sentence_reads_in_us_units() -> None:
    said = words.sentence(_code("suction_main_low"), demo(), "us")
    assert "17.3\u00a0psi" in said
    assert "20.3\u00a0psi" in said
    assert "gpm" in said
    assert "kPa" not in said


def test_digits_are_added_until_provided_and_required_differ() -> None:
    finding = Finding(
        code="pressure_low", severity=Severity.FAIL, subject="/zone/points/pt-t3r8nw",
        pump_set=None,
        governing=Case("sc-p2kh2h", "st-v3a7pe", "hz-d8gn4k", "low", "aged", None),
        provided=amount("pressure", 249_970.0, Dimension.PRESSURE, 0),
        required=amount("required", 250_000.0, Dimension.PRESSURE),
        names=(("point", "Top Row 31"),), mend=("/sets/st-v3a7pe/control/pressure",),
    )  # fmt: skip
    said = words.sentence(finding, demo(), "si")
    assert "249.97\u00a0kPa" in said
    assert "250.00\u00a0kPa" in said


def test_case_names_scenario_supply_state_and_unit_out() -> None:
    case = Case("sc-p2kh2h", "st-v3a7pe", "hz-d8gn4k", "normal", "aged", "sl-p4g7jk")
    assert words.scenario_title(demo(), case) == "peak hour, design, normal supply, P4 out"


def test_scenario_named_after_a_place_keeps_its_capital() -> None:
    station = edited(put("/scenarios/sc-p2kh2h/title", "Harrowmere fair"))
    case = Case("sc-p2kh2h", "st-v3a7pe", "hz-d8gn4k", "high", "aged", None)
    assert words.scenario_title(station, case) == "Harrowmere fair, high supply"


def test_duration_of_hours_reads_in_hours() -> None:
    assert words.amount_words(amount("duration", 7200.0, Dimension.TIME), "si") == "2\u00a0h"
    assert words.amount_words(amount("delay", 15.0, Dimension.TIME), "si") == "15\u00a0s"


def test_basis_names_the_source_of_the_limit_or_that_it_was_typed() -> None:
    finding = _code("suction_main_low")
    assert words.basis(finding).startswith("Published source: Utah R309-540-6(3)(b)")
    station = edited(put("/criteria/rows/suction-main-minimum/limit", q(139, "kPa")))
    assert words.basis(finding, station) == "Typed for this station, no source named"
    assert words.basis(_code("after_trip_end_of_curve")) == "Computed"


def test_criterion_is_named_by_its_rule() -> None:
    said = words.field_words(demo(), "/criteria/rows/suction-main-minimum/limit")
    assert said == "Criteria, Supplying main at the connection, at ground level, limit"


def test_every_refusal_of_the_study_has_words_of_its_own() -> None:
    server = Path(__file__).parents[3] / "server"
    files = [*(server / "studies" / "lowering").glob("*.py"), server / "hydraulics" / "trim.py",
             server / "hydraulics" / "diameters.py", server / "hydraulics" / "tank_levels.py",
             server / "hydraulics" / "smoothed_head.py"]  # fmt: skip
    told = re.compile(
        r"(?:needs\.(?:stop|leave_out)\([^)]*?, |(?:Curve|Supply)Refused\(\s*|^[A-Z_]+ = )"
        r'"([a-z]+(?:_[a-z]+)+)"', re.MULTILINE,
    )  # fmt: skip
    reasons = {reason for file in files for reason in told.findall(file.read_text("utf-8"))}
    assert {"single_barrel", "trim_below_least", "past_the_main"} <= reasons
    known = {*REASONS, "default_used", "not_in_this_version", "smoothing_degree"}
    own = {reason for reason in reasons if reason not in known}
    assert own <= UNSAID


def test_what_has_no_name_is_told_by_its_place() -> None:
    scenarios = [f"/scenarios/{each.id}" for each in demo().scenarios]
    station = edited(
        remove(*scenarios),
        put(f"{DESIGN}/title", ""), put(f"{DESIGN}/year", None), put(f"{SET}/title", ""),
        put(f"{SET}/trips/high_discharge_trip", None),
    )  # fmt: skip
    said = [words.sentence(each, station, "si") for each in assessed(station).findings]

    assert "No scenario in use judges the average day of horizon 2." in said
    assert "Horizon 2 has no year; when firm capacity runs out is not checked." in said
    assert any("of set 1 is not given" in each for each in said)


def test_assumed_velocity_of_a_check_valve_is_read_in_the_views_units() -> None:
    finding = next(
        f for f in assessed(demo()).findings
        if f.code == "default_used" and f.subject.endswith("/full_open_velocity")
    )  # fmt: skip

    assert words.sentence(finding, demo(), "us").endswith("stands in (4.9\u00a0ft/s).")
    assert words.sentence(finding, demo(), "si").endswith("stands in (1.50\u00a0m/s).")
