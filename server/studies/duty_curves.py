"""The curves behind a duty against flow: what is given, asked and taken.

They are read from the same lowered set and the same physics as the duty itself, so that
every duty
point lies on them.
"""

from dataclasses import dataclass

import numpy as np

from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.parallel import leg_flows
from server.hydraulics.states import State
from server.station.station import Station
from server.studies.along_curves import AlongControl, along_control
from server.studies.duty_result import DutyResult, NotSolved, Place
from server.studies.limits import limits_of
from server.studies.lowering import lower
from server.studies.lowering.lowered import Floats, LoweredSet
from server.studies.set_states import full_speeds
from server.studies.shapes import SUPPLY_STATES, PipeAge, SupplyState
from server.studies.suction_side import suction_side
from server.studies.system_heads import Draw, system_heads
from server.studies.tank_states import tank_way

READINGS = 181  # points of a curve
MOST_CURVES = 6


@dataclass(frozen=True, slots=True, eq=False)
class RunningSet:
    """Units that run together, and their curve at the highest speed."""

    combination: int  # index into the result's combinations
    units: int
    small: bool  # only jockeys
    flow: Floats  # (n,) [m3/s]
    head: Floats  # (n,) at the highest speed, manifold to manifold [m]
    preferred_flow: (
        Floats  # (m,) outline of the preferred region, empty when it has none [m3/s]
    )
    preferred_head: Floats  # (m,) [m]


@dataclass(frozen=True, slots=True, eq=False)
class HeldCurve:
    """One combination at one speed: through the duty point of a case."""

    case: int
    flow: Floats
    head: Floats


@dataclass(frozen=True, slots=True, eq=False)
class DutyCurves:
    """Everything that the duty figure draws, in SI."""

    sets: tuple[RunningSet, ...]
    held: tuple[HeldCurve, ...]
    flow: Floats  # (n,) grid of station flow [m3/s]
    required_low: (
        Floats  # (n,) head that holds the set point at low supply, nan if not stated [m]
    )
    required_high: Floats  # (n,)
    pipes: PipeAge
    easiest_pipes: PipeAge  # of required_high; another age towards a tank only
    along: tuple[AlongControl, ...]
    along_state: SupplyState


def duty_curves(station: Station, result: DutyResult, state: SupplyState = "low") -> DutyCurves:
    """Return the curves of a solved set.

    Parameters
    ----------
    station : Station
        The document that the result is of.
    result : DutyResult
        Duty of the set.
    state : {"low", "normal", "high"}
        Supply state of the curves along the held set point; another is taken if it is not
        stated.

    Raises
    ------
    ValueError
        If the result is not of this document: then the set cannot be lowered.
    """
    lowered = lower(station, result.pump_set, limits_of(station))
    if isinstance(lowered, NotSolved):
        raise ValueError(f"set {result.pump_set} of the result is not solved in this document")
    drawn = _drawn(lowered, result)
    sets = tuple(_running_set(lowered, result, k) for k in drawn)
    furthest = max((float(s.flow[-1]) for s in sets), default=0.0)
    asked = float(np.nanmax(result.demand)) if result.demand.size else 0.0
    grid = np.linspace(0.0, max(furthest, 1.1 * asked, 1e-3), READINGS)
    pipes = easiest = _pipes(lowered, result)
    if lowered.floats:
        pipes = "aged" if lowered.route.knows("aged") else "new"
        easiest = "new" if lowered.route.knows("new") else "aged"
    known = [
        s for s in SUPPLY_STATES if np.isfinite(lowered.supply.shift[SUPPLY_STATES.index(s)])
    ]
    along_state = state if state in known else known[0]
    return DutyCurves(
        sets=sets,
        held=_held(lowered, result),
        flow=grid,
        required_low=_asked(lowered, result, grid, "low", pipes),
        required_high=_asked(lowered, result, grid, "high", easiest),
        pipes=pipes,
        easiest_pipes=easiest,
        along=along_control(lowered, result, drawn, grid, along_state, pipes),
        along_state=along_state,
    )


def _pipes(lowered: LoweredSet, result: DutyResult) -> PipeAge:
    """Return the age that most cases are solved at, aged when both are as many."""
    aged = sum(case.pipes == "aged" for case in result.cases)
    return "aged" if lowered.route.knows("aged") and 2 * aged >= len(result.cases) else "new"


def _units(lowered: LoweredSet, result: DutyResult, combination: int) -> list[int]:
    """Return the unit of each slot that runs."""
    return [
        lowered.slots[int(n)].unit for n in np.flatnonzero(result.combinations[combination])
    ]


