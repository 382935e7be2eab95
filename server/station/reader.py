"""Reads a station file: strict JSON, all refusals at once, older versions brought up.

Used for everything that comes from outside; `read_stored` is for bytes this program wrote
itself.
"""

import json
from collections.abc import Iterable

from pydantic import JsonValue, ValidationError

from server.station.canonical import nfc
from server.station.faults import BadStation, Fault, quoted
from server.station.fields import find
from server.station.paths import without_empty_criteria
from server.station.refusals import faults_of, path_of_loc
from server.station.station import FORMAT, VERSION, Station
from server.station.upgrades import Tree, upgraded
from server.station.wellformed import faults

LARGEST_FILE = 8 * 1024 * 1024
DEEPEST = 32
_MOST_FAULTS = 100
_VERSIONS = " or ".join(str(version) for version in range(1, VERSION + 1))


def read_station(data: bytes) -> Station:
    """Return the station that a file holds.

    Parameters
    ----------
    data : bytes
        The file, UTF-8 JSON of at most 8 MB.

    Raises
    ------
    BadStation
        With every fault that can be told at once, at most 100 of them.
    """
    tree = _tree(data)
    tree = upgraded(tree, _version(tree))
    found: list[Fault] = []
    try:
        station = without_empty_criteria(Station.model_validate_json(json.dumps(tree)))
    except ValidationError as error:
        found += faults_of(error, tree)
        found += _faults_of_the_rest(tree, error)
    else:
        found += faults(station)
        if not found:
            return station
    raise BadStation(found[:_MOST_FAULTS])


def read_stored(data: bytes) -> Station:
    """Return the station of bytes that `canonical_bytes` wrote, an older version's too."""
    try:
        return Station.model_validate_json(data)
    except ValidationError:
        # an older version, or not what this program wrote: the strict way says which
        return read_station(data)


def _whole(given: str, allowed: str, sentence: str) -> BadStation:
    return BadStation([Fault("", "", given, allowed, sentence)])


class _Pairs:
    """Makes objects of the JSON reader's pairs and remembers the keys that came twice."""

    def __init__(self) -> None:
        self.twice: list[tuple[str, dict[str, JsonValue]]] = []

    def __call__(self, pairs: list[tuple[str, JsonValue]]) -> dict[str, JsonValue]:
        made: dict[str, JsonValue] = dict(pairs)
        if len(made) < len(pairs):
            seen: set[str] = set()
            for key, _ in pairs:
                if key in seen:
                    self.twice.append((key, made))
                seen.add(key)
        return made


def _tree(data: bytes) -> Tree:
    """Return the raw JSON of a file, its texts in Unicode form NFC."""
    if len(data) > LARGEST_FILE:
        raise _whole(
            f"{len(data) / 1024**2:.1f} MB", "at most 8 MB",
            f"The file has {len(data) / 1024**2:.1f} MB; a station file has at most 8 MB.",
        )  # fmt: skip
    if not data.strip():
        raise _whole("nothing", "a station file", "The file is empty.")
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise _whole(
            f"a byte at {error.start}", "text in UTF-8",
            f"The file is not text in UTF-8: byte {error.start + 1} does not belong to it.",
        ) from None  # fmt: skip
    pairs = _Pairs()
    try:
        # NaN and Infinity are let in here; the models refuse them, knowing where they stand
        value: JsonValue = json.loads(text, object_pairs_hook=pairs, parse_constant=float)
    except json.JSONDecodeError as error:
        raise _whole(
            f"line {error.lineno}, column {error.colno}", "JSON",
            f"The file is not JSON: {_lower(error.msg)} at line {error.lineno}, "
            f"column {error.colno}.",
        ) from None  # fmt: skip
    except RecursionError:
        raise _too_deep() from None
    except ValueError:
        # the one thing left is a whole number of thousands of digits
        raise _whole(
            "a number of thousands of digits", "finite numbers",
            "The file has a number of thousands of digits; a number must be finite.",
        ) from None  # fmt: skip
    value = _cleaned(value, 1)
    if not isinstance(value, dict):
        raise _whole(
            "JSON",
            "a station file",
            "The file is JSON, but not a station: it must begin with {.",
        )
    if pairs.twice:
        raise BadStation(_twice(value, pairs.twice))
    return value


def _lower(text: str) -> str:
    return text[:1].lower() + text[1:]


def _too_deep() -> BadStation:
    return _whole(
        f"more than {DEEPEST} levels", f"at most {DEEPEST} levels",
        f"The file is nested more than {DEEPEST} levels deep.",
    )  # fmt: skip


