"""Head lost in fittings and valves, and the velocity that it goes by."""

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import BoolArray, FloatArray, finite, not_negative, positive
from server.hydraulics.water import GRAVITY

# Kv is the flow in m3/h at 1 bar of a liquid of 1000 kg/m3 (IEC 60534-2-1).
_KV_FLOW = 1.0 / 3600.0  # [m3/s]
_KV_PRESSURE = 1.0e5  # [Pa]
_KV_DENSITY = 1000.0  # [kg/m3]
# Cv is the flow in US gallons a minute at 1 psi of water at 60 degF.
_CV_FLOW = 231.0 * 0.0254**3 / 60.0  # [m3/s]
_CV_PRESSURE = 0.45359237 * GRAVITY / 0.0254**2  # [Pa]
_CV_DENSITY = 999.0  # [kg/m3]
FULL_OPEN_VELOCITY = 1.5  # check valve fully open from here, assumed when not given [m/s]


def velocity(flow: ArrayLike, *, bore: ArrayLike) -> FloatArray:
    """Return the mean velocity in a full, round pipe.

    Parameters
    ----------
    flow : array_like, shape (...)
        Flow. [m3/s]
    bore : array_like, shape (...)
        Inside diameter, above zero. [m]

    Returns
    -------
    ndarray, broadcast shape
        Velocity, with the sign of the flow. [m/s]

    Raises
    ------
    ValueError
        If `bore` is not above zero.

    References
    ----------
    .. [1] Continuity: V = 4Q/(pi D^2).

    Examples
    --------
    >>> round(float(velocity(0.06, bore=0.25)), 4)
    1.2223
    """
    diameter = positive("bore", bore, "m")
    return np.asarray(
        finite("flow", flow, "m3/s") / (0.25 * np.pi * diameter**2), dtype=np.float64
    )


def quadratic_coefficient(k: ArrayLike, *, bore: ArrayLike) -> FloatArray:
    """Return c in h = c Q^2 for a loss of k velocity heads.

    Parameters
    ----------
    k : array_like, shape (...)
        Loss coefficient on the velocity head at `bore`, zero or more. [-]
    bore : array_like, shape (...)
        Inside diameter that the coefficient belongs to, above zero. [m]

    Returns
    -------
    ndarray, broadcast shape
        Coefficient. [m/(m3/s)2]

    Raises
    ------
    ValueError
        If an argument is outside its range.

    References
    ----------
    .. [1] h = K V^2/(2g) with V = 4Q/(pi D^2).
    """
    area = 0.25 * np.pi * positive("bore", bore, "m") ** 2
    return np.asarray(
        not_negative("k", k, "(no unit)") / (2.0 * GRAVITY * area**2), dtype=np.float64
    )


def minor_head_loss(flow: ArrayLike, *, bore: ArrayLike, k: ArrayLike) -> FloatArray:
    """Return the head lost in fittings.

    Parameters
    ----------
    flow : array_like, shape (...)
        Flow, negative when it runs backward. [m3/s]
    bore : array_like, shape (...)
        Inside diameter that the coefficient belongs to, above zero. [m]
    k : array_like, shape (...)
        Sum of the loss coefficients, zero or more. [-]

    Returns
    -------
    ndarray, broadcast shape
        Head lost in the direction of the flow: odd in flow. [m]

    Raises
    ------
    ValueError
        If an argument is outside its range.

    References
    ----------
    .. [1] h = K V^2/(2g), for example Hydraulic Institute, Engineering Data Book.

    Examples
    --------
    >>> round(float(minor_head_loss(0.06, bore=0.25, k=2.0)), 5)
    0.15235
    """
    q = finite("flow", flow, "m3/s")
    return np.asarray(quadratic_coefficient(k, bore=bore) * q * np.abs(q), dtype=np.float64)


def k_from_kv(kv: ArrayLike, *, bore: ArrayLike) -> FloatArray:
    """Return the loss coefficient of a valve of flow coefficient Kv.

    Parameters
    ----------
    kv : array_like, shape (...)
        Flow of water at a drop of 1 bar, above zero. [m3/h]
    bore : array_like, shape (...)
        Inside diameter that the answer belongs to, above zero. [m]

    Returns
    -------
    ndarray, broadcast shape
        Loss coefficient. [-]

    Raises
    ------
    ValueError
        If an argument is not above zero.

    References
    ----------
    .. [1] IEC 60534-2-1, definition of Kv at 1000 kg/m3.

    Examples
    --------
    >>> round(float(k_from_kv(160.0, bore=0.1)), 6)
    6.245609
    """
    speed = velocity(positive("kv", kv, "m3/h") * _KV_FLOW, bore=bore)
    return np.asarray(2.0 * _KV_PRESSURE / (_KV_DENSITY * speed**2), dtype=np.float64)


