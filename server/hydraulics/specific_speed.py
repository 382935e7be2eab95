"""Specific speed and suction specific speed."""

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import FloatArray, positive

US_PER_SI = (1.0 / (231.0 * 0.0254**3 / 60.0)) ** 0.5 / (1.0 / 0.3048) ** 0.75  # 51.645 [-]


def specific_speed(
    rotational_speed: ArrayLike,
    *,
    flow: ArrayLike,
    head: ArrayLike,
    stages: ArrayLike = 1,
    eyes: ArrayLike = 1,
) -> FloatArray:
    """Return the specific speed ns = n sqrt(Q/eyes) / (H/stages)^0.75.

    Parameters
    ----------
    rotational_speed : array_like, shape (...)
        Speed, above zero. [rev/min]
    flow : array_like, shape (...)
        Flow of the whole pump at best efficiency, above zero. [m3/s]
    head : array_like, shape (...)
        Head of the whole pump there, above zero. [m]
    stages, eyes : array_like, shape (...)
        Stages in series; suction eyes of the first impeller (2 for double suction). [-]

    Returns
    -------
    ndarray, broadcast shape
        Specific speed; times `US_PER_SI` for rev/min, US gal/min and ft. [rev/min, m3/s, m]

    Raises
    ------
    ValueError
        If an argument is not above zero.

    Notes
    -----
    With ``eyes=1`` for a double-suction pump it is the total-flow form, 1.41 times as large.

    References
    ----------
    .. [1] Hydraulic Institute, Engineering Data Library, section 1, eqs. (1.D.1), (1.D.2).

    Examples
    --------
    >>> round(float(specific_speed(3550, flow=0.0402, head=100.0)), 3)
    22.508
    """
    n = positive("rotational_speed", rotational_speed, "rev/min")
    q = positive("flow", flow, "m3/s") / positive("eyes", eyes, "(no unit)")
    h = positive("head", head, "m") / positive("stages", stages, "(no unit)")
    return np.asarray(n * np.sqrt(q) / h**0.75, dtype=np.float64)


def suction_specific_speed(
    rotational_speed: ArrayLike,
    *,
    flow: ArrayLike,
    npsh_required: ArrayLike,
    eyes: ArrayLike = 1,
) -> FloatArray:
    """Return the suction specific speed S = n sqrt(Q/eyes) / NPSH3^0.75.

    Parameters
    ----------
    rotational_speed : array_like, shape (...)
        Speed, above zero. [rev/min]
    flow : array_like, shape (...)
        Flow of the whole pump at best efficiency and full diameter, above zero. [m3/s]
    npsh_required : array_like, shape (...)
        NPSH at 3 % head drop there, above zero. [m]
    eyes : array_like, shape (...)
        Suction eyes of the first impeller. [-]

    Returns
    -------
    ndarray, broadcast shape
        Suction specific speed; times `US_PER_SI` for US units. [rev/min, m3/s, m]

    Raises
    ------
    ValueError
        If an argument is not above zero.

    References
    ----------
    .. [1] Hydraulic Institute, Engineering Data Library, section 1, eqs. (1.D.4), (1.D.5).
    """
    return specific_speed(
        rotational_speed,
        flow=flow,
        head=positive("npsh_required", npsh_required, "m"),
        eyes=eyes,
    )
