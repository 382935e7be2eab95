"""Where no water is left, tables, strip, text and memo say so: no number below a vacuum.

No published figures: the demo's hydrant test made weak, as in the tests of the suction side.
"""

import json
import re

import numpy as np
import pytest

from server.duty_text import solved_text
from server.figures.case_words import case_index, judged_set, no_duty_words
from server.figures.duty_rows import scenario_duties, worst
from server.figures.strip import grade_strip
from server.figures.strip_svg import strip_svg
from server.memo.to_html import memo_html
from server.pages.tables import duty_table
from server.station.reader import read_station
from server.studies.assess import assess
from server.studies.duty_curves import duty_curves
from server.studies.supply_curve import SupplyCurve, supply_curve

FIRE = "sc-f2re9k"


@pytest.fixture(scope="module")
def station(demo_bytes):
    tree = json.loads(demo_bytes)
    tree["fires"][0]["flow"]["value"] = 45
    for test in tree["supply"]["flow_tests"]:
        if test["use"] == "basis":
            test["residual_pressure"]["value"] = 170
    return read_station(json.dumps(tree).encode())


@pytest.fixture(scope="module")
def weak(station):
    return judged_set(assess(station), station.proposed_set)


def test_the_row_of_a_case_without_water_names_the_places(weak):
    (duty,) = [each for each in scenario_duties(weak) if each.scenario == FIRE]
    low = duty.states[0]

    assert {"connection", "suction", "npsh"} <= low.dry
    assert (low.connection_pressure, low.suction_pressure, low.npsh_margin) == (None,) * 3
    assert (
        low.reason == "No water at the connection to the supplying main: nothing can be pumped."
    )
    # a state without water is the worst, though it has no number
    assert worst(duty.states, lambda r: r.connection_pressure, dry="connection") is low


def test_the_strip_says_no_water_and_draws_no_line_there(station, weak):
    case = case_index(weak.result, FIRE, "low")
    strip = grade_strip(station, weak.result, case)
    drawn = strip_svg(strip, "si", "the fire")

    assert [stop.dry for stop in strip.stops[:2]] == [True, True]
    assert [stop.grade for stop in strip.stops[:2]] == [None, None]
    assert drawn.count(">no water<") == 2
    assert "Mill Lane street main no water" in drawn
    assert no_duty_words(weak, case).startswith("No water at the connection")


def test_the_end_of_a_main_below_a_vacuum_has_no_pressure(station, weak):
    tree = json.loads(station.model_dump_json(by_alias=True))
    tree["discharge_main"]["reaches"][-1]["end_level"] = {"value": 400, "unit": "m"}
    high = read_station(json.dumps(tree).encode())
    judged = judged_set(assess(high), high.proposed_set)
    strip = grade_strip(high, judged.result, case_index(judged.result, "sc-p2kh2h", "normal"))
    (end,) = [stop for stop in strip.stops if stop.name == "End of the main"]

    assert (end.dry, end.grade, end.pressure) == (True, None, None)


def test_tables_text_and_memo_say_no_water(station, weak):
    head, *rows = duty_table(weak, "si")
    connection = next(
        i for i, title in enumerate(head) if title.startswith("Pressure at the con")
    )
    dry = [row for row in rows if row[connection] == "no water"]

    assert dry
    assert "no water" in solved_text(assess(station))
    assert "no water" in memo_html(station, "si", "a4")


def test_no_edge_prints_a_pressure_below_a_vacuum(station):
    texts = [
        solved_text(assess(station)),
        re.sub(r"<[^>]+>", " ", memo_html(station, "si", "a4")),
    ]
    for text in texts:
        for number in re.findall(r"[-−](\d+(?:\.\d+)?)[\s\u00a0]*kPa", text):
            assert float(number) <= 105


def test_the_curves_end_where_the_water_does(station, weak):
    supply = supply_curve(station, weak.result)
    assert isinstance(supply, SupplyCurve)
    curves = duty_curves(station, weak.result, "low")
    known = supply.pressure[np.isfinite(supply.pressure)]

    assert np.all(known >= weak.result.lowest_pressure)
    assert np.isnan(supply.pressure[0, -1])
    assert np.isnan(curves.required_low[-1])
    for along in curves.along:
        assert not np.any(along.npsh_available < 0)


def test_the_memo_says_from_where_pressures_count_and_how_far_one_pump_runs(station):
    text = re.sub(r"<[^>]+>", " ", memo_html(station, "si", "a4"))

    assert text.count("velocity head is not subtracted") == 1
    assert "judged at the lowest level entered for each reach" in text
    assert "One pump alone at top speed, low supply, new pipes" in text
