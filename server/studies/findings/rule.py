"""What a rule of a criteria profile is."""

from dataclasses import dataclass
from typing import Literal

from server.station.entry import Quantity, Sheet
from server.units import Dimension

Sense = Literal["at_least", "at_most", "setting", "stated"]
Basis = Literal["published", "memory", "common_practice"]
BASIS_WORDS: dict[Basis, str] = {
    "published": "Published source",
    "memory": "From memory, to be confirmed",
    "common_practice": "Common practice",
}


@dataclass(frozen=True, slots=True)
class Rule:
    """One criterion with its limit in each profile; `stated` rules carry words only."""

    key: str
    title: str
    dimension: Dimension
    sense: Sense
    si: Quantity | None
    us: Quantity | None
    basis: Basis
    source: str
    sheet: Sheet
    decimals: int | None = None

    @property
    def source_words(self) -> str:
        """Where the limit comes from, said so that nobody takes memory for print."""
        words = BASIS_WORDS[self.basis]
        return f"{words}: {self.source}" if self.source else words


def rule(
    key: str, title: str, dimension: Dimension, sense: Sense,
    si: tuple[float, str] | None, us: tuple[float, str] | None,
    basis: Basis, source: str, sheet: Sheet, decimals: int | None = None,
) -> Rule:  # fmt: skip
    """Make a rule from plain (value, unit) pairs."""
    return Rule(
        key, title, dimension, sense,
        None if si is None else Quantity(value=si[0], unit=si[1]),
        None if us is None else Quantity(value=us[0], unit=us[1]),
        basis, source, sheet, decimals,
    )  # fmt: skip
