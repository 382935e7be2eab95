"""What is wrong with a station or an edit, in the one shape that every way in reports."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Fault:
    """One refusal: where it stands, what was given, what is allowed, the sentence for a person.

    `cell` is the row and column (from 0) inside a table, for marking a pasted cell; it is not
    part of the JSON shape. A fault of the whole file has an empty path and sheet.
    """

    path: str
    sheet: str
    given: str
    allowed: str
    sentence: str
    cell: tuple[int, int] | None = None

    def as_json(self) -> dict[str, str]:
        """Return the five public members, as every JSON answer shows them."""
        return {
            "path": self.path,
            "sheet": self.sheet,
            "given": self.given,
            "allowed": self.allowed,
            "sentence": self.sentence,
        }


class BadStation(Exception):
    """A station, an edit or a typed text that is not well-formed; `faults` is never empty."""

    def __init__(self, faults: Iterable[Fault]) -> None:
        self.faults: tuple[Fault, ...] = tuple(faults)
        super().__init__(" ".join(fault.sentence for fault in self.faults))


def errors_json(faults: Sequence[Fault]) -> dict[str, list[dict[str, str]]]:
    """Return the error answer `{"errors": [...]}` of the API and the command line."""
    return {"errors": [fault.as_json() for fault in faults]}


def quoted(given: object, longest: int = 60) -> str:
    """Return `given` as it is shown inside a sentence, cut if it is long."""
    text = str(given).replace("\n", " ")
    return text if len(text) <= longest else text[: longest - 1] + "…"
