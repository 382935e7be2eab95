"""Tanks: the outlet of the supply tank, stages by level, the fire that a tank holds."""

from collections.abc import Iterator

import numpy as np

from server.station.demand import Fire
from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.findings.reading import Reading
from server.studies.shapes import Finding, Path, Severity
from server.units import Dimension as D

TANK = "/zone/tank"


def judge_tank(judged: JudgedSet) -> tuple[list[Reading], list[Finding]]:
    """Return the readings of tanks, and what a tank leaves unchecked."""
    readings = [
        *_submergence(judged),
        *_stages(judged),
        *_fire_storage(judged),
        *_draws_down(judged),
    ]
    return readings, [*_storage_not_checked(judged), *_standby(judged), *_several(judged)]


def _submergence(judged: JudgedSet) -> Iterator[Reading]:
    """Yield the water over the outlet at the cut-out against what the flow there needs."""
    made = judged.result.made.cut_out
    if made is None:
        return
    for m, case in enumerate(made.cases):
        yield Reading(
            code="submergence_short", severity=Severity.FAIL, subject="/supply/tank",
            pump_set=judged.id, criterion=judged.criterion("submergence"), case=case,
            provided=amount("depth", made.depth, D.LENGTH, 2),
            required=amount("required", float(made.submergence[m]), D.LENGTH, 2),
            sense="at_least", others=(amount("flow", float(made.flow[m]), D.FLOW),),
            names=(("set", judged.title),), at_limit_share=0.0,
            mend=("/supply/tank/cut_out", "/supply/tank/outlet_level",
                  "/supply/tank/outlet_bore"),
        )  # fmt: skip


def _stages(judged: JudgedSet) -> Iterator[Reading]:
    """Yield the levels of the stages against each other, the tank and the trip."""
    control, tank = judged.entered.control, judged.station.zone.tank
    if control.kind != "levels":
        return
    before: float | None = None
    trip = judged.entered.trips.high_level_trip
    for i, stage in enumerate(control.stages):
        path = f"{judged.path}/control/stages/{stage.id}"
        start = None if stage.start is None else stage.start.si
        stop = None if stage.stop is None else stage.stop.si
        pairs: tuple[tuple[str, float | None, float | None, bool, Path], ...] = (
            ("", stop, start, True, "stop"),
            ("starts-rise", start, before, False, "start"),
            ("outside", stop, None if tank.top is None else tank.top.si, False, "stop"),
            ("below", start, None if tank.low is None else tank.low.si, True, "start"),
            ("trip", stop, None if trip is None else trip.si, False, "stop"),
        )
        for state, level, limit, at_least, field in pairs:
            yield Reading(
                code="stage_level_wrong", severity=Severity.FAIL, subject=f"{path}/{field}",
                pump_set=judged.id, criterion=None, case=None,
                provided=amount("level", level, D.LEVEL, 2),
                required=amount("limit", limit, D.LEVEL, 2),
                sense="at_least" if at_least else "at_most", mend=(f"{path}/{field}",),
                names=(("set", judged.title), ("number", str(i + 1)), ("state", state)),
                # a stop at the start level stops at once: the same level will not do
                without_number=state == "" and level is not None and level == limit,
                at_limit_share=0.0,
            )  # fmt: skip
        before = start if start is not None else before


def stored_fires(judged: JudgedSet) -> tuple[Fire, ...]:
    """Return the fires that a tank on the zone is to hold."""
    if judged.result.zone_kind == "closed":
        return ()
    return tuple(fire for fire in judged.station.fires if fire.carried_by == "storage")


def _volume(fire: Fire) -> float:
    """Return the volume of a fire [m3], nan while a figure is absent."""
    if fire.flow is None or fire.duration is None:
        return float("nan")
    return fire.flow.si * fire.duration.si


def _held(judged: JudgedSet) -> float:
    """Return the volume from the start of the last stage, else normal level, to low [m3]."""
    tank = judged.station.zone.tank
    stages = judged.entered.control.stages
    starts = [stage.start.si for stage in stages if stage.start is not None]
    upper = min(starts) if starts else (None if tank.normal is None else tank.normal.si)
    if upper is None or tank.low is None or tank.area is None:
        return float("nan")
    return (upper - tank.low.si) * tank.area.si


