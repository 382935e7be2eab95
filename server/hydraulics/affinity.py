"""A pump's curve at another speed: the affinity laws."""

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import FloatArray
from server.hydraulics.pump_curve import PumpCurve

NPSH_EXPONENT = 2.0  # of speed for NPSH required; 1.3 to 2 are in use, slower 2 is optimistic
LEAST_NPSH_EXPONENT = 1.3
LARGEST_NPSH_EXPONENT = 2.0


def homologous_flow(flow: ArrayLike, *, speed: ArrayLike) -> FloatArray:
    """Return the flow at tested speed that is similar to a flow at another speed.

    Parameters
    ----------
    flow : array_like, shape (...)
        Flow at the running speed. [m3/s]
    speed : array_like, shape (...)
        Running over tested speed, above zero; nan passes through as nan. [-]

    Returns
    -------
    ndarray, broadcast shape
        Flow over speed. [m3/s]

    Raises
    ------
    ValueError
        If `speed` is zero or less.
    """
    ratio = np.asarray(speed, dtype=np.float64)
    if (ratio <= 0).any():
        raise ValueError(f"speed must be above zero; got {float(np.nanmin(ratio)):g}")
    return np.asarray(np.asarray(flow, dtype=np.float64) / ratio, dtype=np.float64)


def head(curve: PumpCurve, flow: ArrayLike, *, speed: ArrayLike) -> FloatArray:
    """Return the head at a speed: H(q, s) = s^2 H(q/s), nan outside the rows.

    Parameters
    ----------
    curve : PumpCurve
        Curve at tested speed.
    flow : array_like, shape (...)
        Flow at the running speed. [m3/s]
    speed : array_like, shape (...)
        Running over tested speed, above zero. [-]

    Returns
    -------
    ndarray, broadcast shape
        Head. [m]

    Raises
    ------
    ValueError
        If `speed` is zero or less.

    References
    ----------
    .. [1] Hydraulic Institute, Engineering Data Library, section 1, eq. (1.B.6).
    """
    at = homologous_flow(flow, speed=speed)
    return np.asarray(np.square(speed) * curve.head(at), dtype=np.float64)


def shaft_power(
    curve: PumpCurve, flow: ArrayLike, *, speed: ArrayLike, density: ArrayLike
) -> FloatArray:
    """Return the shaft power at a speed: P(q, s) = s^3 P(q/s), nan where it is not known.

    Parameters
    ----------
    curve : PumpCurve
        Curve at tested speed.
    flow : array_like, shape (...)
        Flow at the running speed. [m3/s]
    speed : array_like, shape (...)
        Running over tested speed, above zero. [-]
    density : array_like, shape (...)
        Density of the water. [kg/m3]

    Returns
    -------
    ndarray, broadcast shape
        Shaft power. [W]

    Raises
    ------
    ValueError
        If `speed` is zero or less.

    References
    ----------
    .. [1] Hydraulic Institute, Engineering Data Library, section 1, eq. (1.B.6).
    """
    at = homologous_flow(flow, speed=speed)
    cube = np.asarray(speed, dtype=np.float64) ** 3
    return np.asarray(cube * curve.shaft_power(at, density=density), dtype=np.float64)


def efficiency(curve: PumpCurve, flow: ArrayLike, *, speed: ArrayLike) -> FloatArray:
    """Return the efficiency at a speed: that of the similar flow, nan where it is not known.

    Parameters
    ----------
    curve : PumpCurve
        Curve at tested speed.
    flow : array_like, shape (...)
        Flow at the running speed. [m3/s]
    speed : array_like, shape (...)
        Running over tested speed, above zero. [-]

    Returns
    -------
    ndarray, broadcast shape
        Efficiency ratio. [-]

    Raises
    ------
    ValueError
        If `speed` is zero or less.

    Notes
    -----
    The small loss of efficiency at low speed is left out; below about half speed it counts.

    References
    ----------
    .. [1] Hydraulic Institute, Engineering Data Library, section 1, on eq. (1.B.6).
    """
    return curve.efficiency(homologous_flow(flow, speed=speed))


def npsh_required(
    curve: PumpCurve, flow: ArrayLike, *, speed: ArrayLike, exponent: float = NPSH_EXPONENT
) -> FloatArray:
    """Return the NPSH required at a speed: s^n NPSHr(q/s), nan where it is not known.

    Parameters
    ----------
    curve : PumpCurve
        Curve at tested speed.
    flow : array_like, shape (...)
        Flow at the running speed. [m3/s]
    speed : array_like, shape (...)
        Running over tested speed, above zero. [-]
    exponent : float
        Exponent n, 1.3 to 2; below tested speed the smaller one is the safe side. [-]

    Returns
    -------
    ndarray, broadcast shape
        NPSH required. [m]

    Raises
    ------
    ValueError
        If `speed` is zero or less or `exponent` is outside 1.3 to 2.

    References
    ----------
    .. [1] Exponents of 1.3 to 2 by agreement are common practice.
    """
    if not LEAST_NPSH_EXPONENT <= exponent <= LARGEST_NPSH_EXPONENT:
        raise ValueError(
            f"exponent must be between {LEAST_NPSH_EXPONENT:g} and {LARGEST_NPSH_EXPONENT:g};"
            f" got {exponent:g}"
        )
    factor = np.asarray(speed, dtype=np.float64) ** exponent
    at = homologous_flow(flow, speed=speed)
    return np.asarray(factor * curve.npsh_required(at), dtype=np.float64)
