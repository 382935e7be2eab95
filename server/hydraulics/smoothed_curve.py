"""A pump curve whose head is smoothed; its other columns stay as they are."""

from dataclasses import replace

from server.hydraulics.pump_curve import PumpCurve
from server.hydraulics.smoothed_head import smoothed_head


def smoothed(curve: PumpCurve, *, degree: int | None = None) -> PumpCurve:
    """Return the pump with its head drawn as a least-squares polynomial.

    Parameters
    ----------
    curve : PumpCurve
        Curve through its rows.
    degree : int, optional
        2, 3 or 4; see `smoothed_head.smoothed_head`.

    Returns
    -------
    PumpCurve
        The same rows; head from the polynomial; `smoothing` holds degree and residuals.

    Raises
    ------
    CurveRefused
        If the polynomial rises where the rows fall, or the rows are too few.

    Examples
    --------
    >>> from server.hydraulics.pump_curve import pump_curve
    >>> tested = pump_curve([0, 1, 2, 3, 4], head=[60.1, 58.9, 56.1, 50.9, 44.0],
    ...                     tested_speed=1450)
    >>> drawn = smoothed(tested, degree=2)
    >>> round(drawn.smoothing.largest_residual, 3), round(float(drawn.head(2.0)), 3)
    (0.129, 55.971)
    """
    drawn = smoothed_head(curve.rows.flow, curve.rows.head, degree=degree)
    return replace(curve, head_curve=drawn.curve, smoothing=drawn)
