"""What the control does: set point held or not, speed as a signal, trips reached."""

from collections.abc import Iterator

import numpy as np

from server.hydraulics.states import State
from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.findings.reading import Reading, Sense, broken
from server.studies.shapes import Case, Finding, Path, Severity
from server.units import Dimension as D


def judge_control(
    judged: JudgedSet, failing: frozenset[Case]
) -> tuple[list[Reading], list[Finding]]:
    """Return readings of the control, and the cases in which it does not hold its set point.

    Parameters
    ----------
    judged : JudgedSet
        The set.
    failing : frozenset of Case
        Cases in which a requirement of pressure is not met: that finding says it already.
    """
    readings = [
        *_trips(judged),
        *_speed_range(judged),
        *_night_span(judged),
        *_steepness(judged),
    ]
    return readings, [*_not_held(judged, failing), *_limiter(judged)]


def _not_held(judged: JudgedSet, failing: frozenset[Case]) -> Iterator[Finding]:
    """Yield the set point that is not held although the requirements are met."""
    groups: dict[str, list[tuple[float, int, int]]] = {}
    result = judged.result
    if result.set_point is None:
        return
    for c, k in judged.stated:
        state = State(int(result.state[c, k]))
        if state is State.LOW_SPEED and result.fixed_exceeds[c, k]:
            continue  # what runs without a drive is told by itself
        if bool(result.set_point_held[c, k]) or judged.case(c) in failing:
            continue
        lack = float(result.set_pressure[c] - result.held_pressure[c, k])
        if state is State.LOW_SPEED:
            groups.setdefault("low_speed_limit", []).append((lack, c, k))
        else:
            code = "set_point_not_held_in_fire" if result.is_fire[c] else "set_point_not_held"
            groups.setdefault(code, []).append((-lack, c, k))
    for code, cases in groups.items():
        cases.sort()
        _, c, k = cases[0]
        low = code == "low_speed_limit"
        control = f"{judged.path}/control"
        yield Finding(
            code=code,
            severity=Severity.NOTE if code.endswith("_in_fire") else Severity.CAUTION,
            subject=control, pump_set=judged.id, governing=judged.case(c),
            cases=tuple(judged.case(each) for _, each, _ in cases),
            provided=amount("held", float(result.held_pressure[c, k]), D.PRESSURE, 0),
            required=amount("set_point", float(result.set_pressure[c]), D.PRESSURE),
            others=(amount("speed", float(np.nanmax(result.speed[c, k])), D.RATIO, 1),),
            names=(("set", judged.title), ("held", judged.held_words)), basis="physics",
            mend=(f"{control}/lowest_speed",) if low else (f"{control}/pressure",
                                                           f"{control}/highest_speed"),
        )  # fmt: skip


def _trips(judged: JudgedSet) -> Iterator[Reading]:
    """Yield suction and discharge pressures against the trips: a trip that acts is a stop."""
    trips, result = judged.entered.trips, judged.result
    if trips.low_suction_trip is not None:
        for c in judged.supplied:
            yield _trip(judged, c, "low_suction_trip", trips.low_suction_trip.si,
                        float(result.suction_pressure[c]), "at_least")  # fmt: skip
    if trips.high_discharge_trip is not None:
        for c, k in judged.stated:
            yield _trip(judged, c, "high_discharge_trip", trips.high_discharge_trip.si,
                        float(result.discharge_pressure[c, k]), "at_most")  # fmt: skip


def _trip(
    judged: JudgedSet, c: int, field: str, level: float, pressure: float, sense: Sense
) -> Reading:
    path = f"{judged.path}/trips/{field}"
    return Reading(
        code="trip_reached", severity=Severity.STOP, subject=path, pump_set=judged.id,
        criterion=None, case=judged.case(c),
        provided=amount("pressure", pressure, D.PRESSURE, 0),
        required=amount("trip", level, D.PRESSURE), sense=sense, mend=(path,),
        names=(("set", judged.title),
               ("side", "suction" if sense == "at_least" else "discharge")),
    )  # fmt: skip


