"""Addresses: reading, setting, inserting, moving and removing by path; words for a path."""

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.station import fields
from server.station.canonical import canonical_bytes, plain
from server.station.changes import Change, longest_rise
from server.station.entry import Quantity
from server.station.faults import BadStation
from server.station.paths import (
    all_ids,
    diff,
    get,
    get_json,
    has,
    html_id,
    insert,
    item_title,
    move,
    path_of,
    put,
    remove,
    subject,
    words,
)
from server.station.station import Station
from tests.strategies import field_paths, stations, whole_stations

ELEVATION = "/zone/points/pt-t3r8nw/elevation"
MARGIN = "/criteria/rows/npsh-margin"


def apply_changes(station: Station, changes: tuple[Change, ...]) -> Station:
    for change in changes:
        if change.op == "set":
            station = put(station, change.path, change.value)
        elif change.op == "insert":
            list_path = change.path.rpartition("/")[0]
            station = insert(station, list_path, change.value, change.before)
        elif change.op == "remove":
            station = remove(station, change.path)
        else:
            station = move(station, change.path, change.before)
    return station


def test_a_field_is_read_by_its_path(demo):
    assert get(demo, ELEVATION).value == 156.0
    assert get(demo, "/sets/st-v3a7pe/control/kind") == "zone_point_pressure"
    assert get(demo, "/site/weather_allowance") is None
    assert get(demo, "") is demo
    assert get_json(demo, "/supply/states/normal") == {"value": 0, "unit": "kPa"}


def test_a_field_is_set_and_nothing_else_is_touched(demo):
    new = put(demo, ELEVATION, {"value": 157, "unit": "m"})

    assert get(new, ELEVATION) == Quantity(value=157.0, unit="m")
    assert get(demo, ELEVATION).value == 156.0
    assert new.pumps is demo.pumps
    assert new.zone.points[1] is demo.zone.points[1]


def test_setting_what_stands_there_gives_the_same_document(demo):
    assert put(demo, ELEVATION, get_json(demo, ELEVATION)) is demo


def test_an_emptied_field_goes_back_to_what_a_new_station_has(demo):
    assert get(put(demo, ELEVATION, None), ELEVATION) is None
    assert put(demo, "/site/datum", None).site.datum == ""
    assert get(put(demo, "/pumps/pu-m5x8qd/stages", None), "/pumps/pu-m5x8qd/stages") == 1


def test_a_value_of_another_shape_is_refused_with_its_path(demo):
    with pytest.raises(
        BadStation, match='Elevation of Top Row 31 must be a number; "x"'
    ) as bad:
        put(demo, ELEVATION, {"value": "x", "unit": "m"})

    assert [(fault.path, fault.sheet) for fault in bad.value.faults] == [
        (ELEVATION, "main-and-zone")
    ]


@pytest.mark.parametrize(
    ("path", "phrase"),
    [
        ("/zon", "has no field /zon"),
        ("zone", "has no field zone"),
        ("/zone/points/pt-nobody/elevation", "has no item pt-nobody"),
        ("/zone/points/0/elevation", "has no item 0"),
        ("/zone/points/pt-t3r8nw/colour", "has no field"),
        ("/site/datum/x", "has no field"),
    ],
)
def test_a_place_that_is_not_there_is_refused_in_a_sentence(demo, path, phrase):
    assert not has(demo, path)
    for use in (lambda: get(demo, path), lambda: put(demo, path, None)):
        with pytest.raises(BadStation, match=phrase):
            use()


def test_only_a_field_is_set_whole(demo):
    with pytest.raises(BadStation, match="not one field"):
        put(demo, "/zone", {})
    with pytest.raises(BadStation, match="not one field"):
        put(demo, "/zone/points", [])


def test_a_number_that_is_not_finite_is_refused(demo):
    with pytest.raises(BadStation, match="finite numbers only"):
        put(demo, ELEVATION, {"value": float("nan"), "unit": "m"})


def test_text_is_kept_in_unicode_form_nfc(demo):
    assert put(demo, "/site/datum", "o\u0308").site.datum == "\u00f6"


