"""Findings in full, with the engineer's answers."""

from server.memo.blocks import Block, FindingBlock, Findings, Heading, Items, Paragraph
from server.memo.source import MemoSource
from server.studies.findings import words
from server.studies.findings.answers import answer_to, orphaned
from server.studies.shapes import Severity


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section; what is not checked has its own, defaults stand with the inputs."""
    kept = [
        f
        for f in of.findings
        if f.severity is not Severity.NOT_CHECKED and f.code != "default_used"
    ]
    items = tuple(
        FindingBlock(
            f.code,
            f.severity,
            words.severity_words(f.severity),
            words.sentence(f, of.station, of.view),
            words.basis(f, of.station),
            answer_to(f, of.station),
        )
        for f in kept
    )
    made: list[Block] = [
        Heading("Findings in full"),
        Findings(items, "Nothing was found in what could be checked."),
    ]
    left = orphaned(of.station, of.assessment.findings)
    if left:
        made.append(Paragraph(("Answers whose finding no longer stands:",), small=True))
        made.append(Items(tuple((text,) for text in left)))
    return tuple(made)
