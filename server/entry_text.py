"""Reads what a person types for a number: value, short sum, unit; refuses what is ambiguous.

Nothing here knows a station. The text is parsed, never evaluated, and the sum is exact:
"0.1+0.2" gives 0.3, not 0.30000000000000004.
"""

import re
from dataclasses import dataclass
from fractions import Fraction

from server.units import UNITS, Dimension, dimensions_of, symbols

LONGEST_TEXT = 120
DEEPEST_BRACKETS = 20

MEASURED: dict[Dimension, str] = {
    Dimension.FLOW: "a flow",
    Dimension.LENGTH: "a length",
    Dimension.LEVEL: "a level",
    Dimension.HEAD: "a head",
    Dimension.BORE: "a bore",
    Dimension.ROUGHNESS: "a roughness",
    Dimension.PRESSURE: "a pressure",
    Dimension.TEMPERATURE: "a temperature",
    Dimension.POWER: "a power",
    Dimension.ROTATION: "a speed of rotation",
    Dimension.SPEED: "a velocity",
    Dimension.TIME: "a time",
    Dimension.VOLUME: "a volume",
    Dimension.RATIO: "a ratio",
    Dimension.NUMBER: "a plain number",
    Dimension.SPECIFIC_ENERGY: "an energy for each volume",
    Dimension.DENSITY: "a density",
    Dimension.VISCOSITY: "a viscosity",
    Dimension.AREA: "an area",
}

# ways people write a unit: lower case, no spaces, no full stops; file symbols are found first
_WRITTEN: dict[str, str] = {
    "l/s": "L/s", "lps": "L/s", "m³/h": "m3/h", "m³/s": "m3/s", "m³/d": "m3/d", "ml/d": "ML/d",
    "mld": "ML/d", "gpm": "gpm_us", "usgpm": "gpm_us", "gpmus": "gpm_us", "impgpm": "gpm_imp",
    "igpm": "gpm_imp", "mgd": "mgd_us", "usmgd": "mgd_us", "cfs": "ft3/s", "ft³/s": "ft3/s",
    "metre": "m", "metres": "m", "meter": "m", "meters": "m", "foot": "ft", "feet": "ft",
    "'": "ft", "inch": "in", "inches": "in", '"': "in", "kpa": "kPa", "mpa": "MPa", "pa": "Pa",
    "psig": "psi", "bars": "bar", "barg": "bar", "°c": "degC", "c": "degC", "°f": "degF",
    "f": "degF", "degc": "degC", "degf": "degF", "kw": "kW", "w": "W", "rev/min": "rpm",
    "r/min": "rpm", "fps": "ft/s",
    "sec": "s", "second": "s", "seconds": "s", "minute": "min", "minutes": "min", "hr": "h",
    "hour": "h", "hours": "h", "m³": "m3", "l": "L", "litre": "L", "litres": "L", "liter": "L",
    "liters": "L", "gal": "gal_us", "gallon": "gal_us", "gallons": "gal_us", "percent": "%",
    "m²": "m2", "ft²": "ft2", "m²/s": "m2/s", "kg/m³": "kg/m3", "kwh/m³": "kWh/m3",
    "kwh/kgal": "kWh/kgal_us",
}  # fmt: skip
_BY_WORDS = {
    unit.words.replace(" ", ""): unit.symbol for unit in UNITS.values() if unit.printed
}
_BY_LOWER = {symbol.lower(): symbol for symbol in UNITS if symbol != "1"}
_SIGNS = str.maketrans(
    {"−": "-", "–": "-", "×": "*", "÷": "/", "\u00a0": " ", "\u2009": " ", "\u202f": " "}
)
# a number as typed, separators and all; what they mean is decided afterwards
_NUMBER = re.compile(
    r"(?:[0-9](?:[0-9.,]|[ ](?=[0-9]))*|[.][0-9]+)(?:[eE][+-]?[0-9]{1,3}(?![A-Za-z0-9]))?"
)
_PLAIN = re.compile(r"(?:[0-9]+[.]?[0-9]*|[.][0-9]+)")
_SPACED = re.compile(r"[0-9]{1,3}(?: [0-9]{3})+(?:[.][0-9]+)?")
_COMMAS = re.compile(r"[0-9]{1,3}(?:,[0-9]{3})+[.][0-9]+|[0-9]{1,3}(?:,[0-9]{3}){2,}")