def _cleaned(value: JsonValue, depth: int) -> JsonValue:
    """Return the JSON with texts in NFC; refuse what is too deep or cannot be written again."""
    if depth > DEEPEST and isinstance(value, dict | list):
        raise _too_deep()
    if isinstance(value, dict):
        for key, member in value.items():
            if not isinstance(member, int | float):
                value[key] = _cleaned(member, depth + 1)
        return value
    if isinstance(value, list):
        return [_cleaned(member, depth + 1) for member in value]
    if isinstance(value, str) and not value.isascii():
        try:
            value.encode("utf-8")
        except UnicodeEncodeError:
            raise _whole(
                "half a character", "whole characters",
                "A text of the file has half a character (a lone surrogate); write it whole.",
            ) from None  # fmt: skip
        return nfc(value)
    return value


def _twice(tree: JsonValue, twice: Iterable[tuple[str, dict[str, JsonValue]]]) -> list[Fault]:
    """Return a fault for each key that an object has twice, with the place where it stands."""
    places = {id(holder): loc for holder, loc in _holders(tree, ())}
    found: list[Fault] = []
    for key, holder in twice:
        loc = places.get(id(holder))
        path = "" if loc is None else path_of_loc((*loc, key), tree)
        node = find(path)
        sheet = node.sheet if node is not None and path else ""
        where = f", at {path}" if path else ""
        sentence = f"The file has the key {quoted(key)} twice in one place{where}; keep one."
        found.append(Fault(path, sheet, quoted(key), "each key once", sentence))
    return found


def _holders(
    value: JsonValue, loc: tuple[int | str, ...]
) -> Iterable[tuple[dict[str, JsonValue], tuple[int | str, ...]]]:
    if isinstance(value, dict):
        yield value, loc
        for key, member in value.items():
            yield from _holders(member, (*loc, key))
    elif isinstance(value, list):
        for place, member in enumerate(value):
            yield from _holders(member, (*loc, place))


def _version(tree: Tree) -> int:
    """Return the version of a file; BadStation if this program cannot read it."""
    if tree.get("format") != FORMAT:
        given = quoted(tree["format"]) if "format" in tree else "nothing"
        raise BadStation([
            Fault(
                "/format", "", given, FORMAT,
                f'The file is not a station file: its "format" must be "{FORMAT}"; '
                f"{given} was given.",
            )
        ])  # fmt: skip
    version = tree.get("version")
    if isinstance(version, bool) or not isinstance(version, int) or version < 1:
        given = quoted(json.dumps(version)) if "version" in tree else "nothing"
        sentence = (
            f'The "version" of the file must be a whole number from 1; {given} was given.'
        )
        raise BadStation([Fault("/version", "", given, _VERSIONS, sentence)])
    if version > VERSION:
        sentence = (
            f"The file is of version {version}; this program reads up to version {VERSION}. "
            "Open it with a newer Firmhead."
        )
        raise BadStation([Fault("/version", "", str(version), _VERSIONS, sentence)])
    return version


def _faults_of_the_rest(tree: Tree, error: ValidationError) -> tuple[Fault, ...]:
    """Return the faults of what has the right shape, so that a person corrects the file once.

    What has the wrong shape is left out; references are not judged then, as what they name may
    be what was left out.
    """
    items: dict[int, tuple[list[JsonValue], set[int]]] = {}
    for detail in error.errors(include_url=False, include_input=False, include_context=False):
        _leave_out(tree, detail["loc"], items)
    for holder, places in items.values():
        for place in sorted(places, reverse=True):
            del holder[place]
    try:
        rest = Station.model_validate_json(json.dumps(tree))
    except ValidationError:
        return ()
    return tuple(fault for fault in faults(rest) if not _is_of_a_reference(fault))


def _is_of_a_reference(fault: Fault) -> bool:
    node = find(fault.path)
    return node is not None and node.kind == "reference"


def _leave_out(
    tree: Tree,
    loc: tuple[int | str, ...],
    items: dict[int, tuple[list[JsonValue], set[int]]],
) -> None:
    """Take the smallest field or item that holds `loc` out of the raw JSON."""
    holder: JsonValue = tree
    path = ""
    for at, step in enumerate(loc):
        node = find(f"{path}/{step}")
        last = at == len(loc) - 1 or (node is not None and node.is_field)
        following = loc[at + 1] if at + 1 < len(loc) else None
        if isinstance(holder, dict) and isinstance(step, str):
            if last or node is None:
                holder.pop(step, None)
                return
            holder = holder.get(step)
        elif isinstance(holder, list) and isinstance(step, int):
            # an item without an id is left out whole: nothing could name it
            if last or following == "id":
                items.setdefault(id(holder), (holder, set()))[1].add(step)
                return
            holder = holder[step] if step < len(holder) else None
        else:
            return
        path = f"{path}/{step}"
