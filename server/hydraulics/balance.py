"""How far legs in parallel are from balance: energy over each leg, mass at the manifold."""

from collections.abc import Sequence

import numpy as np

from server.hydraulics.arrays import FloatArray, StateArray
from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.states import State

_LEVEL = -1e-12  # the least slope that a gap is divided by [m/(m3/s)]
_DOUBTFUL = 1e-10  # mass residual from which it is read off the curves anew [m3/s]


def energy_residual(
    flow: FloatArray,
    leg_state: StateArray,
    manifold_head: FloatArray,
    legs: Sequence[LegCurve],
    speed: FloatArray,
) -> FloatArray:
    """Return the largest gap between a flowing leg's head and the manifold head.

    Parameters
    ----------
    flow, leg_state, speed : ndarray, shape (C, N)
        Flow [m3/s], state and speed ratio of each leg; legs that are SOLVED count.
    manifold_head : ndarray, shape (C,)
        Head that the system asks for at the flow of the set. [m]
    legs : sequence of LegCurve, length N
        The legs.

    Returns
    -------
    ndarray, shape (C,)
        Largest gap. [m]
    """
    worst = np.zeros(manifold_head.shape)
    for n, leg in enumerate(legs):
        s = speed[:, n]
        x = np.clip(flow[:, n] / s, leg.first_flow, leg.last_flow)
        gap = np.abs(s * s * leg.head(x) - manifold_head)
        worst = np.maximum(worst, np.where(leg_state[:, n] == State.SOLVED, gap, 0.0))
    return worst


def residuals(
    flow: FloatArray,
    leg_state: StateArray,
    manifold_head: FloatArray,
    legs: Sequence[LegCurve],
    speed: FloatArray,
) -> tuple[FloatArray, FloatArray]:
    """Return the residuals of energy and of mass.

    Parameters
    ----------
    flow, leg_state, speed : ndarray, shape (C, N)
        Flow [m3/s], state and speed ratio of each leg; legs that are SOLVED count.
    manifold_head : ndarray, shape (C,)
        Head that the system asks for at the flow of the set. [m]
    legs : sequence of LegCurve, length N
        The legs.

    Returns
    -------
    tuple of two ndarray, shape (C,)
        Largest gap in head [m]; and the flow by which what the legs pass at the manifold head
        differs from the flows stated, each leg without sign, so that errors do not cancel
        [m3/s].

    Notes
    -----
    A leg's gap in flow is its gap in head over the slope of its curve. Where a level curve
    makes that doubtful the curve is read anew at the manifold head.
    """
    worst, missing = np.zeros(manifold_head.shape), np.zeros(manifold_head.shape)
    for n, leg in enumerate(legs):
        s = speed[:, n]
        x = np.clip(flow[:, n] / s, leg.first_flow, leg.last_flow)
        head, slope = leg.curve.value_and_slope(x)
        flows = leg_state[:, n] == State.SOLVED
        gap = np.where(flows, np.abs(s * s * head - manifold_head), 0.0)
        apart = gap / (s * np.maximum(np.abs(slope), -_LEVEL))
        doubtful = apart > _DOUBTFUL
        if doubtful.any():
            at = s[doubtful]
            anew = at * leg.largest_flow(manifold_head[doubtful] / (at * at))
            apart[doubtful] = np.minimum(apart[doubtful], np.abs(anew - flow[doubtful, n]))
        worst = np.maximum(worst, gap)
        missing += apart
    return worst, missing
