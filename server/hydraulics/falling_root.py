"""The root of a falling function known by its values only, for whole arrays at once."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from server.hydraulics.arrays import FloatArray
from server.hydraulics.errors import SolutionNotFound

MOST_PASSES = 100
SECANT_ONLY = 24  # passes after which every other one is a bisection
ENOUGH = 1e-12  # share of the bracket's larger end below which a step changes nothing


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class FallingRoot:
    """Roots and the values at the ends of the brackets, which tell why there is none."""

    root: FloatArray  # nan where there is none
    at_low: FloatArray
    at_high: FloatArray


def falling_root(
    function: Callable[[FloatArray], FloatArray], low: FloatArray, high: FloatArray
) -> FallingRoot:
    """Return where a falling function passes zero: secants, kept inside a shrinking bracket.

    Parameters
    ----------
    function : callable
        Gives the value for an array of the shape of the brackets; called only inside them.
    low, high : ndarray, shape (...)
        Brackets, finite.

    Returns
    -------
    FallingRoot
        Roots, to 1e-12 of the bracket's larger end; nan where the value is below zero at `low`,
        above zero at `high`, or not a number.

    Raises
    ------
    SolutionNotFound
        If a root is not reached in 100 passes.

    References
    ----------
    .. [1] N. Anderson, A. Bjorck, "A new high order method of regula falsi type," BIT, vol. 13,
       1973, pp. 253-264.
    """
    below, above = np.array(low, dtype=np.float64), np.array(high, dtype=np.float64)
    value_below, value_above = function(below), function(above)
    bracketed = (value_below >= 0) & (value_above <= 0)
    at_low, at_high = value_below, value_above
    enough = ENOUGH * np.maximum(np.abs(below), np.abs(above))
    x, moving = np.where(value_above == 0, above, below), bracketed & (value_below != 0)
    moving &= value_above != 0
    for pass_number in range(MOST_PASSES):
        if not moving.any():
            return FallingRoot(
                root=np.where(bracketed, x, np.nan), at_low=at_low, at_high=at_high
            )
        fall = value_below - value_above
        share = np.where(moving, value_below, 0.0) / np.where(moving & (fall > 0), fall, 1.0)
        if pass_number > SECANT_ONLY and pass_number % 2:
            share = np.full(share.shape, 0.5)
        ahead = np.where(moving, below + (above - below) * share, x)
        value = np.where(moving, function(ahead), 0.0)
        rises, falls = moving & (value > 0), moving & (value < 0)
        # the end that stays is weighed down, so that the next secant passes over the root
        value_above = np.where(
            rises, value_above * _weight(value, value_below, rises), value_above
        )
        value_below = np.where(
            falls, value_below * _weight(value, value_above, falls), value_below
        )
        below, value_below = np.where(rises, ahead, below), np.where(rises, value, value_below)
        above, value_above = np.where(falls, ahead, above), np.where(falls, value, value_above)
        near = (np.abs(ahead - x) <= enough) | (above - below <= enough) | (value == 0)
        x, moving = ahead, moving & ~near
    worst = float(np.abs(value[moving]).max())
    raise SolutionNotFound("root of a falling function", int(moving.sum()), worst)


def _weight(value: FloatArray, replaced: FloatArray, where: np.ndarray) -> FloatArray:  # type: ignore[type-arg]
    """Return the factor of Anderson and Bjorck for the end that stays."""
    ratio = 1.0 - value / np.where(where & (replaced != 0), replaced, np.inf)
    return np.where(ratio > 0, ratio, 0.5)
