"""What binds where a control is not held or nothing is solved, and the nearest state."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from server.hydraulics.states import State
from server.studies.duty_result import Binding
from server.studies.lowering.lowered import Flags, Floats, Indices, LoweredSet
from server.studies.set_ends import at_common_speed
from server.studies.set_states import SetStates
from server.studies.system_heads import Draw, system_heads

LOOKS, ZOOMS = 193, 2  # places looked at beside each other, and how often
_BINDINGS = {
    State.TOP_SPEED: Binding.HEAD,
    State.LOW_SPEED: Binding.LOWEST_SPEED,
    State.END_OF_CURVE: Binding.CURVE_END,
    State.BELOW_STATIC: Binding.STATIC_HEAD,
    State.HELD_SHUT: Binding.CHECK_VALVE,
    State.NO_WATER: Binding.NO_WATER,
    State.NOT_AVAILABLE: Binding.NOT_KNOWN,
}


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Nearest:
    """Arrays (C, K)."""

    binding: NDArray[np.int8]  # Binding
    flow: Floats  # nearest attainable [m3/s]
    lack: Floats  # head missing, below zero in excess [m]


def nearest_states(
    of: LoweredSet,
    *,
    states: SetStates,
    available: Flags,
    combinations: Flags,
    draw: Draw,
    chosen: Indices,
) -> Nearest:
    """Return what binds in every state, and how near the station can come.

    In a closed zone the pressure fails, not the flow: beside the pressure at the demanded flow
    stands the flow at which what runs would hold the head asked, at full speed.
    """
    binding = np.full(states.state.shape, Binding.NOTHING, dtype=np.int8)
    for state, what in _BINDINGS.items():
        binding[states.state == state] = what
    binding[states.fixed_exceeds & (states.state == State.LOW_SPEED)] = Binding.FIXED_UNIT
    binding[~available] = Binding.NOTHING
    flow = np.full(binding.shape, np.nan)
    past, still = binding == Binding.CURVE_END, binding == Binding.STATIC_HEAD
    flow[past] = states.flow_at_end[past]
    flow[still] = 0.0
    if not of.floats and len(combinations):
        _at_full_speed(of, flow, binding, combinations, draw, chosen)
    lack = np.where(binding == Binding.NOTHING, np.nan, states.lack)
    return Nearest(binding=binding, flow=flow, lack=lack)


def _at_full_speed(
    of: LoweredSet,
    flow: Floats,
    binding: NDArray[np.int8],
    combinations: Flags,
    draw: Draw,
    chosen: Indices,
) -> None:
    """Put in the flow at which what runs holds the head asked, fire served first."""
    running = np.maximum(chosen, 0)
    short = (chosen >= 0) & (binding[np.arange(chosen.size), running] == Binding.HEAD)
    rows = np.flatnonzero(short)
    if not rows.size:
        return
    units = at_common_speed(of, combinations[chosen[rows]])
    top = of.control.highest_speed

    def part(values: object) -> NDArray[np.generic]:
        column = np.broadcast_to(np.asarray(values), draw.flow.shape)[rows, None]
        return np.broadcast_to(column, (rows.size, LOOKS))

    def gap(y: Floats) -> Floats:
        """Return the head that lacks for the head asked, falling as the flow does, (M, L)."""
        total = top * units.total(y)
        burning = np.minimum(total, part(draw.fire))
        heads = system_heads(
            of,
            Draw(domestic=total - burning, fire=burning, fire_point=part(draw.fire_point),
                 aged=part(draw.aged), shift=np.asarray(part(draw.shift), dtype=np.float64),
                 way=part(draw.way)),
        )  # fmt: skip
        valve = of.control.valve_loss * total * total
        return np.asarray(heads.required_head + valve - top**2 * y, dtype=np.float64)

    y, at_rest = _zoomed(gap, units.last_head, units.peak_head)
    flow[rows, chosen[rows]] = np.where(at_rest > 0, 0.0, top * units.total(y))


def _zoomed(
    gap: Callable[[Floats], Floats], low: Floats, high: Floats
) -> tuple[Floats, Floats]:
    """Return where falling gaps pass zero, and their values at the upper ends.

    By looking at many places at once, and then between two of them: to 3e-5 of the bracket, and
    along its chord.
    """
    share, own = np.linspace(0.0, 1.0, LOOKS), np.arange(low.size)
    at_high = np.empty(low.shape)
    left, right = np.array(low), np.array(high)
    for turn in range(ZOOMS):
        places = left[:, None] + (right - left)[:, None] * share
        values = gap(places)
        if turn == 0:
            at_high = values[:, -1]
        above = np.clip((values > 0).sum(axis=1), 1, LOOKS - 1)
        left, right = places[own, above - 1], places[own, above]
        upper, lower = values[own, above - 1], values[own, above]
    fall = upper - lower
    part = np.clip(np.where(fall > 0, upper / np.where(fall > 0, fall, 1.0), 0.0), 0.0, 1.0)
    return left + (right - left) * part, at_high
