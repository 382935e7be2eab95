"""Efficiency lost at another speed, by a named formula: optional, beside plain affinity."""

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics import affinity
from server.hydraulics.arrays import FloatArray, positive, within
from server.hydraulics.pump_curve import PumpCurve

SARBU_BORZA_EXPONENT = 0.1


def sarbu_borza(efficiency: ArrayLike, *, speed: ArrayLike) -> FloatArray:
    """Return the efficiency of a similar point at another speed.

    Parameters
    ----------
    efficiency : array_like, shape (...)
        Efficiency ratio at tested speed, 0 to 1. [-]
    speed : array_like, shape (...)
        Running over tested speed, above zero. [-]

    Returns
    -------
    ndarray, broadcast shape
        1 - (1 - efficiency) (1/speed)^0.1. [-]

    Raises
    ------
    ValueError
        If an argument is outside its range.

    References
    ----------
    .. [1] I. Sarbu, I. Borza, "Energetic optimization of water pumping in distribution
       systems," Periodica Polytechnica Mech. Eng., vol. 42, 1998, as quoted in papers on water
       supply; from memory, to be confirmed.

    Examples
    --------
    >>> round(float(sarbu_borza(0.80, speed=0.7)), 5)
    0.79274
    """
    tested = within("efficiency", efficiency, 0.0, 1.0, "(no unit)")
    ratio = positive("speed", speed, "(no unit)")
    return np.asarray(1.0 - (1.0 - tested) * ratio**-SARBU_BORZA_EXPONENT, dtype=np.float64)


def speed_factor(curve: PumpCurve, *, speed: ArrayLike) -> FloatArray:
    """Return efficiency at a speed over that of the similar flow at tested speed.

    Parameters
    ----------
    curve : PumpCurve
        Curve at tested speed; its best efficiency must be known.
    speed : array_like, shape (...)
        Running over tested speed, above zero; nan passes through. [-]

    Returns
    -------
    ndarray, shape (...)
        The formula at best efficiency over best efficiency: 1 at tested speed; nan where the
        best efficiency is not known or the speed is no number. [-]

    Notes
    -----
    The formula is stated for the best point. Its factor there is carried to every flow, so that
    shaft power stays finite toward no flow.
    """
    ratio = np.asarray(speed, dtype=np.float64)
    best = None if curve.best is None else curve.best.efficiency
    if best is None and curve.best is not None:
        read = float(curve.efficiency(curve.best.flow))
        best = read if np.isfinite(read) else None
    if best is None or best <= 0:
        return np.full(ratio.shape, np.nan)
    known = np.isfinite(ratio)
    factor = sarbu_borza(best, speed=np.where(known, ratio, 1.0)) / best
    return np.where(known & (factor > 0), factor, np.nan)


def efficiency(curve: PumpCurve, flow: ArrayLike, *, speed: ArrayLike) -> FloatArray:
    """Return the efficiency at a speed with the loss of the formula, nan if unknown [-].

    Parameters
    ----------
    curve : PumpCurve
        Curve at tested speed.
    flow : array_like, shape (...)
        Flow at the running speed, zero or more. [m3/s]
    speed : array_like, shape (...)
        Running over tested speed, above zero. [-]
    """
    plain = affinity.efficiency(curve, flow, speed=speed)
    return np.asarray(plain * speed_factor(curve, speed=speed), dtype=np.float64)


def shaft_power(
    curve: PumpCurve, flow: ArrayLike, *, speed: ArrayLike, density: ArrayLike
) -> FloatArray:
    """Return the shaft power at a speed with the loss of the formula, nan if unknown [W].

    Parameters
    ----------
    curve : PumpCurve
        Curve at tested speed.
    flow : array_like, shape (...)
        Flow at the running speed, zero or more. [m3/s]
    speed : array_like, shape (...)
        Running over tested speed, above zero. [-]
    density : array_like, shape (...)
        Density of the water. [kg/m3]
    """
    plain = affinity.shaft_power(curve, flow, speed=speed, density=density)
    return np.asarray(plain / speed_factor(curve, speed=speed), dtype=np.float64)
