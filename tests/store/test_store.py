"""Stations kept and found again: revisions, merge, undo of one's own, copies, the archive."""

import threading
from concurrent.futures import ThreadPoolExecutor

import pytest
from sqlalchemy import event

from server.station.canonical import canonical_bytes, document_hash
from server.station.edits import Conflict, Edit
from server.station.faults import BadStation
from server.station.station import Station
from server.store.store import Store

TITLE, PLACE, CLIENT = "/identity/title", "/identity/place", "/identity/client"


def put(path, value):
    return [Edit("set", path, value)]


@pytest.fixture
def station_id(store, demo):
    return store.create(demo, "ann")


def test_a_station_comes_back_as_it_was_kept(store, station_id, demo):
    loaded = store.load(station_id)

    assert loaded.station == demo
    assert (loaded.number, loaded.newest, loaded.author) == (1, 1, "ann")
    assert store.body(station_id) == canonical_bytes(demo)
    assert loaded.hash == document_hash(store.body(station_id))


def test_an_empty_station_is_a_station(store):
    station_id = store.create(Station(), "ann")

    assert store.load(station_id).station == Station()
    assert store.list_stations()[0].title == ""


def test_what_is_kept_is_there_after_a_restart(store, station_id, demo):
    store.save(station_id, put(TITLE, "Another name"), 1, "ann")
    store.close()
    again = Store(store.file.parent)

    assert again.load(station_id).station.identity.title == "Another name"
    assert again.load(station_id, 1).station == demo
    assert [row.title for row in again.list_stations()] == ["Another name"]
    again.close()


def test_an_id_is_eight_characters_and_no_counter(store, demo):
    ids = {store.create(demo, "ann") for _ in range(20)}

    assert len(ids) == 20
    assert all(len(each) == 8 and not set(each) & set("ilou") for each in ids)


@pytest.mark.parametrize("at", [None, 1, 99])
def test_an_unknown_station_is_a_key_error(store, at):
    with pytest.raises(KeyError):
        store.load("nothere1", at)


def test_an_unknown_revision_is_a_key_error(store, station_id):
    for ask in (store.load, store.body):
        with pytest.raises(KeyError):
            ask(station_id, 2)
    with pytest.raises(KeyError):
        store.save(station_id, put(TITLE, "A"), 2, "ann")


def test_an_edit_makes_a_revision_that_says_what_it_changed(store, station_id, demo):
    loaded = store.save(station_id, put(TITLE, "New"), 1, "ann")
    newest, first = store.history(station_id)

    assert loaded.number == 2
    assert (newest.kind, newest.parent, first.kind, first.parent) == ("edit", 1, "new", None)
    (change,) = newest.changes
    assert (change.path, change.was, change.value) == (TITLE, demo.identity.title, "New")


def test_an_edit_that_changes_nothing_makes_no_revision(store, station_id, demo):
    loaded = store.save(station_id, put(TITLE, demo.identity.title), 1, "ann")

    assert loaded.number == 1
    assert len(store.history(station_id)) == 1


def test_edits_of_different_fields_on_one_revision_are_merged(store, station_id):
    store.save(station_id, put(TITLE, "Ann's"), 1, "ann")
    loaded = store.save(station_id, put(PLACE, "Ben's"), 1, "ben")

    assert (loaded.station.identity.title, loaded.station.identity.place) == ("Ann's", "Ben's")
    assert store.history(station_id)[0].kind == "merge"


def test_edits_of_one_field_on_one_revision_conflict_and_nothing_is_kept(store, station_id):
    store.save(station_id, put(TITLE, "Ann's"), 1, "ann")
    with pytest.raises(Conflict) as conflict:
        store.save(station_id, put(TITLE, "Ben's"), 1, "ben")

    assert (conflict.value.yours, conflict.value.theirs) == ("Ben's", "Ann's")
    assert store.load(station_id).number == 2


def test_an_edit_that_is_not_well_formed_is_refused_and_nothing_is_kept(store, station_id):
    with pytest.raises(BadStation):
        store.save(station_id, put("/proposed_set", "st-nothere"), 1, "ann")

    assert store.load(station_id).number == 1


def test_undo_takes_back_the_last_edit_and_redo_makes_it_again(store, station_id, demo):
    store.save(station_id, put(TITLE, "A"), 1, "ann")
    store.save(station_id, put(TITLE, "B"), 2, "ann")

    titles = [store.undo(station_id, "ann").station.identity.title for _ in range(2)]
    assert titles == ["A", demo.identity.title]
    titles = [store.redo(station_id, "ann").station.identity.title for _ in range(2)]
    assert titles == ["A", "B"]
    titles = [store.undo(station_id, "ann").station.identity.title for _ in range(2)]
    assert titles == ["A", demo.identity.title]


def test_undo_takes_back_ones_own_edit_and_leaves_the_others(store, station_id, demo):
    store.save(station_id, put(TITLE, "Ann's"), 1, "ann")
    store.save(station_id, put(PLACE, "Ben's"), 2, "ben")
    loaded = store.undo(station_id, "ann")

    assert loaded.station.identity.title == demo.identity.title
    assert loaded.station.identity.place == "Ben's"


def test_undo_is_refused_with_both_values_when_the_field_changed_since(store, station_id, demo):
    store.save(station_id, put(TITLE, "Ann's"), 1, "ann")
    store.save(station_id, put(TITLE, "Ben's"), 2, "ben")
    with pytest.raises(Conflict) as conflict:
        store.undo(station_id, "ann")

    assert conflict.value.path == TITLE
    assert conflict.value.theirs == "Ben's"
    assert conflict.value.yours == demo.identity.title
    assert store.load(station_id).number == 3


