"""The record: which program, which method, which document, who."""

from server import __version__
from server.memo.blocks import Block, Facts, Heading
from server.memo.source import MemoSource


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section."""
    stamp = None if of.judged is None else of.judged.result.stamp
    memo = of.station.memo
    made: list[Block] = [
        Heading("Record"),
        Facts(
            (
                ("Program", (f"Firmhead {__version__}",)),
                (
                    "Method",
                    (
                        f"study “{stamp.study}”, version {stamp.study_version}"
                        if stamp
                        else "no set solved",
                    ),
                ),
                ("Document, SHA-256", (of.assessment.document_hash or "not stored",)),
                (
                    "Issue and date",
                    (
                        ", ".join(p for p in (memo.issue, memo.date) if p)
                        or "draft, not issued",
                    ),
                ),
                (
                    "Prepared, checked, approved",
                    (_names(memo.prepared, memo.checked, memo.approved),),
                ),
            )
        ),
    ]
    return tuple(made)


def _names(*names: str) -> str:
    return ", ".join(name or "–" for name in names)
