"""The memo of a station: its head and its sections in order."""

from collections.abc import Callable

from server import __version__
from server.memo.blocks import Block, MemoBook, TitleBlock
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
SECTIONS: tuple[Section, ...] = (
    verdict.blocks,
    basis.blocks,
    inputs.blocks,
    demand.blocks,
    supply.blocks,
    duty.blocks,
    firm_capacity.blocks,
    pressures.blocks,
    npsh.blocks,
    motors.blocks,
    made_cases.blocks,
    findings.blocks,
    criteria.blocks,
    not_checked.blocks,
    cautions.blocks,
    record.blocks,
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
    return MemoBook(head, tuple(block for section in SECTIONS for block in section(source)))
