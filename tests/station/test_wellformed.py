"""What is never saved: units, ranges, ids, references, tables, dates; and what is saved."""

import json

import pytest
from hypothesis import given

from server.station import fields
from server.station.edits import Edit, apply_edits
from server.station.entry import Entry
from server.station.faults import BadStation
from server.station.paths import put
from server.station.reader import read_station
from server.station.station import Station
from server.station.wellformed import faults, inside, range_words, usual_range
from server.units import UNITS, Dimension, symbols
from tests.strategies import field_paths, stations, whole_stations

TOP = "/zone/points/pt-t3r8nw/elevation"
ONE_METRE = {"value": 1, "unit": "m"}


def sentences(station: Station) -> list[str]:
    return [fault.sentence for fault in faults(station)]


def one_of_each_pattern(station: Station) -> list[str]:
    return list({fields.node_at(path).pattern: path for path in field_paths(station)}.values())


@whole_stations
@given(stations())
def test_a_drawn_station_is_well_formed(station):
    assert faults(station) == ()


def test_the_empty_station_and_the_demo_are_well_formed(demo):
    assert faults(Station()) == ()
    assert faults(demo) == ()


def test_every_quantity_of_the_demo_refuses_every_unit_that_is_not_its_own(demo):
    for path in one_of_each_pattern(demo):
        if fields.kind_of(path) != "quantity":
            continue
        own = symbols(fields.entry_for(path).dimension)
        for symbol in {symbols(dimension)[0] for dimension in Dimension} - set(own):
            (fault,) = faults(put(demo, path, {"value": 1, "unit": symbol})) or (None,)
            assert fault is not None, (path, symbol)
            assert fault.path == path
            assert "is asked for" in fault.sentence


def test_every_bounded_number_refuses_what_lies_outside_and_takes_its_limits(demo):
    """The range is judged in SI, so in any unit of the field."""
    for path in one_of_each_pattern(demo):
        entry = fields.entry_for(path)
        if fields.kind_of(path) == "quantity" and entry.low is not None:
            for symbol in symbols(entry.dimension):
                unit = UNITS[symbol]
                span = entry.high - entry.low
                for si in (entry.low - 0.01 * span, entry.high + 0.01 * span):
                    value = {"value": unit.from_si(si), "unit": symbol}
                    found = [f for f in faults(put(demo, path, value)) if f.path == path]
                    assert any("must be" in fault.sentence for fault in found), (path, symbol)
                assert inside(entry, unit.to_si(unit.from_si(entry.high)))


def test_a_limit_that_is_not_part_of_the_range_is_refused_itself():
    bore = Entry("Bore", "sets", "", Dimension.BORE, 0, 3, above=True)
    length = Entry("Length", "sets", "", Dimension.LENGTH, 0, 10)

    assert not inside(bore, 0.0)
    assert inside(bore, 1e-9)
    assert inside(length, 0.0)
    assert not inside(length, 10.1)


@pytest.mark.parametrize(
    ("entry", "unit", "short", "long"),
    [
        (
            Entry("a", "sets", "", None, -450, 9000), "m",
            "-450 m to 9000 m", "between -450 m and 9000 m",
        ),
        (
            Entry("a", "sets", "", None, 0, 3, above=True), "mm",
            "above 0 mm, at most 3000 mm", "above 0 mm and at most 3000 mm",
        ),
        (Entry("a", "sets", "", None, 0), "1", "at least 0", "at least 0"),
        (Entry("a", "sets", "", None, 0, above=True), "m", "above 0 m", "above 0 m"),
        (Entry("a", "sets", "", None, None, 2), "m", "at most 2 m", "at most 2 m"),
        (Entry("a", "sets", ""), "m", "a finite number", "a finite number"),
    ],
)  # fmt: skip
def test_a_range_is_said_in_the_unit_of_the_value(entry, unit, short, long):
    assert range_words(entry, UNITS[unit]) == (short, long)


