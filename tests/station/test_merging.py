"""Edits of two people merged by path: both kept, or a conflict with all three values."""

import pytest
from hypothesis import given

from server.station.edits import Conflict, Edit, apply_edits, merge
from server.station.paths import get, has
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


def test_edits_of_two_people_on_different_fields_are_both_kept(demo):
    mine, theirs = Edit("set", TOP, level(157)), Edit("set", HYDRANT, level(151))
    both = merge(demo, [mine], after(demo, theirs))

    assert (get(both, TOP).value, get(both, HYDRANT).value) == (157.0, 151.0)
    assert both == merge(demo, [theirs], after(demo, mine))


def test_the_same_field_set_to_the_same_value_is_no_conflict(demo):
    edit = Edit("set", TOP, level(157))

    assert merge(demo, [edit], after(demo, edit)) == after(demo, edit)


def test_the_same_field_set_differently_is_a_conflict_with_all_three_values(demo):
    with pytest.raises(Conflict) as conflict:
        merge(demo, [Edit("set", TOP, level(157))], after(demo, Edit("set", TOP, level(158))))

    found = conflict.value
    assert found.path == TOP
    assert found.base["value"] == 156
    assert (found.yours, found.theirs) == (level(157), level(158))
    assert found.sentence == (
        "Elevation of Top Row 31 was changed to 158 m by another edit, while you changed it to "
        "157 m."
    )
    assert set(found.as_json()) == {"path", "base", "yours", "theirs", "sentence"}


@pytest.mark.parametrize(
    ("path", "mine", "theirs", "phrase"),
    [
        ("/zone/kind", "tank", "both", "to closed with a tank for fire by another edit"),
        (
            "/site/datum",
            "one",
            "two",
            'to "two" by another edit, while you changed it to "one"',
        ),
        ("/site/eye_level", None, level(111), "while you changed it to nothing"),
        ("/pumps/pu-m5x8qd/stages", 2, 3, "to 3 by another edit"),
        (
            "/pumps/pu-m5x8qd/curves/cu-m1a2bc/table",
            {"rows": [[0, 80]]},
            {"rows": [[0, 81]]},
            "to another content by another edit",
        ),
        (
            "/criteria/rows/npsh-margin/limit",
            level(1),
            level(2),
            "Limit of criterion npsh margin",
        ),
    ],
)
def test_a_conflict_is_told_in_the_words_of_its_field(demo, path, mine, theirs, phrase):
    newest = after(demo, Edit("set", path, theirs))
    with pytest.raises(Conflict) as conflict:
        merge(demo, [Edit("set", path, mine)], newest)

    assert phrase in conflict.value.sentence


def test_items_inserted_by_two_people_are_both_there_in_one_order(demo):
    mine = [
        Edit("insert", "/legs", {"id": "lg-bbbbbb"}),
        Edit("insert", "/legs", {"id": "lg-cccccc"}),
    ]
    theirs = [Edit("insert", "/legs", {"id": "lg-aaaaaa"})]
    both = merge(demo, mine, after(demo, *theirs))

    assert [leg.id for leg in both.legs][2:] == ["lg-aaaaaa", "lg-bbbbbb", "lg-cccccc"]
    assert both == merge(demo, theirs, after(demo, *mine))


def test_the_same_id_inserted_with_different_content_is_a_conflict(demo):
    mine = Edit("insert", "/legs", {"id": "lg-aaaaaa", "title": "One"})
    theirs = Edit("insert", "/legs", {"id": "lg-aaaaaa", "title": "Two"})

    with pytest.raises(Conflict):
        merge(demo, [mine], after(demo, theirs))
    assert merge(demo, [mine], after(demo, mine)) == after(demo, mine)


def test_an_edit_inside_an_item_that_another_removed_is_a_conflict_at_the_field(demo):
    newest = after(demo, Edit("remove", LAST))
    with pytest.raises(Conflict, match="was removed by another edit") as conflict:
        merge(demo, [Edit("set", f"{LAST}/out", "none")], newest)

    assert conflict.value.path == f"{LAST}/out"
    assert conflict.value.theirs is None


def test_an_item_removed_that_another_edited_is_a_conflict_at_the_item(demo):
    newest = after(demo, Edit("set", f"{LAST}/out", "none"))
    with pytest.raises(Conflict, match="was changed by another edit, while you removed it"):
        merge(demo, [Edit("remove", LAST)], newest)


def test_an_item_removed_by_both_is_removed(demo):
    newest = after(demo, Edit("remove", LAST))

    assert merge(demo, [Edit("remove", LAST)], newest) == newest


def test_an_item_moved_by_one_and_edited_by_the_other_is_both(demo):
    moved = Edit("move", LAST, before="sc-n1gh7a")
    edited = Edit("set", f"{LAST}/out", "none")
    both = merge(demo, [moved], after(demo, edited))

    assert both.scenarios[0].id == "sc-f2re9k"
    assert both.scenarios[0].out == "none"
    assert both == merge(demo, [edited], after(demo, moved))


def test_of_two_orders_the_last_wins(demo):
    first = Edit("move", LAST, before="sc-n1gh7a")
    last = Edit("move", LAST, before="sc-n2gh7b")
    both = merge(demo, [last], after(demo, first))

    assert [scenario.id for scenario in both.scenarios][:2] == ["sc-n1gh7a", "sc-f2re9k"]


def test_two_good_edits_that_are_bad_together_are_a_conflict_naming_the_rule(demo):
    """One lowers the static pressure, the other raises the residual pressure past it."""
    test = "/supply/flow_tests/ft-a5t2rv"
    lower = Edit("set", f"{test}/static_pressure", {"value": 300, "unit": "kPa"})
    higher = Edit("set", f"{test}/residual_pressure", {"value": 320, "unit": "kPa"})
    with pytest.raises(
        Conflict, match="must be below the static pressure of 300 kPa"
    ) as conflict:
        merge(demo, [lower], after(demo, higher))

    assert conflict.value.path == f"{test}/residual_pressure"


def test_an_item_removed_that_another_began_to_use_is_a_conflict(demo):
    spare = after(demo, Edit("insert", "/legs", {"id": "lg-spare1", "title": "Spare"}))
    newest = after(spare, Edit("set", f"{SLOT}/leg", "lg-spare1"))
    with pytest.raises(Conflict, match="Spare cannot be removed while it is in use: Leg of P1"):
        merge(spare, [Edit("remove", "/legs/lg-spare1")], newest)


@whole_stations
@given(disjoint_edits())
def test_edits_that_touch_different_paths_merge_to_the_same_whichever_came_first(drawn):
    base, mine, theirs = drawn
    one = merge(base, mine, apply_edits(base, theirs))

    assert one == merge(base, theirs, apply_edits(base, mine))
    for edit in (*mine, *theirs):
        if edit.op == "set":
            alone = apply_edits(base, [edit])
            assert get(one, edit.path) == get(alone, edit.path)
        elif edit.op == "insert":
            assert has(one, f"{edit.path}/{edit.value['id']}")
        else:
            assert not has(one, edit.path)
