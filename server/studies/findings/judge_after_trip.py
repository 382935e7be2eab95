"""A running unit lost: what the units left do until the standby has started.

It lasts for seconds where a standby is there, so all of it is a caution; that the set can do
without its largest unit for good is judged by the scenarios with one out, and by firm capacity.
"""

from collections.abc import Iterator

from server.hydraulics.states import State
from server.studies.duty_result import AfterTrip
from server.studies.findings.case_words import scenario_title
from server.studies.findings.judge_pressures import least_asked
from server.studies.findings.judge_suction import low_state
from server.studies.findings.judged_set import STATED, JudgedSet, amount
from server.studies.findings.reading import Names, Reading
from server.studies.shapes import Finding, Path, Severity
from server.units import Dimension as D


def judge_after_trip(judged: JudgedSet) -> tuple[list[Reading], list[Finding]]:
    """Return readings of pressures and NPSH after a trip, and the ends of curves passed."""
    after = judged.result.made.after_trip
    if after is None:
        return [], []
    readings: list[Reading] = []
    for i in range(len(after.cases)):
        if after.running[i] > 0 and State(int(after.state[i])) in STATED:
            readings.extend(_pressures(judged, after, i))
            readings.append(_npsh(judged, after, i))
    return readings, list(_end_of_curve(judged, after))


def _pressures(judged: JudgedSet, after: AfterTrip, i: int) -> Iterator[Reading]:
    """Yield the least pressure of each point; `i` is the case, before the trip as after it."""
    for p in range(len(judged.points)):
        asked = least_asked(judged, i, p)
        if asked is None:
            continue
        _, key, typed = asked
        yield Reading(
            code="after_trip_pressure_low", severity=Severity.CAUTION,
            subject=judged.point_path(p), pump_set=judged.id, criterion=None,
            case=after.cases[i], sense="at_least",
            provided=amount("pressure", float(after.point_pressure[i, p]), D.PRESSURE, 0),
            required=amount("required", judged.limit(key) if typed is None else typed,
                            D.PRESSURE),
            without_number=bool(after.point_without_water[i, p]),
            names=_names(judged, after, i, point=judged.points[p].title,
                         dry=bool(after.point_without_water[i, p])),
            mend=(*_tables(judged), f"{judged.path}/slots"),
        )  # fmt: skip


def _npsh(judged: JudgedSet, after: AfterTrip, i: int) -> Reading:
    """Return NPSH of the unit left with the least margin, against what it requires."""
    return Reading(
        code="after_trip_npsh_broken", severity=Severity.CAUTION, subject=judged.path,
        pump_set=judged.id, criterion=None, case=after.cases[i],
        provided=amount("available", float(after.npsh_available[i]), D.HEAD),
        required=amount("required", float(after.npsh_required[i]), D.HEAD), sense="at_least",
        names=_names(judged, after, i),
        mend=(low_state(judged), "/site/eye_level", *_tables(judged)),
    )  # fmt: skip


def _end_of_curve(judged: JudgedSet, after: AfterTrip) -> Iterator[Finding]:
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
    demand = judged.result.demand
    worst = max(ended, key=lambda i: float(demand[i]))
    share = float("nan") if furthest is None else float(after.best_efficiency_share[furthest])
    names = dict(_names(judged, after, worst))
    if furthest is not None and share > after.region_end[furthest] and not names["state"]:
        names["state"] = "beside"
        names["share_case"] = scenario_title(judged.station, after.cases[furthest])
    yield Finding(
        code="after_trip_end_of_curve", severity=Severity.CAUTION, subject=judged.path,
        pump_set=judged.id, governing=after.cases[worst],
        cases=tuple(after.cases[i] for i in ended),
        provided=amount("flow_at_end", float(after.flow_at_end[worst]), D.FLOW),
        required=amount("demand", float(demand[worst]), D.FLOW),
        others=(amount("share", share, D.RATIO, 0),), names=tuple(names.items()),
        basis="physics",
        mend=(*_tables(judged), f"{judged.path}/slots"),
    )  # fmt: skip


def _names(
    judged: JudgedSet, after: AfterTrip, i: int, point: str = "", dry: bool = False
) -> Names:
    standby = [slot.title for slot in judged.slots if slot.role == "standby"]
    lost = {slot.id: slot.title for slot in judged.slots}.get(after.lost[i] or "", "a unit")
    state = "" if standby else "no-standby"
    return (
        ("set", judged.title), ("lost", lost), ("left", str(int(after.running[i]))),
        ("standby", " or ".join(standby)), ("point", point),
        ("state", "dry" if dry else state),
    )  # fmt: skip


def _tables(judged: JudgedSet) -> tuple[Path, ...]:
    order = sorted(range(len(judged.slots)), key=lambda n: judged.slots[n].role == "jockey")
    return tuple(dict.fromkeys(f"{judged.curve_path(n)}/table" for n in order))
