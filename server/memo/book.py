"""The memo of a station: its head and its sections in order."""

from collections.abc import Callable

from server import __version__
from server.memo.blocks import Block, MemoBook, TitleBlock
from server.memo.notes import notes_of
from server.memo.sections import (
    basis,
    cautions,
    criteria,
    demand,
    duty,
    findings,
    firm_capacity,
    inputs,
    made_cases,
    motors,
    not_checked,
    npsh,
    pressures,
    record,
    supply,
    verdict,
)
from server.memo.source import MemoSource, memo_source
from server.station.station import Station
from server.studies.assess import Assessment
from server.units import View

Section = Callable[[MemoSource], tuple[Block, ...]]
SECTIONS: tuple[tuple[str, Section], ...] = (
    ("verdict", verdict.blocks),
    ("basis", basis.blocks),
    ("inputs", inputs.blocks),
    ("demand", demand.blocks),
    ("supply", supply.blocks),
    ("duty", duty.blocks),
    ("firm_capacity", firm_capacity.blocks),
    ("pressures", pressures.blocks),
    ("npsh", npsh.blocks),
    ("motors", motors.blocks),
    ("made_cases", made_cases.blocks),
    ("findings", findings.blocks),
    ("criteria", criteria.blocks),
    ("not_checked", not_checked.blocks),
    ("cautions", cautions.blocks),
    ("record", record.blocks),
)
HASH_SHOWN = 12


def memo_book(station: Station, assessment: Assessment, view: View) -> MemoBook:
    """Return the memo on the proposed set; of an empty station it says what is missing.

    Parameters
    ----------
    station : Station
        The document.
    assessment : Assessment
        Its results and findings.
    view : {"si", "us"}
        Units that its sentences are read in.
    """
    source = memo_source(station, assessment, view)
    identity, memo = station.identity, station.memo
    head = TitleBlock(
        title="Booster station sizing memo",
        station=identity.title or "Station without a name",
        client=", ".join(part for part in (identity.client, identity.place) if part),
        number=identity.number,
        issue=memo.issue,
        date=memo.date,
        prepared=memo.prepared,
        checked=memo.checked,
        approved=memo.approved,
        program=f"Firmhead {__version__}",
        document=assessment.document_hash[:HASH_SHOWN] or "not stored",
    )
    made: list[Block] = []
    for name, section in SECTIONS:
        made.extend(section(source))
        made.extend(notes_of(station, name))
    return MemoBook(head, tuple(made))
