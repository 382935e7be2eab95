"""Velocities in pipes and branches, the range of a friction law, the check valves."""

from collections.abc import Iterator

import numpy as np

from server.hydraulics.conduit import HazenWilliamsRange, hazen_williams_range
from server.hydraulics.fittings import FULL_OPEN_VELOCITY
from server.station.conduit import Reach
from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.findings.reading import Reading
from server.studies.shapes import Case, Finding, Path, Severity
from server.units import Dimension as D

_RANGE_WORDS: dict[int, str] = {
    HazenWilliamsRange.INSIDE: "",
    HazenWilliamsRange.BORE: "bore",
    HazenWilliamsRange.VELOCITY: "velocity",
    HazenWilliamsRange.COEFFICIENT: "coefficient",
}


def judge_pipes(judged: JudgedSet) -> tuple[list[Reading], list[Finding]]:
    """Return readings of every velocity, and where a pipe law or valve is out of its range."""
    readings = [*_lines(judged), *_branches(judged), *_flushing(judged)]
    return readings, [*_hazen_williams(judged), *_check_valves(judged)]


def _velocity(
    judged: JudgedSet, code: str, key: str, subject: Path, title: str, case: Case, value: float,
    mend: Path, at_least: bool = False, severity: Severity = Severity.CAUTION,
) -> Reading:  # fmt: skip
    return Reading(
        code=code, severity=severity, subject=subject, pump_set=judged.id,
        criterion=judged.criterion(key), case=case, provided=amount("velocity", value, D.SPEED),
        required=amount("required", judged.limit(key), D.SPEED),
        sense="at_least" if at_least else "at_most", mend=(mend,),
        names=(("part", title), ("set", judged.title)), at_limit_share=0.0,
    )  # fmt: skip


def _lines(judged: JudgedSet) -> Iterator[Reading]:
    result, station = judged.result, judged.station
    # in a closed zone the demand is imposed, so lines are judged by it whatever the pumps do
    for c in judged.supplied:
        for r, reach in enumerate(station.suction_line.reaches):
            path = f"/suction_line/reaches/{reach.id}"
            yield _velocity(judged, "suction_line_fast", "suction-line-velocity-max", path,
                            reach.title or "the suction line", judged.case(c),
                            float(result.suction_line_velocity[c, r]),
                            f"{path}/bore")  # fmt: skip
        fire = bool(result.is_fire[c])
        for r, reach in enumerate(station.discharge_main.reaches):
            path = f"/discharge_main/reaches/{reach.id}"
            yield _velocity(judged, "main_fast_in_fire" if fire else "main_fast",
                            "main-velocity-fire-max" if fire else "main-velocity-max", path,
                            reach.title or "the discharge main", judged.case(c),
                            float(result.main_velocity[c, r]), f"{path}/bore")  # fmt: skip


def _branches(judged: JudgedSet) -> Iterator[Reading]:
    result = judged.result
    for c, k in judged.stated:
        for n, title in judged.running_kinds(c, k):
            leg = f"/legs/{judged.leg_of_slot[n]}"
            for side, velocity in (
                ("suction", result.suction_branch_velocity),
                ("discharge", result.discharge_branch_velocity),
            ):
                yield _velocity(judged, f"{side}_branch_fast", f"{side}-branch-velocity-max",
                                leg,
                                title, judged.case(c), float(velocity[c, k, n]),
                                f"{leg}/{side}_branch/bore")  # fmt: skip


def _flushing(judged: JudgedSet) -> Iterator[Reading]:
    """Yield the largest everyday velocity of each horizon in each reach of the main."""
    result = judged.result
    for horizon in judged.station.horizons:
        cases = [c for c, _ in judged.stated
                 if judged.case(c).horizon == horizon.id and not result.is_fire[c]]  # fmt: skip
        if not cases:
            continue
        for r, reach in enumerate(judged.station.discharge_main.reaches):
            c = max(cases, key=lambda c, r=r: float(result.main_velocity[c, r]))  # type: ignore[misc]
            path = f"/discharge_main/reaches/{reach.id}"
            yield _velocity(judged, "main_slow", "main-velocity-min", path, reach.title,
                            judged.case(c), float(result.main_velocity[c, r]), f"{path}/bore",
                            at_least=True, severity=Severity.NOTE)  # fmt: skip


def _hazen_williams(judged: JudgedSet) -> Iterator[Finding]:
    result, station = judged.result, judged.station
    stated = [c for c, _ in judged.stated]
    for base, reaches, velocity in (
        ("/suction_line", station.suction_line.reaches, result.suction_line_velocity),
        ("/discharge_main", station.discharge_main.reaches, result.main_velocity),
    ):
        for r, reach in enumerate(reaches):
            if reach.roughness.law != "hazen_williams" or reach.bore is None:
                continue
            fastest = float(velocity[stated, r].max()) if stated else 0.0
            why = _outside_law(reach, fastest)
            if why:
                path = f"{base}/reaches/{reach.id}"
                yield Finding(
                    code="friction_law_out_of_range", severity=Severity.CAUTION, subject=path,
                    pump_set=judged.id, provided=amount("velocity", fastest, D.SPEED),
                    required=amount("bore", reach.bore.si, D.BORE),
                    names=(("part", reach.title), ("state", why), ("set", judged.title)),
                    basis="physics",
                    mend=(f"{path}/roughness/law",),
                )  # fmt: skip


def _outside_law(reach: Reach, fastest: float) -> str:
    """Return in one word what puts a reach outside the range of Hazen-Williams, else ""."""
    typed = (reach.roughness.coefficient_new, reach.roughness.coefficient_aged)
    known = [coefficient for coefficient in typed if coefficient is not None]
    found = hazen_williams_range(
        fastest,
        bore=np.nan if reach.bore is None else reach.bore.si,
        coefficient=min(known, default=np.nan),
    )
    return _RANGE_WORDS[int(found)]


def _check_valves(judged: JudgedSet) -> Iterator[Finding]:
    """Yield the legs whose check valve is not fully open somewhere: it loses more then."""
    slowest: dict[int, list[tuple[float, int, int]]] = {}
    for c, k in judged.stated:
        for n in judged.running(c, k):
            velocity = float(judged.result.discharge_branch_velocity[c, k, n])
            slowest.setdefault(n, []).append((velocity, c, k))
    per_leg: dict[str, list[tuple[float, int, int]]] = {}
    for n, velocities in slowest.items():
        leg_id = judged.leg_of_slot[n]
        if leg_id is not None:
            per_leg.setdefault(leg_id, []).extend(velocities)
    for leg in judged.station.legs:
        if leg.id not in per_leg:
            continue
        typed = leg.discharge_branch.full_open_velocity
        needed = FULL_OPEN_VELOCITY if typed is None else typed.si
        below = sorted(v for v in per_leg[leg.id] if v[0] < needed)
        if not below or np.isnan(below[0][0]):
            continue
        path = f"/legs/{leg.id}"
        cases = dict.fromkeys(judged.case(c) for _, c, _ in below)
        yield Finding(
            code="check_valve_not_fully_open", severity=Severity.NOTE, subject=path,
            pump_set=judged.id, governing=judged.case(below[0][1]), cases=tuple(cases),
            provided=amount("velocity", below[0][0], D.SPEED),
            required=amount("required", needed, D.SPEED),
            names=(("part", leg.title), ("state", "assumed" if typed is None else ""),
                   ("set", judged.title)), basis="physics",
            mend=(f"{path}/discharge_branch/full_open_velocity",
                  f"{path}/discharge_branch/bore"),
        )  # fmt: skip
