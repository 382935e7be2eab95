"""Edits: applied whole or not at all, seen or not seen, taken back."""

import pytest
from hypothesis import given

from server.station import fields
from server.station.edits import UNKNOWN, Conflict, Edit, apply_edits, inverse, merge
from server.station.faults import BadStation
from server.station.paths import get, get_json
from server.station.station import Station
from tests.station.disjoint_edits import disjoint_edits
from tests.strategies import whole_stations

TOP = "/zone/points/pt-t3r8nw/elevation"
HYDRANT = "/zone/points/pt-h7f2cs/elevation"
LAST = "/scenarios/sc-f2re9k"
SLOT = "/sets/st-v3a7pe/slots/sl-p1d4fg"


def level(metres: float) -> dict[str, object]:
    return {"value": metres, "unit": "m"}


def after(station: Station, *edits: Edit) -> Station:
    return apply_edits(station, edits)


def test_edits_are_applied_in_order(demo):
    new = after(demo, Edit("set", TOP, level(157)), Edit("set", TOP, level(158)))

    assert get(new, TOP).value == 158.0


def test_one_bad_edit_of_several_leaves_everything_as_it_was(demo):
    with pytest.raises(
        BadStation, match="must be between -450 m and 9000 m; 90000 m was given"
    ):
        after(demo, Edit("set", HYDRANT, level(151)), Edit("set", TOP, level(90_000)))

    assert get(demo, HYDRANT).value == 150.0


def test_edits_may_be_well_formed_only_together(demo):
    """A fire and the scenarios that name it go in one step, in whatever order."""
    fires = [Edit("set", f"/scenarios/{s.id}/fire", None) for s in demo.scenarios if s.fire]
    new = after(demo, Edit("remove", "/fires/fr-f6c1rs"), *fires)

    assert new.fires == ()


@pytest.mark.parametrize(
    ("path", "phrase"),
    [
        (
            "/fires/fr-f6c1rs",
            "Fold Crescent cannot be removed while it is in use: Fire of Maximum",
        ),
        ("/horizons/hz-0pn8ra", "Opening cannot be removed while it is in use"),
        ("/pumps/pu-m5x8qd", "Main M cannot be removed while it is in use: Pump of P1"),
        ("/pumps/pu-m5x8qd/curves/cu-m1a2bc", "212 mm impeller of Main M cannot be removed"),
        ("/legs/lg-j9c3ht", "Jockey leg cannot be removed while it is in use: Leg of J"),
        ("/sets/st-v3a7pe", "Three mains, standby, jockey cannot be removed"),
        (
            "/zone/points/pt-t3r8nw",
            "Top Row 31 cannot be removed while it is in use: Held point",
        ),
    ],
)
def test_an_item_in_use_is_not_removed_and_the_user_is_named(demo, path, phrase):
    with pytest.raises(BadStation) as bad:
        after(demo, Edit("remove", path))

    assert bad.value.faults[0].sentence.startswith(phrase)
    assert fields.find(bad.value.faults[0].path) is not None


def test_another_pump_in_a_slot_empties_the_curve_of_the_first(demo):
    new = after(demo, Edit("set", f"{SLOT}/pump", "pu-j3y6re"))

    assert get(new, f"{SLOT}/curve") is None
    assert apply_edits(new, inverse(demo, new)) == demo


def test_the_same_pump_in_a_slot_keeps_its_curve(demo):
    assert after(demo, Edit("set", f"{SLOT}/pump", "pu-m5x8qd")) == demo


def test_a_field_that_showed_an_old_value_is_not_overwritten_unseen(demo):
    """The page has the newest base, but this input was not redrawn after another's edit."""
    newest = after(demo, Edit("set", TOP, level(157)))
    stale = Edit("set", TOP, level(160), was=level(156))
    seen = Edit("set", TOP, level(160), was=level(157))

    with pytest.raises(Conflict) as conflict:
        merge(newest, [stale], newest)
    assert conflict.value.base == level(156)
    assert get(merge(newest, [seen], newest), TOP).value == 160.0


