"""Changes of the running set: hand-over between numbers of units, and gaps between them."""

from collections.abc import Iterator

import numpy as np

from server.studies.duty_result import Floats, Handover
from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.shapes import SUPPLY_STATES, Finding, Severity
from server.units import Dimension as D

MADE_HANDOVER = "hand-over"


def judge_staging(judged: JudgedSet) -> list[Finding]:
    """Return the gaps and hand-overs between numbers of units."""
    handover = judged.result.made.handover
    return [] if handover is None else list(_handovers(judged, handover))


def _handovers(judged: JudgedSet, handover: Handover) -> Iterator[Finding]:
    for h in range(len(handover.fewer)):
        ends, starts = handover.fewer_end[h], handover.more_start[h]
        known = np.isfinite(ends) & np.isfinite(starts)
        if not known.any():
            continue
        gap = np.where(known, (starts - ends) / np.where(ends > 0, ends, np.nan), -np.inf)
        if np.nanmax(gap) > 0:
            yield _gap(judged, handover, h, gap)
        elif known.all() and float(starts.max()) > float(ends.min()):
            yield _by_share(judged, handover, h)


def _added(judged: JudgedSet, handover: Handover, h: int) -> int:
    """Return a slot that runs after the hand-over and not before."""
    combinations = judged.result.combinations
    new = combinations[handover.more[h]] & ~combinations[handover.fewer[h]]
    return int(np.flatnonzero(new)[0]) if new.any() else 0


def _units(judged: JudgedSet, combination: int) -> str:
    on = np.flatnonzero(judged.result.combinations[combination])
    return " + ".join(judged.slot_title(int(n)) for n in on)


def _gap(judged: JudgedSet, handover: Handover, h: int, gap: Floats) -> Finding:
    """Return the gap that no number of units covers: narrow, wide, or with a scenario in it."""
    worst = int(np.nanargmax(gap))
    ends, starts = handover.fewer_end[h], handover.more_start[h]
    narrow = float(np.nanmax(gap)) < judged.limit("gap-narrow")
    within = [
        judged.case(c)
        for c in range(len(judged.result.cases))
        if _lies_in(judged, c, ends, starts) and not judged.result.is_fire[c]
    ]
    severity = Severity.NOTE if narrow else Severity.FAIL if within else Severity.CAUTION
    n = _added(judged, handover, h)
    case = judged.made_case(MADE_HANDOVER, worst)
    return Finding(
        code="handover_gap_narrow" if narrow else "handover_gap",
        severity=severity, subject=judged.slot_path(n), pump_set=judged.id,
        criterion=judged.criterion("gap-narrow"),
        governing=within[0] if within and not narrow else case,
        cases=(*(within if not narrow else ()), case),
        provided=amount("width", float(gap[worst]), D.RATIO, 1),
        required=amount("required", judged.limit("gap-narrow"), D.RATIO, 0),
        others=(amount("from", float(ends[worst]), D.FLOW),
                amount("to", float(starts[worst]), D.FLOW)),
        names=(("fewer", _units(judged, handover.fewer[h])),
               ("more", _units(judged, handover.more[h])),
               ("set", judged.title), ("state", "scenario" if within and not narrow else "")),
        basis="gap-narrow", mend=(f"{judged.curve_path(n)}/table", f"{judged.path}/slots"),
    )  # fmt: skip


def _lies_in(judged: JudgedSet, c: int, ends: Floats, starts: Floats) -> bool:
    s = SUPPLY_STATES.index(judged.case(c).supply)
    return bool(ends[s] < judged.result.demand[c] < starts[s])


def _by_share(judged: JudgedSet, handover: Handover, h: int) -> Finding:
    """Return that no single flow suits all supply states, although each has an overlap."""
    ends, starts = handover.fewer_end[h], handover.more_start[h]
    n = _added(judged, handover, h)
    before = int(np.flatnonzero(judged.result.combinations[handover.fewer[h]])[0])
    low, high = int(np.argmax(starts)), int(np.argmin(ends))
    return Finding(
        code="handover_by_share", severity=Severity.CAUTION, subject=judged.slot_path(n),
        pump_set=judged.id, governing=judged.made_case(MADE_HANDOVER, low),
        cases=(judged.made_case(MADE_HANDOVER, low), judged.made_case(MADE_HANDOVER, high)),
        provided=amount("ends", float(ends[high]), D.FLOW, 2),
        required=amount("starts", float(starts[low]), D.FLOW, 2),
        others=(amount("overlap", float(np.min(ends - starts)), D.FLOW, 1),),
        names=(("fewer", _units(judged, handover.fewer[h])),
               ("more", _units(judged, handover.more[h])),
               ("starts_in", SUPPLY_STATES[low]), ("ends_in", SUPPLY_STATES[high]),
               ("set", judged.title)),
        basis="physics",
        mend=(f"{judged.curve_path(before)}/table", f"{judged.curve_path(n)}/table"),
    )  # fmt: skip
