"""The database file: made, brought up with a copy beside it, refused if not ours or newer."""

import sqlite3
from contextlib import closing
from pathlib import Path

import pytest

from server.store import schema_steps
from server.store.problems import StoreRefused
from server.store.store import Store
from server.store.tables import metadata

DATABASES = Path(__file__).parent / "databases"


def read(file, question):
    with closing(sqlite3.connect(file)) as connection:
        return connection.execute(question).fetchall()


def write(file, *statements):
    with closing(sqlite3.connect(file)) as connection:
        for statement in statements:
            connection.execute(statement)
        connection.commit()


def add_step(monkeypatch):
    def step_2(connection):
        connection.execute("ALTER TABLE station ADD COLUMN colour TEXT NOT NULL DEFAULT ''")

    monkeypatch.setattr(schema_steps, "STEPS", (*schema_steps.STEPS, step_2))


def test_a_new_file_has_every_step_and_our_mark(store):
    assert read(store.file, "PRAGMA user_version") == [(len(schema_steps.STEPS),)]
    assert read(store.file, "PRAGMA application_id") == [(schema_steps.APPLICATION_ID,)]


def test_the_tables_are_those_the_program_uses(store):
    for table in metadata.sorted_tables:
        columns = {row[1] for row in read(store.file, f"PRAGMA table_info({table.name})")}

        assert columns == set(table.columns.keys())


def test_the_file_is_written_as_the_platform_was_proved(store):
    with store._database.reading() as connection:
        settings = {
            name: connection.exec_driver_sql(f"PRAGMA {name}").scalar()
            for name in ("journal_mode", "synchronous", "foreign_keys")
        }

    assert settings == {"journal_mode": "wal", "synchronous": 2, "foreign_keys": 1}


@pytest.mark.parametrize(
    "verb",
    [
        "UPDATE revision SET author = 'x'",
        "DELETE FROM revision",
        "UPDATE document SET version = 9",
        "DELETE FROM document",
    ],
)
def test_what_was_saved_is_never_changed_or_removed(store, demo, verb):
    store.create(demo, "ann")

    with pytest.raises(sqlite3.IntegrityError, match="append-only"):
        write(store.file, verb)


def test_an_older_file_is_brought_up_with_a_copy_beside_it(store, demo, monkeypatch):
    station_id = store.create(demo, "ann")
    store.close()
    add_step(monkeypatch)
    again = Store(store.file.parent)

    assert again.load(station_id).station == demo
    assert read(again.file, "PRAGMA user_version") == [(2,)]
    copy = store.file.with_name("firmhead-before-step-2.db")
    assert read(copy, "PRAGMA user_version") == [(1,)]
    assert read(copy, "SELECT id FROM station") == [(station_id,)]
    again.close()


def test_a_step_that_fails_leaves_the_file_as_it_was(store, demo, monkeypatch):
    station_id = store.create(demo, "ann")
    store.close()

    def step_2(connection):
        connection.execute("ALTER TABLE station ADD COLUMN colour TEXT")
        connection.execute("ALTER TABLE absent ADD COLUMN colour TEXT")

    with monkeypatch.context() as patched:
        patched.setattr(schema_steps, "STEPS", (*schema_steps.STEPS, step_2))
        with pytest.raises(StoreRefused, match="no such table"):
            Store(store.file.parent)

    again = Store(store.file.parent)
    assert again.load(station_id).station == demo
    assert "colour" not in str(read(again.file, "PRAGMA table_info(station)"))
    again.close()


def test_a_file_of_a_newer_program_is_refused(store):
    store.close()
    write(store.file, "PRAGMA user_version=99")

    with pytest.raises(StoreRefused, match="newer Firmhead"):
        Store(store.file.parent)


def test_a_file_of_another_program_is_refused(tmp_path):
    write(tmp_path / "firmhead.db", "CREATE TABLE theirs (a)")

    with pytest.raises(StoreRefused, match="another program"):
        Store(tmp_path)


def test_a_file_that_is_no_database_is_refused(tmp_path):
    (tmp_path / "firmhead.db").write_text(
        "not a database, but long enough to look like a file" * 9
    )

    with pytest.raises(StoreRefused, match="cannot be used as a database"):
        Store(tmp_path)


def test_a_data_folder_that_is_a_file_is_refused(tmp_path):
    (tmp_path / "taken").write_text("")

    with pytest.raises(StoreRefused, match="is a file"):
        Store(tmp_path / "taken")


@pytest.mark.parametrize("steps", range(1, len(schema_steps.STEPS) + 1))
def test_a_database_of_every_number_of_steps_still_opens(tmp_path, steps):
    """Each was written out by the program that had so many steps, and is kept for ever."""
    kept = DATABASES / f"steps_{steps}.sql"
    with closing(sqlite3.connect(tmp_path / "firmhead.db")) as connection:
        connection.executescript(kept.read_text(encoding="utf-8"))
    opened = Store(tmp_path)
    (row,) = opened.list_stations()

    assert opened.load(row.id).station.identity.title == "Renamed"
    assert opened.load(row.id, 1).station.identity.title == "Upper Fold booster"
    assert opened.undo(row.id, "ann").station.identity.title == "Upper Fold booster"
    opened.close()