def test_a_page_need_not_know_the_source_of_the_value_it_saw(demo):
    edit = Edit("set", TOP, level(157), was=level(156))

    assert merge(demo, [edit], demo) == after(demo, Edit("set", TOP, level(157)))


def test_two_edits_of_one_field_in_a_row_name_what_each_saw(demo):
    edits = [
        Edit("set", TOP, level(157), was=level(156)),
        Edit("set", TOP, level(158), was=level(157)),
    ]

    assert get(merge(demo, edits, demo), TOP).value == 158.0


def test_an_emptied_field_that_was_empty_is_no_conflict(demo):
    edit = Edit("set", "/supply/tank/low", level(3), was=None)

    assert get(merge(demo, [edit], demo), "/supply/tank/low").value == 3.0
    text = Edit("set", "/demands/basis", "new", was=get_json(demo, "/demands/basis"))
    assert merge(demo, [text], demo).demands.basis == "new"


def test_ones_own_edit_is_taken_back_in_a_document_that_others_have_changed(demo):
    mine = after(demo, Edit("set", TOP, level(157)))
    newest = after(mine, Edit("set", HYDRANT, level(151)))
    undone = merge(mine, inverse(demo, mine), newest)

    assert get(undone, TOP) == get(demo, TOP)
    assert get(undone, HYDRANT).value == 151.0


def test_an_edit_that_another_has_built_on_is_not_taken_back(demo):
    mine = after(demo, Edit("set", TOP, level(157)))
    newest = after(mine, Edit("set", TOP, level(158)))

    with pytest.raises(Conflict) as conflict:
        merge(mine, inverse(demo, mine), newest)
    assert conflict.value.theirs == level(158)


def test_a_removed_item_comes_back_whole_and_in_its_place(demo):
    gone = after(demo, Edit("remove", "/scenarios/sc-a1vg5c"))

    assert apply_edits(gone, inverse(demo, gone)) == demo


def test_an_undone_edit_can_be_done_again(demo):
    mine = after(demo, Edit("set", TOP, level(157)))
    undone = apply_edits(mine, inverse(demo, mine))

    assert undone == demo
    assert apply_edits(undone, inverse(mine, undone)) == mine


@pytest.mark.parametrize(
    ("data", "phrase"),
    [
        ("text", "an edit is an object"),
        ({"op": "sett", "path": "/site/datum"}, "op is one of set, insert, remove, move"),
        ({"op": "set", "path": 3, "value": 1}, "path is the address"),
        ({"op": "set", "path": "/site/datum"}, "set needs a value"),
        ({"op": "insert", "path": "/legs"}, "insert needs a value"),
        ({"op": "move", "path": "/legs/lg-a", "before": 3}, "before is the id"),
        ({"op": "remove", "path": "/legs/lg-a", "why": 1}, "an edit has op, path, value"),
        ({"op": ["set"], "path": "/site/datum"}, "op is one of"),
    ],
)
def test_what_is_no_edit_is_refused_in_a_sentence(data, phrase):
    with pytest.raises(BadStation, match=phrase):
        Edit.from_json(data)


def test_an_edit_goes_through_json_unchanged():
    for edit in (
        Edit("set", TOP, level(157), was=None),
        Edit("set", TOP, None),
        Edit("insert", "/legs", {"id": "lg-aaaaaa"}, before="lg-m2n6wd"),
        Edit("remove", "/legs/lg-m2n6wd"),
        Edit("move", "/legs/lg-m2n6wd", before=None),
    ):
        assert Edit.from_json(edit.as_json()) == edit
    assert Edit.from_json({"op": "set", "path": TOP, "value": None}).was is UNKNOWN
    assert repr(UNKNOWN) == "UNKNOWN"


@whole_stations
@given(disjoint_edits())
def test_the_inverse_of_edits_leads_back(drawn):
    base, mine, theirs = drawn
    done = apply_edits(base, mine)
    newest = merge(base, theirs, done)

    assert apply_edits(done, inverse(base, done)) == base
    assert merge(done, inverse(base, done), newest) == apply_edits(base, theirs)
