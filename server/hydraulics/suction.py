"""The suction side: NPSH available, and the water over a tank's outlet."""

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import FloatArray, not_infinite, not_negative, positive
from server.hydraulics.fittings import velocity
from server.hydraulics.water import GRAVITY


def npsh_available(
    suction_grade: ArrayLike,
    *,
    eye_level: ArrayLike,
    branch_loss: ArrayLike,
    atmospheric_pressure: ArrayLike,
    vapour_pressure: ArrayLike,
    density: ArrayLike,
) -> FloatArray:
    """Return the net positive suction head available at a pump's eye.

    Parameters
    ----------
    suction_grade : array_like, shape (...)
        Grade (total head, gauge) at the suction manifold; nan where not known. [m]
    eye_level : array_like, shape (...)
        Elevation of the eye of the first stage; nan where not known. [m]
    branch_loss : array_like, shape (...)
        Head lost from the manifold to the eye, zero or more; nan where nothing runs. [m]
    atmospheric_pressure : array_like, shape (...)
        Absolute pressure of the air, above zero; nan where not known. [Pa]
    vapour_pressure : array_like, shape (...)
        Absolute vapour pressure at the highest water temperature, zero or more. [Pa]
    density : array_like, shape (...)
        Density at that temperature, above zero. [kg/m3]

    Returns
    -------
    ndarray, broadcast shape
        NPSH available; nan where one of its terms is not known. [m]

    Raises
    ------
    ValueError
        If an argument is outside its range.

    Notes
    -----
    The grade holds the velocity head, as NPSH does: nothing is to be added.

    References
    ----------
    .. [1] Hydraulic Institute, Engineering Data Library, section 1, eq. (1.D.6).

    Examples
    --------
    >>> lift = npsh_available(3.0, eye_level=0.0, branch_loss=0.8, atmospheric_pressure=101325,
    ...                       vapour_pressure=2339.2, density=998.2065)
    >>> round(float(lift), 3)
    12.312
    """
    air = not_infinite("atmospheric_pressure", atmospheric_pressure, "Pa")
    if (air <= 0).any():
        raise ValueError(
            f"atmospheric_pressure must be above zero; got {float(np.nanmin(air)):g} Pa"
        )
    vapour = not_negative("vapour_pressure", vapour_pressure, "Pa")
    weight = positive("density", density, "kg/m3") * GRAVITY
    lost = not_infinite("branch_loss", branch_loss, "m")
    if (lost < 0).any():
        raise ValueError(
            f"branch_loss must not be below zero; got {float(np.nanmin(lost)):g} m"
        )
    grade = not_infinite("suction_grade", suction_grade, "m")
    static = grade - not_infinite("eye_level", eye_level, "m")
    return np.asarray((air - vapour) / weight + static - lost, dtype=np.float64)


def submergence(flow: ArrayLike, *, bore: ArrayLike) -> FloatArray:
    """Return the depth over an outlet that keeps surface vortices from drawing air.

    Parameters
    ----------
    flow : array_like, shape (...)
        Flow into the outlet, zero or more. [m3/s]
    bore : array_like, shape (...)
        Diameter of the outlet or bell, above zero. [m]

    Returns
    -------
    ndarray, broadcast shape
        S = D (1 + 2.3 Fr), Fr = V / sqrt(g D). [m]

    Raises
    ------
    ValueError
        If an argument is outside its range.

    References
    ----------
    .. [1] ANSI/HI 9.8, as quoted in the Pump Handbook's section on suction tanks.

    Examples
    --------
    >>> round(float(submergence(0.06, bore=0.3)), 3)
    0.641
    """
    diameter = positive("bore", bore, "m")
    froude = velocity(not_negative("flow", flow, "m3/s"), bore=bore) / np.sqrt(
        GRAVITY * diameter
    )
    return np.asarray(diameter * (1.0 + 2.3 * froude), dtype=np.float64)
