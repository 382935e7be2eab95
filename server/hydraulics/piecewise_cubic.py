"""A curve through rows, kept as plain cubic coefficients and never read outside its rows."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike
from scipy.interpolate import CubicHermiteSpline, PchipInterpolator

from server.hydraulics.arrays import FloatArray, read_only

ROUNDING = 1e-12  # share of the span by which an end row may be passed and still counts as met


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class PiecewiseCubic:
    """Cubics between rows: value = ((c0 t + c1) t + c2) t + c3 with t = x - start of the piece.

    Attributes
    ----------
    breaks : ndarray, shape (R,)
        Rows, rising.
    coefficients : ndarray, shape (4, R - 1)
        Highest power first.
    """

    breaks: FloatArray
    coefficients: FloatArray

    @property
    def first(self) -> float:
        """First row."""
        return float(self.breaks[0])

    @property
    def last(self) -> float:
        """Last row."""
        return float(self.breaks[-1])

    def covers(self, x: ArrayLike) -> np.ndarray[tuple[int, ...], np.dtype[np.bool_]]:
        """Return where x lies between the first and the last row, ends inside."""
        at = np.asarray(x, dtype=np.float64)
        slack = ROUNDING * (self.last - self.first)
        return np.asarray(
            (at >= self.first - slack) & (at <= self.last + slack), dtype=np.bool_
        )

    def __call__(self, x: ArrayLike) -> FloatArray:
        """Return the value, nan outside the rows."""
        at = np.asarray(x, dtype=np.float64)
        inside = self.covers(at)
        t, (c0, c1, c2, c3) = self._piece(np.where(inside, at, self.first))
        return np.where(inside, ((c0 * t + c1) * t + c2) * t + c3, np.nan)

    def slope(self, x: ArrayLike) -> FloatArray:
        """Return the derivative, nan outside the rows."""
        at = np.asarray(x, dtype=np.float64)
        inside = self.covers(at)
        t, (c0, c1, c2, _) = self._piece(np.where(inside, at, self.first))
        return np.where(inside, (3.0 * c0 * t + 2.0 * c1) * t + c2, np.nan)

    def value_and_slope(self, x: ArrayLike) -> tuple[FloatArray, FloatArray]:
        """Return value and derivative from one look into the rows, nan outside them."""
        at = np.asarray(x, dtype=np.float64)
        inside = self.covers(at)
        t, (c0, c1, c2, c3) = self._piece(np.where(inside, at, self.first))
        value = ((c0 * t + c1) * t + c2) * t + c3
        slope = (3.0 * c0 * t + 2.0 * c1) * t + c2
        return np.where(inside, value, np.nan), np.where(inside, slope, np.nan)

    def _piece(self, at: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Return the distance into the piece and its coefficients."""
        index = np.searchsorted(self.breaks[1:-1], at, side="right")
        return at - self.breaks[index], self.coefficients[:, index]


def shape_preserving(x: FloatArray, y: FloatArray) -> PiecewiseCubic:
    """Return the monotone cubic through rows: each rising or falling stretch stays so.

    Parameters
    ----------
    x : ndarray, shape (R,), R of 2 or more
        Rows, rising.
    y : ndarray, shape (R,)
        Values; a row that is a peak stays the peak.

    References
    ----------
    .. [1] F. N. Fritsch, J. Butland, SIAM J. Sci. Stat. Comput., vol. 5, 1984, pp. 300-304.
    """
    curve = PchipInterpolator(x, y)
    return PiecewiseCubic(breaks=read_only(curve.x), coefficients=read_only(curve.c))


def hermite(x: FloatArray, y: FloatArray, slope: FloatArray) -> PiecewiseCubic:
    """Return the cubics that meet values and slopes at the rows."""
    curve = CubicHermiteSpline(x, y, slope)
    return PiecewiseCubic(breaks=read_only(curve.x), coefficients=read_only(curve.c))


def joined(left: PiecewiseCubic, right: PiecewiseCubic) -> PiecewiseCubic:
    """Return two curves as one; the second begins at the row where the first ends."""
    return PiecewiseCubic(
        breaks=read_only(np.concatenate([left.breaks, right.breaks[1:]])),
        coefficients=read_only(np.concatenate([left.coefficients, right.coefficients], axis=1)),
    )
