"""Changes of the running set: hand-over between numbers of units, a unit lost in service."""

from collections.abc import Iterator

import numpy as np

from server.hydraulics.states import State
from server.studies.duty_result import AfterTrip, Floats, Handover
from server.studies.findings.case_words import scenario_title
from server.studies.findings.judged_set import STATED, JudgedSet, amount
from server.studies.shapes import SUPPLY_STATES, Case, Finding, Severity
from server.units import Dimension as D

MADE_HANDOVER = "hand-over"


def judge_staging(judged: JudgedSet) -> list[Finding]:
    """Return the gaps and hand-overs, and what the units left by a trip do."""
    found: list[Finding] = []
    if judged.result.made.handover is not None:
        found.extend(_handovers(judged, judged.result.made.handover))
    if judged.result.made.after_trip is not None:
        found.extend(_after_trip(judged, judged.result.made.after_trip))
    return found


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


def _after_trip(judged: JudgedSet, after: AfterTrip) -> Iterator[Finding]:
    """Yield the cases in which the units left pass the end of their curve.

    That they leave their preferred region is no finding: fewest units run, so one less is
    always to the right of it. How far they go while still on the curve is told beside.
    """
    states = {
        i: State(int(after.state[i])) for i in range(len(after.cases)) if after.running[i] > 0
    }
    ended = [i for i, state in states.items() if state is State.END_OF_CURVE]
    if not ended:
        return
    on_curve = [i for i, state in states.items() if state in STATED]
    furthest = max(on_curve, key=lambda i: float(after.best_efficiency_share[i]), default=None)
    worst = max(ended, key=lambda i: _demand(judged, after.cases[i]))
    share = float("nan") if furthest is None else float(after.best_efficiency_share[furthest])
    beside = share > judged.limit("preferred-region-high")
    names = dict(_trip_names(judged, after, worst))
    if beside and furthest is not None and not names["state"]:
        names["state"] = "beside"
        names["share_case"] = scenario_title(judged.station, after.cases[furthest])
    yield Finding(
        code="after_trip_end_of_curve", severity=Severity.CAUTION, subject=judged.path,
        pump_set=judged.id, governing=after.cases[worst],
        cases=tuple(after.cases[i] for i in ended),
        provided=amount("flow_at_end", float(after.flow_at_end[worst]), D.FLOW),
        required=amount("demand", _demand(judged, after.cases[worst]), D.FLOW),
        others=(amount("share", share, D.RATIO, 0),), names=tuple(names.items()),
        basis="physics",
        mend=(*_tables(judged), f"{judged.path}/slots"),
    )  # fmt: skip


def _trip_names(judged: JudgedSet, after: AfterTrip, i: int) -> tuple[tuple[str, str], ...]:
    standby = [slot.title for slot in judged.slots if slot.role == "standby"]
    lost = {slot.id: slot.title for slot in judged.slots}.get(after.lost[i] or "", "a unit")
    return (
        ("set", judged.title), ("lost", lost), ("left", str(int(after.running[i]))),
        ("standby", " or ".join(standby)), ("state", "" if standby else "no-standby"),
    )  # fmt: skip


def _demand(judged: JudgedSet, case: Case) -> float:
    for c, each in enumerate(judged.result.cases):
        if (each.scenario, each.supply) == (case.scenario, case.supply):
            return float(judged.result.demand[c])
    return float("nan")


def _tables(judged: JudgedSet) -> tuple[str, ...]:
    order = sorted(range(len(judged.slots)), key=lambda n: judged.slots[n].role == "jockey")
    return tuple(dict.fromkeys(f"{judged.curve_path(n)}/table" for n in order))
