"""The database file's shape, brought up step by step; a file from a newer program is refused.

`PRAGMA user_version` counts the steps that were done, `PRAGMA application_id` says whose file
it is. Before a step on a file that holds something, the file is copied beside itself.
"""

import sqlite3
from collections.abc import Callable
from contextlib import closing
from pathlib import Path

from server.store.engine import WAIT
from server.store.problems import StoreRefused

APPLICATION_ID = 0x46524D48  # "FRMH"


def step_1(connection: sqlite3.Connection) -> None:
    """Make stations, documents and revisions."""
    connection.execute(
        "CREATE TABLE station (id TEXT PRIMARY KEY, title TEXT NOT NULL, "
        "job_number TEXT NOT NULL, place TEXT NOT NULL, newest INTEGER NOT NULL, "
        "archived BOOLEAN NOT NULL DEFAULT 0)"
    )
    connection.execute(
        "CREATE TABLE document (hash TEXT PRIMARY KEY, version INTEGER NOT NULL, "
        "body BLOB NOT NULL)"
    )
    connection.execute(
        "CREATE TABLE revision (station TEXT NOT NULL REFERENCES station (id), "
        "number INTEGER NOT NULL, parent INTEGER, "
        "document_hash TEXT NOT NULL REFERENCES document (hash), author TEXT NOT NULL, "
        "made_at TEXT NOT NULL, kind TEXT NOT NULL, changes TEXT NOT NULL, of INTEGER, "
        "PRIMARY KEY (station, number)) WITHOUT ROWID"
    )
    # append-only: what was once saved is never changed or lost
    for table in ("revision", "document"):
        for verb in ("UPDATE", "DELETE"):
            connection.execute(
                f"CREATE TRIGGER {table}_no_{verb.lower()} BEFORE {verb} ON {table} "
                f"BEGIN SELECT RAISE(ABORT, '{table} is append-only'); END"
            )


STEPS: tuple[Callable[[sqlite3.Connection], None], ...] = (step_1,)


def bring_up(file: Path) -> None:
    """Make the file, or bring an older one to the shape of this program.

    Raises
    ------
    StoreRefused
        If it is not Firmhead's file, is from a newer program, or cannot be read or written.
    """
    try:
        with closing(sqlite3.connect(file, timeout=WAIT, isolation_level=None)) as connection:
            _bring_up(connection, file)
    except sqlite3.Error as problem:
        raise StoreRefused(f"{file} cannot be used as a database: {problem}.") from problem


def _bring_up(connection: sqlite3.Connection, file: Path) -> None:
    connection.execute("PRAGMA synchronous=FULL")
    if _checked(connection, file) == len(STEPS):
        return
    connection.execute("BEGIN IMMEDIATE")
    # asked again inside the lock: another start may have done it meanwhile
    done = _checked(connection, file)
    if 0 < done < len(STEPS):
        _copy(file, file.with_name(f"{file.stem}-before-step-{done + 1}{file.suffix}"))
    for number, step in enumerate(STEPS[done:], done + 1):
        step(connection)
        connection.execute(f"PRAGMA user_version={number}")
    connection.execute(f"PRAGMA application_id={APPLICATION_ID}")
    connection.execute("COMMIT")


def _checked(connection: sqlite3.Connection, file: Path) -> int:
    """Return how many steps the file has; StoreRefused if it is not for this program."""
    application: int = connection.execute("PRAGMA application_id").fetchone()[0]
    done: int = connection.execute("PRAGMA user_version").fetchone()[0]
    tables: int = connection.execute("SELECT count(*) FROM sqlite_master").fetchone()[0]
    if application != APPLICATION_ID and (application or done or tables):
        raise StoreRefused(f"{file} belongs to another program; choose another data folder.")
    if done > len(STEPS):
        raise StoreRefused(
            f"{file} was written by a newer Firmhead (step {done}, this one knows "
            f"{len(STEPS)}); install that version, or choose another data folder."
        )
    return done


def _copy(file: Path, copy: Path) -> None:
    # a second connection sees the last committed state, which is what is to be kept
    with closing(sqlite3.connect(file)) as source, closing(sqlite3.connect(copy)) as target:
        source.backup(target)
