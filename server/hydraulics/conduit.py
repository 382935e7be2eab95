"""A line of pipe reaches in series, at one age."""

from dataclasses import dataclass, replace
from enum import IntEnum, StrEnum

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import BoolArray, FloatArray, StateArray, finite, read_only
from server.hydraulics.fittings import minor_head_loss
from server.hydraulics.friction import colebrook_head_loss, hazen_williams_head_loss

SMALLEST_HAZEN_WILLIAMS_BORE = 0.050  # [m]
LARGEST_HAZEN_WILLIAMS_BORE = 1.850  # [m]
FASTEST_HAZEN_WILLIAMS_VELOCITY = 3.0  # [m/s]
LEAST_HAZEN_WILLIAMS_COEFFICIENT = 100.0  # [-]


class FrictionLaw(StrEnum):
    """Law that gives the friction head of every reach of a conduit."""

    DARCY_WEISBACH = "darcy_weisbach"
    HAZEN_WILLIAMS = "hazen_williams"


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Conduit:
    """Reaches in series, each of equal barrels side by side, at one age of the pipe.

    Attributes
    ----------
    law : FrictionLaw
        Law used for all reaches.
    length : ndarray, shape (R,)
        Length, zero or more. [m]
    bore : ndarray, shape (R,)
        Inside diameter of one barrel, above zero. [m]
    resistance : ndarray, shape (R,)
        Roughness [m] under Darcy-Weisbach, coefficient C [-] under Hazen-Williams.
    k : ndarray, shape (R,)
        Sum of the loss coefficients of the fittings of one barrel, zero or more. [-]
    barrels : ndarray, shape (R,)
        Equal barrels that share the flow, 1 or more. [-]
    """

    law: FrictionLaw
    length: FloatArray
    bore: FloatArray
    resistance: FloatArray
    k: FloatArray
    barrels: FloatArray

    def __post_init__(self) -> None:
        """Check the reaches once, with a trial flow, so that later losses need no excuse."""
        for name in ("length", "bore", "resistance", "k", "barrels"):
            column = read_only(np.atleast_1d(finite(name, getattr(self, name), "")))
            object.__setattr__(self, name, column)
        shapes = {
            getattr(self, n).shape for n in ("length", "bore", "resistance", "k", "barrels")
        }
        if len(shapes) != 1 or self.length.ndim != 1:
            raise ValueError(
                f"reaches must have one value each of every column; got {sorted(shapes)}"
            )
        if np.any(self.barrels < 1) or np.any(self.barrels != np.round(self.barrels)):
            raise ValueError(
                f"barrels must be whole numbers of 1 or more; got {self.barrels.min():g}"
            )
        self.reach_head_loss(0.0, kinematic_viscosity=1.0e-6)

    @property
    def reaches(self) -> int:
        """Number of reaches, which may be none."""
        return int(self.length.size)

    def reach_head_loss(self, flow: ArrayLike, *, kinematic_viscosity: ArrayLike) -> FloatArray:
        """Return the head lost in each reach, friction and fittings.

        Parameters
        ----------
        flow : array_like, shape (...)
            Flow through the line, negative when it runs backward. [m3/s]
        kinematic_viscosity : array_like, shape (...)
            Kinematic viscosity; not used by Hazen-Williams. [m2/s]

        Returns
        -------
        ndarray, shape (..., R)
            Head lost in the direction of the flow. [m]
        """
        each = np.asarray(flow, dtype=np.float64)[..., None] / self.barrels
        viscosity = np.asarray(kinematic_viscosity, dtype=np.float64)[..., None]
        if self.law is FrictionLaw.DARCY_WEISBACH:
            friction = colebrook_head_loss(
                each,
                length=self.length,
                bore=self.bore,
                roughness=self.resistance,
                kinematic_viscosity=viscosity,
            )
        else:
            friction = hazen_williams_head_loss(
                each, length=self.length, bore=self.bore, coefficient=self.resistance
            )
        return friction + minor_head_loss(each, bore=self.bore, k=self.k)

    def head_loss(self, flow: ArrayLike, *, kinematic_viscosity: ArrayLike) -> FloatArray:
        """Return the head lost from end to end, friction and fittings.

        Parameters
        ----------
        flow : array_like, shape (...)
            Flow through the line, negative when it runs backward. [m3/s]
        kinematic_viscosity : array_like, shape (...)
            Kinematic viscosity; not used by Hazen-Williams. [m2/s]

        Returns
        -------
        ndarray, broadcast shape
            Head lost in the direction of the flow: odd in flow, zero at zero. [m]
        """
        lost = self.reach_head_loss(flow, kinematic_viscosity=kinematic_viscosity)
        return np.asarray(lost.sum(axis=-1), dtype=np.float64)

    def velocities(self, flow: ArrayLike) -> FloatArray:
        """Return the velocity in each reach, shape (..., R) [m/s]."""
        each = np.asarray(flow, dtype=np.float64)[..., None] / self.barrels
        return np.asarray(each / (0.25 * np.pi * self.bore**2), dtype=np.float64)

    def with_barrel_out(self, reach: int) -> "Conduit":
        """Return the line with one barrel of one reach shut.

        Raises
        ------
        ValueError
            If the reach has a single barrel: the line is then shut, not narrowed.
        """
        if self.barrels[reach] < 2:
            raise ValueError(
                f"barrels of reach {reach + 1} must be 2 or more to take one out; got 1"
            )
        fewer = np.array(self.barrels)
        fewer[reach] -= 1
        return replace(self, barrels=fewer)

    def outside_law(self, flow: ArrayLike) -> BoolArray:
        """Return where the friction law is used outside its range, shape (..., R).

        Notes
        -----
        Hazen-Williams: bore 50 to 1850 mm, velocity to 3 m/s, C of 100 or more; published
        limits differ. Darcy-Weisbach with Colebrook-White has no such limit here.
        """
        speed = np.abs(self.velocities(flow))
        if self.law is FrictionLaw.DARCY_WEISBACH:
            return np.zeros(speed.shape, dtype=np.bool_)
        found = hazen_williams_range(speed, bore=self.bore, coefficient=self.resistance)
        return np.asarray(found != HazenWilliamsRange.INSIDE, dtype=np.bool_)


