"""The engineer's notes in the memo: the sections that take one, and the notes of a section."""

from collections.abc import Iterator

from server.memo.blocks import Block, Heading, Paragraph
from server.station.entry import Choices
from server.station.station import Station

NOTE_SECTIONS: Choices = (
    ("", "Record, at the end of the memo"),
    ("verdict", "What is proposed, and does it hold"),
    ("basis", "The job and the basis of design"),
    ("inputs", "Inputs and their sources"),
    ("demand", "Demand and scenarios"),
    ("supply", "Supply"),
    ("duty", "Duty"),
    ("firm_capacity", "Firm capacity"),
    ("pressures", "Pressures at the named points"),
    ("npsh", "NPSH"),
    ("motors", "Motors and power"),
    ("made_cases", "Cases made besides the scenarios"),
    ("findings", "Findings in full"),
    ("criteria", "Criteria and departures"),
    ("not_checked", "What was not checked"),
    ("cautions", "Cautions"),
)


def notes_of(station: Station, section: str) -> Iterator[Block]:
    """Yield the notes of a section; one that names none of the sections is in the record."""
    known = {name for name, _ in NOTE_SECTIONS if name}
    for note in station.memo.notes:
        own = note.section if note.section in known else "record"
        if own == section and note.text.strip():
            yield Heading("Note", 3)
            yield from (Paragraph((line,)) for line in note.text.split("\n") if line.strip())
