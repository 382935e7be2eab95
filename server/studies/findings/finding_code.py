"""What a finding code is: its words and where it belongs."""

from collections.abc import Mapping
from dataclasses import dataclass, field

from server.station.entry import Sheet


@dataclass(frozen=True, slots=True)
class FindingCode:
    """One kind of finding.

    `sentence` and `variants` are templates: {provided} and {required} are the finding's
    amounts, other names its further amounts and words, {case} the governing case. A variant is
    chosen by the
    finding's word "state". `required` tells whether "holds" waits for it while it is not '
           'checked.
    """

    code: str
    short: str
    sheet: Sheet
    sentence: str
    variants: Mapping[str, str] = field(default_factory=dict)
    required: bool = True


def code(
    name: str,
    short: str,
    sheet: Sheet,
    sentence: str,
    *,
    required: bool = True,
    **variants: str,
) -> FindingCode:
    """Make a finding code; a variant's name may use _ for - ."""
    return FindingCode(
        name, short, sheet, sentence,
        {key.rstrip("_").replace("_", "-"): text for key, text in variants.items()}, required,
    )  # fmt: skip
