"""The revisions of a station: read, appended, and which of them its author can take back."""

import json
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from typing import Any, Literal

from sqlalchemy import Connection, Row, insert, select

from server.station.changes import Change
from server.store.tables import revision

Kind = Literal[
    "new", "copy", "demo", "import", "edit", "merge", "undo", "redo", "restore", "upgrade"
]


@dataclass(frozen=True, slots=True)
class RevisionRow:
    """One revision: who made it of what, when, and what it changed against its parent."""

    number: int
    parent: int | None
    hash: str
    author: str
    made_at: datetime
    kind: Kind
    changes: tuple[Change, ...]
    of: int | None


_COLUMNS = (
    revision.c.number, revision.c.parent, revision.c.document_hash, revision.c.author,
    revision.c.made_at, revision.c.kind, revision.c.changes, revision.c.of,
)  # fmt: skip


def _row(found: Row[*tuple[Any, ...]]) -> RevisionRow:  # columns of a Core table have no types
    return RevisionRow(
        number=found.number,
        parent=found.parent,
        hash=found.document_hash,
        author=found.author,
        made_at=datetime.fromisoformat(found.made_at),
        kind=found.kind,
        changes=tuple(Change(**change) for change in json.loads(found.changes)),
        of=found.of,
    )


def read(connection: Connection, station_id: str, number: int) -> RevisionRow:
    """Return one revision; KeyError if there is none."""
    found = connection.execute(
        select(*_COLUMNS).where(revision.c.station == station_id, revision.c.number == number)
    ).one_or_none()
    if found is None:
        raise KeyError(number)
    return _row(found)


def every(connection: Connection, station_id: str) -> tuple[RevisionRow, ...]:
    """Return all revisions of a station, the newest first."""
    found = connection.execute(
        select(*_COLUMNS)
        .where(revision.c.station == station_id)
        .order_by(revision.c.number.desc())
    )
    return tuple(_row(row) for row in found)


def append(
    connection: Connection,
    station_id: str,
    *,
    number: int,
    parent: int | None,
    key: str,
    author: str,
    kind: Kind,
    changes: Sequence[Change],
    of: int | None = None,
) -> RevisionRow:
    """Add a revision and return it."""
    made_at = datetime.now(UTC)
    connection.execute(
        insert(revision).values(
            station=station_id,
            number=number,
            parent=parent,
            document_hash=key,
            author=author,
            made_at=made_at.isoformat(timespec="milliseconds"),
            kind=kind,
            changes=json.dumps([_sparse(change) for change in changes], ensure_ascii=False),
            of=of,
        )
    )
    return RevisionRow(number, parent, key, author, made_at, kind, tuple(changes), of)


def _sparse(change: Change) -> dict[str, object]:
    members: dict[str, object] = {"op": change.op, "path": change.path}
    for name in ("was", "value", "before"):
        value = getattr(change, name)
        if value is not None:
            members[name] = value
    return members


@dataclass(frozen=True, slots=True)
class OwnSteps:
    """What an author can take back, and make again: numbers of revisions, the next one last."""

    undoable: tuple[int, ...]
    redoable: tuple[int, ...]


def own_steps(connection: Connection, station_id: str, author: str) -> OwnSteps:
    """Return what an author can undo and redo; a new edit ends what could be made again."""
    undoable: list[int] = []
    redoable: list[int] = []
    found = connection.execute(
        select(revision.c.number, revision.c.kind)
        .where(
            revision.c.station == station_id,
            revision.c.author == author,
            revision.c.parent.is_not(None),
        )
        .order_by(revision.c.number)
    )
    for number, kind in found:
        if kind == "undo":
            undoable.pop()
            redoable.append(number)
        elif kind == "redo":
            redoable.pop()
            undoable.append(number)
        else:
            redoable.clear()
            undoable.append(number)
    return OwnSteps(tuple(undoable), tuple(redoable))
