"""The curves behind a duty against flow: what is given, asked and taken.

They are read from the same lowered set and the same physics as the duty itself, so that
every duty
point lies on them.
"""

from dataclasses import dataclass, replace

import numpy as np

from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.parallel import leg_flows
from server.hydraulics.states import State
from server.station.station import Station
from server.studies.duty_result import DutyResult, NotSolved, Place
from server.studies.limits import limits_of
from server.studies.lowering import lower
from server.studies.lowering.lowered import Floats, LoweredSet
from server.studies.set_states import solve_states
from server.studies.shapes import SUPPLY_STATES, PipeAge, SupplyState
from server.studies.suction_side import suction_side
from server.studies.system_heads import Draw, SystemHeads, system_heads

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
    required_low: (
        Floats  # (n,) head that holds the set point at low supply, nan if not stated [m]
    )
    required_high: Floats  # (n,)
    pipes: PipeAge
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
    pipes = _pipes(lowered, result)
    known = [
        s for s in SUPPLY_STATES if np.isfinite(lowered.supply.shift[SUPPLY_STATES.index(s)])
    ]
    along_state = state if state in known else known[0]
    return DutyCurves(
        sets=sets,
        held=_held(lowered, result),
        flow=grid,
        required_low=_heads(lowered, grid, "low", pipes).required_head,
        required_high=_heads(lowered, grid, "high", pipes).required_head,
        pipes=pipes,
        along=_along(lowered, result, drawn, grid, along_state, pipes),
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


def _at_speed(legs: list[LegCurve], speed: float) -> tuple[Floats, Floats]:
    """Return flow and head of legs together, from no flow to the first leg's last row."""
    square = speed * speed
    high, low = (
        max(leg.peak_head for leg in legs) * square,
        max(leg.last_head for leg in legs) * square,
    )
    # flow grows with the root of the head given up: equal steps in flow need squared steps
    # in head
    head = high - (high - low) * np.linspace(0.0, 1.0, READINGS) ** 2
    flows = leg_flows(head, legs=legs, speeds=speed)
    usable = ~np.any(flows.state == State.END_OF_CURVE, axis=-1)
    return flows.flow.sum(axis=-1)[usable], head[usable]


def _running_set(lowered: LoweredSet, result: DutyResult, combination: int) -> RunningSet:
    units = _units(lowered, result, combination)
    flow, head = _at_speed([lowered.units[u].leg for u in units], lowered.control.highest_speed)
    slots = [int(n) for n in np.flatnonzero(result.combinations[combination])]
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
        speed = float(result.speed[case, max(k, 0), running[0]]) if running.size else np.nan
        if k >= 0 and np.isfinite(speed):
            together = [lowered.units[u].leg for u in _units(lowered, result, k)]
            curves.append(HeldCurve(int(case), *_at_speed(together, speed)))
    return tuple(curves)


def _heads(
    lowered: LoweredSet, flow: Floats, state: SupplyState, pipes: PipeAge
) -> SystemHeads:
    """Return grades and required head, all flow taken as demand; nan where no water is."""
    draw = Draw(
        domestic=flow,
        fire=np.zeros(flow.shape),
        fire_point=-1,
        aged=pipes == "aged",
        shift=np.full(flow.shape, lowered.supply.shift[SUPPLY_STATES.index(state)]),
    )
    heads = system_heads(lowered, draw)
    side = suction_side(lowered, heads)
    required = np.where(side.breaks_at == Place.NOWHERE, heads.required_head, np.nan)
    return replace(heads, suction_grade=side.suction_grade, required_head=required)


def _along(
    lowered: LoweredSet,
    result: DutyResult,
    drawn: tuple[int, ...],
    flow: Floats,
    state: SupplyState,
    pipes: PipeAge,
) -> tuple[AlongControl, ...]:
    """Return each drawn combination where it holds the set point, solved as the duty is."""
    if not drawn:
        return ()
    heads = _heads(lowered, flow, state, pipes)
    on = result.combinations[list(drawn)]
    solved = solve_states(lowered, on, flow, heads.required_head)
    held = (solved.state == State.SOLVED) & (flow > 0)[:, None]
    curves = []
    for i, k in enumerate(drawn):
        slot = {
            name: np.where(held[:, i, None], values[:, i, on[i]], np.nan)
            for name, values in solved.slot.items()
        }
        power = slot["shaft_power"].sum(axis=1)
        useful = (slot["shaft_power"] * slot["efficiency"]).sum(axis=1)
        available = lowered.npsh_available(heads.suction_grade[:, None], slot["suction_loss"])
        curves.append(
            AlongControl(
                combination=k,
                flow=flow,
                speed=slot["speed"][:, 0],
                efficiency=np.divide(
                    useful, power, out=np.full(flow.shape, np.nan), where=power > 0
                ),
                shaft_power=power,
                npsh_available=np.where(available < 0, np.nan, available).min(axis=1),
                npsh_required=slot["npsh_required"].max(axis=1),
            )
        )
    return tuple(curves)