class HazenWilliamsRange(IntEnum):
    """Whether Hazen-Williams is used where it was fitted, and what lies outside."""

    INSIDE = 0
    BORE = 1
    VELOCITY = 2
    COEFFICIENT = 3


def hazen_williams_range(
    velocity: ArrayLike, *, bore: ArrayLike, coefficient: ArrayLike
) -> StateArray:
    """Return where Hazen-Williams is used outside its range, and by what.

    Parameters
    ----------
    velocity : array_like, shape (...)
        Velocity in the pipe, either way. [m/s]
    bore : array_like, shape (...)
        Inside diameter. [m]
    coefficient : array_like, shape (...)
        Coefficient C. [-]

    Returns
    -------
    ndarray of int8, broadcast shape
        Codes of `HazenWilliamsRange`: bore before velocity before coefficient.

    References
    ----------
    .. [1] Common practice: bore 50 to 1850 mm, to 3 m/s, C of 100 or more; limits in print
       differ.
    """
    speed, diameter, c = np.broadcast_arrays(
        *(np.asarray(each, dtype=np.float64) for each in (velocity, bore, coefficient))
    )
    codes = np.zeros(speed.shape, dtype=np.int8)
    codes[c < LEAST_HAZEN_WILLIAMS_COEFFICIENT] = HazenWilliamsRange.COEFFICIENT
    codes[np.abs(speed) > FASTEST_HAZEN_WILLIAMS_VELOCITY] = HazenWilliamsRange.VELOCITY
    outside = (diameter < SMALLEST_HAZEN_WILLIAMS_BORE) | (
        diameter > LARGEST_HAZEN_WILLIAMS_BORE
    )
    codes[outside] = HazenWilliamsRange.BORE
    return codes


def conduit(
    law: FrictionLaw,
    *,
    length: ArrayLike,
    bore: ArrayLike,
    resistance: ArrayLike,
    k: ArrayLike = 0.0,
    barrels: ArrayLike = 1.0,
) -> Conduit:
    """Return a conduit from plain sequences; a single value stands for all reaches.

    Parameters
    ----------
    law : FrictionLaw
        Law used for all reaches.
    length, bore, resistance, k, barrels : array_like, shape (R,) or ()
        As the attributes of `Conduit`.

    Raises
    ------
    ValueError
        If a column is outside its range or the columns do not fit together.

    Examples
    --------
    >>> main = conduit(FrictionLaw.DARCY_WEISBACH, length=[820, 330], bore=[0.3, 0.246],
    ...                resistance=[6e-4, 1e-4], k=[6, 4])
    >>> float(main.head_loss(0.060, kinematic_viscosity=1.1697e-6).round(2))
    4.92
    """
    columns = np.broadcast_arrays(
        *(
            np.atleast_1d(np.asarray(c, dtype=np.float64))
            for c in (length, bore, resistance, k, barrels)
        )
    )
    return Conduit(
        law=law,
        length=columns[0],
        bore=columns[1],
        resistance=columns[2],
        k=columns[3],
        barrels=columns[4],
    )
