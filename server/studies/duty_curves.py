"""The curves behind a duty: what the set gives, what is asked of it, what it takes, against flow.

They are read from the same lowered set and the same physics as the duty itself, so that every duty
point lies on them.
"""

from dataclasses import dataclass

import numpy as np

from server.hydraulics.affinity import npsh_required, shaft_power
from server.hydraulics.common_speed import CommonSpeedSet, common_speed_set
from server.hydraulics.leg_curve import LegCurve, leg_curve
from server.hydraulics.water import GRAVITY
from server.station.station import Station
from server.studies.duty_result import DutyResult, NotSolved
from server.studies.limits import limits_of
from server.studies.lowering import lower
from server.studies.lowering.lowered import Floats, LoweredSet
from server.studies.shapes import SUPPLY_STATES, PipeAge, SupplyState

READINGS = 121  # points of a curve
MOST_CURVES = 6


@dataclass(frozen=True, slots=True, eq=False)
class RunningSet:
    """Units of one kind or of several that run together, and their curve at the highest speed."""

    combination: int  # index into the result's combinations
    units: int
    small: bool  # only jockeys
    flow: Floats  # (n,) [m3/s]
    head: Floats  # (n,) at the highest speed, manifold to manifold [m]
    preferred_flow: Floats  # (m,) outline of the preferred region, empty when it has none [m3/s]
    preferred_head: Floats  # (m,) [m]


@dataclass(frozen=True, slots=True, eq=False)
class HeldCurve:
    """One combination at one speed: through the duty point of a case."""

    case: int
    flow: Floats
    head: Floats


@dataclass(frozen=True, slots=True, eq=False)
class AlongControl:
    """A combination along the held set point: nan where it cannot hold it."""

    combination: int
    flow: Floats  # (n,) [m3/s]
    speed: Floats  # (n,) ratio
    efficiency: Floats  # (n,) of all running pumps together, ratio
    shaft_power: Floats  # (n,) of all running pumps together [W]
    npsh_available: Floats  # (n,) least of the running pumps [m]
    npsh_required: Floats  # (n,) largest of the running pumps [m]


@dataclass(frozen=True, slots=True, eq=False)
class DutyCurves:
    """Everything that the duty figure draws, in SI."""

    sets: tuple[RunningSet, ...]
    held: tuple[HeldCurve, ...]
    flow: Floats  # (n,) grid of station flow [m3/s]
    required_low: Floats  # (n,) head that holds the set point at low supply, nan if not stated [m]
    required_high: Floats  # (n,)
    pipes: PipeAge
    along: tuple[AlongControl, ...]
    along_state: SupplyState


@dataclass(frozen=True, slots=True, eq=False)
class _Kinds:
    """A combination by kinds: legs, how many of each, index of a slot of each."""

    legs: tuple[LegCurve, ...]
    count: tuple[int, ...]
    slots: tuple[int, ...]


def duty_curves(station: Station, result: DutyResult, state: SupplyState = "low") -> DutyCurves:
    """Return the curves of a solved set.

    Parameters
    ----------
    station : Station
        The document that the result is of.
    result : DutyResult
        Duty of the set.
    state : {"low", "normal", "high"}
        Supply state of the curves along the held set point; another is taken if it is not stated.

    Raises
    ------
    ValueError
        If the result is not of this document: then the set cannot be lowered.
    """
    lowered = lower(station, result.pump_set, limits_of(station))
    if isinstance(lowered, NotSolved):
        raise ValueError(f"set {result.pump_set} of the result is not solved in this document")
    drawn = _drawn(lowered, result)
    top = lowered.control.highest_speed
    sets = tuple(_running_set(lowered, k, kinds, top) for k, kinds in drawn)
    furthest = max((float(s.flow[-1]) for s in sets), default=0.0)
    asked = float(np.nanmax(result.demand)) if result.demand.size else 0.0
    grid = np.linspace(0.0, max(furthest, 1.1 * asked, 1e-3), READINGS)
    pipes = _pipes(lowered, result)
    known = [s for s in SUPPLY_STATES if np.isfinite(lowered.supply.shift[SUPPLY_STATES.index(s)])]
    along_state = state if state in known else known[0]
    return DutyCurves(
        sets=sets,
        held=_held(lowered, result),
        flow=grid,
        required_low=_required(lowered, grid, "low", pipes),
        required_high=_required(lowered, grid, "high", pipes),
        pipes=pipes,
        along=tuple(_along(lowered, k, kinds, along_state, pipes) for k, kinds in drawn),
        along_state=along_state,
    )


