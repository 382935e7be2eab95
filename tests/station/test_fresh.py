"""New and copied items: well-formed at once, with ids of their own, no invented numbers."""

import pytest
from hypothesis import given

from server.station import fields
from server.station.canonical import canonical_bytes
from server.station.edits import Edit, apply_edits
from server.station.entry import Quantity
from server.station.faults import BadStation
from server.station.fresh import copy_item, new_item
from server.station.ids import kind_letters
from server.station.paths import all_ids, get, put
from server.station.reader import read_station
from server.station.station import Station
from tests.strategies import field_paths, stations, whole_stations

LISTS = [
    "/supply/flow_tests", "/suction_line/reaches", "/discharge_main/reaches", "/legs",
    "/discharge_main/reaches/rc-d1f5my/fittings", "/zone/points", "/horizons", "/fires",
    "/scenarios", "/pumps", "/pumps/pu-m5x8qd/curves", "/sets", "/sets/st-v3a7pe/slots",
    "/sets/st-v3a7pe/control/stages", "/answers", "/memo/notes",
]  # fmt: skip


def test_every_list_that_a_person_fills_is_tried_here():
    tried = {fields.node_at(path).pattern for path in LISTS}
    every = {node.pattern for node in fields.walk(fields.root()) if node.kind == "list"}

    # criteria have rows by rule; suction fittings are those of every conduit
    assert every - tried == {"/criteria/rows", "/suction_line/reaches/*/fittings"}


@pytest.mark.parametrize("list_path", LISTS)
def test_a_new_item_can_be_saved_and_read_as_it_is(demo, list_path):
    item = new_item(demo, list_path)
    station = apply_edits(demo, [Edit("insert", list_path, item)])

    assert str(item["id"]).startswith(kind_letters(list_path) + "-")
    assert read_station(canonical_bytes(station)) == station


@pytest.mark.parametrize("list_path", LISTS)
def test_a_new_item_has_no_engineering_number(demo, list_path):
    item = new_item(demo, list_path)
    station = apply_edits(demo, [Edit("insert", list_path, item)])
    inside = [p for p in field_paths(station) if p.startswith(f"{list_path}/{item['id']}/")]

    assert inside
    assert not any(isinstance(get(station, path), Quantity) for path in inside)


def test_the_first_flow_test_is_the_basis_and_the_next_is_compared(demo):
    assert new_item(Station(), "/supply/flow_tests")["use"] == "basis"
    assert new_item(demo, "/supply/flow_tests")["use"] == "compared"


def test_a_new_point_has_the_role_that_is_still_missing(demo):
    assert new_item(Station(), "/zone/points")["role"] == "critical"
    assert new_item(demo, "/zone/points")["role"] == "customer"


def test_a_new_slot_has_the_pump_of_the_duty_slots_and_the_next_short_name(demo):
    slot = new_item(demo, "/sets/st-v3a7pe/slots")

    assert (slot["title"], slot["pump"], slot["leg"]) == ("P5", "pu-m5x8qd", "lg-m2n6wd")


def test_the_first_slot_has_the_only_pump_and_leg(demo):
    empty = apply_edits(demo, [Edit("insert", "/sets", {"id": "st-empty1"})])
    assert set(new_item(empty, "/sets/st-empty1/slots")) == {"id", "title"}
    single = put(Station.model_validate_json(
        '{"pumps": [{"id": "pu-a"}], "legs": [{"id": "lg-a"}], "sets": [{"id": "st-a"}]}'
    ), "/site/datum", "town")  # fmt: skip
    slot = new_item(single, "/sets/st-a/slots")

    assert (slot["title"], slot["pump"], slot["leg"]) == ("P1", "pu-a", "lg-a")


def test_a_new_fire_is_at_the_only_hydrant_and_a_new_scenario_in_the_last_horizon(demo):
    assert new_item(demo, "/fires")["point"] == "pt-h7f2cs"
    assert "point" not in new_item(Station(), "/fires")
    assert new_item(demo, "/scenarios")["horizon"] == "hz-d8gn4k"
    assert "horizon" not in new_item(Station(), "/scenarios")


def test_a_list_that_is_not_there_has_no_new_item(demo):
    with pytest.raises(BadStation, match="has no item"):
        new_item(demo, "/pumps/pu-nobody/curves")


def test_a_copy_has_new_ids_inside_and_keeps_what_it_refers_to(demo):
    copy = copy_item(demo, "/sets/st-v3a7pe")
    station = apply_edits(demo, [Edit("insert", "/sets", copy)])

    assert copy["title"] == "Three mains, standby, jockey, copy"
    assert len(all_ids(station)) == len(all_ids(demo)) + 6
    assert station.sets[1].control == demo.sets[0].control
    assert [s.pump for s in station.sets[1].slots] == [s.pump for s in demo.sets[0].slots]


def test_a_copied_slot_has_the_next_short_name(demo):
    assert copy_item(demo, "/sets/st-v3a7pe/slots/sl-p1d4fg")["title"] == "P5"


def test_a_copied_flow_test_is_compared_with_the_basis(demo):
    assert copy_item(demo, "/supply/flow_tests/ft-a5t2rv")["use"] == "compared"


def test_what_is_no_item_is_not_copied(demo):
    with pytest.raises(BadStation, match="has no item"):
        copy_item(demo, "/sets/st-nobody")


@whole_stations
@given(stations(1))
def test_every_item_of_a_station_can_be_copied_and_saved(station):
    for node in fields.walk(fields.root()):
        if node.kind != "list" or "*" in node.pattern or node.pattern == "/criteria/rows":
            continue
        for item in get(station, node.pattern):
            copy = copy_item(station, f"{node.pattern}/{item.id}")
            new = apply_edits(station, [Edit("insert", node.pattern, copy, before=item.id)])
            assert read_station(canonical_bytes(new)) == new


def test_a_new_reach_has_the_friction_law_of_the_reach_before(demo):
    assert "roughness" not in new_item(Station(), "/suction_line/reaches")
    first = demo.suction_line.reaches[0].id
    changed = apply_edits(
        demo,
        [
            Edit("set", f"/suction_line/reaches/{first}/roughness/law", "hazen_williams"),
            *(
                Edit("remove", f"/discharge_main/reaches/{reach.id}")
                for reach in demo.discharge_main.reaches
            ),
        ],
    )

    assert new_item(changed, "/discharge_main/reaches")["roughness"] == {
        "law": "hazen_williams"
    }