def test_the_usual_range_is_in_the_unit_of_the_si_view():
    assert usual_range(fields.entry_for("/pumps/*/motor_efficiency"), Dimension.RATIO) == (
        "20 % to 100 %"
    )


def test_a_number_without_an_upper_limit_must_still_be_finite():
    station = Station.model_validate_json(
        '{"criteria": {"rows": [{"id": "aa", "limit": {"value": 1e308, "unit": "km"}}]}}'
    )

    assert "Limit of criterion aa must be a finite number" in sentences(station)[0]


def test_an_engineering_contradiction_is_a_finding_and_not_a_refusal(demo):
    """Level order, a wrong pump, an odd demand: saved, and judged by the studies."""
    low = apply_edits(
        demo,
        [
            Edit("set", TOP, {"value": 20, "unit": "m"}),
            Edit(
                "set", "/horizons/hz-0pn8ra/demand/minimum_night", {"value": 99, "unit": "L/s"}
            ),
            Edit("set", "/supply/tank/low", {"value": 50, "unit": "m"}),
            Edit("set", "/supply/tank/top", {"value": 40, "unit": "m"}),
        ],
    )

    assert faults(low) == ()


def test_an_unknown_rule_is_kept_for_the_study_to_tell():
    tree = {"format": "firmhead-station", "version": 1,
            "criteria": {"rows": [{"id": "a-rule-of-tomorrow", "reason": "why"}]}}  # fmt: skip

    assert read_station(json.dumps(tree).encode()).criteria.rows[0].reason == "why"


def test_a_rule_may_have_the_name_of_an_item():
    station = Station.model_validate_json(
        '{"legs": [{"id": "npsh-margin"}], "criteria": {"rows": [{"id": "npsh-margin"}]}}'
    )

    assert faults(station) == ()


def test_a_list_has_at_most_500_items():
    rows = ",".join(f'{{"id": "lg-{n}"}}' for n in range(501))

    assert sentences(Station.model_validate_json(f'{{"legs": [{rows}]}}')) == [
        "Legs may have at most 500 items; 501 were given."
    ]


@pytest.mark.parametrize(
    ("path", "value", "phrase"),
    [
        ("/memo/date", "2026-02-29", "must be a date"),
        ("/memo/date", "26-02-01", "must be a date"),
        ("/supply/flow_tests/ft-a5t2rv/made_at", "2025-05-14 24:30", "must be a date"),
        ("/supply/flow_tests/ft-a5t2rv/made_at", "2025-05", "must be a date"),
        ("/demands/basis", "a\x00b", "without control signs"),
        ("/demands/basis", "x" * 20_001, "at most 20000 signs"),
        ("/site/datum", "a\nb", "on one line"),
        ("/demands/daily_pattern/values", [1] * 25, "it has 25"),
        ("/demands/daily_pattern/values", [1] * 23 + [-1], "-1 was given for hour 23"),
        (TOP, ONE_METRE | {"typed": "1+" * 70}, "at most 120 signs"),
        (TOP, ONE_METRE | {"source": {"kind": "test", "text": "x" * 301}}, "source"),
        (TOP, ONE_METRE | {"source": {"kind": "test", "date": "May"}}, "May was given"),
        ("/criteria/rows/aa/source", {"kind": "code", "date": "1.1."}, "date of its source"),
        ("/proposed_set", "st-none", "which is not among the sets"),
        ("/sets/st-v3a7pe/slots/sl-j5h8kq/curve", "cu-m1a2bc", "of another pump"),
    ],
)  # fmt: skip
def test_a_value_that_breaks_a_rule_is_not_saved(demo, path, value, phrase):
    with pytest.raises(BadStation) as bad:
        apply_edits(demo, [Edit("set", path, value)])

    (fault,) = bad.value.faults
    assert (fault.path, fault.sheet) == (path, fields.sheet_of(path))
    assert phrase in fault.sentence