def _pipes(lowered: LoweredSet, result: DutyResult) -> PipeAge:
    """Return the age that most cases are solved at, aged when both are as many."""
    aged = sum(case.pipes == "aged" for case in result.cases)
    return "aged" if lowered.main.knows("aged") and 2 * aged >= len(result.cases) else "new"


def _kinds(lowered: LoweredSet, result: DutyResult, combination: int) -> _Kinds:
    slots: dict[int, list[int]] = {}
    for n in np.flatnonzero(result.combinations[combination]):
        slots.setdefault(lowered.slots[int(n)].unit, []).append(int(n))
    legs = tuple(leg_curve(lowered.units[u].curve, loss=lowered.units[u].leg_coefficient) for u in slots)
    return _Kinds(legs, tuple(len(s) for s in slots.values()), tuple(s[0] for s in slots.values()))


def _drawn(lowered: LoweredSet, result: DutyResult) -> tuple[tuple[int, _Kinds], ...]:
    """Return the combinations that are drawn, one of each make-up: those chosen, and fewer of them."""
    chosen = {int(k) for k in result.chosen if k >= 0}
    usable = {int(k) for k in np.flatnonzero(result.available.any(axis=0))} | chosen
    most = max((int(result.combinations[k].sum()) for k in chosen), default=2)
    found: dict[tuple[tuple[int, int], ...], tuple[int, _Kinds]] = {}
    for k in sorted(usable, key=lambda k: (k not in chosen, k)):
        units = [lowered.slots[int(n)].unit for n in np.flatnonzero(result.combinations[k])]
        make_up = tuple(sorted((u, units.count(u)) for u in set(units)))
        if units and len(units) <= most and make_up not in found:
            found[make_up] = k, _kinds(lowered, result, k)
    ordered = sorted(found.values(), key=lambda item: _end_flow(item[1]))
    return tuple(ordered[-MOST_CURVES:])


def _end_flow(kinds: _Kinds) -> float:
    return sum(n * leg.last_flow for n, leg in zip(kinds.count, kinds.legs, strict=True))


def _common(kinds: _Kinds) -> CommonSpeedSet:
    return common_speed_set(kinds.legs, kinds.count)


def _running_set(lowered: LoweredSet, combination: int, kinds: _Kinds, top: float) -> RunningSet:
    together = _common(kinds)
    flow = np.linspace(0.0, float(np.max(together.last_flow)) * top, READINGS)
    head = together.head(flow, speed=top)
    outline = _preferred(lowered, kinds, top)
    small = all(lowered.slots[n].facts.role == "jockey" for n in kinds.slots)
    known = np.isfinite(head)
    return RunningSet(
        combination, sum(kinds.count), small, flow[known], head[known], outline[0], outline[1]
    )


def _preferred(lowered: LoweredSet, kinds: _Kinds, top: float) -> tuple[Floats, Floats]:
    """Return the outline of the preferred region between its two loci, equal units only."""
    empty = np.empty(0)
    facts = lowered.slots[kinds.slots[0]].facts
    if len(kinds.legs) != 1 or facts.best_efficiency_flow is None:
        return empty, empty
    leg, count = kinds.legs[0], kinds.count[0]
    low, high = (facts.best_efficiency_flow * end for end in lowered.slots[kinds.slots[0]].preferred)
    high = min(high, leg.last_flow)
    bottom = lowered.control.lowest_speed
    if not leg.first_flow <= low < high:
        return empty, empty
    speeds = np.linspace(bottom, top, 25)
    across = np.linspace(low, high, 25)
    # up the left locus, along the top speed, down the right locus, back along the lowest speed
    x = np.concatenate([np.full(25, low), across, np.full(25, high), across[::-1]])
    s = np.concatenate([speeds, np.full(25, top), speeds[::-1], np.full(25, bottom)])
    return count * x * s, s**2 * leg.head(x)


