"""Efficiency between rows, and the best efficiency point that it implies."""

from dataclasses import dataclass

import numpy as np

from server.hydraulics.arrays import FloatArray
from server.hydraulics.piecewise_cubic import PiecewiseCubic, hermite, joined, shape_preserving


@dataclass(frozen=True, slots=True, kw_only=True)
class BestEfficiencyPoint:
    """Flow and efficiency at the top of the efficiency curve, at tested speed."""

    flow: float  # [m3/s]
    efficiency: float | None  # ratio [-]; None when only the flow is stated


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class EfficiencyCurve:
    """Efficiency against flow, with its top where that can be told."""

    curve: PiecewiseCubic
    best: BestEfficiencyPoint | None  # None: the highest row is an end row


def efficiency_curve(flow: FloatArray, efficiency: FloatArray) -> EfficiencyCurve:
    """Return a smooth efficiency curve whose top need not sit on a row.

    Parameters
    ----------
    flow : ndarray, shape (R,), R of 2 or more
        Rows, rising. [m3/s]
    efficiency : ndarray, shape (R,)
        Efficiency ratio, 0 to 1. [-]

    Returns
    -------
    EfficiencyCurve
        The curve and its top; no top when the highest row is the first or the last.

    Notes
    -----
    Around the highest row the curve *is* the parabola through that row and its two neighbours,
    and the best efficiency point is its vertex: local, so that a doubtful row far off does not
    move it, and it can be checked by hand. Beyond the neighbours a shape-preserving cubic goes
    on with the parabola's slope, unless that would make the curve turn, when the slope is cut:
    the shape of the rows goes before smoothness. Curve and point are therefore one thing: the
    efficiency at the best efficiency point is never below that of any other flow.
    """
    top = int(np.argmax(efficiency))
    plain = shape_preserving(flow, efficiency)
    if top in (0, flow.size - 1):
        return EfficiencyCurve(curve=plain, best=None)

    steps = np.diff(flow)
    rises = np.diff(efficiency) / steps
    before, after = rises[top - 1], rises[top]
    bend = (after - before) / (steps[top - 1] + steps[top])
    slopes = before + bend * np.array(
        [-steps[top - 1], steps[top - 1], steps[top - 1] + 2 * steps[top]]
    )

    around = slice(top - 1, top + 2)
    curve = hermite(flow[around], efficiency[around], slopes)
    row_slopes = plain.slope(flow)
    if top > 1:
        left = np.array(row_slopes[:top])
        left[-1] = _kept_in_shape(slopes[0], rises[top - 2])
        curve = joined(hermite(flow[:top], efficiency[:top], left), curve)
    if top < flow.size - 2:
        right = np.array(row_slopes[top + 1 :])
        right[0] = _kept_in_shape(slopes[2], rises[top + 1])
        curve = joined(curve, hermite(flow[top + 1 :], efficiency[top + 1 :], right))

    vertex = float(flow[top] - slopes[1] / (2.0 * bend)) if bend < 0 else float(flow[top])
    best = BestEfficiencyPoint(flow=vertex, efficiency=float(curve(vertex)))
    return EfficiencyCurve(curve=curve, best=best)


def _kept_in_shape(slope: float, rise: float) -> float:
    """Cut a slope so that the cubic of the next stretch does not turn (Fritsch and Carlson)."""
    low, high = min(0.0, 3.0 * rise), max(0.0, 3.0 * rise)
    return float(np.clip(slope, low, high))