def test_undo_of_an_insertion_removes_the_item(store, station_id, demo):
    fire = {"id": "fr-n3w0ne", "title": "Another fire"}
    store.save(station_id, [Edit("insert", "/fires", fire)], 1, "ann")
    assert len(store.load(station_id).station.fires) == len(demo.fires) + 1

    assert store.undo(station_id, "ann").station == demo


def test_a_new_edit_ends_what_could_be_made_again(store, station_id):
    store.save(station_id, put(TITLE, "A"), 1, "ann")
    store.undo(station_id, "ann")
    store.save(station_id, put(PLACE, "B"), 3, "ann")

    with pytest.raises(BadStation, match="nothing of yours to redo"):
        store.redo(station_id, "ann")


def test_there_is_nothing_to_undo_in_a_new_station(store, station_id):
    with pytest.raises(BadStation, match="nothing of yours to undo"):
        store.undo(station_id, "ann")


def test_an_old_revision_can_be_restored_and_that_undone(store, station_id, demo):
    store.save(station_id, put(TITLE, "A"), 1, "ann")
    restored = store.restore(station_id, 1, "ann")

    assert restored.station == demo
    assert (restored.number, store.history(station_id)[0].of) == (3, 1)
    assert store.undo(station_id, "ann").station.identity.title == "A"


def test_a_whole_document_takes_the_place_of_the_newest_and_merges(store, station_id, demo):
    mine = store.save(station_id, put(TITLE, "A"), 1, "ann").station
    store.save(station_id, put(PLACE, "Elsewhere"), 2, "ben")
    loaded = store.replace(station_id, mine, 1, "ann")

    assert loaded.station.identity.place == "Elsewhere"
    assert store.replace(station_id, demo, 3, "ann").station == demo


def test_a_copy_is_a_station_of_its_own(store, station_id, demo):
    copy = store.copy(station_id, "ben")
    store.save(copy, put(PLACE, "Elsewhere"), 1, "ben")

    assert store.load(copy).station.identity.title == f"{demo.identity.title} (copy)"
    assert store.load(station_id).station == demo


def test_a_renamed_station_stands_in_the_list_by_its_new_name(store, station_id):
    store.rename(station_id, "New name", "ann")

    assert [row.title for row in store.list_stations()] == ["New name"]


def test_an_archived_station_leaves_the_list_and_takes_no_edit(store, station_id):
    store.archive(station_id, True)

    assert store.list_stations() == ()
    assert [row.id for row in store.list_stations(archived=True)] == [station_id]
    assert store.load(station_id).archived
    for change in (
        lambda: store.save(station_id, put(TITLE, "A"), 1, "ann"),
        lambda: store.undo(station_id, "ann"),
        lambda: store.restore(station_id, 1, "ann"),
        lambda: store.rename(station_id, "A", "ann"),
    ):
        with pytest.raises(BadStation, match="archived"):
            change()
    store.archive(station_id, False)
    assert store.save(station_id, put(TITLE, "A"), 1, "ann").number == 2


def test_a_document_that_stood_before_is_kept_once(store, station_id, demo):
    store.save(station_id, put(TITLE, "A"), 1, "ann")
    store.save(station_id, put(TITLE, demo.identity.title), 2, "ann")
    newest, _, first = store.history(station_id)

    assert newest.hash == first.hash
    assert newest.number == 3


def test_edits_of_many_threads_are_all_kept(store, station_id):
    paths = [f"/memo/{name}" for name in ("issue", "prepared", "checked", "approved")]
    paths += [TITLE, PLACE, CLIENT]
    start = threading.Barrier(len(paths))

    def save(path):
        start.wait()
        return store.save(station_id, put(path, f"by {path}"), 1, path)

    with ThreadPoolExecutor(len(paths)) as pool:
        list(pool.map(save, paths))

    loaded = store.load(station_id)
    assert loaded.number == 1 + len(paths)
    identity, memo = loaded.station.identity, loaded.station.memo
    kept = [memo.issue, memo.prepared, memo.checked, memo.approved]
    kept += [identity.title, identity.place, identity.client]
    assert kept == [f"by {path}" for path in paths]


def test_a_reader_does_not_wait_for_a_writer(store, station_id):
    with store._database.writing(), ThreadPoolExecutor(1) as pool:
        loaded = pool.submit(store.load, station_id).result(timeout=5)

    assert loaded.number == 1


def test_an_edit_asks_few_things_of_the_database(store, station_id):
    """Machine-independent: what an edit costs must not grow with the station's history."""
    asked = []

    def listen(connection, cursor, statement, parameters, context, executemany):
        asked.append(statement.split()[0])

    def cost(title, base):
        asked.clear()
        store.save(station_id, put(TITLE, title), base, "ann")
        return list(asked)

    event.listen(store._database.engine, "before_cursor_execute", listen)
    first = cost("0", 1)
    for number in range(30):
        store.save(station_id, put(TITLE, f"{number + 1}"), number + 2, "ann")

    assert cost("last", 32) == first
    assert len(first) <= 7, first


def test_the_same_document_is_read_once_while_it_is_in_memory(store, station_id):
    assert store.load(station_id).station is store.load(station_id).station
