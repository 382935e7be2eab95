"""A supply tank in its four states, cut-out to top, and the water over its outlet."""

from dataclasses import dataclass
from enum import IntEnum

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import FloatArray, finite, positive, read_only
from server.hydraulics.errors import SupplyRefused
from server.hydraulics.suction import submergence


class TankState(IntEnum):
    """States of a supply tank, in the order of the levels."""

    CUT_OUT = 0
    """Level at which the pumps are stopped: NPSH and submergence are judged here too."""
    LOW = 1
    NORMAL = 2
    TOP = 3


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class TankLevels:
    """Levels of a supply tank and its outlet. Made by `tank_levels`."""

    level: FloatArray  # (4,) by TankState; nan where not given [m]
    outlet_level: float  # lip of the outlet, nan when not given [m]
    outlet_bore: float  # nan when not given [m]

    def grade(self, state: ArrayLike) -> FloatArray:
        """Return the grade in a state: the water level, nan where not given [m]."""
        return np.asarray(self.level[np.asarray(state, dtype=np.intp)], dtype=np.float64)

    def depth(self, state: ArrayLike) -> FloatArray:
        """Return the water over the outlet in a state, nan where not known [m]."""
        return np.asarray(self.grade(state) - self.outlet_level, dtype=np.float64)

    def submergence_spare(self, flow: ArrayLike, *, state: ArrayLike) -> FloatArray:
        """Return the water over the outlet less what keeps vortices from drawing air.

        Parameters
        ----------
        flow : array_like, shape (...)
            Flow into the outlet, zero or more; nan passes through. [m3/s]
        state : array_like of TankState, shape (...)
            State of the tank.

        Returns
        -------
        ndarray, broadcast shape
            Below zero: too little water; nan where a figure is not given. [m]

        References
        ----------
        .. [1] S = D (1 + 2.3 Fr), ANSI/HI 9.8, as in `suction.submergence`.
        """
        q = np.asarray(flow, dtype=np.float64)
        if not np.isfinite(self.outlet_bore):
            return np.full(np.broadcast_shapes(q.shape, np.shape(state)), np.nan)
        known = np.isfinite(q)
        needed = submergence(np.where(known, q, 0.0), bore=self.outlet_bore)
        return np.asarray(self.depth(state) - np.where(known, needed, np.nan), np.float64)


def tank_levels(
    *,
    cut_out: float | None,
    low: float | None,
    normal: float | None,
    top: float | None,
    outlet_level: float | None = None,
    outlet_bore: float | None = None,
) -> TankLevels:
    """Return the levels of a supply tank, checked.

    Parameters
    ----------
    cut_out, low, normal, top : float or None
        Water levels, each not below the one before; None where not given. [m]
    outlet_level : float, optional
        Lip of the outlet, below the levels. [m]
    outlet_bore : float, optional
        Diameter of the outlet or bell, above zero. [m]

    Raises
    ------
    SupplyRefused
        `tank_levels_out_of_order` or `tank_level_not_above_outlet`, with the two figures.
    ValueError
        If a figure is no number or the bore is not above zero.
    """
    names = ("cut_out", "low", "normal", "top")
    given = [
        (name, float(finite(name, value, "m")))
        for name, value in zip(names, (cut_out, low, normal, top), strict=True)
        if value is not None
    ]
    for (lower, below), (upper, above) in zip(given, given[1:], strict=False):
        if above < below:
            raise SupplyRefused(
                "tank_levels_out_of_order",
                f"{upper} must not be below {lower}; got {above:g} m against {below:g} m",
            )
    if outlet_level is not None:
        finite("outlet_level", outlet_level, "m")
        for name, value in given[:1]:
            if value <= outlet_level:
                raise SupplyRefused(
                    "tank_level_not_above_outlet",
                    f"{name} must be above outlet_level; got {value:g} m"
                    f" against {outlet_level:g} m",
                )
    if outlet_bore is not None:
        positive("outlet_bore", outlet_bore, "m")
    known = dict(given)
    return TankLevels(
        level=read_only(np.array([known.get(name, np.nan) for name in names])),
        outlet_level=np.nan if outlet_level is None else float(outlet_level),
        outlet_bore=np.nan if outlet_bore is None else float(outlet_bore),
    )
