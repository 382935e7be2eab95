"""Cases: every scenario in use at low, normal and high supply, as arrays.

"The largest unit" is the one with the largest best-efficiency flow (last-row flow where a
best-efficiency flow is not known for all); among equals the last in slot order, so that a
standby itself counts as the missing one and the duty units keep their places.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from server.studies.lowering.lowered import (
    Flags,
    Floats,
    Indices,
    LoweredSet,
    Scenario,
    Slot,
)
from server.studies.shapes import SUPPLY_STATES, Case
from server.studies.system_heads import Draw

STATES = len(SUPPLY_STATES)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Cases:
    """C cases: S scenarios, three supply states each, the states running fastest."""

    cases: tuple[Case, ...]
    shown: Flags  # (C,) the scenario's own supply state
    is_fire: Flags  # (C,)
    draw: Draw  # arrays (C,)
    tank_state: Indices  # (C,) of the tank on the zone: 0 low, 1 normal, 2 top
    running: tuple[
        tuple[int, ...], ...
    ]  # per case, slots that may run: duty, and who replaces one out
    jockeys: tuple[tuple[int, ...], ...]  # per case, jockey slots that may run


def cases_of(of: LoweredSet) -> Cases:
    """Return the cases of the scenarios in use, in document order."""
    cases: list[Case] = []
    running: list[tuple[int, ...]] = []
    jockeys: list[tuple[int, ...]] = []
    for scenario in of.scenarios:
        installed = installed_slots(of.slots, scenario.horizon_order)
        out = largest(of.slots, installed) if scenario.largest_out else None
        mains, small = may_run(of.slots, installed, out)
        for state in SUPPLY_STATES:
            cases.append(
                Case(scenario=scenario.id, pump_set=of.pump_set, horizon=scenario.horizon,
                     supply=state, pipes=scenario.pipes,
                     out=None if out is None else of.slots[out].facts.id)
            )  # fmt: skip
            running.append(mains)
            jockeys.append(small)
    return Cases(
        cases=tuple(cases),
        shown=np.array([s.shown == state for s in of.scenarios for state in SUPPLY_STATES]),
        is_fire=_each(of.scenarios, [s.is_fire for s in of.scenarios]).astype(np.bool_),
        draw=Draw(
            domestic=_each(of.scenarios, [s.domestic for s in of.scenarios]),
            fire=_each(of.scenarios, [s.fire for s in of.scenarios]),
            fire_point=_each(of.scenarios, [s.fire_point for s in of.scenarios]).astype(
                np.intp
            ),
            aged=_each(of.scenarios, [s.pipes == "aged" for s in of.scenarios]).astype(
                np.bool_
            ),
            shift=np.concatenate([shifts(of, s.low_shift) for s in of.scenarios]),
            way=_each(of.scenarios, [s.way for s in of.scenarios]).astype(np.intp),
        ),
        tank_state=_each(of.scenarios, [s.tank_state for s in of.scenarios]).astype(np.intp),
        running=tuple(running),
        jockeys=tuple(jockeys),
    )


def _each(scenarios: Sequence[Scenario], values: Sequence[float]) -> Floats:
    """Repeat a scenario's value for its supply states."""
    return np.repeat(np.array(values, dtype=np.float64), STATES)


def shifts(of: LoweredSet, low_shift: float) -> Floats:
    """Return the supply's three shifts, the low one of a year where that year has its own."""
    moved = np.array(of.supply.shift)
    if not np.isnan(low_shift):
        moved[0] = low_shift
    return moved


def installed_slots(slots: Sequence[Slot], horizon_order: int) -> tuple[int, ...]:
    """Return the slots that stand there in a horizon: one phased in later is absent before."""
    return tuple(i for i, slot in enumerate(slots) if slot.from_year <= horizon_order)


def largest(slots: Sequence[Slot], among: Sequence[int]) -> int | None:
    """Return the largest unit among some slots, the last of equals; None when there is none."""
    if not among:
        return None
    best = [slots[i].facts.best_efficiency_flow for i in among]
    known = [flow for flow in best if flow is not None]
    sizes = known if len(known) == len(among) else [slots[i].facts.last_flow for i in among]
    return max(zip(sizes, among, strict=True))[1]


def may_run(
    slots: Sequence[Slot], installed: Sequence[int], out: int | None
) -> tuple[tuple[int, ...], tuple[int, ...]]:
    """Return the main units and the jockeys that may run, with one unit out or none.

    A standby never adds to the duty units: the first one left takes the place of one out.
    """
    left = [i for i in installed if i != out]
    mains = [i for i in left if slots[i].facts.role == "duty"]
    if out is not None and slots[out].facts.role == "duty":
        mains += [i for i in left if slots[i].facts.role == "standby"][:1]
    jockeys = tuple(i for i in left if slots[i].facts.role == "jockey")
    return tuple(sorted(mains)), jockeys
