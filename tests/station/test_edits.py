"""Edits: applied whole or not at all, merged by path, taken back."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.station import fields
from server.station.edits import UNKNOWN, Conflict, Edit, apply_edits, inverse, merge
from server.station.faults import BadStation
from server.station.fresh import new_item
from server.station.paths import get, get_json, has
from server.station.station import Station
from tests.strategies import field_paths, quantities, short_texts, stations, whole_stations

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


_TESTED = ("static_pressure", "residual_pressure")  # judged together, so never disjoint


@st.composite
def disjoint_edits(draw: st.DrawFn) -> tuple[Station, list[Edit], list[Edit]]:
    """Draw a station with two lists of edits that touch different fields and items."""
    base = draw(stations())
    paths = [p for p in field_paths(base) if p.rpartition("/")[2] not in _TESTED]
    chosen = draw(st.lists(st.sampled_from(paths), min_size=2, max_size=8, unique=True))
    sides: tuple[list[Edit], list[Edit]] = ([], [])
    for place, path in enumerate(chosen):
        node = fields.node_at(path)
        if node.kind == "quantity":
            value = draw(st.none() | quantities(node))
        elif node.kind == "text" and not path.endswith(("/made_at", "/date")):
            value = draw(short_texts)
        elif node.kind == "choice":
            value = draw(st.sampled_from([key for key, _ in node.entry.choices]))
        else:
            continue
        sides[place % 2].append(Edit("set", path, value))
    lists = ["/legs", "/zone/points", "/memo/notes", "/discharge_main/reaches"]
    for side in sides:
        for list_path in draw(st.lists(st.sampled_from(lists), max_size=2)):
            items = get(base, list_path)
            before = draw(st.none() | st.sampled_from([item.id for item in items] or [None]))
            side.append(Edit("insert", list_path, new_item(base, list_path), before=before))
    if base.answers and not any(edit.path.startswith("/answers") for edit in sides[1]):
        key = base.answers[0].id
        sides[0][:] = [
            edit for edit in sides[0] if not edit.path.startswith(f"/answers/{key}/")
        ]
        sides[0].append(Edit("remove", f"/answers/{key}"))
    return base, *sides


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


@whole_stations
@given(disjoint_edits())
def test_the_inverse_of_edits_leads_back(drawn):
    base, mine, theirs = drawn
    done = apply_edits(base, mine)
    newest = merge(base, theirs, done)

    assert apply_edits(done, inverse(base, done)) == base
    assert merge(done, inverse(base, done), newest) == apply_edits(base, theirs)
