"""A smaller impeller by trimming one of a tested diameter: the radial trim."""

from dataclasses import dataclass

import numpy as np

from server.hydraulics.errors import CurveRefused
from server.hydraulics.falling_root import falling_root
from server.hydraulics.pump_curve import PumpCurve, pump_curve
from server.hydraulics.smoothed_curve import smoothed

LIMIT_RATIO = 0.90  # under which the rule grows doubtful, common practice [-]
LEAST_RATIO = 0.75  # under which a trim is refused [-]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Trim:
    """A trimmed pump."""

    curve: PumpCurve
    ratio: float  # trimmed over tested diameter [-]
    beyond_limit: bool  # cut by more than a tenth


def trimmed(curve: PumpCurve, *, ratio: float, least_ratio: float | None = None) -> Trim:
    """Return the curve of an impeller cut to a share of its tested diameter.

    Parameters
    ----------
    curve : PumpCurve
        Curve of the tested diameter.
    ratio : float
        Trimmed over tested diameter, the least ratio to 1. [-]
    least_ratio : float, optional
        The maker's smallest over the tested diameter; it counts where it is above 0.75. [-]

    Returns
    -------
    Trim
        Flow goes as the diameter, head as its square, shaft power as its cube, and the best
        efficiency point with them.

    Raises
    ------
    CurveRefused
        `trim_ratio_above_one`, `trim_below_least`.

    Notes
    -----
    Efficiency is kept at similar flows; a real cut loses a little. NPSH required is that of the
    tested impeller at the *same* flow, since the inlet is not cut (common practice).

    References
    ----------
    .. [1] Hydraulic Institute, Engineering Data Library, section 1, eq. (1.B.7).
    .. [2] US Department of Energy, pumping systems tip sheet 7: not under 75 % of the diameter.
    """
    least = _least(least_ratio)
    if not np.isfinite(ratio) or ratio > 1:
        raise CurveRefused(
            "trim_ratio_above_one",
            f"ratio must not be above 1: an impeller is cut, not grown; got {ratio:g}",
        )
    if ratio < least:
        raise CurveRefused(
            "trim_below_least",
            f"ratio must not be below {least:g} of the tested diameter; got {ratio:g}",
        )
    rows, best = curve.rows, curve.best
    stated = best is not None and best is not curve.fitted_best
    flow = ratio * rows.flow
    cut = pump_curve(
        flow,
        head=ratio**2 * rows.head,
        efficiency=_cells(rows.efficiency),
        shaft_power=_cells(ratio**3 * rows.shaft_power),
        npsh_required=_cells(curve.npsh_required(flow)),
        bep_flow=ratio * best.flow if stated and best is not None else None,
        bep_efficiency=best.efficiency if stated and best is not None else None,
        tested_speed=curve.tested_speed,
        stages=curve.stages,
        eyes=curve.eyes,
    )
    if curve.smoothing is not None:
        cut = smoothed(cut, degree=curve.smoothing.degree)
    return Trim(curve=cut, ratio=float(ratio), beyond_limit=ratio < LIMIT_RATIO)


def trim_for_duty(
    curve: PumpCurve, *, flow: float, head: float, least_ratio: float | None = None
) -> float:
    """Return the ratio of diameters that brings the curve through a duty.

    Parameters
    ----------
    curve : PumpCurve
        Curve of the tested diameter, falling.
    flow : float
        Flow wanted, above zero. [m3/s]
    head : float
        Head wanted, above zero. [m]
    least_ratio : float, optional
        As for `trimmed`. [-]

    Raises
    ------
    CurveRefused
        `duty_above_full_diameter`, `trim_below_least`, `duty_past_last_row`.

    Notes
    -----
    The root of D^2 H(Q/D) = head: similar points lie on H/Q^2 = const, so the head does not
    fall as D^2 at a fixed flow.

    References
    ----------
    .. [1] Hydraulic Institute, Engineering Data Library, section 1, eq. (1.B.7).
    """
    if not (np.isfinite(flow) and np.isfinite(head) and flow > 0 and head > 0):
        raise ValueError(f"flow and head must be above zero; got {flow:g} m3/s, {head:g} m")
    least = _least(least_ratio)
    floor = max(least, flow / curve.last_flow)
    if floor > 1:
        raise CurveRefused(
            "duty_past_last_row",
            f"flow must not be above the last row, {curve.last_flow:g} m3/s; got {flow:g}",
        )
    ceiling = min(1.0, flow / curve.first_flow) if curve.first_flow > 0 else 1.0
    found = falling_root(
        lambda r: head - r**2 * curve.head(np.minimum(flow / r, curve.last_flow)),
        np.array([floor]),
        np.array([ceiling]),
    )
    if found.at_high[0] > 0:
        raise CurveRefused(
            "duty_above_full_diameter",
            f"head must not be above what the tested diameter gives; got {head:g} m",
        )
    if not found.at_low[0] >= 0:
        reason = "trim_below_least" if floor == least else "duty_past_last_row"
        raise CurveRefused(
            reason, f"the duty needs a trim under {floor:.3g} of the tested diameter"
        )
    return float(found.root[0])


def _least(least_ratio: float | None) -> float:
    """Return the least ratio that is allowed."""
    return LEAST_RATIO if least_ratio is None else max(LEAST_RATIO, least_ratio)


def _cells(column: np.ndarray[tuple[int, ...], np.dtype[np.float64]]) -> list[float | None]:
    """Return a column with its empty cells."""
    return [None if np.isnan(cell) else float(cell) for cell in column]
