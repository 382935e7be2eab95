"""Canonical bytes: one document, one file; what was written comes back the same.

`golden/station_v1.json` is a file of version 1 with every field filled, kept for ever.
"""

import json
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.station import fields
from server.station.canonical import canonical_bytes, document_hash, nfc, number, plain
from server.station.entry import Quantity
from server.station.paths import put
from server.station.reader import read_station, read_stored
from server.station.station import Station
from tests.conftest import DEMO_FILE as DEMO
from tests.strategies import stations, whole_stations

GOLDEN = Path(__file__).parent / "golden" / "station_v1.json"


@whole_stations
@given(stations())
def test_a_file_read_and_written_again_has_the_same_bytes(station):
    body = canonical_bytes(station)

    assert read_station(body) == station
    assert canonical_bytes(read_station(body)) == body
    assert read_stored(body) == station


def test_the_golden_file_of_version_1_opens_and_is_written_as_it_was():
    body = GOLDEN.read_bytes()

    assert canonical_bytes(read_station(body)) == body


def test_the_golden_file_of_version_1_has_every_field_filled():
    tree = json.loads(GOLDEN.read_bytes())
    absent = []
    for node in fields.walk(fields.root()):
        holders = [tree]
        for segment in node.pattern[1:].split("/"):
            if segment == "*":
                holders = [item for holder in holders for item in holder]
            else:
                holders = [holder[segment] for holder in holders if segment in holder]
        if not holders:
            absent.append(node.pattern)

    assert absent == []


def test_the_demo_station_is_kept_in_canonical_bytes():
    body = DEMO.read_bytes()

    assert canonical_bytes(read_station(body)) == body


def test_the_empty_document_has_only_its_format_and_version():
    assert (
        canonical_bytes(Station()) == b'{\n  "format": "firmhead-station",\n  "version": 1\n}\n'
    )


def test_a_group_that_was_filled_and_emptied_leaves_no_trace():
    filled = put(Station(), "/site/water_temperature/low", {"value": 6, "unit": "degC"})
    emptied = put(filled, "/site/water_temperature/low", None)

    assert canonical_bytes(emptied) == canonical_bytes(Station())


def test_keys_stand_in_the_order_of_the_models_whatever_the_order_of_entry():
    one = put(put(Station(), "/zone/title", "Upper"), "/site/datum", "town")
    two = put(put(Station(), "/site/datum", "town"), "/zone/title", "Upper")

    assert canonical_bytes(one) == canonical_bytes(two)
    assert canonical_bytes(one).index(b"datum") < canonical_bytes(one).index(b"Upper")


def test_a_value_keeps_the_unit_and_the_sum_it_was_typed_as():
    value = {"value": 55.5, "unit": "ft", "typed": "3*18.5"}
    body = canonical_bytes(put(Station(), "/site/floor_level", value))

    assert b'"floor_level": {"value": 55.5, "unit": "ft", "typed": "3*18.5"}' in body


def test_a_table_has_one_row_a_line():
    body = DEMO.read_bytes().decode()

    assert "\n              [0, 85, 0, 9, 2.05],\n" in body
    assert "\n              [25.2, 51.7, 59.4, null, 5.05]\n" in body


def test_text_is_written_in_unicode_form_nfc_and_as_utf_8():
    decomposed = Station.model_validate_json('{"site": {"datum": "Odlo\\u0308"}}')
    body = canonical_bytes(decomposed)

    assert "Odl\u00f6".encode() in body
    assert canonical_bytes(read_station(body)) == body


def test_a_file_with_decomposed_text_is_read_as_it_will_be_written():
    body = '{"format": "firmhead-station", "version": 1, "site": {"datum": "o\u0308"}}'

    assert read_station(body.encode()).site.datum == "\u00f6"


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (54.0, "54"), (-0.0, "0"), (0.0, "0"), (-40.0, "-40"), (0.1, "0.1"),
        (3.9000000000000004, "3.9000000000000004"), (1e15, "1000000000000000.0"),
        (1e22, "1e+22"), (5e-324, "5e-324"),
    ],
)  # fmt: skip
def test_a_number_is_written_as_short_as_it_can_be(value, text):
    assert number(value) == text


@given(st.floats(allow_nan=False, allow_infinity=False))
def test_a_written_number_reads_back_exactly(value):
    assert json.loads(number(value)) == value


@pytest.mark.parametrize("value", [float("nan"), float("inf"), -float("inf")])
def test_a_number_that_is_not_finite_is_never_written(value):
    with pytest.raises(ValueError, match="finite"):
        number(value)


@given(st.text())
def test_text_in_form_nfc_stays_as_it_is(text):
    assert nfc(nfc(text)) == nfc(text)


def test_plain_data_is_what_the_file_says(demo):
    assert plain(demo) | {"format": 1, "version": 1} == json.loads(DEMO.read_bytes()) | {
        "format": 1,
        "version": 1,
    }
    assert plain(Quantity(value=54.0, unit="m")) == {"value": 54, "unit": "m"}


def test_what_a_station_does_not_hold_is_refused():
    with pytest.raises(TypeError, match="set"):
        plain({1})


def test_the_hash_is_the_sha_256_of_the_bytes():
    """FIPS 180-4, the digest of the message "abc"; recalled from memory."""
    expected = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
    assert document_hash(b"abc") == expected
