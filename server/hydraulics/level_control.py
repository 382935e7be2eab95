"""Start and stop by level: which stages run, with the memory that hysteresis is."""

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import BoolArray, FloatArray, finite
from server.hydraulics.errors import InputRefused


def check_stages(start: ArrayLike, *, stop: ArrayLike) -> tuple[FloatArray, FloatArray]:
    """Return start and stop levels of the stages of a tank that is filled.

    Parameters
    ----------
    start, stop : array_like, shape (S,)
        Level at which a stage starts as the tank falls, and at which it stops as it fills. [m]

    Raises
    ------
    InputRefused
        `stage_stop_not_above_start`, or `stage_starts_not_falling`: a later stage must not
        start above an earlier one.
    """
    on = np.atleast_1d(finite("start", start, "m"))
    off = np.atleast_1d(finite("stop", stop, "m"))
    if on.shape != off.shape:
        raise InputRefused(
            "stages_uneven", f"start and stop must be one a stage; got {on.size} and {off.size}"
        )
    for i in np.flatnonzero(off <= on)[:1]:
        raise InputRefused(
            "stage_stop_not_above_start",
            f"stop must be above start; stage {i + 1} has {off[i]:g} m against {on[i]:g} m",
            row=int(i),
        )
    for i in np.flatnonzero(np.diff(on) > 0)[:1]:
        raise InputRefused(
            "stage_starts_not_falling",
            f"a later stage must not start above an earlier one; stage {i + 2} does",
            row=int(i) + 1,
        )
    return on, off


def stages_running(
    level: ArrayLike, *, running: ArrayLike, start: ArrayLike, stop: ArrayLike
) -> BoolArray:
    """Return which stages run at a level, given which ran before.

    Parameters
    ----------
    level : array_like, shape (...)
        Water level of the tank that is filled. [m]
    running : array_like of bool, shape (..., S)
        Stages that ran until now.
    start, stop : array_like, shape (S,)
        Levels of the stages; see `check_stages`. [m]

    Returns
    -------
    ndarray of bool, shape (..., S)
        A stage starts at its start level or below, stops at its stop level or above, and
        between them does as before.

    Raises
    ------
    InputRefused
        If the levels are out of order.

    Examples
    --------
    >>> levels = dict(start=[181.6, 181.0], stop=[182.5, 182.2])
    >>> stages_running(181.3, running=[False, False], **levels).tolist()
    [True, False]
    >>> stages_running(182.3, running=[True, True], **levels).tolist()
    [True, False]
    """
    on, off = check_stages(start, stop=stop)
    at = finite("level", level, "m")[..., None]
    before = np.asarray(running, dtype=np.bool_)
    return np.asarray((at <= on) | (before & (at < off)), dtype=np.bool_)


def possible_counts(level: ArrayLike, *, start: ArrayLike, stop: ArrayLike) -> BoolArray:
    """Return how many stages may run at a level, whatever came before.

    Parameters
    ----------
    level : array_like, shape (...)
        Water level. [m]
    start, stop : array_like, shape (S,)
        Levels of the stages. [m]

    Returns
    -------
    ndarray of bool, shape (..., S + 1)
        Entry n is true where n stages running is a state that the levels allow.
    """
    on, off = check_stages(start, stop=stop)
    at = finite("level", level, "m")[..., None]
    least = (at <= on).sum(axis=-1)[..., None]
    most = (at < off).sum(axis=-1)[..., None]
    count = np.arange(on.size + 1)
    return np.asarray((count >= least) & (count <= np.maximum(most, least)), dtype=np.bool_)
