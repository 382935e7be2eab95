"""Criteria: each with what is provided; departures with their reasons."""

from server.memo.blocks import Block, Cell, Column, Heading, Paragraph, Strong, Table
from server.memo.source import MemoSource
from server.studies.findings.compliance import ComplianceRow, departures
from server.studies.findings.requirement_words import compliance_words
from server.studies.findings.words import amount_words
from server.studies.shapes import Amount, Verdict


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section."""
    made: list[Block] = [Heading("Criteria and departures")]
    # without a solved set nearly every row would only say so
    left_out = {Verdict.NOT_APPLICABLE} | (
        {Verdict.NOT_CHECKED} if of.judged is None else set()
    )
    judged = tuple(r for r in of.assessment.compliance if r.verdict not in left_out)
    if not judged:
        made.append(Paragraph(("No criterion is judged: the proposed set is not solved.",)))
    if judged:
        made.append(
            Table(
                "Criteria that are judged, worst case of each",
                (
                    Column("Criterion", wide=True),
                    Column("Required"),
                    Column("Provided"),
                    Column("Verdict"),
                    Column("Case, or why"),
                ),
                tuple(_row(row, of) for row in judged),
            )
        )
    left = departures(of.assessment.compliance)
    made.append(Heading("Departures from the profile", 3))
    if left:
        made.append(
            Table(
                "Departures",
                (
                    Column("Criterion"),
                    Column("Profile"),
                    Column("Here"),
                    Column("Source"),
                    Column("Reason"),
                ),
                tuple(_departure(row, of) for row in left),
            )
        )
    else:
        made.append(Paragraph(("There are none: every limit is that of the profile.",)))
    made.append(
        Paragraph(
            (
                "Local codes and the authority's own limits govern; the profile is a "
                "starting point.",
            ),
            small=True,
        )
    )
    return tuple(made)


def _row(row: ComplianceRow, of: MemoSource) -> tuple[Cell, ...]:
    required, provided, verdict, said = compliance_words(row, of.station, of.view)
    bad = row.verdict is Verdict.DOES_NOT_MEET
    shown: Cell = (Strong(verdict, bad=True),) if bad else verdict
    return (row.criterion.title, required, provided, shown, said)


def _departure(row: ComplianceRow, of: MemoSource) -> tuple[Cell, ...]:
    criterion = row.criterion
    profile = (
        "no limit"
        if criterion.profile is None
        else amount_words(
            Amount(
                "profile", criterion.profile.si, criterion.dimension, criterion.rule.decimals
            ),
            of.view,
        )
    )
    here = amount_words(
        Amount("limit", criterion.si, criterion.dimension, criterion.rule.decimals), of.view
    )
    reason: Cell = criterion.reason or (Strong("no reason is given", bad=True),)
    return (criterion.title, profile, here, criterion.source, reason)
