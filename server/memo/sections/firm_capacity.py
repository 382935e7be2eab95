"""Firm capacity: each unit in turn out, all others as the control allows."""

from server.memo.blocks import Block, Cell, Column, Heading, Paragraph, Table
from server.memo.source import MemoSource
from server.studies.duty_result import FirmCapacity
from server.studies.findings.judged_set import JudgedSet
from server.studies.findings.requirement_words import limit_title
from server.units import Dimension as D

REQUIREMENTS = {
    "peak_hour": "Peak hour",
    "maximum_day_fire": "Maximum day and fire",
    "tank_refill": "Maximum day into the full tank",
}


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section."""
    made: list[Block] = [Heading("Firm capacity")]
    if of.judged is None or not of.judged.result.made.firm_capacity:
        why = (
            "the proposed set is not solved"
            if of.judged is None
            else "no horizon has the demands for it"
        )
        return (*made, Paragraph((f"Not computed: {why}.",)))
    made.append(
        Paragraph(
            (
                "The largest flow at low supply and aged pipes with each installed unit in "
                "turn out, the"
                " least of them: limited by head and curve end, and also by suction limits "
                "and NPSH margin."
                " Found by solving the coupled system; nameplate flows are never added.",
            )
        )
    )
    made.append(_table(of, of.judged))
    made.append(_weak(of, of.judged))
    made.append(Paragraph((_single(of, of.judged),)))
    return tuple(made)


def _weak(of: MemoSource, judged: JudgedSet) -> Table:
    """Return the same with every pump at the lower corner of its acceptance grade."""
    firms = judged.result.made.firm_capacity
    rows: list[tuple[Cell, ...]] = [
        (
            _requirement(of, firm), firm.required_flow,
            "not checked" if firm.not_counted else _known(firm.by_all_weak),
        )
        for firm in firms
    ]  # fmt: skip
    return Table(
        f"Firm capacity with pumps that just pass their acceptance test, grade "
        f"{firms[0].test_grade}",
        (Column("Requirement"), Column("Required", D.FLOW), Column("By all limits", D.FLOW)),
        tuple(rows),
        ("Lower corner of the grade by ISO 9906 (2B: flow 8 %, head 5 % less; 1B: 5 % and 3 %; "
         "from memory, to be confirmed), along the whole curve. Information.",),
    )  # fmt: skip


def _single(of: MemoSource, judged: JudgedSet) -> str:
    """Return the parts in whose place nothing steps."""
    reaches = {
        reach.id: reach.title or "a reach"
        for reach in (*of.station.suction_line.reaches, *of.station.discharge_main.reaches)
    }
    names = [reaches.get(each, "the only pump") for each in judged.result.made.single_points]
    listed = "; ".join([*names, "the supply", "power supply and controls"])
    return f"Single points of failure, with no second in their place: {listed}."


def _requirement(of: MemoSource, firm: FirmCapacity) -> str:
    horizons = {h.id: str(h.year or h.title) for h in of.station.horizons}
    name = REQUIREMENTS.get(firm.requirement, firm.requirement)
    return f"{name}, {horizons.get(firm.horizon, '')}"


def _table(of: MemoSource, judged: JudgedSet) -> Table:
    slots = {s.id: judged.slot_title(n) for n, s in enumerate(judged.slots)}
    rows: list[tuple[Cell, ...]] = []
    for firm in judged.result.made.firm_capacity:
        rows.append(
            (
                _requirement(of, firm),
                firm.required_flow,
                firm.by_head,
                limit_title(firm.by_head_limit, of.station),
                "not checked" if firm.not_counted else firm.by_all,
                _limit(firm, of),
                slots.get(firm.unit_out, "–"),
                _known(firm.all_running),
                "–" if firm.runs_out is None or firm.not_counted else str(firm.runs_out),
            )
        )
    return Table(
        "Firm capacity against what is required",
        (
            Column("Requirement"),
            Column("Required", D.FLOW),
            Column("By head", D.FLOW),
            Column("limited by"),
            Column("By all limits", D.FLOW),
            Column("limited by"),
            Column("Unit out"),
            Column("No unit out", D.FLOW),
            Column("Passed in"),
        ),
        tuple(rows),
        (
            "“Passed in”: the year in which the demand, growing linearly between the "
            "horizons, passes the"
            " capacity by all limits; a dash: not within the horizons.",
        ),
    )


def _limit(firm: FirmCapacity, of: MemoSource) -> str:
    """Return what limits a capacity, or the limits that could not be counted."""
    if not firm.not_counted:
        return limit_title(firm.by_all_limit, of.station)
    names = ", ".join(limit_title(name, of.station) for name in firm.not_counted)
    return f"not known: {names}"


def _known(value: float) -> float | None:
    return value if value == value else None
