"""Every running combination of a set on every system: C cases, K combinations, N slots."""

from collections.abc import Sequence
from typing import TypeVar

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.hydraulics.arrays import BoolArray, FloatArray
from server.hydraulics.case_system import RowsOfCases
from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.parallel import ParallelResult, solve_parallel
from server.hydraulics.system_curve import SystemCurve

_Kind = TypeVar("_Kind", bound=np.generic)


def solve_combinations(
    legs: Sequence[LegCurve],
    *,
    system: SystemCurve,
    combinations: ArrayLike,
    speeds: ArrayLike = 1.0,
) -> ParallelResult:
    """Return where each combination meets each case's system.

    Parameters
    ----------
    legs : sequence of LegCurve, length N
        Slots, unlike ones allowed.
    system : SystemCurve
        Head asked for a flow, rising or level, for C cases.
    combinations : array_like of bool, shape (K, N)
        Slots that run.
    speeds : array_like, shape () or (N,) or (K, N) or (C, K, N)
        Running over tested speed of each slot, above zero. [-]

    Returns
    -------
    ParallelResult
        With arrays of shape (C, K) and (C, K, N); a slot that does not run passes nothing.

    Raises
    ------
    SolutionNotFound
        As `parallel.solve_parallel`.
    """
    mask = np.atleast_2d(np.asarray(combinations, dtype=np.bool_))
    cases, count, slots = system.cases, mask.shape[0], len(legs)
    rows = (cases, count, slots)
    result = solve_parallel(
        legs,
        system=RowsOfCases(system=system, case_of=np.repeat(np.arange(cases), count)),
        speeds=spread(speeds, rows).reshape(-1, slots),
        on=np.broadcast_to(mask, rows).reshape(-1, slots),
    )

    def shaped(values: NDArray[_Kind]) -> NDArray[_Kind]:
        return values.reshape(cases, count, *values.shape[1:])

    return ParallelResult(
        state=shaped(result.state),
        flow=shaped(result.flow),
        manifold_head=shaped(result.manifold_head),
        leg_flow=shaped(result.leg_flow),
        leg_state=shaped(result.leg_state),
        cannot_start=shaped(result.cannot_start),
        unique=shaped(result.unique),
        last_row_flow=shaped(result.last_row_flow),
        last_row_surplus=shaped(result.last_row_surplus),
        static_shortfall=shaped(result.static_shortfall),
        energy_residual=shaped(result.energy_residual),
        mass_residual=shaped(result.mass_residual),
    )


def spread(values: ArrayLike, shape: tuple[int, int, int]) -> FloatArray:
    """Return values for each case, combination and slot.

    Parameters
    ----------
    values : array_like, shape () or (N,) or (K, N) or (C, K, N)
        Any quantity, in any unit. [-]
    shape : tuple of int
        C, K and N.
    """
    return np.array(np.broadcast_to(np.asarray(values, dtype=np.float64), shape))


def most_flow(
    result: ParallelResult, combinations: ArrayLike, *, allowed: BoolArray
) -> FloatArray:
    """Return the largest flow of the combinations allowed in each case.

    Parameters
    ----------
    result : ParallelResult
        Of `solve_combinations`.
    combinations : array_like of bool, shape (K, N)
        The same combinations.
    allowed : ndarray of bool, shape (N,)
        Slots that may run: without the one that is out, for firm capacity.

    Returns
    -------
    ndarray, shape (C,)
        Largest flow; zero where no combination allowed has an operating point. [m3/s]
    """
    mask = np.atleast_2d(np.asarray(combinations, dtype=np.bool_))
    usable = ~np.any(mask & ~allowed, axis=1)
    flow = np.where(usable & np.isfinite(result.flow), result.flow, 0.0)
    return np.asarray(flow.max(axis=1, initial=0.0), dtype=np.float64)