@dataclass(frozen=True, slots=True)
class Typed:
    """A number as typed: its value, the symbol of its unit, and the sum if it was one."""

    value: float
    unit: str
    typed: str | None


class EntryRefused(ValueError):
    """A text that is not one clear number of the wanted dimension."""

    def __init__(self, given: str, allowed: str, sentence: str) -> None:
        self.given, self.allowed, self.sentence = given, allowed, sentence
        super().__init__(sentence)


def read_entry(text: str, dimension: Dimension, unit: str) -> Typed:
    """Return the number that `text` says.

    Parameters
    ----------
    text : str
        A number, or a sum of + - * / and brackets, and a unit behind it if it is not `unit`.
    dimension : Dimension
        What the field measures.
    unit : str
        Symbol taken when the text has no unit.

    Raises
    ------
    EntryRefused
        With what was given, what is allowed and a sentence for a person.

    Examples
    --------
    >>> read_entry("3*18.5", Dimension.LENGTH, "m")
    Typed(value=55.5, unit='m', typed='3*18.5')
    >>> read_entry("850 gpm", Dimension.FLOW, "L/s")
    Typed(value=850.0, unit='gpm_us', typed=None)
    """
    given = text.strip()
    allowed = allowed_units(dimension)
    if not given:
        raise EntryRefused("", allowed, "Nothing was typed.")
    if len(given) > LONGEST_TEXT:
        raise EntryRefused(
            given[:40] + "…", allowed, f"The text is longer than {LONGEST_TEXT} signs."
        )
    reader = _Reader(given.translate(_SIGNS), allowed)
    total = reader.sum()
    written = reader.rest()
    chosen = _unit(written, dimension, given) if written else unit
    try:
        value = float(total)
    except OverflowError:
        raise EntryRefused(given, allowed, f"{given} is too large a number.") from None
    return Typed(value, chosen, reader.expression() if reader.operators else None)


def allowed_units(dimension: Dimension) -> str:
    """Return the units of `dimension` in words: "a number in kPa, bar, psi, Pa or MPa"."""
    printed = [UNITS[symbol].printed for symbol in symbols(dimension) if UNITS[symbol].printed]
    if not printed:
        return "a number without a unit"
    return f"a number in {alternatives(printed)}"


def alternatives(names: list[str]) -> str:
    """Return "a", "a or b", "a, b or c"."""
    return " or ".join(filter(None, (", ".join(names[:-1]), names[-1])))


def wrong_unit(symbol: str, dimension: Dimension) -> str:
    """Return why the known unit `symbol` does not fit: both dimensions named.

    >>> wrong_unit("m", Dimension.PRESSURE)
    'a pressure is asked for, in kPa, bar, psi, Pa or MPa; m is a unit of a head'
    """
    printed = [UNITS[s].printed for s in symbols(dimension) if UNITS[s].printed]
    units = f", in {alternatives(printed)}" if printed else ", without a unit"
    name = UNITS[symbol].printed or "a plain number"
    return (
        f"{MEASURED[dimension]} is asked for{units}; {name} is a unit of {_measured_by(symbol)}"
    )


def _measured_by(symbol: str) -> str:
    dimensions = dimensions_of(symbol)
    # m and ft serve five dimensions; where they are out of place a head was most likely meant
    return MEASURED[Dimension.HEAD if Dimension.HEAD in dimensions else dimensions[0]]


