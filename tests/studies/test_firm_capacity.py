"""Firm capacity is not checked while one of its limits cannot be counted; the unit out is told.

No published figures: the demo's own, and what follows from the rule "smallest over units out".
"""

import json

import numpy as np
import pytest

from server.studies.assess import assess
from server.studies.capacity import Capacity
from server.studies.findings import requirement_words, words
from server.studies.firm_capacity import worst_out
from server.studies.results_json import results_bytes
from server.studies.shapes import Severity, Verdict
from tests.studies.demo import document, quantity, solved, station_with

LEVELS = {
    "/supply/connection_level": "connection",
    "/site/suction_gauge_level": "suction_gauge",
    "/site/eye_level": "npsh",
    "/site/altitude": "npsh",
}
# the demo's design fire falls short by the suction main, whatever else is not known
ROOMY = {"/supply/states/low": quantity(0, "kPa")}


@pytest.mark.parametrize("path", LEVELS)
def test_without_a_level_firm_capacity_is_not_checked_and_the_field_is_named(path: str) -> None:
    station = station_with(**{**ROOMY, path: None})
    assessment = assess(station)
    (finding,) = [f for f in assessment.findings if f.code == "firm_not_checked"]
    assert finding.severity is Severity.NOT_CHECKED
    assert finding.mend == (path,)
    assert "is not given" in words.sentence(finding, station, "si")
    assert assessment.holds is not True
    rows = {row.key: row for row in assessment.requirements}
    for key in ("peak_hour", "maximum_day_fire"):
        for cell in rows[key].cells:
            assert cell.verdict is Verdict.NOT_CHECKED
            assert "firm capacity" in requirement_words.cell_words(cell, "si")
        assert requirement_words.runs_out_words(rows[key], station) == ""
    for firm in solved(station).made.firm_capacity:
        assert firm.not_counted == (LEVELS[path],)


def test_without_npsh_rows_the_pump_is_named() -> None:
    tree = document()["pumps"][0]["curves"][0]["table"]
    del tree["units"]["npsh_required"]
    tree["rows"] = [row[:4] for row in tree["rows"]]
    path = "/pumps/pu-m5x8qd/curves/cu-m1a2bc/table"
    assessment = assess(station_with(**{**ROOMY, path: tree}))
    (finding,) = [f for f in assessment.findings if f.code == "firm_not_checked"]
    assert finding.mend == (path,)


def test_a_capacity_short_by_the_limits_that_are_known_fails_all_the_same() -> None:
    station = station_with(**{"/site/suction_gauge_level": None})
    rows = {row.key: row for row in assess(station).requirements}
    assert rows["maximum_day_fire"].cells[1].verdict is Verdict.DOES_NOT_MEET
    assert rows["maximum_day_fire"].cells[0].verdict is Verdict.NOT_CHECKED


def test_the_results_give_no_capacity_by_all_limits_while_one_is_not_known() -> None:
    station = station_with(**{**ROOMY, "/supply/connection_level": None})
    (each,) = json.loads(results_bytes(assess(station)))["sets"]
    for firm in each["firm_capacity"]:
        assert firm["by_all_m3_s"] is None
        assert firm["by_all_limit"] == "not_checked"
        assert firm["not_counted"] == ["connection"]
        assert firm["by_head_m3_s"] > 0


def test_without_low_supply_no_capacity_is_had_and_none_is_said_to_meet() -> None:
    rows = {
        row.key: row
        for row in assess(station_with(**{"/supply/states/low": None})).requirements
    }
    assert {cell.verdict for cell in rows["peak_hour"].cells} == {Verdict.NOT_CHECKED}


def _capacity(by_all: float, by_head: float) -> Capacity:
    return Capacity(
        by_head=by_head, by_head_limit="curve_end", by_all=by_all, by_all_limit="connection",
        not_counted=(), share=np.nan,
    )  # fmt: skip


def test_the_unit_out_is_not_picked_by_rounding() -> None:
    small_out, large_out = _capacity(56.4e-3, 80e-3), _capacity(56.4e-3 * (1 + 1e-12), 62e-3)
    assert worst_out([(small_out, 4), (large_out, 0)]) == (large_out, 0)
    assert worst_out([(large_out, 0), (large_out, 3), (small_out, 4)]) == (large_out, 3)


def test_in_the_demo_a_main_is_out_although_the_suction_limits_every_capacity() -> None:
    fires = [
        f for f in solved(station_with()).made.firm_capacity if f.by_all_limit == "connection"
    ]
    assert fires
    assert {f.unit_out for f in fires} == {"sl-p4g7jk"}
