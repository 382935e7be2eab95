"""Which combination runs: the rule "fewest units", one answer for all states of a scenario.

Decision. Combinations are looked at by number of units, then jockeys before main units, then
slot order. The first that
 0 holds the set point with every unit inside its preferred region, at all three supply states;
 1 else holds it with every unit inside the maker's allowable region at all three;
 2 else holds it at all three, before the end of the curve and within the speed limits;
 3 else comes nearest: fewest supply states past the end of a curve or without water, least
   pressure missing at the worst state, least in excess, largest flow at the end of the curve.
A combination with a unit held shut in any state is never chosen, nor one whose state cannot be
told. Supply states that are not stated, or give no water, are left out of "all". One set for
all states, because the operator switches by flow and does not know the state of the supply.
"""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from server.hydraulics.states import State
from server.studies.cases import STATES
from server.studies.lowering.lowered import Flags, Floats, Indices, Slot

NONE = 4
BARRED = (State.HELD_SHUT, State.NOT_AVAILABLE)
WITHOUT_DUTY = (State.END_OF_CURVE, State.NO_WATER)


def choose(
    slots: Sequence[Slot],
    *,
    available: Flags,
    known: Flags,
    state: NDArray[np.int8],
    share: Floats,
    combinations: Flags,
    held_pressure: Floats,
    set_point: Floats,
    flow_at_end: Floats,
) -> tuple[Indices, NDArray[np.int8]]:
    """Return the chosen combination of each case (-1: none) and the class of the choice.

    Parameters
    ----------
    slots : sequence of Slot, length N
        The set.
    available : ndarray of bool, shape (C, K)
        Combinations that a case allows; C is scenarios by three supply states.
    known : ndarray of bool, shape (C,)
        Cases whose supply state is stated and gives water.
    state : ndarray of int8, shape (C, K)
        `State` of each.
    share : ndarray, shape (C, K, N)
        Flow over best-efficiency flow at the running speed.
    combinations : ndarray of bool, shape (K, N)
        Slots that run.
    held_pressure : ndarray, shape (C, K)
        Pressure where the set point is held. [Pa]
    set_point : ndarray, shape (C,)
        [Pa]
    flow_at_end : ndarray, shape (K,)
        Largest flow before the end of a curve. [m3/s]
    """
    cases, total = state.shape
    if total == 0:
        return np.full(cases, -1, dtype=np.intp), np.full(cases, NONE, dtype=np.int8)
    preferred = np.array([slot.preferred for slot in slots], dtype=np.float64)
    allowable = np.array(
        [(slot.facts.allowable_low, slot.facts.allowable_high) for slot in slots],
        dtype=np.float64,
    )
    solved = state == State.SOLVED
    inside = solved & inside_all(share, preferred, combinations)
    allowed = solved & inside_all(share, allowable, combinations)
    barred = np.isin(state, BARRED) | ~available
    told = known[:, None]
    possible = _every(~barred | ~told) & _some(told & np.ones_like(barred))
    classes = np.full(possible.shape, NONE, dtype=np.int8)
    classes[possible] = 3
    for number, meets in ((2, solved), (1, allowed), (0, inside)):
        classes[possible & _every(meets | ~told)] = number
    past = _total(told & np.isin(state, WITHOUT_DUTY))
    short = np.where(told, set_point[:, None] - held_pressure, np.nan)
    missing, excess = _worst(np.maximum(short, 0.0)), _worst(np.maximum(-short, 0.0))
    chosen = np.full(possible.shape[0], -1, dtype=np.intp)
    reached = classes.min(axis=1)
    for scenario, best in enumerate(reached):
        if best == NONE:
            continue
        candidates = np.flatnonzero(classes[scenario] == best)
        if best == 3:
            rank = np.lexsort((
                candidates, -flow_at_end[candidates], excess[scenario, candidates],
                missing[scenario, candidates], past[scenario, candidates],
            ))  # fmt: skip
            candidates = candidates[rank]
        chosen[scenario] = candidates[0]
    return np.repeat(chosen, STATES), np.repeat(reached, STATES)


def inside_all(share: Floats, limits: Floats, combinations: Flags) -> Flags:
    """Return where every running unit lies inside its limits; unknown is not inside."""
    within = (share >= limits[:, 0]) & (share <= limits[:, 1])
    return np.asarray(np.all(within | ~combinations, axis=2), dtype=np.bool_)


def _by_scenario(values: NDArray[np.generic]) -> NDArray[np.generic]:
    return values.reshape(-1, STATES, values.shape[1])


def _every(values: Flags) -> Flags:
    return np.asarray(_by_scenario(values).all(axis=1), dtype=np.bool_)


def _some(values: Flags) -> Flags:
    return np.asarray(_by_scenario(values).any(axis=1), dtype=np.bool_)


def _total(values: Flags) -> Floats:
    return np.asarray(_by_scenario(values).sum(axis=1), dtype=np.float64)


def _worst(values: Floats) -> Floats:
    """Return the largest of the states that have a number, 0 where none has."""
    return np.asarray(
        _by_scenario(np.nan_to_num(values, nan=0.0)).max(axis=1), dtype=np.float64
    )
