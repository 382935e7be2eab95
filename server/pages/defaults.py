"""Values that may be taken without a source of their own, each only by an action the user sees.

A default is written with its source ("default", common practice) and so is listed in the memo.
What has no entry here is never defaulted.
"""

from dataclasses import dataclass

from pydantic import JsonValue

from server.station import fields
from server.units import UNITS, View


@dataclass(frozen=True, slots=True)
class Default:
    """One default in each unit view, with the reason printed beside it."""

    si: tuple[float, str]
    us: tuple[float, str]
    reason: str

    def quantity(self, view: View) -> JsonValue:
        """Return the value as a document holds it, with its source."""
        value, unit = self.us if view == "us" else self.si
        return {
            "value": value,
            "unit": unit,
            "source": {"kind": "default", "text": self.reason},
        }


def _same(value: float, unit: str, reason: str) -> Default:
    return Default((value, unit), (value, unit), reason)


_PRACTICE = "common practice"
_DEFAULTS: dict[str, Default] = {
    "/site/water_temperature/normal": Default((10, "degC"), (50, "degF"), _PRACTICE),
    "/site/water_temperature/high": Default((20, "degC"), (68, "degF"), _PRACTICE),
    "/fires/*/duration": _same(2, "h", _PRACTICE),
    "/pumps/*/drive_efficiency": _same(97, "%", _PRACTICE),
    "/sets/*/control/lowest_speed": _same(50, "%", _PRACTICE),
    "/sets/*/control/highest_speed": _same(100, "%", "tested speed"),
    "/sets/*/trips/low_suction_alarm": Default((140, "kPa"), (20, "psi"), _PRACTICE),
    "/sets/*/trips/low_suction_trip": Default((70, "kPa"), (10, "psi"), _PRACTICE),
    "/sets/*/trips/low_suction_delay": _same(10, "s", _PRACTICE),
}


def default_of(path: str) -> Default | None:
    """Return the default of the field at `path`, or None where a value is never assumed."""
    return _DEFAULTS.get(fields.node_at(path).pattern)


def default_words(default: Default, view: View) -> str:
    """Return the words of the action: "Use 20 °C, a default"."""
    value, unit = default.us if view == "us" else default.si
    return f"Use {value:g}\u00a0{UNITS[unit].printed}, a default"