def _limiter(judged: JudgedSet) -> Iterator[Finding]:
    """Yield the cases in which a slow-down limiter acts, whose effect is not computed."""
    level = judged.entered.trips.low_suction_slow_down
    if level is None:
        return
    path = f"{judged.path}/trips/low_suction_slow_down"
    acting = [c for c in judged.supplied if judged.result.suction_pressure[c] < level.si]
    if acting:
        worst = min(acting, key=lambda c: float(judged.result.suction_pressure[c]))
        yield Finding(
            code="limiter_not_computed", severity=Severity.NOT_CHECKED, subject=path,
            pump_set=judged.id, governing=judged.case(worst),
            cases=tuple(judged.case(c) for c in acting),
            provided=amount("pressure", float(judged.result.suction_pressure[worst]),
                            D.PRESSURE, 0),
            required=amount("limiter", level.si, D.PRESSURE), names=(("set", judged.title),),
            basis="physics", mend=(path,), because="not_in_this_version",
        )  # fmt: skip


def _speed_range(judged: JudgedSet) -> Iterator[Reading]:
    """Yield the typed speeds against the range of the criteria."""
    if all(slot.fixed for slot in judged.slots):
        return
    control = f"{judged.path}/control"
    for field, code, key, value, sense in (
        (
            "lowest_speed",
            "lowest_speed_low",
            "speed-lowest",
            judged.result.lowest_speed,
            "at_least",
        ),
        (
            "highest_speed",
            "highest_speed_high",
            "speed-highest",
            judged.result.highest_speed,
            "at_most",
        ),
    ):
        yield Reading(
            code=code, severity=Severity.CAUTION, subject=f"{control}/{field}",
            pump_set=judged.id,
            criterion=judged.criterion(key), case=None,
            provided=amount("speed", value, D.RATIO, 0),
            required=amount("required", judged.limit(key), D.RATIO, 0),
            sense="at_least" if sense == "at_least" else "at_most",
            mend=(f"{control}/{field}",),
            names=(("set", judged.title),), at_limit_share=0.0,
        )  # fmt: skip


def _night_span(judged: JudgedSet) -> Iterator[Reading]:
    """Yield how far minimum night stands from no flow in speed, for a lone variable unit."""
    result = judged.result
    for c, k in judged.stated:
        if not judged.is_kind(c, "minimum_night"):
            continue
        running = list(judged.running(c, k))
        zero = float(result.zero_flow_speed[c, k])
        if len(running) != 1 or zero != zero:
            continue
        n = running[0]
        speed = float(result.speed[c, k, n])
        yield Reading(
            code="speed_cannot_tell_night", severity=Severity.CAUTION,
            subject=judged.slot_path(n),
            pump_set=judged.id, criterion=judged.criterion("speed-span-min"),
            case=judged.case(c),
            provided=amount("span", speed - zero, D.RATIO, 1),
            required=amount("required", judged.limit("speed-span-min"), D.RATIO, 0),
            sense="at_least",
            others=(amount("zero", zero, D.RATIO, 1), amount("speed", speed, D.RATIO, 1),
                    amount("flow", float(result.flow[c, k]), D.FLOW)),
            mend=(_demand_field(judged, c), f"{judged.curve_path(n)}/table"),
            names=(("slot", judged.slot_title(n)), ("set", judged.title)), at_limit_share=0.0,
        )  # fmt: skip


def _demand_field(judged: JudgedSet, c: int) -> Path:
    return f"/horizons/{judged.case(c).horizon}/demand/{judged.demand_of(c)}"


def _steepness(judged: JudgedSet) -> Iterator[Reading]:
    """Yield the pressure change for 1 % of speed: over the limit, or over half of it."""
    result, limit = judged.result, judged.limit("pressure-per-speed-max")
    mend = (f"{judged.path}/control/pressure", *_tables(judged))
    for c, k in judged.stated:
        change = float(result.pressure_per_speed[c, k])
        if change != change or not bool(result.set_point_held[c, k]):
            continue
        over = Reading(
            code="pressure_steep_in_speed", severity=Severity.CAUTION,
            subject=f"{judged.path}/control", pump_set=judged.id,
            criterion=judged.criterion("pressure-per-speed-max"), case=judged.case(c),
            provided=amount("change", change, D.PRESSURE, 1),
            required=amount("required", limit, D.PRESSURE, 0), sense="at_most",
            others=(amount("limit", limit, D.PRESSURE, 0),), mend=mend,
            names=(("set", judged.title), ("held", judged.held_words)),
        )  # fmt: skip
        yield over
        if not broken(over) and not result.is_fire[c]:
            yield over.varied(code="pressure_by_speed", severity=Severity.NOTE,
                          required=amount("required", limit / 2, D.PRESSURE, 0))  # fmt: skip


def _tables(judged: JudgedSet) -> tuple[Path, ...]:
    return tuple(
        dict.fromkeys(f"{judged.curve_path(n)}/table" for n in range(len(judged.slots)))
    )