def _fire_storage(judged: JudgedSet) -> Iterator[Reading]:
    """Yield the volume that is there even before the day's draw-down: less is never enough."""
    held = _held(judged)
    for fire in stored_fires(judged):
        yield Reading(
            code="fire_storage_short", severity=Severity.FAIL, subject=TANK,
            pump_set=judged.id, criterion=None, case=None,
            provided=amount("held", held, D.VOLUME, 0),
            required=amount("needed", _volume(fire), D.VOLUME, 0), sense="at_least",
            names=(("fire", fire.title or "the fire"), ("set", judged.title)),
            mend=(f"{TANK}/area", f"/fires/{fire.id}/duration"), at_limit_share=0.0,
        )  # fmt: skip


def _storage_not_checked(judged: JudgedSet) -> Iterator[Finding]:
    """Yield that the day's run of the level is not computed; absent figures are named."""
    held = _held(judged)
    for fire in stored_fires(judged):
        volume = _volume(fire)
        if volume > held:
            continue  # said already
        tank = judged.station.zone.tank
        given = {"low": tank.low, "area": tank.area}
        absent = tuple(f"{TANK}/{name}" for name, value in given.items() if value is None)
        yield Finding(
            code="fire_storage_not_checked", severity=Severity.NOT_CHECKED, subject=TANK,
            pump_set=judged.id, others=(amount("volume", volume, D.VOLUME, 0),),
            names=(("fire", fire.title or "the fire"), ("set", judged.title),
                   ("state", "absent" if absent else "")), basis="physics",
            mend=absent or (f"/fires/{fire.id}/carried_by",),
            because="absent" if absent else "not_in_this_version",
        )  # fmt: skip


def _draws_down(judged: JudgedSet) -> Iterator[Reading]:
    """Yield the cases in which a fire tank would feed although the set point is held."""
    result = judged.result
    for c in np.flatnonzero(result.tank_draws_down.any(axis=1)):
        level = float(result.tank_level[c])
        state = judged.scenario_of(int(c))
        name = "normal" if state is None else state.tank_state or "normal"
        yield Reading(
            code="fire_tank_draws_down", severity=Severity.FAIL, subject=TANK,
            pump_set=judged.id, criterion=None, case=judged.case(int(c)),
            provided=amount("grade", judged.held_grade(int(c)), D.LEVEL, 2),
            required=amount("level", level, D.LEVEL, 2), sense="at_least",
            names=(("set", judged.title),),
            mend=(f"{TANK}/{name}", f"{judged.path}/control/pressure"),
        )  # fmt: skip


def _standby(judged: JudgedSet) -> Iterator[Finding]:
    """Yield that standby power is not told where a tank feeds the zone meanwhile."""
    if judged.result.zone_kind != "floating_tank":
        return
    if judged.entered.standby_power.kind is None:
        path = f"{judged.path}/standby_power/kind"
        yield Finding(
            code="standby_power_missing", severity=Severity.NOT_CHECKED, subject=path,
            pump_set=judged.id, names=(("set", judged.title),), basis="standby-power",
            mend=(path,), because="absent",
        )  # fmt: skip


def _several(judged: JudgedSet) -> Iterator[Finding]:
    """Yield the states in which humped curves leave more than one operating point."""
    for one in judged.result.made.several:
        tables = dict.fromkeys(
            f"{judged.curve_path(int(n))}/table"
            for n in np.flatnonzero(judged.result.combinations[one.combination])
        )
        yield Finding(
            code="operating_point_not_unique", severity=Severity.CAUTION, subject=judged.path,
            pump_set=judged.id, governing=one.case, cases=(one.case,),
            provided=amount("largest", one.flows[0], D.FLOW),
            required=amount("least", one.flows[-1], D.FLOW),
            names=(("set", judged.title), ("number", str(len(one.flows)))),
            basis="physics", mend=tuple(tables),
        )  # fmt: skip
