"""What is proposed, and does it hold: the first page."""

from server.memo.blocks import Block, Column, Heading, Paragraph, Spans, Strong, Table, Warned
from server.memo.source import MemoSource
from server.studies.findings import words
from server.studies.findings.requirement_words import (
    cell_words,
    requirement_title,
    runs_out_words,
    verdict_words,
)
from server.studies.findings.requirements import RequirementCell
from server.studies.shapes import Severity, Verdict

MOST_MISSING = 15  # listed on the first page; the section on what was not checked has all


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section."""
    made: list[Block] = [Heading("What is proposed, and does it hold"), *_verdict(of)]
    made.append(_requirements(of) or Paragraph(("No requirement can be judged yet.",)))
    count = sum(f.severity is Severity.NOT_CHECKED for f in of.findings)
    if count:
        made.append(
            Paragraph(
                (
                    f"{count} {'thing is' if count == 1 else 'things are'} not checked; "
                    "the section “What was not checked” lists them.",
                ),
                small=True,
            )
        )
    return tuple(made)


def _verdict(of: MemoSource) -> list[Block]:
    failing = [f for f in of.findings if f.severity in (Severity.STOP, Severity.FAIL)]
    if failing:
        title = _set_title(of)
        return [
            Warned(
                f"{title} does not hold.",
                tuple(
                    (
                        Strong(f"{words.severity_words(f.severity)}: ", bad=True),
                        words.sentence(f, of.station, of.view),
                    )
                    for f in failing
                ),
            )
        ]
    made: list[Block] = [Paragraph((of.assessment.lead(of.view),), lead=True)]
    absent = of.not_solved
    if absent is not None:
        fields = tuple(missing.path for missing in absent.missing)
    elif of.judged is None:
        fields = of.assessment.missing
    else:
        return made
    names = [(words.field_words(of.station, path),) for path in fields[:MOST_MISSING]]
    if len(fields) > MOST_MISSING:
        names.append((f"and {len(fields) - MOST_MISSING} more",))
    if names:
        made.append(
            Warned("Not solved: these inputs are missing or not computed.", tuple(names))
        )
    return made


def _set_title(of: MemoSource) -> str:
    title = next((s.title for s in of.station.sets if s.id == of.assessment.proposed), "")
    return f"The set “{title}”" if title else "The proposed set"


def _requirements(of: MemoSource) -> Table | None:
    rows = of.assessment.requirements
    if not rows:
        return None
    horizons = tuple(
        Column(
            " ".join(p for p in (str(h.year) if h.year else "", h.title.lower()) if p)
            or "horizon"
        )
        for h in of.station.horizons
    )
    return Table(
        "Requirements by horizon"
        + (", largest unit out" if any(r.grows for r in rows) else ""),
        (Column("Requirement", wide=True), *horizons, Column("Runs out")),
        tuple(
            (
                requirement_title(row, of.view),
                *(_answer(cell, of) for cell in row.cells),
                runs_out_words(row, of.station),
            )
            for row in rows
        ),
    )


def _answer(cell: RequirementCell, of: MemoSource) -> Spans:
    verdict, told = verdict_words(cell), cell_words(cell, of.view)
    strong = Strong(verdict, bad=cell.verdict is Verdict.DOES_NOT_MEET)
    shown: Spans = (strong,) if cell.verdict is not Verdict.MEETS else (verdict,)
    return (*shown, f"; {told}") if told else shown
