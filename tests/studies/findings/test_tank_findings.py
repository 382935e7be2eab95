"""The demo that fills a tank is clean of stop and fail, and nothing in it is left unsaid.

Source of the list: the station's own description; figures by an independent scalar calculator.
"""

import pytest

from server.studies.findings import requirement_words, words
from server.studies.findings.compliance import ComplianceRow
from server.studies.shapes import Severity, Verdict
from tests.studies.findings.demo import assessed, put
from tests.studies.findings.tank_code_cases import STAGES, tank_demo
from tests.studies.tank_demo import BASE, PUMP, T1

NOT_CHECKED, CAUTION, NOTE = Severity.NOT_CHECKED, Severity.CAUTION, Severity.NOTE
LEG = "/legs/lg-t5r2nb"
# one pump runs far right, no bypass and no standby power is given in revision 1, and the run of
# the reservoir's level over a day is not computed
REMARKS = {
    ("region_edge", CAUTION, T1),
    ("input_missing", NOT_CHECKED, "/supply/bypass/fitted"),
    ("standby_power_missing", NOT_CHECKED, f"{BASE}/standby_power/kind"),
    ("fire_storage_not_checked", NOT_CHECKED, "/zone/tank"),
}
PLAIN_FACTS = {
    ("check_valve_not_fully_open", NOTE, LEG),
    ("criterion_departs", NOTE, "/criteria/rows/firm-tank-hours"),
    ("default_used", NOTE, f"{LEG}/discharge_branch/full_open_velocity"),
    ("default_used", NOTE, f"{PUMP}/npsh_exponent"),
    ("default_used", NOTE, f"{PUMP}/minimum_flow"),
}


def test_the_demo_shows_its_remarks_and_nothing_of_stop_or_fail() -> None:
    found = [(f.code, f.severity, f.subject) for f in assessed(tank_demo()).findings]
    assert len(found) == len(set(found))
    assert set(found) == REMARKS | PLAIN_FACTS


def test_one_pump_alone_stands_at_the_edge_of_its_region() -> None:
    (edge,) = [f for f in assessed(tank_demo()).findings if f.code == "region_edge"]
    said = words.sentence(edge, tank_demo(), "si")
    assert "T1 runs at 119.7" in said
    assert "easiest fill, opening, high supply, 1 running" in said


def test_the_rows_of_the_summary_are_those_of_a_filling_station() -> None:
    station = tank_demo()
    rows = {row.key: row for row in assessed(station).requirements}
    assert list(rows) == [
        "tank_refill", "region", "npsh", "motor", "submergence", "fire_storage",
    ]  # fmt: skip
    say = requirement_words
    assert say.requirement_title(rows["tank_refill"], "si") == (
        "Maximum day into the full tank in 22\u00a0h"
    )
    assert say.cell_words(rows["tank_refill"].cells[1], "si") == "86.5 for 81.8\u00a0L/s"
    assert say.runs_out_words(rows["tank_refill"], station) == "after 2047"
    assert say.verdict_words(rows["region"].cells[0]) == "119.7\u00a0%, edge"
    assert say.cell_words(rows["motor"].cells[0], "si") == "50.9 for 55.0\u00a0kW"
    assert say.cell_words(rows["submergence"].cells[0], "si") == "1.10 for 0.77\u00a0m"
    assert "level over a day" in say.cell_words(rows["fire_storage"].cells[0], "si")
    assert {cell.verdict for cell in rows["npsh"].cells} == {Verdict.MEETS}


def test_what_a_tank_has_no_use_for_is_said_not_to_apply() -> None:
    rows: dict[str, ComplianceRow] = {
        row.criterion.key: row for row in assessed(tank_demo()).compliance
    }
    for key, because in (
        ("suction-main-minimum", "the station draws from a tank"),
        ("service-pressure-min", "no point is named; the tank holds the zone"),
        ("pressure-per-speed-max", "no pressure is held"),
        ("speed-lowest", "no unit has a drive"),
    ):
        assert rows[key].verdict is Verdict.NOT_APPLICABLE, key
        assert rows[key].because == because


def test_whether_it_holds_waits_for_what_is_not_checked() -> None:
    assessment = assessed(tank_demo())
    assert assessment.holds is None
    assert "3 things are not checked" in assessment.lead("si")


@pytest.mark.parametrize(("state", "path", "wrong", "right"), STAGES)
def test_levels_of_stages_are_held_against_tank_and_trip(
    state: str, path: str, wrong: object, right: object
) -> None:
    station = put(path, wrong)(tank_demo())
    found = [f for f in assessed(station).findings if f.code == "stage_level_wrong"]
    assert state in [dict(f.names)["state"] for f in found]
    for finding in found:
        assert words.sentence(finding, station, "si").endswith(".")
    mended = put(path, right)(station)
    assert not [f for f in assessed(mended).findings if f.code == "stage_level_wrong"]
