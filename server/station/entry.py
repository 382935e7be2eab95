"""What a field of the document says about itself: title, dimension, range, sheet, guidance."""

from dataclasses import dataclass
from typing import Literal

from pydantic import BaseModel, ConfigDict

from server.units import Dimension, to_si

Sheet = Literal[
    "summary",
    "supply",
    "main-and-zone",
    "demand",
    "pumps",
    "sets",
    "duty",
    "criteria",
    "memo",
    "history",
]
Choices = tuple[tuple[str, str], ...]


@dataclass(frozen=True, slots=True)
class Entry:
    """The one place where a field's label, unit, range and sheet are written.

    `low` and `high` are in SI and belong to the range unless `above` is true (then `low`
    itself is refused). `refers_to` is the path of the list whose ids the field may hold.
    """

    title: str
    sheet: Sheet
    guidance: str = ""
    dimension: Dimension | None = None
    low: float | None = None
    high: float | None = None
    above: bool = False
    decimals: int | None = None
    choices: Choices = ()
    refers_to: str | None = None
    long: bool = False
    gauge: str = ""


@dataclass(frozen=True, slots=True)
class Part:
    """The title of a group or list inside the document, and the sheet that shows it."""

    title: str
    sheet: Sheet
    item: str = ""


class Record(BaseModel):
    """Base of every model of the document: frozen, strict, no unknown keys, no NaN."""

    model_config = ConfigDict(
        frozen=True, extra="forbid", strict=True, allow_inf_nan=False, defer_build=False
    )


SourceKind = Literal["survey", "test", "code", "standard", "maker", "office", "default"]


class Source(Record):
    """Where a value comes from."""

    kind: SourceKind
    text: str = ""
    date: str | None = None


class Quantity(Record):
    """A number as entered: value and unit, the sum it was typed as, its source."""

    value: float
    unit: str
    typed: str | None = None
    source: Source | None = None

    @property
    def si(self) -> float:
        """The value in SI; KeyError for a unit that well-formedness would have refused."""
        return to_si(self.value, self.unit)
