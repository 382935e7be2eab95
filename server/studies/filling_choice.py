"""Which combination fills a tank: the fewest units that keep up, and each stage besides.

Decision. The combinations of the level stages are looked at, the first units in slot order for
each stage; without stages every combination that is allowed. The first that keeps up with the
demand at every stated supply state, with every unit
 0 inside its preferred region,
 1 else inside the maker's allowable region,
 2 else on its curve;
 3 else, where none keeps up, the one that passes most: the tank feeds the rest.
The level, not the demand, starts and stops units, so that every stage comes about in every
scenario: each is a case of its own.
"""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from server.hydraulics.states import State
from server.studies.cases import STATES, Cases
from server.studies.choice import BARRED, NONE, WITHOUT_DUTY, inside_all
from server.studies.combinations import Mask
from server.studies.lowering.lowered import Flags, Floats, Indices, LoweredSet
from server.studies.set_states import SetStates

KEEPS_UP = 1e-9  # relative, that a flow may lack of the demand


def stage_combinations(
    of: LoweredSet, cases: Cases, masks: Sequence[Mask]
) -> tuple[tuple[int, ...], ...]:
    """Return the combinations of the stages, lead first, for each case; none at a held flow."""
    if of.control.kind == "held_flow":
        return tuple(() for _ in cases.cases)
    where = {mask: k for k, mask in enumerate(masks)}
    chains = []
    for running, jockeys in zip(cases.running, cases.jockeys, strict=True):
        order = running or jockeys
        most = len(of.control.stages) or len(order)
        chains.append(
            tuple(where[tuple(sorted(order[: n + 1]))] for n in range(min(most, len(order))))
        )
    return tuple(chains)


def choose_filling(
    of: LoweredSet,
    *,
    stages: Sequence[Sequence[int]],
    available: Flags,
    known: Flags,
    states: SetStates,
    combinations: Flags,
    demand: Floats,
) -> tuple[Indices, NDArray[np.int8]]:
    """Return the chosen combination of each case (-1: none) and the class of the choice.

    Parameters
    ----------
    of : LoweredSet
        The set.
    stages : sequence of sequence of int, length C
        Combinations of the stages of each case; empty where any may run.
    available : ndarray of bool, shape (C, K)
        Combinations that a case allows.
    known : ndarray of bool, shape (C,)
        Cases that are stated and have water.
    states : SetStates
        Their states.
    combinations : ndarray of bool, shape (K, N)
        Slots that run.
    demand : ndarray, shape (C,)
        What is drawn from the zone. [m3/s]
    """
    cases, total = states.state.shape
    chosen = np.full(cases, -1, dtype=np.intp)
    classes = np.full(cases, NONE, dtype=np.int8)
    if total == 0:
        return chosen, classes
    share = states.slot["best_efficiency_share"]
    preferred = np.array([slot.preferred for slot in of.slots], dtype=np.float64)
    allowable = np.array(
        [(slot.facts.allowable_low, slot.facts.allowable_high) for slot in of.slots],
        dtype=np.float64,
    )
    on_curve = np.isin(states.state, (State.SOLVED, State.TOP_SPEED, State.LOW_SPEED))
    if of.control.kind == "held_flow":
        keeps = states.state == State.SOLVED
    else:
        keeps = on_curve & (states.flow >= demand[:, None] * (1.0 - KEEPS_UP))
    inside = keeps & inside_all(share, preferred, combinations)
    allowed = keeps & inside_all(share, allowable, combinations)
    barred = np.isin(states.state, BARRED) | (states.state == State.BELOW_STATIC) | ~available
    for first in range(0, cases, STATES):
        rows = np.arange(first, first + STATES)[known[first : first + STATES]]
        looked_at = stages[first] or range(total)
        possible = [k for k in looked_at if rows.size and not barred[rows, k].any()]
        if not possible:
            continue
        good = [
            (number, k)
            for number, meets in enumerate((inside, allowed, keeps))
            for k in possible
            if meets[rows, k].all()
        ]
        if good:
            number, best = good[0]
        else:
            number = 3
            past = np.isin(states.state[rows], WITHOUT_DUTY).sum(axis=0)
            least = np.nan_to_num(states.flow[rows], nan=np.inf).min(axis=0)
            best = min(possible, key=lambda k, p=past, q=least: (p[k], -q[k], k))  # type: ignore[misc]
        chosen[first : first + STATES] = best
        classes[first : first + STATES] = number
    return chosen, classes


def stage_rows(stages: Sequence[Sequence[int]], chosen: Indices) -> tuple[Indices, Indices]:
    """Return the further cases: rows of the cases and the combination that runs in each.

    Every stage of every case but the one that is chosen there.
    """
    pairs = [(c, k) for c, chain in enumerate(stages) for k in chain if k != chosen[c]]
    rows = np.array(pairs, dtype=np.intp).reshape(-1, 2)
    return rows[:, 0], rows[:, 1]
