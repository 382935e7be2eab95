"""The root of a falling function, for whole arrays at once."""

from collections.abc import Callable

import numpy as np

from server.hydraulics.arrays import FloatArray
from server.hydraulics.errors import SolutionNotFound

MOST_PASSES = 80
STEP = (
    4.0 * np.finfo(np.float64).eps
)  # share of the bracket's end at which a step counts as none

ValueAndSlope = Callable[[FloatArray], tuple[FloatArray, FloatArray]]


def falling_root(function: ValueAndSlope, low: FloatArray, high: FloatArray) -> FloatArray:
    """Return where a falling function passes zero: Newton, kept inside a shrinking bracket.

    Parameters
    ----------
    function : callable
        Gives value and slope for an array; falls from `low` to `high`.
    low, high : ndarray, shape (...)
        Brackets, finite; the function is only called inside them.

    Returns
    -------
    ndarray, shape (...)
        Roots, to rounding error of the bracket; nan where the value is below zero at `low`,
        above zero at `high`, or not a number.

    Raises
    ------
    SolutionNotFound
        If a root is not reached in 80 passes.
    """
    below, above = np.array(low, dtype=np.float64), np.array(high, dtype=np.float64)
    at_low, at_high = function(below)[0], function(above)[0]
    bracketed = (at_low >= 0) & (at_high <= 0)
    smallest = STEP * np.maximum(np.abs(below), np.abs(above))
    fall = np.where(at_low > at_high, at_low - at_high, 1.0)
    x = np.where(bracketed, below + (above - below) * np.clip(at_low / fall, 0.0, 1.0), below)
    moving = np.array(bracketed)
    for _ in range(MOST_PASSES):
        if not moving.any():
            return np.where(bracketed, x, np.nan)
        value, slope = function(x)
        positive = value > 0
        below, above = np.where(positive, x, below), np.where(positive, above, x)
        newton = x - value / np.where(slope < 0, slope, -np.inf)
        # strict, so that a root found exactly on a bound of the bracket is kept
        outside = (newton < below) | (newton > above) | ~(slope < 0)
        following = np.where(outside, 0.5 * (below + above), newton)
        moving &= (np.abs(following - x) > smallest) & (value != 0)
        x = np.where(value == 0, x, following)
    worst = float(np.abs(value[moving]).max())
    raise SolutionNotFound("root of a falling function", int(moving.sum()), worst)
