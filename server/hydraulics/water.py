"""Properties of liquid water, and the atmosphere above it."""

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import FloatArray, within

GRAVITY = 9.80665  # standard gravity [m/s2]
KELVIN = 273.15  # zero of the Celsius scale [K]
LOWEST_TEMPERATURE = 0.0  # [degC]
HIGHEST_TEMPERATURE = 60.0  # [degC]
LOWEST_ALTITUDE = -400.0  # [m]
HIGHEST_ALTITUDE = 5000.0  # [m]

# IAPWS SR6-08(2011): reducing temperature [K], gas constant [J/(kg K)], reference pressure
# [Pa].
_REDUCING_TEMPERATURE = 10.0
_GAS_CONSTANT = 461.51805
_REFERENCE_PRESSURE = 1.0e5
_VOLUME_CONSTANT = 1.93763157e-2
_VOLUME_ALPHA = (
    (4, 6.74458446e3),
    (5, -2.22521604e5),
    (7, 1.00231247e8),
    (8, -1.63552118e9),
    (9, 8.32299658e9),
)
_VOLUME_BETA = (
    (1, 5.78545292e-3),
    (2, -1.53195665e-2),
    (3, 3.11337859e-2),
    (4, -4.23546241e-2),
    (5, 3.38713507e-2),
    (6, -1.19946761e-2),
)
_VISCOSITY = ((280.68, -1.9), (511.45, -7.7), (61.131, -19.6), (0.45903, -40.0))

# IAPWS R7-97(2012), region 4.
_SATURATION = (
    0.11670521452767e4,
    -0.72421316703206e6,
    -0.17073846940092e2,
    0.12020824702470e5,
    -0.32325550322333e7,
    0.14915108613530e2,
    -0.48232657361591e4,
    0.40511340542057e6,
    -0.23855557567849,
    0.65017534844798e3,
)

# US Standard Atmosphere, 1976.
SEA_LEVEL_PRESSURE = 101325.0  # [Pa]
_SEA_LEVEL_TEMPERATURE = 288.15  # [K]
_LAPSE_RATE = 0.0065  # [K/m]
_EARTH_RADIUS = 6356766.0  # [m]
_PRESSURE_EXPONENT = GRAVITY * 0.0289644 / (8.31432 * _LAPSE_RATE)


def _kelvin(temperature: ArrayLike) -> FloatArray:
    """Check a water temperature and turn it into kelvin."""
    checked = within(
        "temperature", temperature, LOWEST_TEMPERATURE, HIGHEST_TEMPERATURE, "degC"
    )
    return np.asarray(checked + KELVIN, dtype=np.float64)


def density(temperature: ArrayLike) -> FloatArray:
    """Return the density of liquid water at 0.1 MPa.

    Parameters
    ----------
    temperature : array_like, shape (...)
        Water temperature, 0 to 60. [degC]

    Returns
    -------
    ndarray, shape (...)
        Density. [kg/m3]

    Raises
    ------
    ValueError
        If `temperature` is outside 0 to 60 degC.

    Notes
    -----
    Pressure is left out: at 1 MPa the density is 0.04 % higher.

    References
    ----------
    .. [1] IAPWS SR6-08(2011), Thermodynamic Properties of Liquid Water at 0.1 MPa, eq. (1).

    Examples
    --------
    >>> round(float(density(20.0)), 4)
    998.2065
    """
    kelvin = _kelvin(temperature)
    alpha = _REDUCING_TEMPERATURE / (593.0 - kelvin)
    beta = _REDUCING_TEMPERATURE / (kelvin - 232.0)
    total = np.full_like(kelvin, _VOLUME_CONSTANT)
    for power, factor in _VOLUME_ALPHA:
        total = total + factor * alpha**power
    for power, factor in _VOLUME_BETA:
        total = total + factor * beta**power
    volume = _GAS_CONSTANT * _REDUCING_TEMPERATURE / _REFERENCE_PRESSURE * total
    return np.asarray(1.0 / volume, dtype=np.float64)


