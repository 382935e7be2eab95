"""The SQLite file and how it is opened: no lost update, no lost commit, readers never wait.

Python's sqlite3 begins a transaction at the first write only, so that what was read before
stands outside it; here every transaction is begun by us, a writing one with the lock at once.
"""

import sqlite3
import threading
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

from sqlalchemy import Connection, Engine, create_engine, event

FILE_NAME = "firmhead.db"
WAIT = 30.0  # seconds for another process's write
CONNECTIONS = 40  # as many as there are threads answering requests


def make_engine(file: Path) -> Engine:
    """Return the engine of a database file."""
    engine = create_engine(
        f"sqlite:///{file}",
        connect_args={"timeout": WAIT},
        pool_size=CONNECTIONS,
        max_overflow=CONNECTIONS,
    )
    event.listen(engine, "connect", _on_connect)
    event.listen(engine, "begin", _on_begin)
    return engine


def _on_connect(connection: sqlite3.Connection, record: Any) -> None:  # SQLAlchemy's own record
    connection.isolation_level = None
    connection.execute("PRAGMA journal_mode=WAL")
    connection.execute("PRAGMA synchronous=FULL")
    connection.execute("PRAGMA foreign_keys=ON")


def _on_begin(connection: Connection) -> None:
    readonly = connection.get_execution_options().get("readonly", False)
    connection.exec_driver_sql("BEGIN" if readonly else "BEGIN IMMEDIATE")


class Database:
    """Transactions on one file."""

    def __init__(self, engine: Engine) -> None:
        self.engine = engine
        # SQLite's own waiting is unfair between threads: with a lock of ours nobody waits long
        self._writing = threading.Lock()

    @contextmanager
    def reading(self) -> Iterator[Connection]:
        """Return a connection on one state of the file, whatever is written meanwhile."""
        with (
            self.engine.connect().execution_options(readonly=True) as connection,
            connection.begin(),
        ):
            yield connection

    @contextmanager
    def writing(self) -> Iterator[Connection]:
        """Return a connection whose changes are all kept, or none if an exception leaves it."""
        with self._writing, self.engine.begin() as connection:
            yield connection
