"""Units: a closed table of symbols per dimension, exact factors, and the two unit views.

Nothing here knows a station. A value keeps the unit it was entered in; `to_si` gives the SI
float the physics uses, `from_si` brings a result to the unit a person reads.
"""

from dataclasses import dataclass, field
from enum import StrEnum
from fractions import Fraction
from math import isfinite
from typing import Literal

View = Literal["si", "us"]


class Dimension(StrEnum):
    """What a number measures; two of them may share SI units and be read differently."""

    FLOW = "flow"
    LENGTH = "length"
    LEVEL = "level"
    HEAD = "head"
    BORE = "bore"
    ROUGHNESS = "roughness"
    PRESSURE = "pressure"
    TEMPERATURE = "temperature"
    POWER = "power"
    ROTATION = "rotation"
    SPEED = "speed"
    TIME = "time"
    VOLUME = "volume"
    RATIO = "ratio"
    NUMBER = "number"
    SPECIFIC_ENERGY = "specific_energy"
    DENSITY = "density"
    VISCOSITY = "viscosity"
    AREA = "area"


@dataclass(frozen=True, slots=True)
class Unit:
    """One unit: its symbol in files, how it is printed, its words, its exact way to SI."""

    symbol: str
    printed: str
    words: str
    factor: Fraction
    offset: Fraction = Fraction(0)
    ratio: float = field(init=False)  # the factor as a float, made once

    def __post_init__(self) -> None:
        """Make the float of the factor."""
        object.__setattr__(self, "ratio", float(self.factor))

    def to_si(self, value: float) -> float:
        """Return `value` of this unit in SI."""
        if self.offset and isfinite(value):
            # exact: 140 degF is 60 degC, the end of a range, and not a rounding error above it
            return float(Fraction(value) * self.factor + self.offset)
        # one product of floats: the rounding stays under one part in 1e15
        return value * self.ratio

    def from_si(self, value: float) -> float:
        """Return the SI `value` in this unit."""
        if self.offset and isfinite(value):
            return float((Fraction(value) - self.offset) / self.factor)
        return value / self.ratio


FOOT = Fraction(3048, 10000)
INCH = Fraction(254, 10000)
US_GALLON = 231 * INCH**3
IMPERIAL_GALLON = Fraction(454609, 100_000_000)
POUND_FORCE = Fraction(45359237, 100_000_000) * Fraction(980665, 100_000)
PSI = POUND_FORCE / INCH**2
HORSEPOWER = 550 * FOOT * POUND_FORCE

_ALL = (
    Unit("L/s", "L/s", "litres per second", Fraction(1, 1000)),
    Unit("m3/s", "m³/s", "cubic metres per second", Fraction(1)),
    Unit("m3/h", "m³/h", "cubic metres per hour", Fraction(1, 3600)),
    Unit("m3/d", "m³/d", "cubic metres per day", Fraction(1, 86400)),
    Unit("ML/d", "ML/d", "megalitres per day", Fraction(1000, 86400)),
    Unit("gpm_us", "gpm", "US gallons per minute", US_GALLON / 60),
    Unit("gpm_imp", "imp gpm", "imperial gallons per minute", IMPERIAL_GALLON / 60),
    Unit("mgd_us", "MGD", "million US gallons per day", 1_000_000 * US_GALLON / 86400),
    Unit("ft3/s", "ft³/s", "cubic feet per second", FOOT**3),
    Unit("m", "m", "metres", Fraction(1)),
    Unit("km", "km", "kilometres", Fraction(1000)),
    Unit("ft", "ft", "feet", FOOT),
    Unit("mm", "mm", "millimetres", Fraction(1, 1000)),
    Unit("in", "in", "inches", INCH),
    Unit("kPa", "kPa", "kilopascals", Fraction(1000)),
    Unit("Pa", "Pa", "pascals", Fraction(1)),
    Unit("MPa", "MPa", "megapascals", Fraction(1_000_000)),
    Unit("bar", "bar", "bar", Fraction(100_000)),
    Unit("psi", "psi", "pounds per square inch", PSI),
    Unit("degC", "°C", "degrees Celsius", Fraction(1)),
    Unit("degF", "°F", "degrees Fahrenheit", Fraction(5, 9), Fraction(-160, 9)),
    Unit("kW", "kW", "kilowatts", Fraction(1000)),
    Unit("W", "W", "watts", Fraction(1)),
    Unit("hp", "hp", "horsepower", HORSEPOWER),
    Unit("rpm", "rev/min", "revolutions per minute", Fraction(1, 60)),
    Unit("m/s", "m/s", "metres per second", Fraction(1)),
    Unit("ft/s", "ft/s", "feet per second", FOOT),
    Unit("s", "s", "seconds", Fraction(1)),
    Unit("min", "min", "minutes", Fraction(60)),
    Unit("h", "h", "hours", Fraction(3600)),
    Unit("m3", "m³", "cubic metres", Fraction(1)),
    Unit("L", "L", "litres", Fraction(1, 1000)),
    Unit("gal_us", "gal", "US gallons", US_GALLON),
    Unit("%", "%", "per cent", Fraction(1, 100)),
    Unit("1", "", "as a number", Fraction(1)),
    Unit("kWh/m3", "kWh/m³", "kilowatt hours per cubic metre", Fraction(3_600_000)),
    Unit(
        "kWh/kgal_us",
        "kWh/kgal",
        "kilowatt hours per thousand US gallons",
        3_600_000 / (1000 * US_GALLON),
    ),
    Unit("kg/m3", "kg/m³", "kilograms per cubic metre", Fraction(1)),
    Unit("m2/s", "m²/s", "square metres per second", Fraction(1)),
    Unit("m2", "m²", "square metres", Fraction(1)),
    Unit("ft2", "ft²", "square feet", FOOT**2),
)
UNITS: dict[str, Unit] = {unit.symbol: unit for unit in _ALL}

