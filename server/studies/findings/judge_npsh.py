"""NPSH of every running pump: in every case, and of one pump alone as far out as it runs."""

from collections.abc import Iterator

import numpy as np

from server.studies.duty_result import OnePumpAlone, Place
from server.studies.findings.judge_suction import low_state, no_water
from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.findings.reading import Reading, broken
from server.studies.shapes import Case, Region, Severity
from server.units import Dimension as D

ALONE = "alone"


def judge_npsh(judged: JudgedSet) -> list[Reading]:
    """Return the readings of NPSH: broken, by ratio, by margin."""
    alone = judged.result.made.one_pump_alone
    return [
        *_in_cases(judged),
        *_at_cut_out(judged),
        *(() if alone is None else _alone(judged, alone)),
    ]


def _at_cut_out(judged: JudgedSet) -> Iterator[Reading]:
    """Yield what runs with the supply tank at its cut-out level."""
    made = judged.result.made.cut_out
    if made is None:
        return
    for m, case in enumerate(made.cases):
        kinds: dict[object, int] = {}
        for n in np.flatnonzero(np.isfinite(made.npsh_required[m])):
            slot = judged.slots[int(n)]
            leg = judged.leg_of_slot[int(n)]
            kinds.setdefault((slot.pump, slot.curve, slot.diameter, leg, slot.fixed), int(n))
        for first in kinds.values():
            yield from _of_pump(
                judged, case, first, judged.slot_title(first),
                float(made.npsh_available[m, first]), float(made.npsh_required[m, first]), True,
            )  # fmt: skip


def _in_cases(judged: JudgedSet) -> Iterator[Reading]:
    result = judged.result
    for c, k in judged.stated:
        for n, title in judged.running_kinds(c, k):
            yield from _of_pump(
                judged, judged.case(c), n, title, float(result.npsh_available[c, k, n]),
                float(result.npsh_required[c, k, n]), judged.inside(c, k, n),
            )  # fmt: skip


def _of_pump(
    judged: JudgedSet, case: Case, n: int, title: str, available: float, required: float,
    inside: bool,
) -> Iterator[Reading]:  # fmt: skip
    """Yield what is had against what is required, and if that is met against what is asked."""
    if available != available or required != required:
        return
    margin_key = "npsh-margin-min" if inside else "npsh-margin-outside-min"
    by_ratio = judged.limit("npsh-ratio-min") * required
    by_margin = required + judged.limit(margin_key)
    key = "npsh-ratio-min" if by_ratio >= by_margin else margin_key
    common = Reading(
        code="npsh_broken", severity=Severity.STOP, subject=judged.slot_path(n),
        pump_set=judged.id, criterion=None, case=case,
        provided=amount("available", available, D.HEAD),
        required=amount("required", required, D.HEAD), sense="at_least",
        mend=(low_state(judged), "/site/eye_level", *judged.suction_bores,
              f"{judged.curve_path(n)}/table"),
        names=(("slot", title), ("set", judged.title),
               ("has", "have" if " and " in title else "has")),
        others=(amount("npsh_required", required, D.HEAD),),
    )  # fmt: skip
    yield common
    if not broken(common):
        yield common.varied(
            code="npsh_short", severity=Severity.FAIL, criterion=judged.criterion(key),
            required=amount("required", max(by_ratio, by_margin), D.HEAD),
        )  # fmt: skip


def _alone(judged: JudgedSet, alone: OnePumpAlone) -> Iterator[Reading]:
    """Yield one pump alone; where the low-suction trip stops it before, that is said."""
    case = judged.made_case(ALONE, 0, alone.pipes)
    places = {slot.id: n for n, slot in enumerate(judged.slots)}
    trip = judged.entered.trips.low_suction_trip
    for u, slot in enumerate(alone.slots):
        n = places[slot]
        dry = Place(int(alone.suction_breaks_at[u]))
        if dry is not Place.NOWHERE:
            readings = [no_water(judged, case, dry)]
        else:
            share = float(alone.best_efficiency_share[u])
            inside = judged.region(n, share) in (Region.INSIDE, Region.EDGE)
            readings = list(
                _of_pump(
                    judged, case, n, judged.slot_title(n), float(alone.npsh_available[u]),
                    float(alone.npsh_required[u]), inside,
                )
            )  # fmt: skip
        # a pressure that is not there is under any trip
        stopped = trip is not None and not float(alone.suction_pressure[u]) >= trip.si
        for reading in readings:
            if broken(reading) and stopped and trip is not None:
                level = amount("trip", trip.si, D.PRESSURE)
                yield reading.varied(
                    code="run_out_stopped_by_trip", severity=Severity.CAUTION, others=(level,),
                    subject=judged.slot_path(n), criterion=None,
                    mend=(low_state(judged), f"{judged.path}/trips/low_suction_trip"),
                    names=(("slot", judged.slot_title(n)), ("set", judged.title)),
                )  # fmt: skip
            else:
                yield reading
