"""Systems given by functions of flow and case, with slopes from a table, and rows of cases."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import FloatArray, IndexArray, read_only
from server.hydraulics.conduit import Conduit
from server.hydraulics.system_curve import SystemCurve

HeadFunction = Callable[[FloatArray, IndexArray], FloatArray]
_SLOPES = 24  # intervals of the table of slopes


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class TabledSystem:
    """A system by a function whose values cost: its slopes are read from a table.

    Slopes only steer the steps of a solve; the heads are always those of the function.

    Attributes
    ----------
    function : callable
        Head asked [m] for flows [m3/s] and their cases, one shape.
    case_count : int
        Number of cases C.
    largest_flow : float
        Flow up to which slopes are tabled, above zero. [m3/s]
    """

    function: HeadFunction
    case_count: int
    largest_flow: float
    _slopes: FloatArray = field(init=False)

    def __post_init__(self) -> None:
        """Read the heads at even flows once."""
        if not (np.isfinite(self.largest_flow) and self.largest_flow > 0):
            raise ValueError(f"largest_flow must be above zero; got {self.largest_flow:g} m3/s")
        flow = np.linspace(0.0, self.largest_flow, _SLOPES + 1)
        rows = (self.case_count, flow.size)
        case = np.broadcast_to(np.arange(self.case_count)[:, None], rows)
        heads = self.head(
            np.broadcast_to(flow, rows).ravel().copy(), case=case.ravel().copy()
        ).reshape(rows)
        rise = np.gradient(heads, flow, axis=1) if self.case_count else np.zeros(rows)
        object.__setattr__(self, "_slopes", read_only(np.maximum(rise, 0.0)))

    @property
    def cases(self) -> int:
        """Number of cases C."""
        return self.case_count

    def head(self, flow: FloatArray, *, case: IndexArray) -> FloatArray:
        """Return the head asked [m]."""
        return np.asarray(self.function(flow, case), dtype=np.float64)

    def slope(self, flow: FloatArray, *, case: IndexArray) -> FloatArray:
        """Return its derivative with flow, roughly [m/(m3/s)]."""
        place = np.clip(flow * (_SLOPES / self.largest_flow), 0.0, _SLOPES)
        cell = np.minimum(place.astype(np.intp), _SLOPES - 1)
        left, right = self._slopes[case, cell], self._slopes[case, cell + 1]
        return np.asarray(left + (place - cell) * (right - left), dtype=np.float64)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class RowsOfCases:
    """A system seen by rows that each belong to one of its cases, such as combinations."""

    system: SystemCurve
    case_of: IndexArray  # (M,)

    @property
    def cases(self) -> int:
        """Number of rows M."""
        return int(self.case_of.size)

    def head(self, flow: FloatArray, *, case: IndexArray) -> FloatArray:
        """Return the head asked of a row [m]."""
        return self.system.head(flow, case=self.case_of[case])

    def slope(self, flow: FloatArray, *, case: IndexArray) -> FloatArray:
        """Return its derivative with flow [m/(m3/s)]."""
        return self.system.slope(flow, case=self.case_of[case])


def loss_by_case(
    lines: Sequence[Conduit], *, line_of: ArrayLike, kinematic_viscosity: ArrayLike
) -> HeadFunction:
    """Return the loss of a line that differs from case to case: its age, a barrel out.

    Parameters
    ----------
    lines : sequence of Conduit
        The variants of the line.
    line_of : array_like of int, shape (C,)
        Variant of each case, counted from 0. [-]
    kinematic_viscosity : array_like, shape () or (C,)
        Viscosity of each case. [m2/s]

    Returns
    -------
    callable
        Head lost [m] for flows [m3/s], negative when they run backward, and their cases.

    Raises
    ------
    ValueError
        If a case names a variant that is not there.
    """
    of = np.atleast_1d(np.asarray(line_of, dtype=np.intp))
    viscosity = np.broadcast_to(np.asarray(kinematic_viscosity, dtype=np.float64), of.shape)
    if of.size and not (of.min() >= 0 and of.max() < len(lines)):
        raise ValueError(f"line_of must name one of {len(lines)} lines; got {of.max()}")

    def lost(flow: FloatArray, case: IndexArray) -> FloatArray:
        which = of[case]
        out: FloatArray = np.zeros(np.shape(flow))
        for i, line in enumerate(lines):
            rows = which == i
            if line.reaches and rows.any():
                out[rows] = line.head_loss(
                    flow[rows], kinematic_viscosity=viscosity[case[rows]]
                )
        return out

    return lost
