"""Pressures at the named points against what is required, and points without water."""

from collections.abc import Iterator

from server.hydraulics.states import State
from server.studies.findings.judge_suction import below_atmosphere
from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.findings.reading import TOLD_ELSEWHERE, Reading, Sense
from server.studies.shapes import Case, Path, Severity
from server.units import Dimension as D


def judge_pressures(judged: JudgedSet) -> list[Reading]:
    """Return readings of every point in every case, and where a point has no water at all."""
    readings: list[Reading] = []
    result = judged.result
    for c, k in judged.stated:
        for p in range(len(judged.points)):
            if result.point_without_water[c, k, p]:
                readings.extend(_no_water(judged, c, p))
            else:
                pressure = float(result.point_pressure[c, k, p])
                readings.extend(_in_case(judged, c, k, p, pressure))
        if result.discharge_without_water[c, k]:
            gauge = "/site/discharge_gauge_level"
            readings.append(_dry(judged, gauge, "the discharge gauge", judged.case(c)))
    return readings


def least_asked(judged: JudgedSet, c: int, p: int) -> tuple[str, str, float | None] | None:
    """Return the code and rule by which point `p` is judged in case `c`, and what it types."""
    point = judged.points[p]
    if not judged.result.is_fire[c]:
        if point.role == "hydrant" and point.required_pressure is None:
            return None
        return "pressure_low", "service-pressure-min", point.required_pressure
    if int(judged.result.fire_point[c]) == p:
        return "hydrant_residual_low", "hydrant-residual-min", point.residual_pressure
    return "fire_pressure_low", "fire-pressure-min", point.fire_pressure


def _dry(judged: JudgedSet, subject: Path, place: str, case: Case) -> Reading:
    """Return that there is no water at a place: no number can say by how much."""
    return Reading(
        code="no_water_at_point", severity=Severity.STOP, subject=subject, pump_set=judged.id,
        criterion=None, case=case, provided=amount("pressure", None, D.PRESSURE),
        required=amount("required", judged.result.lowest_pressure, D.PRESSURE),
        sense="at_least", without_number=True, mend=_to_raise(judged, top_speed=True),
        names=(("point", place), ("set", judged.title)),
    )  # fmt: skip


def _no_water(judged: JudgedSet, c: int, p: int) -> Iterator[Reading]:
    """Yield that a point has no water, and that it so does not have what is asked."""
    reading = _dry(judged, judged.point_path(p), judged.points[p].title, judged.case(c))
    yield reading
    asked = least_asked(judged, c, p)
    if asked is not None:
        yield reading.varied(code=TOLD_ELSEWHERE, criterion=judged.criterion(asked[1]))


def _in_case(judged: JudgedSet, c: int, k: int, p: int, pressure: float) -> Iterator[Reading]:
    """Yield the readings of one point in one case."""
    point, result = judged.points[p], judged.result
    at_top = State(int(result.state[c, k])) is State.TOP_SPEED
    raising = _to_raise(judged, at_top)
    if pressure < 0:
        yield below_atmosphere(
            judged, judged.case(c), judged.point_path(p), point.title, pressure, raising
        )
    asked, fire = least_asked(judged, c, p), bool(result.is_fire[c])
    if asked is not None:
        code, key, typed = asked
        held = p == judged.held_index and bool(result.set_point_held[c, k])
        yield pressure_reading(judged, code, key, p, pressure, typed, "at_least",
                               judged.case(c), raising, held=held and not fire)  # fmt: skip
    code, key, typed = (
        ("pressure_high_in_fire", "service-pressure-max-abnormal",
         point.highest_pressure_abnormal)
        if fire
        else ("pressure_high", "service-pressure-max", point.highest_pressure)
    )  # fmt: skip
    yield pressure_reading(judged, code, key, p, pressure, typed, "at_most", judged.case(c),
                           (f"{judged.path}/control/pressure",))  # fmt: skip


def pressure_reading(
    judged: JudgedSet, code: str, key: str, p: int, pressure: float, typed: float | None,
    sense: Sense, case: Case, mend: tuple[Path, ...], held: bool = False,
    severity: Severity = Severity.FAIL, name: str = "",
) -> Reading:  # fmt: skip
    """Return one point's pressure against the limit typed there, else the rule's."""
    limit = judged.limit(key) if typed is None else typed
    return Reading(
        code=code, severity=severity, subject=judged.point_path(p), pump_set=judged.id,
        criterion=judged.criterion(key), case=case,
        provided=amount("pressure", pressure, D.PRESSURE, 0),
        required=amount("required", limit, D.PRESSURE), sense=sense, mend=mend,
        names=(("point", judged.points[p].title), ("set", judged.title),
               ("limit", "point" if typed is not None else "criterion"), ("state", name)),
        # a held pressure is the set point itself: its margin lies in the speed, not here
        at_limit_share=0.0 if held else 0.02,
    )  # fmt: skip


def _to_raise(judged: JudgedSet, top_speed: bool) -> tuple[Path, ...]:
    """Return the fields that raise a pressure, best first."""
    set_point = f"{judged.path}/control/pressure"
    if not top_speed:
        return (set_point,)
    return (*_pump_tables(judged), f"{judged.path}/control/highest_speed", set_point)


def _pump_tables(judged: JudgedSet) -> tuple[Path, ...]:
    """Return the curves of the duty pumps, each once, the first slot's first."""
    order = sorted(range(len(judged.slots)), key=lambda n: judged.slots[n].role == "jockey")
    return tuple(dict.fromkeys(f"{judged.curve_path(n)}/table" for n in order))
