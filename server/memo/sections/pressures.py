"""Pressures at every named point: the state shown and the worst of the three."""

from collections.abc import Callable

from server.figures.duty_rows import DutyRow, worst
from server.memo.blocks import Block, Cell, Column, Heading, Paragraph, Spans, Table
from server.memo.source import MemoSource
from server.studies.duty_result import PointFacts
from server.units import Dimension as D
from server.units import shown, shown_with_unit

ACROSS = 4  # points in one table: more do not fit A4 upright


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section."""
    made: list[Block] = [Heading("Pressures at the named points")]
    if of.judged is None:
        return (*made, Paragraph(("Not computed: the proposed set is not solved.",)))
    points = of.judged.points
    for start in range(0, len(points), ACROSS):
        made.append(_table(of, points, range(start, min(start + ACROSS, len(points)))))
    return tuple(made)


def _table(of: MemoSource, points: tuple[PointFacts, ...], which: range) -> Table:
    columns = tuple(Column(_title(points[p], of), unit=_unit(of)) for p in which)
    rows: list[tuple[Cell, ...]] = []
    for duty in of.duties:
        cells: list[Spans] = []
        for p in which:
            read, dry = _reader(p), f"point-{p}"
            far = worst(duty.states, read, highest=points[p].role == "lowest", dry=dry)
            own, told = (
                ""
                if row is None
                else "no water"
                if dry in row.dry
                else shown(read(row), D.PRESSURE, of.view)
                for row in (duty.own, far)
            )
            same = far is None or far is duty.own or told == own
            cells.append(
                (own,) if same or far is None else (own, f" ({told} at {far.of.supply})")
            )
        rows.append((duty.own.title, duty.own.of.supply, *cells))
    return Table(
        "Gauge pressure at the named points",
        (Column("Scenario"), Column("State shown"), *columns),
        tuple(rows),
        (
            "In brackets the worst of low, normal and high supply where it differs: the "
            "least, at the lowest"
            " customer the highest.",
        ),
    )


def _reader(point: int) -> Callable[[DutyRow], float | None]:
    return lambda row: row.point_pressures[point]


def _title(point: PointFacts, of: MemoSource) -> str:
    level = point.elevation if point.elevation == point.elevation else None
    at = shown_with_unit(level, D.LEVEL, of.view)
    return (
        f"{point.title or 'Point'}, {at}"
        if level is not None
        else f"{point.title}, level not given"
    )


def _unit(of: MemoSource) -> str:
    from server.units import display_unit

    return display_unit(D.PRESSURE, of.view).printed
