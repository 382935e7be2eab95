"""A set point that rises with flow: the pressure far off is held without a sensor there."""

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import FloatArray, finite, not_negative, positive

COMPENSATION_EXPONENT = 2.0  # of the flow; controllers square the flow, common practice [-]


def compensated_pressure(
    flow: ArrayLike,
    *,
    at_no_flow: ArrayLike,
    at_full_flow: ArrayLike,
    full_flow: ArrayLike,
    exponent: float = COMPENSATION_EXPONENT,
) -> FloatArray:
    """Return the pressure that a flow-compensated control holds at a flow.

    Parameters
    ----------
    flow : array_like, shape (...)
        Station flow, zero or more; nan passes through. [m3/s]
    at_no_flow, at_full_flow : array_like, shape (...)
        Set point at no flow, and at full flow and above, not lower. [Pa]
    full_flow : array_like, shape (...)
        Flow at which the upper set point is reached, above zero. [m3/s]
    exponent : float
        Exponent of the flow, 1 to 2. [-]

    Returns
    -------
    ndarray, broadcast shape
        Set point; above the full flow it stays. [Pa]

    Raises
    ------
    ValueError
        If an argument is outside its range or the set point would fall with flow.

    References
    ----------
    .. [1] Common practice; no published source.
    """
    q = np.asarray(flow, dtype=np.float64)
    not_negative("flow", np.where(np.isnan(q), 0.0, q), "m3/s")
    low, high = (
        finite("at_no_flow", at_no_flow, "Pa"),
        finite("at_full_flow", at_full_flow, "Pa"),
    )
    if np.any(high < low):
        raise ValueError(
            "at_full_flow must not be below at_no_flow;"
            f" got {float(np.min(high)):g} Pa against {float(np.max(low)):g} Pa"
        )
    if not 1.0 <= exponent <= 2.0:
        raise ValueError(f"exponent must be between 1 and 2; got {exponent:g}")
    share = np.minimum(q / positive("full_flow", full_flow, "m3/s"), 1.0)
    return np.asarray(low + (high - low) * share**exponent, dtype=np.float64)