# per dimension: symbols allowed, SI view, US view, decimals in each view
_LENGTHS = ("m", "ft", "mm", "in", "km")
_TABLE: dict[Dimension, tuple[tuple[str, ...], str, str, int, int]] = {
    Dimension.FLOW: (
        ("L/s", "m3/h", "m3/d", "ML/d", "m3/s", "gpm_us", "gpm_imp", "mgd_us", "ft3/s"),
        "L/s",
        "gpm_us",
        1,
        0,
    ),
    Dimension.LENGTH: (_LENGTHS, "m", "ft", 0, 0),
    Dimension.LEVEL: (("m", "ft"), "m", "ft", 2, 2),
    Dimension.HEAD: (("m", "ft"), "m", "ft", 1, 1),
    Dimension.BORE: (_LENGTHS, "mm", "in", 0, 2),
    Dimension.ROUGHNESS: (("mm", "in", "m", "ft"), "mm", "in", 3, 4),
    Dimension.PRESSURE: (("kPa", "bar", "psi", "Pa", "MPa"), "kPa", "psi", 0, 1),
    Dimension.TEMPERATURE: (("degC", "degF"), "degC", "degF", 0, 0),
    Dimension.POWER: (("kW", "hp", "W"), "kW", "hp", 1, 1),
    Dimension.ROTATION: (("rpm",), "rpm", "rpm", 0, 0),
    Dimension.SPEED: (("m/s", "ft/s"), "m/s", "ft/s", 2, 1),
    Dimension.TIME: (("s", "min", "h"), "s", "s", 0, 0),
    Dimension.VOLUME: (("m3", "L", "gal_us"), "m3", "gal_us", 1, 0),
    Dimension.RATIO: (("%", "1"), "%", "%", 1, 1),
    Dimension.NUMBER: (("1",), "1", "1", 2, 2),
    Dimension.SPECIFIC_ENERGY: (("kWh/m3", "kWh/kgal_us"), "kWh/m3", "kWh/kgal_us", 3, 2),
    Dimension.DENSITY: (("kg/m3",), "kg/m3", "kg/m3", 1, 1),
    Dimension.VISCOSITY: (("m2/s",), "m2/s", "m2/s", 9, 9),
    Dimension.AREA: (("m2", "ft2"), "m2", "ft2", 1, 0),
}


def symbols(dimension: Dimension) -> tuple[str, ...]:
    """Return the unit symbols that a field of `dimension` takes, the usual one first."""
    return _TABLE[dimension][0]


def display_unit(dimension: Dimension, view: View) -> Unit:
    """Return the unit in which `dimension` is read in the SI or the US view."""
    row = _TABLE[dimension]
    return UNITS[row[1] if view == "si" else row[2]]


def display_decimals(dimension: Dimension, view: View) -> int:
    """Return the decimals a result of `dimension` is printed with in a view."""
    row = _TABLE[dimension]
    return row[3] if view == "si" else row[4]


def dimensions_of(symbol: str) -> tuple[Dimension, ...]:
    """Return every dimension that takes the unit `symbol`; empty if the symbol is unknown."""
    return tuple(dimension for dimension, row in _TABLE.items() if symbol in row[0])


def to_si(value: float, symbol: str) -> float:
    """Return `value` of the unit `symbol` in SI (degrees Celsius for temperature).

    Raises
    ------
    KeyError
        If `symbol` is not in the table.
    """
    return UNITS[symbol].to_si(value)


def from_si(value: float, symbol: str) -> float:
    """Return the SI `value` in the unit `symbol`; KeyError if it is not in the table."""
    return UNITS[symbol].from_si(value)


def shown(
    value: float | None, dimension: Dimension, view: View, decimals: int | None = None
) -> str:
    """Return the SI `value` as a person reads it, without its unit; an en dash for None."""
    if value is None or value != value:
        return "–"
    places = display_decimals(dimension, view) if decimals is None else decimals
    text = f"{display_unit(dimension, view).from_si(value):.{places}f}"
    # "-0.0" reads as an error of ours, not as a number
    return text[1:] if text.startswith("-") and not text.strip("-0.") else text


def shown_with_unit(
    value: float | None, dimension: Dimension, view: View, decimals: int | None = None
) -> str:
    """Return the SI `value` with its printed unit, as in "56.4 L/s"."""
    number = shown(value, dimension, view, decimals)
    unit = display_unit(dimension, view).printed
    return f"{number}\u00a0{unit}" if unit and number != "–" else number
