"""Equal legs at a common speed, solved by their flow: humps and late first rows included.

Legs of one kind share the demand equally, so the demand and the speed fix the place of each on
its curve, and the head is read off there, on the rising side of a hump too.
"""

from dataclasses import dataclass

import numpy as np

from server.hydraulics.arrays import BoolArray, FloatArray, StateArray
from server.hydraulics.falling_root import falling_root
from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.states import State


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class EqualLegs:
    """Where equal legs stand; arrays of shape (M,)."""

    limit: StateArray  # SOLVED, TOP_SPEED or LOW_SPEED
    u: FloatArray  # head over speed squared [m]
    x: FloatArray  # flow of one over speed [m3/s]
    past_end: BoolArray
    unknown: BoolArray  # before a first row that is above zero flow
    rising: BoolArray  # left of the peak


def equal_legs(
    leg: LegCurve,
    *,
    each: FloatArray,
    head: FloatArray,
    low: FloatArray,
    high: FloatArray,
) -> EqualLegs:
    """Return where equal legs stand at a flow each, under a head to hold and speed limits.

    Parameters
    ----------
    leg : LegCurve
        The kind of leg.
    each : ndarray, shape (M,)
        Flow of one leg, above zero. [m3/s]
    head : ndarray, shape (M,)
        Head to hold. [m]
    low, high : ndarray, shape (M,)
        Limits of the speed ratio. [-]
    """
    slowest = each / leg.last_flow
    quickest = each / leg.first_flow if leg.first_flow > 0 else np.full(each.shape, np.inf)
    floor, ceiling = np.maximum(low, slowest), np.minimum(high, quickest)
    possible = floor <= ceiling
    floor = np.where(possible, floor, high)
    ceiling = np.where(possible, ceiling, high)

    def surplus(speed: FloatArray) -> FloatArray:
        x = np.clip(each / speed, leg.first_flow, leg.last_flow)
        return np.asarray(speed**2 * leg.head(x) - head, dtype=np.float64)

    over, short = surplus(floor) > 0, surplus(ceiling) < 0
    past_end = (slowest > high) | (possible & over & (slowest > low))
    unknown = ~past_end & ((quickest < low) | (possible & short & (quickest < high)))
    found = falling_root(lambda speed: -surplus(speed), floor, ceiling).root
    speed = np.where(over, floor, np.where(short, ceiling, found))
    limit = np.where(over, State.LOW_SPEED, np.where(short, State.TOP_SPEED, State.SOLVED))
    speed = np.where(past_end | unknown, ceiling, speed)
    x = np.clip(each / speed, leg.first_flow, leg.last_flow)
    return EqualLegs(
        limit=limit.astype(np.int8),
        u=leg.head(x),
        x=x,
        past_end=past_end,
        unknown=unknown,
        rising=np.asarray(x < leg.peak_flow, dtype=np.bool_),
    )
