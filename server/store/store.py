"""The store: every station with its revisions. A session lives inside one method."""

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from sqlalchemy import Connection, insert, select, update

from server.station.changes import diff
from server.station.edits import Edit, apply_edits, inverse, merge
from server.station.faults import BadStation, Fault
from server.station.paths import put
from server.station.station import Station
from server.store import revisions
from server.store.documents import Documents
from server.store.engine import FILE_NAME, Database, make_engine
from server.store.places import make_usable
from server.store.revisions import Kind, OwnSteps, RevisionRow
from server.store.schema_steps import bring_up
from server.store.station_ids import new_station_id
from server.store.tables import revision, station


@dataclass(frozen=True, slots=True)
class Loaded:
    """A document as it stands at a revision, and which revision is the newest."""

    id: str
    station: Station
    number: int
    newest: int
    hash: str
    archived: bool
    edited_at: datetime
    author: str


@dataclass(frozen=True, slots=True)
class StationRow:
    """One line of the list of stations."""

    id: str
    title: str
    job_number: str
    place: str
    newest: int
    archived: bool
    edited_at: datetime
    author: str


class Store:
    """All stations of a data folder; threads may share a store, processes a folder."""

    def __init__(self, data_folder: Path) -> None:
        """Open the data folder, made if it is not there.

        Raises
        ------
        StoreRefused
            If it cannot be used.
        """
        make_usable(data_folder)
        self.file = data_folder / FILE_NAME
        bring_up(self.file)
        self._database = Database(make_engine(self.file))
        self._documents = Documents()

    def close(self) -> None:
        """Let go of the file."""
        self._database.engine.dispose()

    def list_stations(self, archived: bool = False) -> tuple[StationRow, ...]:
        """Return the stations in use, or the archived ones, the last edited first."""
        columns = (
            station.c.id, station.c.title, station.c.job_number, station.c.place,
            station.c.newest, station.c.archived, revision.c.made_at, revision.c.author,
        )  # fmt: skip
        question = (
            select(*columns)
            .join(
                revision,
                (revision.c.station == station.c.id) & (revision.c.number == station.c.newest),
            )
            .where(station.c.archived == archived)
            .order_by(revision.c.made_at.desc(), station.c.id)
        )
        with self._database.reading() as connection:
            return tuple(
                StationRow(*row[:6], datetime.fromisoformat(row[6]), row[7])
                for row in connection.execute(question)
            )

    def exists(self, station_id: str) -> bool:
        """Whether there is such a station, archived or not."""
        with self._database.reading() as connection:
            return _head(connection, station_id) is not None

    def create(
        self, document: Station, author: str, kind: Kind = "new", station_id: str | None = None
    ) -> str:
        """Keep a new station and return its id, a made one if none is given."""
        with self._database.writing() as connection:
            made = station_id
            while made is None or (station_id is None and _head(connection, made) is not None):
                made = new_station_id()
            key = self._documents.put(connection, document)
            row = {"id": made, "newest": 1, "archived": False, **_titles(document)}
            connection.execute(insert(station).values(row))
            revisions.append(
                connection,
                made,
                number=1,
                parent=None,
                key=key,
                author=author,
                kind=kind,
                changes=(),
            )
        return made

    def load(self, station_id: str, at: int | None = None) -> Loaded:
        """Return a station at a revision, the newest if `at` is None.

        Raises
        ------
        KeyError
            If there is no such station or revision.
        """
        with self._database.reading() as connection:
            return self._load(connection, station_id, at)

    def body(self, station_id: str, at: int | None = None) -> bytes:
        """Return the station file at a revision, as stored; KeyError if there is none."""
        with self._database.reading() as connection:
            newest, _ = _known(connection, station_id)
            row = revisions.read(connection, station_id, newest if at is None else at)
            return self._documents.body(connection, row.hash)

    def history(self, station_id: str) -> tuple[RevisionRow, ...]:
        """Return all revisions, the newest first; KeyError if there is no such station."""
        with self._database.reading() as connection:
            _known(connection, station_id)
            return revisions.every(connection, station_id)

    def own_steps(self, station_id: str, author: str) -> OwnSteps:
        """Return which revisions an author could undo and redo; none of an unknown station."""
        with self._database.reading() as connection:
            return revisions.own_steps(connection, station_id, author)

    def save(self, station_id: str, edits: Sequence[Edit], base: int, author: str) -> Loaded:
        """Apply edits that were made on revision `base` to the newest document.

        Edits that change nothing make no revision.

        Raises
        ------
        KeyError
            If there is no such station or revision.
        BadStation
            If an edit cannot be applied, or the station is archived.
        Conflict
            If somebody changed the same thing meanwhile, differently.
        """
        with self._database.writing() as connection:
            newest = self._writable(connection, station_id)
            made_on = (
                newest if base == newest.number else self._load(connection, station_id, base)
            )
            result = merge(made_on.station, edits, newest.station)
            kind: Kind = "edit" if base == newest.number else "merge"
            return self._append(connection, newest, result, author, kind)

    def replace(self, station_id: str, document: Station, base: int, author: str) -> Loaded:
        """Put a whole document made on revision `base` in a station's place, merged like edits.

        Raises
        ------
        KeyError, BadStation, Conflict
            As `save`.
        """
        with self._database.writing() as connection:
            newest = self._writable(connection, station_id)
            made_on = (
                newest if base == newest.number else self._load(connection, station_id, base)
            )
            result = merge(made_on.station, inverse(document, made_on.station), newest.station)
            return self._append(connection, newest, result, author, "import")

    def undo(self, station_id: str, author: str) -> Loaded:
        """Take back the author's own last edit, on the newest document.

        Raises
        ------
        KeyError
            If there is no such station.
        Conflict
            If somebody changed the same thing since.
        BadStation
            If there is nothing to take back, or the station is archived.
        """
        return self._step(station_id, author, "undo")

    def redo(self, station_id: str, author: str) -> Loaded:
        """Make the author's own last undone edit again; raises as `undo`."""
        return self._step(station_id, author, "redo")

    def restore(self, station_id: str, number: int, author: str) -> Loaded:
        """Make an old revision's document the newest; KeyError, or BadStation if archived."""
        with self._database.writing() as connection:
            newest = self._writable(connection, station_id)
            old = self._load(connection, station_id, number)
            return self._append(connection, newest, old.station, author, "restore", of=number)

    def copy(self, station_id: str, author: str) -> str:
        """Keep a copy of the newest document as a station of its own; return its id."""
        document = self.load(station_id).station
        title = document.identity.title or "Station without a name"
        return self.create(put(document, "/identity/title", f"{title} (copy)"), author, "copy")

    def rename(self, station_id: str, title: str, author: str) -> Loaded:
        """Give a station another name, as an edit; raises as `save`."""
        with self._database.writing() as connection:
            newest = self._writable(connection, station_id)
            result = apply_edits(newest.station, [Edit("set", "/identity/title", title)])
            return self._append(connection, newest, result, author, "edit")

    def archive(self, station_id: str, archived: bool) -> None:
        """Put a station into the archive, or take it back; KeyError if there is none."""
        with self._database.writing() as connection:
            _known(connection, station_id)
            connection.execute(
                update(station).where(station.c.id == station_id).values(archived=archived)
            )

    def _step(self, station_id: str, author: str, kind: Kind) -> Loaded:
        with self._database.writing() as connection:
            newest = self._writable(connection, station_id)
            own = revisions.own_steps(connection, station_id, author)
            steps = own.undoable if kind == "undo" else own.redoable
            if not steps:
                sentence = f"There is nothing of yours to {kind}."
                raise BadStation([Fault("", "", "", "", sentence)])
            step = revisions.read(connection, station_id, steps[-1])
            after = self._documents.station(connection, step.hash)
            before = self._load(connection, station_id, step.parent).station
            result = merge(after, inverse(before, after), newest.station)
            return self._append(connection, newest, result, author, kind, of=step.number)

    def _load(self, connection: Connection, station_id: str, at: int | None) -> Loaded:
        newest, archived = _known(connection, station_id)
        row = revisions.read(connection, station_id, newest if at is None else at)
        document = self._documents.station(connection, row.hash)
        return Loaded(
            station_id,
            document,
            row.number,
            newest,
            row.hash,
            archived,
            row.made_at,
            row.author,
        )

    def _writable(self, connection: Connection, station_id: str) -> Loaded:
        newest = self._load(connection, station_id, None)
        if newest.archived:
            sentence = "This station is archived; take it out of the archive to change it."
            raise BadStation([Fault("", "", "", "", sentence)])
        return newest

    def _append(
        self,
        connection: Connection,
        newest: Loaded,
        document: Station,
        author: str,
        kind: Kind,
        *,
        of: int | None = None,
    ) -> Loaded:
        key = self._documents.put(connection, document)
        # an undo is a step of its own even when it leads to a document that stood before
        if key == newest.hash and kind not in ("undo", "redo"):
            return newest
        number = newest.number + 1
        row = revisions.append(
            connection, newest.id, number=number, parent=newest.number, key=key, author=author,
            kind=kind, changes=diff(newest.station, document), of=of,
        )  # fmt: skip
        head = {"newest": number, **_titles(document)}
        connection.execute(update(station).where(station.c.id == newest.id).values(head))
        return Loaded(newest.id, document, number, number, key, False, row.made_at, author)


def _titles(document: Station) -> dict[str, str]:
    identity = document.identity
    return {
        "title": identity.title,
        "job_number": identity.number,
        "place": identity.place,
    }


def _head(connection: Connection, station_id: str) -> tuple[int, bool] | None:
    found = connection.execute(
        select(station.c.newest, station.c.archived).where(station.c.id == station_id)
    ).one_or_none()
    return None if found is None else (int(found.newest), bool(found.archived))


def _known(connection: Connection, station_id: str) -> tuple[int, bool]:
    head = _head(connection, station_id)
    if head is None:
        raise KeyError(station_id)
    return head
