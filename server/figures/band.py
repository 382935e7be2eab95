"""The band mark: where a pump stands on a short axis from 0 to 150 % of best-efficiency flow."""

from dataclasses import dataclass

import numpy as np

from server.studies.duty_result import DutyResult
from server.studies.findings.judge import region_of
from server.studies.limits import StudyLimits
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
    """A mark as it is drawn: ends of the preferred region, the dot, the words; pixels of 62 by 12."""

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
    limits: StudyLimits,
    slot: str | None = None,
) -> BandMark:
    """Return the mark of a pump.

    Parameters
    ----------
    share : float or None
        Flow over best-efficiency flow at the running speed; None or nan when it is not known. [-]
    preferred : (float, float) or None
        Ends of its preferred region. [-]
    limits : StudyLimits
        Gives the width of the edge.
    slot : str or None
        Title of the pump's slot.
    """
    region = region_of(share, preferred, limits)
    word = REGION_WORDS[region]
    if share is None or not np.isfinite(share):
        return BandMark(None, None, None, False, "unknown", word, word, "–", region, None, slot)
    percent = _percent(share, preferred)
    low, high = (None, None) if preferred is None else (_at(preferred[0]), _at(preferred[1]))
    return BandMark(
        low, high, _at(min(share, AXIS_END)), share > AXIS_END, region.value.replace("_", "-"), word,
        f"{percent}\u00a0%, {word}", percent, region, float(share), slot,
    )  # fmt: skip


def slot_mark(
    result: DutyResult, case: int, combination: int, slot: int, limits: StudyLimits
) -> BandMark:
    """Return the mark of one running slot of a case."""
    facts = result.slots[slot]
    share = float(result.best_efficiency_share[case, combination, slot])
    known = facts.best_efficiency_flow is not None
    preferred = limits.preferred_region(facts.specific_speed) if known else None
    return band_mark(share if known else None, preferred, limits, facts.title or facts.id)


def worst_mark(
    result: DutyResult, case: int, combination: int, limits: StudyLimits
) -> BandMark | None:
    """Return the mark of the running pump that stands farthest from its region; None if none runs."""
    marks = [
        slot_mark(result, case, combination, int(n), limits)
        for n in np.flatnonzero(result.combinations[combination])
    ]
    if not marks:
        return None
    order = [Region.OUTSIDE, Region.NOT_CHECKED, Region.EDGE, Region.INSIDE]
    middle = (limits.preferred_low + limits.preferred_high) / 2
    return min(
        marks, key=lambda m: (order.index(m.region), -abs((middle if m.share is None else m.share) - middle))
    )


def _percent(share: float, preferred: tuple[float, float] | None) -> str:
    """Return the per cent, with a digit more where rounding would put it on the other side."""
    for places in (0, 1, 2):
        text = shown(share, Dimension.RATIO, "si", places)
        if preferred is None:
            return text
        rounded = float(text) / 100
        if all((rounded < end) == (share < end) and (rounded > end) == (share > end)
               for end in preferred):  # fmt: skip
            return text
    return text


def _at(ratio: float) -> float:
    return round(AXIS_LEFT + (AXIS_RIGHT - AXIS_LEFT) * ratio / AXIS_END, 1)
