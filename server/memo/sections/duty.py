"""The duty: figure, grade line of the governing case, tables that fit the paper."""

from server.figures.band import farthest
from server.figures.case_words import case_index, case_words, no_duty_words
from server.figures.duty_charts import duty_chart
from server.figures.duty_rows import DutyRow, ScenarioDuty
from server.figures.strip import grade_strip
from server.memo.blocks import (
    Block,
    Cell,
    Column,
    Figure,
    Heading,
    Paragraph,
    Spans,
    StripFigure,
    Table,
)
from server.memo.sections.tanks import stage_table
from server.memo.source import MemoSource
from server.studies.duty_curves import duty_curves
from server.studies.findings.judged_set import JudgedSet
from server.units import Dimension as D


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section."""
    made: list[Block] = [Heading("Duty")]
    if of.judged is None:
        made.append(
            Paragraph(
                ("No duty: the proposed set is not solved. Page 1 lists what is missing.",)
            )
        )
        return tuple(made)
    judged = of.judged
    governing = _governing(of)
    made.append(Figure(duty_chart(duty_curves(of.station, judged.result), judged), scale=0.86))
    made.append(_state_table(of, judged))
    made.append(_region_table(of))
    if judged.result.zone_kind == "floating_tank":
        made.append(stage_table(of))
    case = case_index(judged.result, governing)
    if case is not None:
        title = f"Grade line, {case_words(judged, case)}"
        caption = (
            "Heights to scale, lengths not; pressures are gauge, at each place's own level."
        )
        made.append(StripFigure(grade_strip(of.station, judged.result, case), title, caption))
    return tuple(made)


def _governing(of: MemoSource) -> str:
    """Return the scenario of the worst finding, else that of the largest flow."""
    known = {duty.scenario for duty in of.duties}
    for finding in of.findings:
        if finding.governing is not None and finding.governing.scenario in known:
            return finding.governing.scenario
    return max(of.duties, key=lambda d: d.own.flow or 0.0).scenario if of.duties else ""


def _state_table(of: MemoSource, judged: JudgedSet) -> Table:
    rows = tuple(_state_row(duty.own) for duty in of.duties)
    notes = [
        f"{row.title}: {no_duty_words(judged, row.case)}"
        for d in of.duties
        for row in (d.own,)
        if row.reason
    ]
    return Table(
        "Duty by scenario, in the state shown",
        (
            Column("Scenario"),
            Column("State"),
            Column("Flow", D.FLOW),
            Column("Head asked", D.HEAD),
            Column("Head given", D.HEAD),
            Column("Running"),
            Column("Speed", D.RATIO),
            Column("Set point held"),
        ),
        rows,
        tuple(notes),
    )


def _state_row(row: DutyRow) -> tuple[Cell, ...]:
    held = "–" if row.held is None else "yes" if row.held else "no, top speed"
    return (
        row.title,
        row.state,
        row.flow,
        row.required_head,
        row.head,
        row.running,
        row.speed,
        held,
    )


def _region_table(of: MemoSource) -> Table:
    return Table(
        "Where the pumps stand in their preferred region",
        (
            Column("Scenario"),
            Column("State shown"),
            Column("Of best-efficiency flow"),
            Column("Worst of the three supply states"),
        ),
        tuple((d.own.title, d.own.of.supply, _mark(d.own), _worst_mark(d)) for d in of.duties),
        (
            "The running pump farthest from its region stands for the set. The mark: 0 to "
            "150 % of"
            " best-efficiency flow at the running speed, ticks at the ends of the preferred "
            "region.",
        ),
    )


def _mark(row: DutyRow) -> Spans:
    return ("no duty",) if row.mark is None else (row.mark,)


def _worst_mark(duty: ScenarioDuty) -> Spans:
    marks = {id(row.mark): row for row in duty.states if row.mark is not None}
    far = farthest([row.mark for row in duty.states if row.mark is not None])
    return ("no duty",) if far is None else (far, f" at {marks[id(far)].of.supply} supply")
