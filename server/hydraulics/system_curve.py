"""The head that a system asks of the station for a flow, case by case."""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Protocol

import numpy as np

from server.hydraulics.arrays import FloatArray, IndexArray, not_negative, read_only

_SLOPE_STEP = 1e-6  # of flow, for the slope of a curve known by its values only [m3/s]


class SystemCurve(Protocol):
    """Head asked between the manifolds, rising (or level) with flow.

    `flow` and `case` have one shape; `case` tells which of the C cases each flow belongs to.
    """

    @property
    def cases(self) -> int:
        """Number of cases C."""
        ...

    def head(self, flow: FloatArray, *, case: IndexArray) -> FloatArray:
        """Return the head asked [m]."""
        ...

    def slope(self, flow: FloatArray, *, case: IndexArray) -> FloatArray:
        """Return its derivative with flow; it steers the steps only [m/(m3/s)]."""
        ...


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class PowerSystem:
    """Static head plus a coefficient times a power of flow.

    Attributes
    ----------
    static_head : ndarray, shape (C,)
        Head at zero flow. [m]
    coefficient : ndarray, shape (C,)
        Zero or more. [m/(m3/s)^exponent]
    exponent : float
        1 or more. [-]
    """

    static_head: FloatArray
    coefficient: FloatArray
    exponent: float = 2.0

    def __post_init__(self) -> None:
        """Check the coefficients."""
        static, factor = np.broadcast_arrays(
            np.atleast_1d(np.asarray(self.static_head, dtype=np.float64)),
            np.atleast_1d(not_negative("coefficient", self.coefficient, "")),
        )
        if self.exponent < 1:
            raise ValueError(f"exponent must be 1 or more; got {self.exponent:g}")
        object.__setattr__(self, "static_head", read_only(static))
        object.__setattr__(self, "coefficient", read_only(factor))

    @property
    def cases(self) -> int:
        """Number of cases C."""
        return int(self.static_head.size)

    def head(self, flow: FloatArray, *, case: IndexArray) -> FloatArray:
        """Return the head asked [m]."""
        return np.asarray(
            self.static_head[case] + self.coefficient[case] * self._power(flow, self.exponent),
            dtype=np.float64,
        )

    def slope(self, flow: FloatArray, *, case: IndexArray) -> FloatArray:
        """Return its derivative with flow [m/(m3/s)]."""
        factor = self.exponent * self.coefficient[case]
        return np.asarray(factor * self._power(flow, self.exponent - 1.0), dtype=np.float64)

    @staticmethod
    def _power(flow: FloatArray, exponent: float) -> FloatArray:
        """Raise a flow of zero or more; squares by multiplication, which is much quicker."""
        if exponent == 2.0:
            return flow * flow
        return flow if exponent == 1.0 else np.asarray(flow**exponent, dtype=np.float64)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class FunctionSystem:
    """A system known by a function of flow and case, such as supply, main and zone in one."""

    function: Callable[[FloatArray, IndexArray], FloatArray]
    case_count: int

    @property
    def cases(self) -> int:
        """Number of cases C."""
        return self.case_count

    def head(self, flow: FloatArray, *, case: IndexArray) -> FloatArray:
        """Return the head asked [m]."""
        return np.asarray(self.function(flow, case), dtype=np.float64)

    def slope(self, flow: FloatArray, *, case: IndexArray) -> FloatArray:
        """Return its derivative with flow by a difference [m/(m3/s)]."""
        ahead = self.head(flow + _SLOPE_STEP, case=case)
        rise = (ahead - self.head(flow, case=case)) / _SLOPE_STEP
        return np.asarray(np.maximum(rise, 0.0), dtype=np.float64)