def _unit(written: str, dimension: Dimension, given: str) -> str:
    key = re.sub(r"[ .]", "", written)
    lower = key.lower()
    symbol = (
        key if key in UNITS and key != "1"
        else _WRITTEN.get(lower) or _BY_LOWER.get(lower) or _BY_WORDS.get(lower)
    )  # fmt: skip
    allowed = allowed_units(dimension)
    if symbol is None:
        if re.search(r"[0-9(]", written):
            sentence = f"{given} has a unit inside the sum; write the unit once, at the end."
        else:
            sentence = f"{written} is not a unit that can be read here; write {allowed}."
        raise EntryRefused(given, allowed, sentence)
    if symbol not in symbols(dimension):
        why = wrong_unit(symbol, dimension)
        raise EntryRefused(given, allowed, f"{why[0].upper()}{why[1:]}.")
    return symbol


class _Reader:
    """A recursive-descent reader of one sum; stops at the first sign that is not part of it."""

    def __init__(self, text: str, allowed: str) -> None:
        self.text, self.allowed = text, allowed
        self.at = 0
        self.depth = 0
        self.operators = 0

    def refuse(self, sentence: str) -> EntryRefused:
        return EntryRefused(self.text, self.allowed, sentence)

    def next(self) -> str:
        while self.at < len(self.text) and self.text[self.at] == " ":
            self.at += 1
        return self.text[self.at] if self.at < len(self.text) else ""

    def sum(self) -> Fraction:
        total = self.product()
        while (sign := self.next()) and sign in "+-":
            self.at += 1
            self.operators += 1
            term = self.product()
            total = total + term if sign == "+" else total - term
        return total

    def product(self) -> Fraction:
        total = self.factor()
        while (sign := self.next()) and sign in "*/":
            self.at += 1
            self.operators += 1
            factor = self.factor()
            if sign == "/" and factor == 0:
                raise self.refuse(f"{self.text} divides by zero.")
            total = total * factor if sign == "*" else total / factor
        return total

    def factor(self) -> Fraction:
        sign = self.next()
        if sign and sign in "+-(":
            self.at += 1
            self.depth += 1
            if self.depth > DEEPEST_BRACKETS:
                raise self.refuse(f"{self.text} has too many brackets or signs.")
            if sign != "(":
                value = self.factor()
                self.depth -= 1
                return value if sign == "+" else -value
            value = self.sum()
            if self.next() != ")":
                raise self.refuse(f"{self.text} has a bracket that is not closed.")
            self.at += 1
            self.depth -= 1
            return value
        found = _NUMBER.match(self.text, self.at)
        if found is None:
            rest = self.text[self.at :]
            what = f"{rest} is not a number" if rest else "a number is missing at the end"
            raise self.refuse(f"{self.text} cannot be read: {what}; write {self.allowed}.")
        self.at = found.end()
        return self.number(found.group())

    def number(self, typed: str) -> Fraction:
        mantissa, power = (*re.split("[eE]", typed), "0")[:2]
        if abs(int(power)) > 330:
            raise self.refuse(f"{typed} is outside what can be entered; write {self.allowed}.")
        if "," in mantissa and not _COMMAS.fullmatch(mantissa):
            if re.fullmatch(r"[0-9]{1,3},[0-9]{3}", mantissa):
                whole, point = mantissa.replace(",", ""), mantissa.replace(",", ".")
                why = f"may be {whole} or {point}; write it without the comma, or with a point"
            else:
                why = "has a comma; write the decimals behind a point"
            raise self.refuse(f"{mantissa} {why}.")
        if " " in mantissa and not _SPACED.fullmatch(mantissa):
            raise self.refuse(f"{mantissa} is more than one number; put a sign between them.")
        plain = mantissa.replace(",", "").replace(" ", "")
        if not _PLAIN.fullmatch(plain):
            raise self.refuse(f"{mantissa} has more than one decimal point.")
        return Fraction(plain.rstrip(".")) * Fraction(10) ** int(power)

    def rest(self) -> str:
        if self.next() == ")":
            raise self.refuse(f"{self.text} closes a bracket that was not opened.")
        return self.text[self.at :].strip()

    def expression(self) -> str:
        return self.text[: self.at].strip()
