"""Head lost by friction in full, round pipes."""

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import FloatArray, finite, not_negative, positive, within
from server.hydraulics.water import GRAVITY

LAMINAR_LIMIT = 2000.0  # Reynolds number up to which flow is taken as laminar [-]
TURBULENT_LIMIT = 4000.0  # Reynolds number from which flow is taken as turbulent [-]
ROUGHEST = 0.05  # largest relative roughness of the Colebrook-White law [-]
# V = 1.318 C R^0.63 S^0.54 in feet and seconds is the definition of the coefficient C.
HAZEN_WILLIAMS_CONSTANT = 1.318 * 0.3048**0.37  # the same in metres and seconds
HAZEN_WILLIAMS_EXPONENT = 1.0 / 0.54  # of the flow [-]
_NEWTON_STEPS = 3


def _factor_times_reynolds(reynolds: FloatArray, relative_roughness: FloatArray) -> FloatArray:
    """Return friction factor times Reynolds number, finite down to no flow at all."""
    # Newton on x = 1/sqrt(f). The residual rises and is concave in x, so after the first step
    # the iterates climb to the root; from the start used three steps reach rounding error.
    turbulent = np.maximum(reynolds, TURBULENT_LIMIT)
    a, b = relative_roughness / 3.7, 2.51 / turbulent
    x = -1.8 * np.log10(a**1.11 + 6.9 / turbulent)
    slope_factor = 2.0 / np.log(10.0)
    for _ in range(_NEWTON_STEPS):
        inner = a + b * x
        x = x - (x + slope_factor * np.log(inner)) / (1.0 + slope_factor * b / inner)
    factor = x**-2.0
    at_limit = 64.0 / LAMINAR_LIMIT
    share = np.clip((reynolds - LAMINAR_LIMIT) / (TURBULENT_LIMIT - LAMINAR_LIMIT), 0.0, 1.0)
    blended = at_limit + share * (factor - at_limit)
    return np.where(reynolds <= LAMINAR_LIMIT, 64.0, blended * reynolds)


def darcy_friction_factor(reynolds: ArrayLike, relative_roughness: ArrayLike) -> FloatArray:
    """Return the Darcy friction factor of a full, round pipe.

    Parameters
    ----------
    reynolds : array_like, shape (...)
        Reynolds number on the inside diameter, above zero. [-]
    relative_roughness : array_like, shape (...)
        Equivalent sand roughness over inside diameter, 0 to 0.05. [-]

    Returns
    -------
    ndarray, broadcast shape
        Darcy friction factor (four times the Fanning factor). [-]

    Raises
    ------
    ValueError
        If `reynolds` is not above zero or `relative_roughness` is outside 0 to 0.05.

    Notes
    -----
    Laminar to Re 2000: 64/Re. From Re 4000: Colebrook-White to rounding error. Between them
    flow is unsettled; the factor runs straight from one to the other (our choice), so that the
    head loss is continuous and rises with flow.

    References
    ----------
    .. [1] C. F. Colebrook, "Turbulent flow in pipes," J. Inst. Civ. Eng., vol. 11, 1939,
       pp. 133-156.
    .. [2] S. E. Haaland, J. Fluids Eng., vol. 105, 1983, pp. 89-90 (the first guess).

    Examples
    --------
    >>> float(darcy_friction_factor(1e5, 1e-4).round(6))
    0.018514
    """
    re = positive("reynolds", reynolds, "(no unit)")
    rough = within("relative_roughness", relative_roughness, 0.0, ROUGHEST, "(no unit)")
    return np.asarray(_factor_times_reynolds(re, rough) / re, dtype=np.float64)


def colebrook_head_loss(
    flow: ArrayLike,
    *,
    length: ArrayLike,
    bore: ArrayLike,
    roughness: ArrayLike,
    kinematic_viscosity: ArrayLike,
) -> FloatArray:
    """Return the friction head by Darcy-Weisbach with the Colebrook-White factor.

    Parameters
    ----------
    flow : array_like, shape (...)
        Flow, negative when it runs backward. [m3/s]
    length : array_like, shape (...)
        Length, zero or more. [m]
    bore : array_like, shape (...)
        Inside diameter, above zero. [m]
    roughness : array_like, shape (...)
        Equivalent sand roughness, 0 to 0.05 of the bore. [m]
    kinematic_viscosity : array_like, shape (...)
        Kinematic viscosity, above zero. [m2/s]

    Returns
    -------
    ndarray, broadcast shape
        Head lost in the direction of the flow: odd in flow, zero at zero. [m]

    Raises
    ------
    ValueError
        If an argument is outside its range.

    References
    ----------
    .. [1] Darcy-Weisbach: h = f (L/D) V^2/(2g); factor as in `darcy_friction_factor`.

    Examples
    --------
    >>> loss = colebrook_head_loss(
    ...     0.06, length=1000.0, bore=0.25, roughness=1e-4, kinematic_viscosity=1.13857e-6)
    >>> float(loss.round(3))
    5.42
    """
    q = finite("flow", flow, "m3/s")
    diameter = positive("bore", bore, "m")
    distance = not_negative("length", length, "m")
    viscosity = positive("kinematic_viscosity", kinematic_viscosity, "m2/s")
    rough = not_negative("roughness", roughness, "m") / diameter
    within("roughness over bore", rough, 0.0, ROUGHEST, "(no unit)")
    speed = q / (0.25 * np.pi * diameter**2)
    product = _factor_times_reynolds(np.abs(speed) * diameter / viscosity, rough)
    return np.asarray(
        product * viscosity * distance * speed / (2.0 * GRAVITY * diameter**2), dtype=np.float64
    )


def hazen_williams_head_loss(
    flow: ArrayLike, *, length: ArrayLike, bore: ArrayLike, coefficient: ArrayLike
) -> FloatArray:
    """Return the friction head by the Hazen-Williams law.

    Parameters
    ----------
    flow : array_like, shape (...)
        Flow, negative when it runs backward. [m3/s]
    length : array_like, shape (...)
        Length, zero or more. [m]
    bore : array_like, shape (...)
        Inside diameter, above zero; the law is fair for 0.05 to 1.85. [m]
    coefficient : array_like, shape (...)
        Hazen-Williams coefficient C, above zero. [-]

    Returns
    -------
    ndarray, broadcast shape
        Head lost in the direction of the flow: odd in flow, zero at zero. [m]

    Raises
    ------
    ValueError
        If an argument is outside its range.

    Notes
    -----
    The exact exponents that go with the constant 1.318 are kept (1/0.54 and 2.63/0.54); rounded
    ones with 10.67 give 0.05 to 0.12 % less. For water near 15 degC in turbulent flow only.

    References
    ----------
    .. [1] G. M. Fair, J. C. Geyer, D. A. Okun, Water and Wastewater Engineering, p. 169.

    Examples
    --------
    >>> loss = hazen_williams_head_loss(0.06, length=1000.0, bore=0.25, coefficient=140.0)
    >>> float(loss.round(6))
    5.289592
    """
    q = finite("flow", flow, "m3/s")
    diameter = positive("bore", bore, "m")
    distance = not_negative("length", length, "m")
    c = positive("coefficient", coefficient, "(no unit)")
    speed = q / (0.25 * np.pi * diameter**2)
    slope = (
        np.abs(speed) / (HAZEN_WILLIAMS_CONSTANT * c * (diameter / 4.0) ** 0.63)
    ) ** HAZEN_WILLIAMS_EXPONENT
    return np.asarray(np.sign(q) * slope * distance, dtype=np.float64)
