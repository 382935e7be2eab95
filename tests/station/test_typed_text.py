"""What a person types in a field becomes its value, and the field shows it as it was typed."""

import pytest
from hypothesis import given

from server.station import fields
from server.station.edits import Edit, apply_edits
from server.station.faults import BadStation
from server.station.paths import get, put
from server.station.station import Station
from server.station.typed_text import text_of, value_from_text
from server.units import Dimension
from tests.strategies import field_paths, stations, whole_stations

TOP = "/zone/points/pt-t3r8nw/elevation"
SOURCE = "/criteria/rows/npsh-margin/source"
TABLE = "/pumps/pu-m5x8qd/curves/cu-m1a2bc/table"
SURVEY = {"kind": "survey", "text": "site levels, sheet 3", "date": "2026-02-11"}


def refusal(station, path, text, **options):
    with pytest.raises(BadStation) as bad:
        value_from_text(station, path, text, **options)
    return bad.value.faults


@pytest.mark.parametrize(
    ("path", "text", "value"),
    [
        (TOP, "157", {"value": 157.0, "unit": "m", "source": SURVEY}),
        (TOP, "515 ft", {"value": 515.0, "unit": "ft", "source": SURVEY}),
        (TOP, "3*52 ", {"value": 156.0, "unit": "m", "typed": "3*52", "source": SURVEY}),
        (TOP, "  ", None),
        ("/site/weather_allowance", "1", {"value": 1.0, "unit": "kPa"}),
        ("/site/datum", " town\r\n", "town"),
        ("/zone/kind", "tank", "tank"),
        ("/zone/kind", "A tank floats on it", "tank"),
        ("/zone/kind", "", None),
        ("/scenarios/sc-n1gh7a/on", "left out", False),
        ("/scenarios/sc-n1gh7a/on", "true", True),
        ("/supply/bypass/fitted", "none", False),
        ("/fires/fr-f6c1rs/point", "pt-g4h9ka", "pt-g4h9ka"),
        ("/fires/fr-f6c1rs/point", "gatehouse", "pt-g4h9ka"),
        ("/sets/st-v3a7pe/slots/sl-p1d4fg/curve", "174 mm impeller", "cu-j4d5ef"),
        ("/pumps/pu-m5x8qd/stages", "2", 2),
        ("/pumps/pu-m5x8qd/npsh_exponent", "1.8", 1.8),
        ("/horizons/hz-0pn8ra/people", "2 500", 2500),
        ("/demands/daily_pattern/values", "1 0.5;0.5\n2", [1.0, 0.5, 0.5, 2.0]),
        ("/demands/daily_pattern/values", "", []),
        (SOURCE, "code: state rule", {"kind": "code", "text": "state rule"}),
        (SOURCE, "our rule", {"kind": "office", "text": "our rule"}),
        (SOURCE, "Survey", {"kind": "survey"}),
    ],
)  # fmt: skip
def test_a_text_is_read_as_its_field_wants_it(demo, path, text, value):
    assert value_from_text(demo, path, text) == value


@pytest.mark.parametrize(
    ("path", "text", "sentence", "allowed"),
    [
        (
            TOP,
            "20 kPa",
            "Elevation of Top Row 31: A level is asked for, in m or ft; kPa is a unit of "
            "a pressure.",
            "a number in m or ft, -450 m to 9000 m",
        ),
        (
            TOP,
            "1,234",
            "Elevation of Top Row 31: 1,234 may be 1234 or 1.234; write it without the "
            "comma, or with a point.",
            "a number in m or ft, -450 m to 9000 m",
        ),
        (
            "/zone/kind",
            "open",
            "Kind of zone must be closed: no tank on the zone, a tank floats on it or closed "
            "with a tank for fire; open was given.",
            "closed: no tank on the zone, a tank floats on it or closed with a tank for fire",
        ),
        (
            "/fires/fr-f6c1rs/point",
            "pt-nobody",
            "Hydrant of Fold Crescent must be Top Row 31, H-07 Fold Crescent or Gatehouse; "
            "pt-nobody was given.",
            "Top Row 31, H-07 Fold Crescent or Gatehouse",
        ),
        (
            "/pumps/pu-m5x8qd/stages",
            "2.5",
            "Stages of Main M must be a whole number; 2.5 was given.",
            "a whole number",
        ),
        (
            "/demands/daily_pattern/values",
            "1 x",
            "Hourly factors: x cannot be read: x is not a number; write a number without "
            "a unit.",
            "a number without a unit",
        ),
    ],
)
def test_a_text_that_cannot_be_read_is_refused_with_what_is_allowed(
    demo, path, text, sentence, allowed
):
    (fault,) = refusal(demo, path, text)

    assert (fault.path, fault.sheet) == (path, fields.sheet_of(path))
    assert fault.sentence == sentence
    assert fault.allowed == allowed
    assert fault.given


def test_an_empty_list_leaves_nothing_to_refer_to():
    (fault,) = refusal(Station(), "/proposed_set", "x")

    assert fault.sentence == "Proposed set has nothing to choose from yet; x was given."