@pytest.mark.parametrize(
    ("path", "value"),
    [
        ("/memo/date", "2024-02-29"),
        ("/supply/flow_tests/ft-a5t2rv/made_at", "2025-05-14"),
        ("/supply/flow_tests/ft-a5t2rv/made_at", "2025-05-14T23:59"),
        ("/demands/basis", "two\nlines\tand a tab"),
        ("/demands/daily_pattern/values", []),
        ("/demands/daily_pattern/values", [0] * 23 + [20]),
        ("/sets/st-v3a7pe/slots/sl-j5h8kq/curve", None),
        ("/site/water_temperature/high", {"value": 140, "unit": "degF"}),
        ("/site/altitude", {"value": -400, "unit": "m"}),
        ("/pumps/pu-m5x8qd/motor_efficiency", {"value": 1, "unit": "1"}),
    ],
)
def test_a_value_at_the_edge_of_a_rule_is_saved(demo, path, value):
    assert faults(apply_edits(demo, [Edit("set", path, value)])) == ()


def test_a_residual_pressure_is_below_the_static_one_in_any_units(demo):
    path = "/supply/flow_tests/ft-a5t2rv/residual_pressure"
    for value, unit in ((350, "kPa"), (3.5, "bar"), (51, "psi")):
        with pytest.raises(BadStation, match="must be below the static pressure of 350 kPa"):
            apply_edits(demo, [Edit("set", path, {"value": value, "unit": unit})])
    assert apply_edits(demo, [Edit("set", path, {"value": 50, "unit": "psi"})])


TABLE = "/pumps/pu-m5x8qd/curves/cu-m1a2bc/table"
UNITS_OF_TWO = {"flow": "L/s", "head": "m"}


@pytest.mark.parametrize(
    ("units", "rows", "phrase", "cell"),
    [
        (UNITS_OF_TWO, [[0, 50], [0, 49]], "which is the same as the one before", (1, 0)),
        (UNITS_OF_TWO, [[5, 50], [4, 49], [6, 48]], "which is below the one before", (1, 0)),
        (UNITS_OF_TWO, [[0, 50, 1]], "must have 2 cells", (0, 0)),
        (UNITS_OF_TWO, [[None, 50]], "has no flow", (0, 0)),
        (UNITS_OF_TWO, [[0, None]], "has no head", (0, 1)),
        (UNITS_OF_TWO, [[-1, 50]], "has its flow outside 0 L/s", (0, 0)),
        (UNITS_OF_TWO, [[0, 5000]], "has its head outside", (0, 1)),
        ({"flow": "psi", "head": "m"}, [[0, 50]], "psi is a unit of a pressure", None),
        ({"flow": "L/s", "head": "yards"}, [[0, 50]], "yards, which is not known", None),
        ({**UNITS_OF_TWO, "efficiency": "1"}, [[0, 50, 72]], "outside 0 to 1; 72", (0, 2)),
        ({**UNITS_OF_TWO, "efficiency": "%"}, [[0, 50, 101]], "outside 0 % to 100 %", (0, 2)),
        ({**UNITS_OF_TWO, "npsh_required": "kPa"}, [[0, 50, 2]], "kPa is a unit of", None),
    ],
)  # fmt: skip
def test_a_table_that_breaks_a_rule_is_refused_at_its_cell(demo, units, rows, phrase, cell):
    (fault,) = faults(put(demo, TABLE, {"units": units, "rows": rows}))

    assert fault.path == TABLE
    assert phrase in fault.sentence
    assert fault.cell == cell


@pytest.mark.parametrize(
    ("units", "rows"),
    [
        (UNITS_OF_TWO, []),
        (UNITS_OF_TWO, [[0, 50]]),
        (UNITS_OF_TWO, [[0, 50], [10, 60]]),
        ({**UNITS_OF_TWO, "efficiency": "1"}, [[0, 50, None], [5, 40, 1.0]]),
        ({**UNITS_OF_TWO, "efficiency": "%"}, [[0, 50, 0.72]]),
    ],
)
def test_a_table_that_a_study_will_judge_is_saved(demo, units, rows):
    assert faults(put(demo, TABLE, {"units": units, "rows": rows})) == ()
