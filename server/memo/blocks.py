"""What a memo is made of: blocks with SI numbers in their spans, no format.

A number knows its dimension and decimals; units and rounding come in at the writer. The same
(label, value, unit) can so be read back from every format.
"""

from dataclasses import dataclass, field

from server.figures.band import BandMark
from server.figures.chart import Chart
from server.figures.strip import GradeStrip
from server.studies.shapes import Severity
from server.units import Dimension


@dataclass(frozen=True, slots=True)
class Number:
    """An SI number in a text or a cell; None is printed as an en dash."""

    value: float | None
    dimension: Dimension
    decimals: int | None = None


@dataclass(frozen=True, slots=True)
class Strong:
    """A word that carries weight; `bad` marks what does not hold."""

    text: str
    bad: bool = False


Span = str | Number | Strong | BandMark
Spans = tuple[Span, ...]


@dataclass(frozen=True, slots=True)
class Heading:
    """Head of a section (level 2, numbered by the writer) or inside one (level 3)."""

    text: str
    level: int = 2


@dataclass(frozen=True, slots=True)
class Paragraph:
    """A paragraph; `small` for what qualifies another block."""

    spans: Spans
    small: bool = False
    lead: bool = False


@dataclass(frozen=True, slots=True)
class Facts:
    """Short facts with a label each."""

    rows: tuple[tuple[str, Spans], ...]


@dataclass(frozen=True, slots=True)
class Column:
    """A column of a table: text on the left, numbers on the right with the unit in the head."""

    title: str
    dimension: Dimension | None = None
    decimals: int | None = None
    unit: str = ""  # printed under the title where the column has no dimension
    wide: bool = False


@dataclass(frozen=True, slots=True)
class Table:
    """A table; a bare float in a cell takes its column's dimension, None is an en dash."""

    caption: str
    columns: tuple[Column, ...]
    rows: tuple[tuple["Cell", ...], ...]
    notes: tuple[str, ...] = ()
    kind: str = ""  # tables of one kind share their column widths


Cell = float | None | str | Spans


@dataclass(frozen=True, slots=True, eq=False)
class Figure:
    """A chart with its caption."""

    chart: Chart
    scale: float = 1.0


@dataclass(frozen=True, slots=True)
class StripFigure:
    """A grade-line strip."""

    strip: GradeStrip
    title: str
    caption: str


@dataclass(frozen=True, slots=True)
class FindingBlock:
    """A finding in full."""

    code: str
    severity: Severity
    grade: str
    sentence: str
    basis: str
    answer: str = ""


@dataclass(frozen=True, slots=True)
class Findings:
    """Findings, worst first; `none` is said when there are none."""

    items: tuple[FindingBlock, ...]
    none: str


@dataclass(frozen=True, slots=True)
class Items:
    """A list of sentences; numbered where they are referred to."""

    items: tuple[Spans, ...]
    numbered: bool = False


@dataclass(frozen=True, slots=True)
class Warned:
    """What must be seen first: "does not hold" and why."""

    title: str
    items: tuple[Spans, ...]


@dataclass(frozen=True, slots=True)
class PageBreak:
    """The next block starts a page."""


Block = (
    Heading
    | Paragraph
    | Facts
    | Table
    | Figure
    | StripFigure
    | Findings
    | Items
    | Warned
    | PageBreak
)


@dataclass(frozen=True, slots=True)
class TitleBlock:
    """Head of the memo: what it is about, issue, names."""

    title: str
    station: str
    client: str
    number: str
    issue: str
    date: str
    prepared: str
    checked: str
    approved: str
    program: str
    document: str


@dataclass(frozen=True, slots=True)
class MemoBook:
    """A whole memo."""

    head: TitleBlock
    blocks: tuple[Block, ...] = field(default=())