def test_an_item_without_a_name_is_chosen_by_its_place(demo):
    unnamed = put(demo, "/sets/st-v3a7pe/title", "")

    assert value_from_text(unnamed, "/proposed_set", "set 1") == "st-v3a7pe"


def test_a_field_without_a_value_takes_the_unit_of_the_readers_view(demo):
    path = "/site/weather_allowance"

    assert text_of(demo, path) == ("", "kPa")
    assert text_of(demo, path, "us") == ("", "psi")
    assert value_from_text(demo, path, "0.2", view="us") == {"value": 0.2, "unit": "psi"}
    assert value_from_text(demo, path, "0.2", unit="bar") == {"value": 0.2, "unit": "bar"}


def test_a_field_keeps_its_own_unit_whatever_the_view(demo):
    assert text_of(demo, TOP, "us") == ("156", "m")
    assert value_from_text(demo, TOP, "157", view="us")["unit"] == "m"


def test_a_sum_is_shown_as_it_was_typed(demo):
    new = put(demo, TOP, value_from_text(demo, TOP, "3*52.5 ft"))

    assert text_of(new, TOP) == ("3*52.5", "ft")


def test_a_number_of_ones_own_is_no_default_any_more(demo):
    default = {"value": 25, "unit": "%", "source": {"kind": "default", "text": "assumed"}}
    path = "/pumps/pu-j3y6re/minimum_flow"
    station = put(demo, path, default)

    assert "source" not in value_from_text(station, path, "30")
    assert value_from_text(station, path, "25")["source"]["kind"] == "default"


def test_the_limit_of_a_criterion_needs_the_dimension_of_its_rule(demo):
    path = "/criteria/rows/suction-gauge-minimum/limit"
    value = value_from_text(demo, path, "20 psi", dimension=Dimension.PRESSURE)

    assert value == {"value": 20.0, "unit": "psi"}
    assert text_of(demo, path) == ("", None)
    assert value_from_text(put(demo, path, value), path, "21") == {"value": 21.0, "unit": "psi"}
    with pytest.raises(ValueError, match="dimension"):
        value_from_text(demo, path, "20 psi")


def test_the_source_of_a_limit_keeps_its_date_while_its_text_stays(demo):
    path = "/criteria/rows/npsh-margin/source"
    source = {"kind": "code", "text": "state rule", "date": "2025"}
    station = put(demo, path, source)

    assert text_of(station, path) == ("code: state rule", None)
    assert value_from_text(station, path, "code: state rule") == source
    assert value_from_text(station, path, "new rule") == {"kind": "code", "text": "new rule"}


def test_rows_pasted_from_a_spreadsheet_are_the_rows_copied_from_it(demo):
    text, unit = text_of(demo, TABLE)
    value = value_from_text(demo, TABLE, text.replace("\n", "\r\n") + "\r\n\t\t\t\t\r\n")

    assert unit is None
    assert text.splitlines()[1] == "4.5\t83.9\t34.8\t\t2.08"
    assert put(demo, TABLE, value) == demo


def test_rows_may_be_typed_with_spaces_and_short_rows_are_filled(demo):
    value = value_from_text(demo, TABLE, "0 60\n10; 50; 40")

    assert value["rows"] == [[0.0, 60.0, None, None, None], [10.0, 50.0, 40.0, None, None]]


def test_every_bad_cell_of_a_paste_is_told_with_its_place(demo):
    faults = refusal(demo, TABLE, "0\tx\t\n1\t60\t50%\t5 hp\n2\t50\t1\t2\t3\t4")

    assert [fault.cell for fault in faults] == [(0, 1), (1, 3), (2, 5)]
    assert "row 1, head: x cannot be read" in faults[0].sentence
    assert "the column is in kW, not in hp" in faults[1].sentence
    assert "more cells than the table has columns" in faults[2].sentence


def test_a_paste_of_too_many_rows_is_refused(demo):
    (fault,) = refusal(demo, TABLE, "\n".join(f"{n} 5" for n in range(201)))

    assert "at most 200 rows" in fault.sentence


def test_only_a_field_takes_a_text(demo):
    (fault,) = refusal(demo, "/zone/points", "x")
    assert "not a field" in fault.sentence
    with pytest.raises(BadStation, match="has no field"):
        text_of(demo, "/nowhere")


@whole_stations
@given(stations())
def test_what_a_field_shows_typed_again_changes_nothing(station):
    for path in field_paths(station):
        text, unit = text_of(station, path)
        value = get(station, path)
        limit = path.startswith("/criteria/rows/") and path.endswith("/limit")
        if limit and value is None:
            continue
        if fields.kind_of(path) in ("text", "source") or getattr(value, "typed", None):
            continue  # text is trimmed, and a drawn sum need not be one that can be read
        again = put(station, path, value_from_text(station, path, text, unit=unit))
        assert again == station, path


def test_a_typed_value_is_stored_by_an_edit(demo):
    value = value_from_text(demo, TOP, "72 ft")

    assert get(apply_edits(demo, [Edit("set", TOP, value)]), TOP).si == pytest.approx(21.9456)