def k_from_cv(cv: ArrayLike, *, bore: ArrayLike) -> FloatArray:
    """Return the loss coefficient of a valve of flow coefficient Cv.

    Parameters
    ----------
    cv : array_like, shape (...)
        Flow of water at 60 degF at a drop of 1 psi, above zero. [US gal/min]
    bore : array_like, shape (...)
        Inside diameter that the answer belongs to, above zero. [m]

    Returns
    -------
    ndarray, broadcast shape
        Loss coefficient. [-]

    Raises
    ------
    ValueError
        If an argument is not above zero.

    References
    ----------
    .. [1] Definition of Cv; water at 60 degF taken as 999.0 kg/m3.
    """
    speed = velocity(positive("cv", cv, "US gal/min") * _CV_FLOW, bore=bore)
    return np.asarray(2.0 * _CV_PRESSURE / (_CV_DENSITY * speed**2), dtype=np.float64)


def k_from_head_loss(head_loss: ArrayLike, *, flow: ArrayLike, bore: ArrayLike) -> FloatArray:
    """Return the loss coefficient of a fitting that loses a given head at a given flow.

    Parameters
    ----------
    head_loss : array_like, shape (...)
        Head lost, zero or more. [m]
    flow : array_like, shape (...)
        Flow at which it is lost, above zero. [m3/s]
    bore : array_like, shape (...)
        Inside diameter that the answer belongs to, above zero. [m]

    Returns
    -------
    ndarray, broadcast shape
        Loss coefficient. [-]

    Raises
    ------
    ValueError
        If an argument is outside its range.

    References
    ----------
    .. [1] h = K V^2/(2g).
    """
    speed = velocity(positive("flow", flow, "m3/s"), bore=bore)
    lost = not_negative("head_loss", head_loss, "m")
    return np.asarray(lost * 2.0 * GRAVITY / speed**2, dtype=np.float64)


def k_at_bore(k: ArrayLike, *, from_bore: ArrayLike, to_bore: ArrayLike) -> FloatArray:
    """Return a loss coefficient moved to the velocity head of another bore.

    Parameters
    ----------
    k : array_like, shape (...)
        Loss coefficient at `from_bore`, zero or more. [-]
    from_bore, to_bore : array_like, shape (...)
        Inside diameters, above zero. [m]

    Returns
    -------
    ndarray, broadcast shape
        Loss coefficient at `to_bore`. [-]

    Raises
    ------
    ValueError
        If an argument is outside its range.

    References
    ----------
    .. [1] Equal loss at equal flow: K2 = K1 (D2/D1)^4.
    """
    ratio = positive("to_bore", to_bore, "m") / positive("from_bore", from_bore, "m")
    return np.asarray(not_negative("k", k, "(no unit)") * ratio**4, dtype=np.float64)


def equivalent_length(
    k: ArrayLike, *, bore: ArrayLike, friction_factor: ArrayLike
) -> FloatArray:
    """Return the length of straight pipe that loses as much as the fittings.

    Parameters
    ----------
    k : array_like, shape (...)
        Sum of the loss coefficients, zero or more. [-]
    bore : array_like, shape (...)
        Inside diameter, above zero. [m]
    friction_factor : array_like, shape (...)
        Darcy friction factor of the pipe, above zero. [-]

    Returns
    -------
    ndarray, broadcast shape
        Equivalent length. [m]

    Raises
    ------
    ValueError
        If an argument is outside its range.

    References
    ----------
    .. [1] K = f L/D.
    """
    diameter = positive("bore", bore, "m")
    factor = positive("friction_factor", friction_factor, "(no unit)")
    return np.asarray(not_negative("k", k, "(no unit)") * diameter / factor, dtype=np.float64)


def check_valve_fully_open(
    flow: ArrayLike, *, bore: ArrayLike, full_open_velocity: ArrayLike = FULL_OPEN_VELOCITY
) -> BoolArray:
    """Return whether a check valve stands fully open, so that its coefficient holds.

    Parameters
    ----------
    flow : array_like, shape (...)
        Flow through the valve. [m3/s]
    bore : array_like, shape (...)
        Bore of the valve, above zero. [m]
    full_open_velocity : array_like, shape (...)
        Velocity from which it is fully open, above zero; 1.5 is assumed. [m/s]

    Returns
    -------
    ndarray of bool, broadcast shape
        False where the valve is partly open and loses more than its coefficient says.

    Raises
    ------
    ValueError
        If an argument is outside its range.

    References
    ----------
    .. [1] Hydraulic Institute, Engineering Data Book, warns of partly open check valves at low
       velocity; the limit of 1.5 m/s is common practice.
    """
    limit = positive("full_open_velocity", full_open_velocity, "m/s")
    return np.asarray(velocity(flow, bore=bore) >= limit, dtype=np.bool_)