def _drawn(lowered: LoweredSet, result: DutyResult) -> tuple[int, ...]:
    """Return the combinations drawn, one of each make-up: those chosen, and fewer."""
    chosen = {int(k) for k in result.chosen if k >= 0}
    usable = {int(k) for k in np.flatnonzero(result.available.any(axis=0))} | chosen
    most = max((int(result.combinations[k].sum()) for k in chosen), default=2)
    found: dict[tuple[int, ...], int] = {}
    for k in sorted(usable, key=lambda k: (k not in chosen, k)):
        units = _units(lowered, result, k)
        if units and len(units) <= most:
            found.setdefault(tuple(sorted(units)), k)

    def end(k: int) -> float:
        return sum(lowered.units[u].curve.last_flow for u in _units(lowered, result, k))

    return tuple(sorted(found.values(), key=end)[-MOST_CURVES:])


def _at_speeds(legs: list[LegCurve], speeds: Floats) -> tuple[Floats, Floats]:
    """Return flow and head of legs together, from no flow to the first leg's last row."""
    square = speeds * speeds
    high = float(np.max(square * [leg.peak_head for leg in legs]))
    low = float(np.max(square * [leg.last_head for leg in legs]))
    # flow grows with the root of the head given up: equal steps in flow need squared steps
    # in head
    head = high - (high - low) * np.linspace(0.0, 1.0, READINGS) ** 2
    flows = leg_flows(head, legs=legs, speeds=speeds)
    usable = ~np.any(flows.state == State.END_OF_CURVE, axis=-1)
    return flows.flow.sum(axis=-1)[usable], head[usable]


def _running_set(lowered: LoweredSet, result: DutyResult, combination: int) -> RunningSet:
    units = _units(lowered, result, combination)
    slots = [int(n) for n in np.flatnonzero(result.combinations[combination])]
    flow, head = _at_speeds([lowered.units[u].leg for u in units], full_speeds(lowered)[slots])
    small = all(lowered.slots[n].facts.role == "jockey" for n in slots)
    outline = _preferred(lowered, slots) if len(set(units)) == 1 else (np.empty(0), np.empty(0))
    return RunningSet(combination, len(units), small, flow, head, *outline)


def _preferred(lowered: LoweredSet, slots: list[int]) -> tuple[Floats, Floats]:
    """Return the outline of the preferred region of equal units, between its two loci."""
    slot, count = lowered.slots[slots[0]], len(slots)
    leg, best = lowered.units[slot.unit].leg, slot.facts.best_efficiency_flow
    if best is None:
        return np.empty(0), np.empty(0)
    low, high = best * slot.preferred[0], min(best * slot.preferred[1], leg.last_flow)
    if not leg.first_flow <= low < high:
        return np.empty(0), np.empty(0)
    top, bottom = lowered.control.highest_speed, lowered.control.lowest_speed
    if lowered.units[slot.unit].fixed:
        top = bottom = 1.0
    speeds, across = np.linspace(bottom, top, 25), np.linspace(low, high, 25)
    # up the left locus, along the top speed, down the right locus, back along the lowest speed
    x = np.concatenate([np.full(25, low), across, np.full(25, high), across[::-1]])
    s = np.concatenate([speeds, np.full(25, top), speeds[::-1], np.full(25, bottom)])
    return np.asarray(count * x * s), np.asarray(s**2 * leg.head(x))


def _held(lowered: LoweredSet, result: DutyResult) -> tuple[HeldCurve, ...]:
    """Return the curve at the speed of each shown case."""
    curves = []
    for case in np.flatnonzero(result.shown):
        k = int(result.chosen[case])
        running = np.flatnonzero(result.combinations[max(k, 0)])
        speeds = result.speed[case, max(k, 0), running]
        if k >= 0 and running.size and np.isfinite(speeds).all():
            together = [lowered.units[u].leg for u in _units(lowered, result, k)]
            curves.append(HeldCurve(int(case), *_at_speeds(together, speeds)))
    return tuple(curves)


def _asked(
    lowered: LoweredSet, result: DutyResult, flow: Floats, state: SupplyState, pipes: PipeAge
) -> Floats:
    """Return the head asked of the station at a flow.

    In a closed zone all of it is demand. Towards a tank the hardest stands with low supply: a
    full tank and nothing drawn; the easiest with high supply: a low tank and the largest
    demand.
    """
    shift = np.full(flow.shape, lowered.supply.shift[SUPPLY_STATES.index(state)])
    none = np.zeros(flow.shape)
    if not lowered.floats:
        draw = Draw(domestic=flow, fire=none, fire_point=-1, aged=pipes == "aged", shift=shift)
        heads = system_heads(lowered, draw)
        has_water = suction_side(lowered, heads).breaks_at == Place.NOWHERE
        return np.where(has_water, heads.required_head, np.nan)
    hardest = state == "low"
    drawn = 0.0 if hardest or not result.demand.size else float(np.nanmax(result.demand))
    draw = Draw(
        domestic=none + drawn, fire=none, fire_point=-1,
        aged=np.full(flow.shape, pipes == "aged"), shift=shift,
        way=np.zeros(flow.shape, dtype=np.intp),
    )  # fmt: skip
    tank = np.full(flow.shape, 2 if hardest else 0)
    return tank_way(lowered, draw, tank).head(flow, np.arange(flow.size))
