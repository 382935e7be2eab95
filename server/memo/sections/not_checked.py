"""What was not checked, with the reason and the missing field."""

from server.memo.blocks import Block, Heading, Items, Paragraph, Spans, Strong
from server.memo.source import MemoSource
from server.studies.findings import words
from server.studies.findings.registry import NOT_COMPUTED
from server.studies.shapes import Severity

MOST_FIELDS = 12


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section."""
    made: list[Block] = [Heading("What was not checked")]
    found = [f for f in of.findings if f.severity is Severity.NOT_CHECKED]
    items: list[Spans] = []
    for finding in found:
        fields = [words.field_words(of.station, path) for path in finding.mend]
        more = f" and {len(fields) - MOST_FIELDS} more" if len(fields) > MOST_FIELDS else ""
        needed = f" It needs: {'; '.join(fields[:MOST_FIELDS])}{more}." if fields else ""
        items.append(
            (
                Strong(f"{words.short(finding).capitalize()}. "),
                words.sentence(finding, of.station, of.view) + needed,
            )
        )
    if items:
        made.append(Items(tuple(items), numbered=True))
    else:
        made.append(Paragraph(("Of what this version computes, everything could be checked.",)))
    made.append(Heading("Never checked by this version of the program", 3))
    made.append(Items(tuple((line,) for line in NOT_COMPUTED)))
    return tuple(made)
