"""The band mark: a pump on a short axis from 0 to 150 % of best-efficiency flow."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from server.studies.findings.judged_set import JudgedSet
from server.studies.shapes import Region
from server.units import Dimension, shown

AXIS_LEFT, AXIS_RIGHT, AXIS_END = 2.0, 60.0, 1.5
REGION_WORDS = {
    Region.INSIDE: "inside",
    Region.EDGE: "edge",
    Region.OUTSIDE: "outside",
    Region.NOT_CHECKED: "not checked",
}


@dataclass(frozen=True, slots=True)
class BandMark:
    """A mark as drawn: ends of the preferred region, dot, words; pixels of 62 by 12."""

    low: float | None
    high: float | None
    dot: float | None
    past_axis: bool
    css: str
    word: str
    text: str
    percent: str
    region: Region
    share: float | None
    slot: str | None


def band_mark(
    share: float | None,
    preferred: tuple[float, float] | None,
    region: Region,
    slot: str | None = None,
) -> BandMark:
    """Return the mark of a pump.

    Parameters
    ----------
    share : float or None
        Flow over best-efficiency flow at the running speed; None or nan if not known. [-]
    preferred : (float, float) or None
        Ends of its preferred region. [-]
    region : Region
        Where the share stands, as judged.
    slot : str or None
        Title of the pump's slot.
    """
    word = REGION_WORDS[region]
    if share is None or not np.isfinite(share):
        return BandMark(None, None, None, False, "unknown", word, word, "–", region, None, slot)
    percent = _percent(share, preferred)
    low, high = (None, None) if preferred is None else (_at(preferred[0]), _at(preferred[1]))
    return BandMark(
        low,
        high,
        _at(min(share, AXIS_END)),
        share > AXIS_END,
        region.value.replace("_", "-"),
        word,
        f"{percent}\u00a0%, {word}",
        percent,
        region,
        float(share),
        slot,
    )


def slot_mark(judged: JudgedSet, case: int, combination: int, slot: int) -> BandMark:
    """Return the mark of one running slot of a case."""
    share = float(judged.result.best_efficiency_share[case, combination, slot])
    known = judged.result.slots[slot].best_efficiency_flow is not None and np.isfinite(share)
    return band_mark(
        share if known else None,
        judged.preferred(slot) if known else None,
        judged.region(slot, share) if known else Region.NOT_CHECKED,
        judged.slot_title(slot),
    )


def worst_mark(judged: JudgedSet, case: int, combination: int) -> BandMark | None:
    """Return the mark of the running pump farthest from its region; None if none runs."""
    marks = [slot_mark(judged, case, combination, n) for n in judged.running(case, combination)]
    return farthest(marks)


def farthest(marks: Sequence[BandMark]) -> BandMark | None:
    """Return the mark that says most: outside before not checked, edge and inside."""
    order = (Region.OUTSIDE, Region.NOT_CHECKED, Region.EDGE, Region.INSIDE)

    def key(mark: BandMark) -> tuple[int, float]:
        if mark.dot is None or mark.low is None or mark.high is None:
            return order.index(mark.region), 0.0
        return order.index(mark.region), -abs(mark.dot - (mark.low + mark.high) / 2)

    return min(marks, key=key, default=None)


def _percent(share: float, preferred: tuple[float, float] | None) -> str:
    """Return the per cent, with a digit more where rounding would put it on the other side."""
    for places in (0, 1, 2):
        text = shown(share, Dimension.RATIO, "si", places)
        if preferred is None:
            return text
        rounded = float(text) / 100
        if all(
            (rounded < end) == (share < end) and (rounded > end) == (share > end)
            for end in preferred
        ):
            return text
    return text


def _at(ratio: float) -> float:
    return round(AXIS_LEFT + (AXIS_RIGHT - AXIS_LEFT) * ratio / AXIS_END, 1)
