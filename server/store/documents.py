"""Documents by the SHA-256 of their bytes, each kept once, squeezed."""

import threading
import zlib
from collections import OrderedDict

from sqlalchemy import Connection, select
from sqlalchemy.dialects.sqlite import insert

from server.station.canonical import canonical_bytes, document_hash
from server.station.reader import read_stored
from server.station.station import VERSION, Station
from server.store.tables import document

OPENED_KEPT = 32


class Documents:
    """Reads and writes documents; the last opened ones stay in memory."""

    def __init__(self) -> None:
        self._opened: OrderedDict[str, Station] = OrderedDict()
        self._lock = threading.Lock()

    def put(self, connection: Connection, station: Station) -> str:
        """Keep a document and return its hash."""
        body = canonical_bytes(station)
        key = document_hash(body)
        row = {"hash": key, "version": VERSION, "body": zlib.compress(body, 6)}
        connection.execute(insert(document).values(row).on_conflict_do_nothing())
        self._remember(key, station)
        return key

    def body(self, connection: Connection, key: str) -> bytes:
        """Return the bytes of a document as they were stored; KeyError if there is none."""
        found = connection.execute(
            select(document.c.body).where(document.c.hash == key)
        ).scalar_one_or_none()
        if found is None:
            raise KeyError(key)
        return zlib.decompress(found)

    def station(self, connection: Connection, key: str) -> Station:
        """Return a document; the same hash gives the same object while it is in memory."""
        with self._lock:
            known = self._opened.get(key)
            if known is not None:
                self._opened.move_to_end(key)
                return known
        return self._remember(key, read_stored(self.body(connection, key)))

    def _remember(self, key: str, station: Station) -> Station:
        with self._lock:
            kept = self._opened.setdefault(key, station)
            self._opened.move_to_end(key)
            while len(self._opened) > OPENED_KEPT:
                self._opened.popitem(last=False)
        return kept
