"""Efficiency that a pump of a size and specific speed is held to by a public rule."""

from enum import StrEnum

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import FloatArray, positive
from server.hydraulics.specific_speed import specific_speed

LEAST_SPECIFIC_SPEED = 6.0  # of the rule's scope for end-suction pumps [rev/min, m3/s, m]
LARGEST_SPECIFIC_SPEED = 80.0
LEAST_FLOW = 6.0 / 3600.0  # [m3/s]


class PumpType(StrEnum):
    """Types of the rule."""

    END_SUCTION_OWN_BEARING = "esob"
    END_SUCTION_CLOSE_COUPLED = "escc"
    IN_LINE = "escci"
    VERTICAL_MULTISTAGE = "ms_v"
    SUBMERSIBLE_MULTISTAGE = "mss"


# Constant C by type and nominal speed, for a minimum efficiency index of 0.10 and of 0.40.
_CONSTANTS: dict[tuple[PumpType, int], tuple[float, float]] = {
    (PumpType.END_SUCTION_OWN_BEARING, 1450): (132.58, 128.07),
    (PumpType.END_SUCTION_OWN_BEARING, 2900): (135.60, 130.27),
    (PumpType.END_SUCTION_CLOSE_COUPLED, 1450): (132.74, 128.46),
    (PumpType.END_SUCTION_CLOSE_COUPLED, 2900): (135.93, 130.77),
    (PumpType.IN_LINE, 1450): (136.67, 132.30),
    (PumpType.IN_LINE, 2900): (139.45, 133.69),
    (PumpType.VERTICAL_MULTISTAGE, 2900): (138.19, 133.95),
    (PumpType.SUBMERSIBLE_MULTISTAGE, 2900): (134.31, 128.79),
}


def least_best_efficiency(
    flow: ArrayLike,
    *,
    head: ArrayLike,
    pump_type: PumpType,
    nominal_speed: int,
    index: float = 0.40,
    stages: ArrayLike = 1,
) -> FloatArray:
    """Return the least best efficiency that the European rule allows for a size.

    Parameters
    ----------
    flow, head : array_like, shape (...)
        Best efficiency point at full diameter and nominal speed, above zero. [m3/s], [m]
    pump_type : PumpType
        Type of the rule.
    nominal_speed : int
        1450 or 2900. [rev/min]
    index : float
        Minimum efficiency index, 0.10 or 0.40. [-]
    stages : array_like, shape (...)
        Stages in series. [-]

    Returns
    -------
    ndarray, broadcast shape
        Efficiency ratio; nan outside the scope (specific speed 6 to 80, flow from 6 m3/h). [-]

    Raises
    ------
    ValueError
        If the rule has no constant for the type, speed and index, or an argument is not above
        zero.

    References
    ----------
    .. [1] Commission Regulation (EU) 547/2012, Annex III; with x = ln(ns), ns by Q in m3/s, and
       y = ln(Q in m3/h).

    Examples
    --------
    >>> least = least_best_efficiency(100 / 3600, head=32.0, nominal_speed=1450,
    ...                               pump_type=PumpType.END_SUCTION_OWN_BEARING)
    >>> round(100 * float(least), 3)
    70.939
    """
    constants = _CONSTANTS.get((pump_type, nominal_speed))
    if constants is None or index not in (0.10, 0.40):
        raise ValueError(
            f"the rule has no constant for {pump_type} at {nominal_speed} rev/min,"
            f" index {index:g}"
        )
    q = positive("flow", flow, "m3/s")
    ns = specific_speed(nominal_speed, flow=q, head=head, stages=stages)
    x, y = np.log(ns), np.log(q * 3600.0)
    per_cent = (
        88.59 * x + 13.46 * y - 11.48 * x**2 - 0.85 * y**2 - 0.38 * x * y
        - constants[0 if index == 0.10 else 1]
    )  # fmt: skip
    inside = (ns >= LEAST_SPECIFIC_SPEED) & (ns <= LARGEST_SPECIFIC_SPEED) & (q >= LEAST_FLOW)
    return np.where(inside, per_cent / 100.0, np.nan)
