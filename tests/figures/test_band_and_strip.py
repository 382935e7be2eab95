"""The band mark and the grade-line strip.

Sources
    demo    design fire at low supply: street main 119 kPa, suction gauge 128.9 kPa, critical
            customer 183 kPa, lowest 498 kPa, hydrant 231.8 kPa, head 63.3 m (independent scalar
            calculator).
"""

from dataclasses import replace
from xml.etree import ElementTree

import pytest

from server.figures.band import band_mark, farthest
from server.figures.case_words import case_index, case_words
from server.figures.strip import grade_strip
from server.figures.strip_svg import strip_svg
from server.studies.shapes import Region

POR = (0.70, 1.20)


@pytest.mark.parametrize(
    ("share", "region", "percent"),
    [
        (0.334, Region.OUTSIDE, "33"),
        (0.6996, Region.OUTSIDE, "69.96"),
        (0.70, Region.EDGE, "70"),
        (1.2004, Region.OUTSIDE, "120.04"),
        (0.91, Region.INSIDE, "91"),
    ],
)
def test_a_rounded_share_never_stands_on_the_other_side_of_an_end(share, region, percent):
    mark = band_mark(share, POR, region)

    assert mark.percent == percent
    assert mark.word in mark.text


def test_the_dot_moves_and_the_ticks_stay():
    low, high = band_mark(0.4, POR, Region.OUTSIDE), band_mark(1.1, POR, Region.INSIDE)

    assert low.dot < low.low < high.dot < high.high
    assert (low.low, low.high) == (high.low, high.high)


def test_a_pump_beyond_the_axis_is_drawn_as_an_arrow_at_its_end():
    mark = band_mark(1.62, POR, Region.OUTSIDE)

    assert mark.past_axis
    assert mark.text == "162\u00a0%, outside"


def test_a_share_that_is_not_known_has_words_and_no_dot():
    mark = band_mark(None, None, Region.NOT_CHECKED)

    assert (mark.dot, mark.text) == (None, "not checked")


def test_the_mark_outside_comes_before_all_others():
    marks = [band_mark(s, POR, r) for s, r in ((0.9, Region.INSIDE), (0.3, Region.OUTSIDE))]

    assert farthest(marks).share == 0.3
    assert farthest([]) is None


@pytest.fixture
def fire(demo, judged):
    return grade_strip(demo, judged.result, case_index(judged.result, "sc-f2re9k"))


def test_the_strip_has_the_pressures_on_the_way(fire):
    pressures = {stop.name: stop.pressure for stop in fire.stops}

    assert pressures["Mill Lane street main"] / 1000 == pytest.approx(119.3, abs=0.3)
    assert pressures["Suction manifold"] / 1000 == pytest.approx(128.9, abs=0.3)
    assert pressures["Top Row 31"] / 1000 == pytest.approx(183, abs=0.5)
    assert pressures["Gatehouse"] / 1000 == pytest.approx(498, abs=0.5)
    assert pressures["H-07 Fold Crescent"] / 1000 == pytest.approx(231.8, abs=0.5)
    assert fire.lift == pytest.approx(63.3, abs=0.05)


def test_the_grade_line_falls_from_the_pumps_to_the_customer(fire):
    after = [stop.grade for stop in fire.stops if stop.after_pumps]

    assert after == sorted(after, reverse=True)
    assert fire.stops[1].grade < fire.stops[0].grade


@pytest.mark.parametrize("view", ["si", "us"])
def test_the_drawing_is_sound_and_says_what_it_shows(fire, judged, view):
    title = case_words(judged, case_index(judged.result, "sc-f2re9k"))
    root = ElementTree.fromstring(strip_svg(fire, view, title))
    texts = [t.text for t in root.iter("{http://www.w3.org/2000/svg}text")]

    assert title in root.get("aria-label")
    assert any("lift" in text for text in texts)
    assert ("17.3\u00a0psi" if view == "us" else "119\u00a0kPa") in texts
    assert "nan" not in ElementTree.tostring(root, encoding="unicode").lower()


def test_a_case_without_a_duty_draws_the_supply_s_side_alone(demo, judged):
    case = case_index(judged.result, "sc-f2re9k")
    chosen = judged.result.chosen.copy()
    chosen[case] = -1
    strip = grade_strip(demo, replace(judged.result, chosen=chosen), case)

    assert strip.lift is None
    assert strip.stops[1].pressure is not None
    assert all(stop.grade is None for stop in strip.stops if stop.after_pumps)
    assert "<svg" in strip_svg(strip, "si", "no duty")


def test_a_station_without_levels_is_still_drawn(demo, judged):
    site = demo.site.model_copy(
        update={"suction_gauge_level": None, "discharge_gauge_level": None}
    )
    strip = grade_strip(demo.model_copy(update={"site": site}), judged.result, 0)

    assert strip.stops[1].elevation is None
    assert "<svg" in strip_svg(strip, "si", "without levels")
