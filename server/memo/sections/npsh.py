"""NPSH and velocities on the suction side."""

from server.figures.duty_rows import wet, worst
from server.memo.blocks import Block, Cell, Column, Heading, Paragraph, Table
from server.memo.source import MemoSource
from server.units import Dimension as D


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section."""
    made: list[Block] = [Heading("NPSH")]
    if of.judged is None:
        return (*made, Paragraph(("Not computed: the proposed set is not solved.",)))
    made.append(
        Paragraph(
            (
                "At the highest water temperature, at the pump eye, for the running pump "
                "with the least"
                " margin. NPSH required is the maker's 3 % head-drop value brought to the "
                "running speed.",
            )
        )
    )
    rows: list[tuple[Cell, ...]] = []
    for duty in of.duties:
        far = worst(duty.states, lambda r: r.npsh_margin, dry="npsh")
        own = duty.own
        rows.append(
            (
                own.title,
                own.of.supply,
                wet(own, "npsh", own.npsh_available),
                own.npsh_required,
                wet(own, "npsh", own.npsh_margin),
                None if far is None else wet(far, "npsh", far.npsh_margin),
                "–" if far is None else far.of.supply,
            )
        )
    made.append(
        Table(
            "NPSH by scenario",
            (
                Column("Scenario"),
                Column("State shown"),
                Column("Available", D.HEAD),
                Column("Required", D.HEAD),
                Column("Margin", D.HEAD),
                Column("Least margin", D.HEAD),
                Column("at supply"),
            ),
            tuple(rows),
        )
    )
    if any(row[3] is None for row in rows):
        made.append(
            Paragraph(
                (
                    "A dash: not computed, because the pump's rows have no NPSH required, or "
                    "the"
                    " altitude or the eye level is not given.",
                ),
                small=True,
            )
        )
    return tuple(made)