def test_an_item_is_inserted_in_front_of_another_or_last(demo):
    one = insert(demo, "/legs", {"id": "lg-aaaaaa"}, before="lg-j9c3ht")
    two = insert(demo, "/legs", {"id": "lg-aaaaaa"})

    assert [leg.id for leg in one.legs] == ["lg-m2n6wd", "lg-aaaaaa", "lg-j9c3ht"]
    assert [leg.id for leg in two.legs] == ["lg-m2n6wd", "lg-j9c3ht", "lg-aaaaaa"]


@pytest.mark.parametrize(
    ("list_path", "item", "before", "phrase"),
    [
        ("/legs", {"id": "lg-m2n6wd"}, None, "Main leg is already there"),
        ("/legs", {"title": "no id"}, None, "must have an id"),
        ("/legs", "text", None, "must have an id"),
        ("/legs", {"id": "A--"}, None, "must have an id"),
        ("/legs", {"id": "lg-aaaaaa", "colour": 1}, None, "colour is not a field of Leg 3"),
        ("/legs", {"id": "lg-aaaaaa"}, "lg-nobody", "has no item lg-nobody"),
        ("/site", {"id": "lg-aaaaaa"}, None, "is not a list"),
        ("/sets/st-nobody/slots", {"id": "sl-aaaaaa"}, None, "has no item st-nobody"),
    ],
)
def test_an_item_that_cannot_stand_in_a_list_is_refused(demo, list_path, item, before, phrase):
    with pytest.raises(BadStation, match=phrase):
        insert(demo, list_path, item, before)


def test_an_item_is_moved_and_removed(demo):
    moved = move(demo, "/scenarios/sc-f2re9k", "sc-n1gh7a")
    last = move(demo, "/scenarios/sc-n1gh7a", None)
    gone = remove(demo, "/scenarios/sc-n1gh7a")

    assert moved.scenarios[0].id == "sc-f2re9k"
    assert last.scenarios[-1].id == "sc-n1gh7a"
    assert len(gone.scenarios) == len(demo.scenarios) - 1
    assert move(demo, "/legs/lg-m2n6wd", "lg-m2n6wd") is demo


def test_what_is_no_item_is_neither_moved_nor_removed(demo):
    with pytest.raises(BadStation, match="not an item of a list"):
        remove(demo, "/site/datum")
    with pytest.raises(BadStation, match="has no item lg-nobody"):
        remove(demo, "/legs/lg-nobody")
    with pytest.raises(BadStation, match="has no item lg-nobody"):
        move(demo, "/legs/lg-nobody", None)


def test_a_criterion_has_a_row_only_while_it_departs_from_its_profile(demo):
    limit = {"value": 1.4, "unit": "1"}
    departing = put(demo, f"{MARGIN}/limit", limit)

    assert get(demo, f"{MARGIN}/limit") is None
    assert [row.id for row in departing.criteria.rows] == ["npsh-margin"]
    assert diff(demo, departing) == (Change("set", f"{MARGIN}/limit", None, limit),)
    assert put(departing, f"{MARGIN}/limit", None) == demo


def test_criteria_rows_stand_in_order_of_their_keys_whichever_came_first(demo):
    limit = {"value": 1, "unit": "1"}
    one = put(put(demo, f"{MARGIN}/limit", limit), "/criteria/rows/aa/limit", limit)
    two = put(put(demo, "/criteria/rows/aa/limit", limit), f"{MARGIN}/limit", limit)

    assert one == two
    with pytest.raises(BadStation, match="has no item"):
        put(demo, "/criteria/rows/Not A Key/limit", limit)


def test_every_id_of_the_document_is_known(demo):
    ids = all_ids(demo)

    assert {"pt-t3r8nw", "cu-m1a2bc", "sl-j5h8kq", "ft-a5t2rv", "rc-d2g7pz"} <= ids
    assert len(ids) == 2 + 3 + 2 + 3 + 2 + 1 + 10 + 4 + 1 + 5


