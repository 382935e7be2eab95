"""The body of a JSON request: read whole, refused in words."""

import json
from typing import Annotated

from fastapi import Depends, HTTPException, Request
from pydantic import JsonValue

from server.station.edits import Edit
from server.station.faults import BadStation, Fault, quoted

MOST_EDITS = 10_000


async def _body(request: Request) -> bytes:
    media_type = request.headers.get("content-type", "").partition(";")[0].strip().lower()
    if media_type != "application/json":
        raise HTTPException(415, "Send JSON, with Content-Type: application/json.")
    return await request.body()


JsonBytes = Annotated[bytes, Depends(_body)]


def edits_in(body: bytes) -> tuple[Edit, ...]:
    """Return the edits of a body `{"edits": [...]}`.

    Raises
    ------
    BadStation
        If the body is not that.
    """
    data = _json(body)
    edits = data.get("edits") if isinstance(data, dict) else None
    if not isinstance(edits, list) or not isinstance(data, dict) or len(data) > 1:
        raise _refused(quoted(body[:60].decode("utf-8", "replace")), '{"edits": [...]}')
    if len(edits) > MOST_EDITS:
        raise _refused(f"{len(edits)} edits", f"at most {MOST_EDITS} edits at once")
    return tuple(Edit.from_json(each) for each in edits)


def _json(body: bytes) -> JsonValue:
    try:
        value: JsonValue = json.loads(body, parse_constant=_no_constant)
    except RecursionError:
        raise _refused("something nested too deep", "JSON") from None
    except ValueError as problem:
        raise _refused(str(problem), "JSON") from None
    return value


def _no_constant(name: str) -> None:
    raise ValueError(f"{name} is no number")


def _refused(given: str, allowed: str) -> BadStation:
    sentence = f"The body must be {allowed}; {given} was given."
    return BadStation([Fault("", "", given, allowed, sentence)])