def dynamic_viscosity(temperature: ArrayLike) -> FloatArray:
    """Return the dynamic viscosity of liquid water at 0.1 MPa.

    Parameters
    ----------
    temperature : array_like, shape (...)
        Water temperature, 0 to 60. [degC]

    Returns
    -------
    ndarray, shape (...)
        Dynamic viscosity. [Pa s]

    Raises
    ------
    ValueError
        If `temperature` is outside 0 to 60 degC.

    References
    ----------
    .. [1] IAPWS SR6-08(2011), eq. (7).

    Examples
    --------
    >>> round(float(dynamic_viscosity(20.0)) * 1e6, 2)
    1001.57
    """
    reduced = _kelvin(temperature) / 300.0
    total = np.zeros_like(reduced)
    for factor, power in _VISCOSITY:
        total = total + factor * reduced**power
    return np.asarray(total * 1e-6, dtype=np.float64)


def kinematic_viscosity(temperature: ArrayLike) -> FloatArray:
    """Return the kinematic viscosity of liquid water at 0.1 MPa.

    Parameters
    ----------
    temperature : array_like, shape (...)
        Water temperature, 0 to 60. [degC]

    Returns
    -------
    ndarray, shape (...)
        Kinematic viscosity. [m2/s]

    Raises
    ------
    ValueError
        If `temperature` is outside 0 to 60 degC.

    References
    ----------
    .. [1] IAPWS SR6-08(2011), eqs. (1) and (7).

    Examples
    --------
    >>> round(float(kinematic_viscosity(20.0)) * 1e6, 4)
    1.0034
    """
    return np.asarray(dynamic_viscosity(temperature) / density(temperature), dtype=np.float64)


def vapour_pressure(temperature: ArrayLike) -> FloatArray:
    """Return the absolute vapour (saturation) pressure of water.

    Parameters
    ----------
    temperature : array_like, shape (...)
        Water temperature, 0 to 60. [degC]

    Returns
    -------
    ndarray, shape (...)
        Absolute vapour pressure. [Pa]

    Raises
    ------
    ValueError
        If `temperature` is outside 0 to 60 degC.

    References
    ----------
    .. [1] IAPWS R7-97(2012), Industrial Formulation 1997, region 4, eq. (30).

    Examples
    --------
    >>> round(float(vapour_pressure(20.0)), 1)
    2339.2
    """
    kelvin = _kelvin(temperature)
    n1, n2, n3, n4, n5, n6, n7, n8, n9, n10 = _SATURATION
    theta = kelvin + n9 / (kelvin - n10)
    a = theta**2 + n1 * theta + n2
    b = n3 * theta**2 + n4 * theta + n5
    c = n6 * theta**2 + n7 * theta + n8
    return np.asarray(
        (2.0 * c / (-b + np.sqrt(b**2 - 4.0 * a * c))) ** 4 * 1e6, dtype=np.float64
    )


def atmospheric_pressure(altitude: ArrayLike) -> FloatArray:
    """Return the standard atmospheric pressure at an altitude.

    Parameters
    ----------
    altitude : array_like, shape (...)
        Elevation above mean sea level, -400 to 5000. [m]

    Returns
    -------
    ndarray, shape (...)
        Absolute pressure. [Pa]

    Raises
    ------
    ValueError
        If `altitude` is outside -400 to 5000 m.

    Notes
    -----
    A mean: weather moves it by about 3 % either way.

    References
    ----------
    .. [1] U.S. Standard Atmosphere, 1976, NOAA/NASA/USAF, troposphere.

    Examples
    --------
    >>> round(float(atmospheric_pressure(1000.0)), 1)
    89876.3
    """
    height = within("altitude", altitude, LOWEST_ALTITUDE, HIGHEST_ALTITUDE, "m")
    geopotential = _EARTH_RADIUS * height / (_EARTH_RADIUS + height)
    ratio = 1.0 - _LAPSE_RATE * geopotential / _SEA_LEVEL_TEMPERATURE
    return np.asarray(SEA_LEVEL_PRESSURE * ratio**_PRESSURE_EXPONENT, dtype=np.float64)
