"""The root of a falling function known by its values only, for whole arrays at once."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from server.hydraulics.arrays import BoolArray, FloatArray
from server.hydraulics.errors import SolutionNotFound

MOST_PASSES = 250
SLOW = 4  # passes in which a bracket has to halve, else it is halved
ENOUGH = 1e-9  # width of a last bracket, as a share of its larger end; read along its chord


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class FallingRoot:
    """Roots and the values at the ends of the brackets, which tell why there is none."""

    root: FloatArray  # nan where there is none
    at_low: FloatArray
    at_high: FloatArray


def falling_root(
    function: Callable[[FloatArray], FloatArray],
    low: FloatArray,
    high: FloatArray,
    *,
    width: float = ENOUGH,
) -> FallingRoot:
    """Return where a falling function passes zero: secants, kept inside a shrinking bracket.

    Parameters
    ----------
    function : callable
        Gives the value for an array of the shape of the brackets; called only inside them.
    low, high : ndarray, shape (...)
        Brackets, finite.
    width : float
        Of a last bracket, as a share of its larger end. [-]

    Returns
    -------
    FallingRoot
        Roots, to that width at worst, to rounding for smooth functions; nan where the value is
        below zero at `low`, above zero at `high`, or not a number.

    Raises
    ------
    SolutionNotFound
        If a root is not reached in 250 passes.

    References
    ----------
    .. [1] N. Anderson, A. Bjorck, "A new high order method of regula falsi type," BIT, vol. 13,
       1973, pp. 253-264.
    """
    below, above = np.array(low, dtype=np.float64), np.array(high, dtype=np.float64)
    value_below, value_above = function(below), function(above)
    at_low, at_high = value_below, value_above
    enough = width * np.maximum(np.abs(below), np.abs(above))
    bracketed = (at_low >= 0) & (at_high <= 0)
    # a root on a bound is a bracket of no width
    above = np.where(bracketed & (at_low == 0), below, above)
    below = np.where(bracketed & (at_high == 0) & (at_low != 0), above, below)
    moving = bracketed & (above - below > enough)
    true_below, true_above = value_below, value_above
    widths = [above - below]
    for _ in range(MOST_PASSES):
        if not moving.any():
            root = below + (above - below) * _share(true_below, true_above)
            return FallingRoot(
                root=np.where(bracketed, root, np.nan), at_low=at_low, at_high=at_high
            )
        secant = below + (above - below) * _share(value_below, value_above)
        # not nearer to a bound than what counts: a step past the root then closes the bracket
        ahead = np.clip(secant, below + 0.5 * enough, above - 0.5 * enough)
        if len(widths) > SLOW:
            stalled = widths[-1] > 0.5 * widths[-1 - SLOW]
            ahead = np.where(stalled, 0.5 * (below + above), ahead)
        ahead = np.where(moving, ahead, below)
        value = function(ahead)
        rises, falls = moving & (value > 0), moving & (value <= 0)
        # the end that stays is weighed down, so that the next secant passes over the root
        value_above = np.where(
            rises, value_above * _weight(value, value_below, rises), value_above
        )
        value_below = np.where(
            falls, value_below * _weight(value, value_above, falls), value_below
        )
        met = moving & (value == 0)
        below, above = np.where(rises | met, ahead, below), np.where(falls, ahead, above)
        value_below = np.where(rises | met, value, value_below)
        value_above = np.where(falls, value, value_above)
        true_below = np.where(rises | met, value, true_below)
        true_above = np.where(falls, value, true_above)
        widths.append(above - below)
        moving &= above - below > enough
    worst = float(np.abs(value[moving]).max())
    raise SolutionNotFound("root of a falling function", int(moving.sum()), worst)


def _share(value_below: FloatArray, value_above: FloatArray) -> FloatArray:
    """Return where a straight line passes zero, as a share of the way from below to above."""
    fall = value_below - value_above
    some = (value_below > 0) & (fall > 0) & np.isfinite(fall)
    return np.where(some, value_below, 0.0) / np.where(some, fall, 1.0)


def _weight(value: FloatArray, replaced: FloatArray, where: BoolArray) -> FloatArray:
    """Return the factor of Anderson and Bjorck for the end that stays."""
    ratio = 1.0 - value / np.where(where & (replaced != 0), replaced, np.inf)
    return np.where(ratio > 0, ratio, 0.5)
