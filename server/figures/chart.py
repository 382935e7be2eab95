"""A chart as data: axes, panels, series, bands, markers, words, and the table behind it.

Everything is in SI. Units and rounding come in where a chart is written for a person: by
`to_plotly` for the screen, by `to_svg` for paper. Both take the numbers through `shown_points`,
so that the same points stand in both.
"""

from dataclasses import dataclass, field
from enum import StrEnum
from math import isfinite

import numpy as np
from numpy.typing import NDArray

from server.units import Dimension, View, display_unit, shown

Floats = NDArray[np.float64]


class Role(StrEnum):
    """What a thing on a chart stands for; colour, dash and marker follow from it."""

    SET_CURVE = "set_curve"  # pumps together, at top speed
    HELD_CURVE = "held_curve"  # pumps together, at the speed of the duty
    SMALL_CURVE = "small_curve"  # the jockey
    SYSTEM_LOW = "system_low"  # low supply: the most head
    SYSTEM_HIGH = "system_high"
    SYSTEM_BAND = "system_band"
    PREFERRED = "preferred"  # preferred operating region
    AVAILABLE = "available"
    REQUIRED = "required"
    LIMIT = "limit"
    SUPPLY_LOW = "supply_low"
    SUPPLY_NORMAL = "supply_normal"
    SUPPLY_HIGH = "supply_high"
    DUTY_INSIDE = "duty_inside"
    DUTY_EDGE = "duty_edge"
    DUTY_OUTSIDE = "duty_outside"
    TEST = "test"
    TEST_COMPARED = "test_compared"
    WORDS = "words"


@dataclass(frozen=True, slots=True)
class Axis:
    """An axis: what it measures and from where to where, in SI."""

    title: str
    dimension: Dimension
    low: float
    high: float
    decimals: int | None = None


@dataclass(frozen=True, slots=True)
class Panel:
    """One drawing area over the common flow axis; `share` is its part of the height."""

    key: str
    axis: Axis
    share: float = 1.0


@dataclass(frozen=True, slots=True, eq=False)
class Series:
    """A line; its name stands at it where `named` is set, and shows on hover everywhere."""

    key: str
    name: str
    role: Role
    x: Floats
    y: Floats
    panel: int = 0
    dash: int = 0  # how many pumps run, or any other small number that the dash tells apart
    named: bool = False


@dataclass(frozen=True, slots=True, eq=False)
class Area:
    """A closed outline: the band between two lines, or a region between its loci."""

    key: str
    name: str
    role: Role
    x: Floats
    y: Floats
    panel: int = 0


@dataclass(frozen=True, slots=True)
class Marker:
    """A named point; `key` is shared by the row of a table that it belongs to."""

    key: str
    name: str
    role: Role
    x: float
    y: float
    panel: int = 0
    chosen: bool = False
    named: bool = False


@dataclass(frozen=True, slots=True)
class Words:
    """A text that stands at a place of a panel."""

    text: str
    role: Role
    x: float
    y: float
    panel: int = 0
    anchor: str = "start"


@dataclass(frozen=True, slots=True)
class Column:
    """A column of the table behind a chart; text where it has no dimension."""

    title: str
    dimension: Dimension | None = None
    decimals: int | None = None


@dataclass(frozen=True, slots=True)
class BehindTable:
    """The numbers behind a chart, in SI; None is printed as an en dash."""

    caption: str
    columns: tuple[Column, ...]
    rows: tuple[tuple[float | str | None, ...], ...]


@dataclass(frozen=True, slots=True, eq=False)
class Chart:
    """One figure: panels over a common horizontal axis, what is drawn, the words for it."""

    key: str
    title: str
    caption: str
    alt: str
    x: Axis
    panels: tuple[Panel, ...]
    series: tuple[Series, ...] = ()
    areas: tuple[Area, ...] = ()
    markers: tuple[Marker, ...] = ()
    words: tuple[Words, ...] = ()
    tables: tuple[BehindTable, ...] = ()
    notes: tuple[str, ...] = field(default=())


def shown_points(values: Floats, axis: Axis, view: View) -> tuple[float | None, ...]:
    """Return SI values in the unit a person reads, to four decimals; None for no number.

    Parameters
    ----------
    values : ndarray, shape (n,)
        SI values of the axis' dimension.
    axis : Axis
        Gives the dimension.
    view : {"si", "us"}
        Which unit is read.

    Returns
    -------
    tuple of float or None, length n
        Finer than anything printed, coarser than binary noise: the figure stays small.
    """
    unit = display_unit(axis.dimension, view)
    numbers = np.asarray(values, dtype=np.float64).tolist()
    if unit.offset:
        return tuple(round(unit.from_si(v), 4) if isfinite(v) else None for v in numbers)
    ratio = unit.ratio
    return tuple(round(v / ratio, 4) if isfinite(v) else None for v in numbers)


def axis_title(axis: Axis, view: View) -> str:
    """Return the title of an axis with its unit, as in "Station flow, L/s"."""
    unit = display_unit(axis.dimension, view).printed
    return f"{axis.title}, {unit}" if unit else axis.title


def cell_text(value: float | str | None, column: Column, view: View) -> str:
    """Return a cell of a table behind a chart as a person reads it."""
    if value is None:
        return "–"
    if isinstance(value, str):
        return value
    if column.dimension is None:
        raise TypeError(f"column {column.title!r} has no dimension for the number {value!r}")
    return shown(value, column.dimension, view, column.decimals)


def round_ticks(low: float, high: float, most: int = 9) -> tuple[float, ...]:
    """Return round numbers between two ends, ends included when they are round.

    Parameters
    ----------
    low, high : float
        Ends in the unit that is read; `high` above `low`.
    most : int
        No more than so many numbers.

    Returns
    -------
    tuple of float
        Multiples of 1, 2 or 5 times a power of ten.
    """
    if not high > low:
        return (low,)
    base = 10.0 ** np.floor(np.log10((high - low) / most))
    for factor in (1.0, 2.0, 5.0, 10.0):
        step = float(base * factor)
        first, last = int(np.ceil(low / step - 1e-9)), int(np.floor(high / step + 1e-9))
        if last - first + 1 <= most:
            break
    return tuple(float(f"{i * step:.10g}") for i in range(first, last + 1))