def _held(lowered: LoweredSet, result: DutyResult) -> tuple[HeldCurve, ...]:
    """Return the curve at the speed of each shown case, where units share one speed."""
    curves = []
    for case in np.flatnonzero(result.shown):
        k = int(result.chosen[case])
        if k < 0:
            continue
        kinds = _kinds(lowered, result, k)
        speed = float(result.speed[case, k, kinds.slots[0]])
        if not np.isfinite(speed):
            continue
        together = _common(kinds)
        flow = np.linspace(0.0, float(np.max(together.last_flow)) * speed, READINGS // 2)
        head = together.head(flow, speed=speed)
        known = np.isfinite(head)
        curves.append(HeldCurve(int(case), flow[known], head[known]))
    return tuple(curves)


def _suction_grade(lowered: LoweredSet, flow: Floats, state: SupplyState, pipes: PipeAge) -> Floats:
    shift = lowered.supply.shift[SUPPLY_STATES.index(state)]
    lost = lowered.suction_line.head_loss(
        flow, np.full(flow.shape, pipes == "aged"), lowered.water.kinematic_viscosity
    )
    return np.asarray(lowered.supply.grade(flow, shift) - lost)


def _required(lowered: LoweredSet, flow: Floats, state: SupplyState, pipes: PipeAge) -> Floats:
    """Return the head that holds the set point, all flow taken as demand of the zone. [m]"""
    control, weight = lowered.control, lowered.water.weight
    suction = _suction_grade(lowered, flow, state, pipes)
    if control.point < 0:
        held = control.discharge_gauge_level + control.pressure / weight
        return np.asarray(held - suction)
    none = np.zeros(flow.shape)
    lost = lowered.points.loss(flow, none, none - 1)[..., control.point]
    main = lowered.main.head_loss(
        flow, np.full(flow.shape, pipes == "aged"), lowered.water.kinematic_viscosity
    )
    held = lowered.points.elevation[control.point] + control.pressure / weight
    return np.asarray(held + lost + main - suction)


def _along(
    lowered: LoweredSet, combination: int, kinds: _Kinds, state: SupplyState, pipes: PipeAge
) -> AlongControl:
    together = _common(kinds)
    top, bottom = lowered.control.highest_speed, lowered.control.lowest_speed
    flow = np.linspace(0.0, float(np.max(together.last_flow)) * top, READINGS)
    head = _required(lowered, flow, state, pipes)
    speed = together.speed(flow, head=head)
    can = np.isfinite(speed) & (speed <= top) & (speed >= bottom) & (flow > 0)
    s = np.where(can, speed, np.nan)
    each = together.leg_flows(flow, head=head, speed=s)
    suction = _suction_grade(lowered, flow, state, pipes)
    useful, power = np.zeros(flow.shape), np.zeros(flow.shape)
    required = np.full(flow.shape, np.nan)
    available = np.full(flow.shape, np.nan)
    for n, leg_flow in enumerate(each):
        unit = lowered.units[lowered.slots[kinds.slots[n]].unit]
        q = np.where(can & (leg_flow > 0), leg_flow, np.nan)
        pump_head = head + unit.leg_coefficient * q**2
        useful += kinds.count[n] * lowered.water.weight * np.nan_to_num(q * pump_head)
        power += kinds.count[n] * shaft_power(unit.curve, q, speed=s, density=lowered.water.density)
        needs = npsh_required(unit.curve, q, speed=s, exponent=unit.npsh_exponent)
        has = _npsh_available(lowered, suction, unit.suction_coefficient * q**2)
        required, available = np.fmax(required, needs), np.fmin(available, has)
    with np.errstate(invalid="ignore", divide="ignore"):
        efficiency = np.where(power > 0, useful / power, np.nan)
    return AlongControl(
        combination, flow, s, efficiency, np.where(can, power, np.nan), available, required
    )


def _npsh_available(lowered: LoweredSet, suction_grade: Floats, branch_loss: Floats) -> Floats:
    water = lowered.water
    absolute = (water.atmosphere - water.vapour_pressure) / (water.density * GRAVITY)
    return np.asarray(absolute + suction_grade - branch_loss - lowered.eye_level)