@pytest.mark.parametrize(
    ("path", "said", "begins"),
    [
        (ELEVATION, "Main and zone, Top Row 31, elevation", "Elevation of Top Row 31"),
        (
            "/suction_line/reaches/rc-s7n3de/bore",
            "Site and supply, Tee to suction manifold, bore",
            "Bore of Tee to suction manifold",
        ),
        (
            "/legs/lg-m2n6wd/suction_branch/k",
            "Sets, Main leg, suction branch, sum of K",
            "Suction branch, sum of K of Main leg",
        ),
        (
            "/pumps/pu-m5x8qd/curves/cu-m1a2bc/table",
            "Pumps, Main M, 212 mm impeller, tested rows",
            "Tested rows of 212 mm impeller of Main M",
        ),
        ("/site/datum", "Site and supply, datum of all levels", "Datum of all levels"),
        ("/zone/points/pt-t3r8nw", "Main and zone, Top Row 31", "Top Row 31"),
        ("/zone/points/pt-nobody", "Main and zone, point 4", "Point 4"),
        (
            f"{MARGIN}/limit",
            "Criteria, criterion npsh margin, limit",
            "Limit of criterion npsh margin",
        ),
        ("/nowhere", "/nowhere", "nowhere"),
    ],
)  # fmt: skip
def test_a_path_is_said_in_words(demo, path, said, begins):
    assert words(demo, path) == said
    assert subject(demo, path) == begins


def test_an_item_without_a_name_is_told_by_its_place(demo):
    unnamed = put(demo, "/zone/points/pt-h7f2cs/title", "")

    assert item_title(unnamed, "/zone/points/pt-h7f2cs/elevation") == "point 2"
    assert item_title(demo, "/site/datum") == "Datum of all levels"
    assert item_title(demo, "/nowhere") == "/nowhere"


def test_an_html_id_leads_back_to_its_path():
    assert html_id(ELEVATION) == "zone--points--pt-t3r8nw--elevation"
    assert path_of("zone--points--pt-t3r8nw--elevation") == ELEVATION


@whole_stations
@given(stations())
def test_every_field_can_be_read_as_json_emptied_and_set_again(station):
    for path in field_paths(station):
        value = get_json(station, path)
        emptied = put(station, path, None)
        if fields.kind_of(path) not in ("choice", "flag", "integer"):
            assert put(emptied, path, value) == station


@whole_stations
@given(stations(1), stations(2))
def test_the_changes_between_two_stations_applied_in_order_lead_from_one_to_the_other(old, new):
    assert canonical_bytes(apply_changes(old, diff(old, new))) == canonical_bytes(new)
    assert diff(new, new) == ()


@settings(deadline=None, max_examples=40)
@given(st.permutations(range(10)), st.integers(0, 9))
def test_scenarios_in_any_order_are_reached_by_moves(order, left_out):
    old = Station.model_validate_json(
        '{"scenarios": [' + ",".join(f'{{"id": "s{i}"}}' for i in range(10)) + "]}"
    )
    kept = [f"s{i}" for i in order if i != left_out]
    new = Station.model_validate_json(
        '{"scenarios": [' + ",".join(f'{{"id": "{i}"}}' for i in [*kept, "new"]) + "]}"
    )

    assert apply_changes(old, diff(old, new)) == new


@given(st.lists(st.integers(0, 30), unique=True, max_size=8))
def test_what_need_not_be_moved_is_a_longest_rising_part(places):
    rise = longest_rise(places)
    best = max(
        (
            sum(1 for bit in range(len(places)) if mask >> bit & 1)
            for mask in range(1 << len(places))
            if (part := [p for bit, p in enumerate(places) if mask >> bit & 1]) == sorted(part)
        ),
        default=0,
    )

    assert rise == sorted(rise)
    assert [p for p in places if p in set(rise)] == rise
    assert len(rise) == best


def test_one_moved_item_is_one_change(demo):
    moved = move(demo, "/scenarios/sc-f2re9k", "sc-n1gh7a")

    assert [(c.op, c.path, c.before) for c in diff(demo, moved)] == [
        ("move", "/scenarios/sc-f2re9k", "sc-n1gh7a")
    ]


def test_an_inserted_item_is_one_change_with_its_whole_content(demo):
    new = insert(demo, "/legs", {"id": "lg-aaaaaa", "title": "Third"}, "lg-j9c3ht")
    value = {"id": "lg-aaaaaa", "title": "Third"}

    assert diff(demo, new) == (Change("insert", "/legs/lg-aaaaaa", None, value, "lg-j9c3ht"),)
    assert plain(new.legs[1]) == value
