"""The sheet from which a form was sent, read from the address the browser names."""

from collections.abc import Mapping
from dataclasses import dataclass
from urllib.parse import parse_qsl, urlsplit

from fastapi import Request

from server.station import fields
from server.station.entry import Sheet

KEPT = ("case", "set", "units")


@dataclass(frozen=True, slots=True)
class CameFrom:
    """A sheet and what its address chose, but for `at`: an old revision is never edited."""

    sheet: Sheet
    query: Mapping[str, str]


def came_from(request: Request, station_id: str, path: str = "") -> CameFrom:
    """Return the sheet a form of this station was sent from.

    htmx names it in `HX-Current-URL`, a plain form in `Referer`. An address that is not a sheet
    of this station counts for nothing: then it is the sheet that shows the field at `path`.
    """
    address = urlsplit(
        request.headers.get("hx-current-url") or request.headers.get("referer") or ""
    )
    before, _, name = address.path.rpartition("/")
    query = {key: value for key, value in parse_qsl(address.query) if key in KEPT}
    for sheet in fields.SHEET_TITLES:
        if name == sheet and before.endswith(f"/stations/{station_id}"):
            return CameFrom(sheet, query)
    node = fields.find(path)
    return CameFrom(node.sheet if node is not None and path else "summary", query)
