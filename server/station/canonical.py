"""The only writer of a station file: the same document always gives the same bytes.

UTF-8 in Unicode form NFC, keys in the order of the models, absent values and empty groups left
out, the shortest number that reads back the same, one row of a table a line, a newline at the
end.
"""

import hashlib
from functools import cache
from json.encoder import encode_basestring
from math import isfinite
from unicodedata import is_normalized, normalize

from pydantic import JsonValue

from server.station.entry import Quantity, Record, Source
from server.station.pump import CurveUnits
from server.station.station import FORMAT, VERSION, Station

# written on one line, however deep
_ONE_LINE = (Quantity, Source, CurveUnits)


def number(value: float) -> str:
    """Return the shortest text that reads back as `value`: 54 for 54.0, 0 for -0.0.

    Raises
    ------
    ValueError
        If `value` is not finite.

    Examples
    --------
    >>> number(54.0), number(-0.0), number(0.1), number(1e-7)
    ('54', '0', '0.1', '1e-07')
    """
    if not isfinite(value):
        raise ValueError(f"a number in a station must be finite; got {value}")
    if value == 0:
        return "0"
    # an int has no is_integer before Python 3.12
    if float(value).is_integer() and abs(value) < 1e15:
        return str(int(value))
    return repr(value)


def nfc(text: str) -> str:
    """Return `text` in Unicode form NFC."""
    return text if text.isascii() or is_normalized("NFC", text) else normalize("NFC", text)


@cache
def _members(model: type[Record]) -> tuple[tuple[str, str, object], ...]:
    return tuple(
        (name, f'"{name}": ', info.get_default()) for name, info in model.model_fields.items()
    )


def _present(record: Record) -> list[tuple[str, str, object]]:
    """Return name, written name and value of what is written of `record`, in the model's order.

    Left out is what was never entered: None, the empty text, the empty list, the untouched
    group.
    """
    values = vars(record)
    found: list[tuple[str, str, object]] = []
    for name, key, default in _members(type(record)):
        value = values[name]
        if value is None:
            continue
        if isinstance(value, Record):
            if value is default:
                continue
            if isinstance(default, Record) and vars(value) == vars(default):
                continue
        elif value == "" or value == ():
            continue
        found.append((name, key, value))
    return found


def plain(value: object) -> JsonValue:
    """Return a value of the document as JSON data, written as sparsely as in a file."""
    if isinstance(value, Record):
        return {name: plain(member) for name, _, member in _present(value)}
    if isinstance(value, tuple):
        return [plain(member) for member in value]
    if isinstance(value, float):
        return int(value) if value.is_integer() and abs(value) < 1e15 else value
    if value is None or isinstance(value, bool | int | str):
        return value
    raise TypeError(f"a station holds no {type(value).__name__}")


def _scalar(value: object) -> str:
    if isinstance(value, str):
        return encode_basestring(nfc(value))
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, float):
        return number(value)
    if isinstance(value, int):
        return str(value)
    if value is None:
        return "null"
    raise TypeError(f"a station holds no {type(value).__name__}")


def _inline(value: object) -> str:
    kind = type(value)
    if kind is float or kind is str:
        return _scalar(value)
    if isinstance(value, Quantity) and value.typed is None and value.source is None:
        # by far the most frequent value of a station
        return f'{{"value": {number(value.value)}, "unit": {encode_basestring(value.unit)}}}'
    if isinstance(value, tuple):
        return "[" + ", ".join([_inline(member) for member in value]) + "]"
    if isinstance(value, Record):
        members = [key + _inline(member) for _, key, member in _present(value)]
        return "{" + ", ".join(members) + "}"
    return _scalar(value)


def _is_block(value: object) -> bool:
    """Whether a value is written over several lines."""
    kind = type(value)
    if kind is str or kind is Quantity:
        return False
    if isinstance(value, tuple):
        return bool(value) and isinstance(value[0], Record | tuple)
    return isinstance(value, Record) and not isinstance(value, _ONE_LINE)


def _write(value: object, indent: str, out: list[str]) -> None:
    if not _is_block(value):
        out.append(_inline(value))
    elif isinstance(value, Record):
        members = [(key, member) for _, key, member in _present(value)]
        _block("{", "}", members, indent, out)
    elif isinstance(value, tuple):
        # items of a list, or the rows of a table
        _block("[", "]", [("", member) for member in value], indent, out)


def _block(
    start: str, end: str, members: list[tuple[str, object]], indent: str, out: list[str]
) -> None:
    inner = indent + "  "
    comma = start + "\n" + inner
    for key, member in members:
        if _is_block(member):
            out.append(comma + key)
            _write(member, inner, out)
        else:
            out.append(f"{comma}{key}{_inline(member)}")
        comma = ",\n" + inner
    out.append(f"\n{indent}{end}" if members else start + end)


def canonical_bytes(station: Station) -> bytes:
    """Return the bytes of the station file of `station`."""
    out: list[str] = []
    head: list[tuple[str, object]] = [('"format": ', FORMAT), ('"version": ', VERSION)]
    members = [
        (key, value)
        for name, key, value in _present(station)
        if name not in ("format", "version")
    ]
    _block("{", "}", head + members, "", out)
    out.append("\n")
    return "".join(out).encode("utf-8")


def document_hash(body: bytes) -> str:
    """Return the SHA-256 of stored bytes, in hexadecimal; never of a document written again."""
    return hashlib.sha256(body).hexdigest()
