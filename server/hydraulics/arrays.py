"""Types of the arrays, and the checks of what comes in."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]
StateArray = NDArray[np.int8]
IndexArray = NDArray[np.intp]


def finite(name: str, value: ArrayLike, unit: str) -> FloatArray:
    """Return `value` as floats; ValueError if any of it is not a finite number."""
    array = np.asarray(value, dtype=np.float64)
    if not np.isfinite(array).all():
        raise ValueError(
            f"{name} must be a finite number; got {_first(array, ~np.isfinite(array))} {unit}"
        )
    return array


def not_infinite(name: str, value: ArrayLike, unit: str) -> FloatArray:
    """Return `value` as floats, nan for what is not known; ValueError if any is infinite."""
    array = np.asarray(value, dtype=np.float64)
    if np.isinf(array).any():
        raise ValueError(
            f"{name} must not be infinite; got {_first(array, np.isinf(array))} {unit}"
        )
    return array


def within(name: str, value: ArrayLike, low: float, high: float, unit: str) -> FloatArray:
    """Return `value` as floats; ValueError if any of it lies outside `low` to `high`."""
    array = finite(name, value, unit)
    wrong = (array < low) | (array > high)
    if wrong.any():
        raise ValueError(
            f"{name} must be between {low:g} and {high:g} {unit};"
            f" got {_first(array, wrong)} {unit}"
        )
    return array


def positive(name: str, value: ArrayLike, unit: str) -> FloatArray:
    """Return `value` as floats; ValueError if any of it is zero or less."""
    array = np.asarray(value, dtype=np.float64)
    # in one pass for the arrays that are right, which nearly all are
    if not ((array > 0) & (array < np.inf)).all():
        finite(name, array, unit)
        raise ValueError(f"{name} must be above zero; got {_first(array, array <= 0)} {unit}")
    return array


def not_negative(name: str, value: ArrayLike, unit: str) -> FloatArray:
    """Return `value` as floats; ValueError if any of it is below zero."""
    array = np.asarray(value, dtype=np.float64)
    if not ((array >= 0) & (array < np.inf)).all():
        finite(name, array, unit)
        raise ValueError(
            f"{name} must not be below zero; got {_first(array, array < 0)} {unit}"
        )
    return array


def read_only(array: FloatArray) -> FloatArray:
    """Return a copy that cannot be written to, for the fields of frozen results."""
    kept = np.array(array, dtype=np.float64)
    kept.flags.writeable = False
    return kept


def _first(array: FloatArray, wrong: BoolArray) -> str:
    """Write the first wrong value for a message."""
    return f"{np.atleast_1d(array)[np.atleast_1d(wrong)][0]:g}"
