"""A head curve smoothed by least squares: a polynomial through the cloud of the rows."""

from dataclasses import dataclass

import numpy as np

from server.hydraulics.arrays import FloatArray, read_only
from server.hydraulics.errors import CurveRefused
from server.hydraulics.piecewise_cubic import PiecewiseCubic, hermite

DEGREES = (2, 3, 4)
# A quartic kept as so many cubics differs from itself by (1/pieces)^4/16 of its quartic part.
_QUARTIC_PIECES = 128
_LEVEL = 1e-9  # rise, as a share of the head, that is rounding and not a rise [-]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Smoothing:
    """A polynomial of head against flow and how far the rows lie from it."""

    degree: int
    coefficients: FloatArray  # (degree + 1,) highest power first, of flow over last flow [m]
    curve: PiecewiseCubic  # the same as cubics, [m] against [m3/s]
    fitted: FloatArray  # (R,) head of the curve at each row [m]
    residual: FloatArray  # (R,) row less curve [m]
    peak_head: float  # highest head of the curve [m]
    level_at_first_row: bool  # drawn level there, since the free polynomial would rise

    @property
    def largest_residual(self) -> float:
        """Largest distance of a row from the curve, without sign [m]."""
        return float(np.abs(self.residual).max())

    @property
    def deviation(self) -> float:
        """Standard deviation of the rows from the curve; nan with no row to spare [m]."""
        spare = self.residual.size - self.degree - 1
        return float(np.sqrt(np.sum(self.residual**2) / spare)) if spare > 0 else float("nan")


def smoothed_head(
    flow: FloatArray, head: FloatArray, *, degree: int | None = None
) -> Smoothing:
    """Return the least-squares polynomial of head against flow.

    Parameters
    ----------
    flow : ndarray, shape (R,)
        Rows, rising, the last above zero. [m3/s]
    head : ndarray, shape (R,)
        Heads of the rows. [m]
    degree : int, optional
        2, 3 or 4. Without it the one of the smallest standard deviation is taken, of those that
        leave two rows to spare and fall where the rows fall.

    Returns
    -------
    Smoothing
        The polynomial with the distance of every row from it.

    Raises
    ------
    CurveRefused
        `smoothing_degree`, `too_few_rows_to_smooth` or `smoothed_rises`: the polynomial rises
        where the rows fall, also when it is held level at the first row.

    Notes
    -----
    Flat rows near shut-off let the free polynomial rise by a hair: then it is fitted again with
    no slope at the first row, and says so. A hump of the rows is kept; its top may move by less
    than one row.

    References
    ----------
    .. [1] Least squares; polynomials of degree 2 to 4 for pump curves are common practice.
    """
    if degree is not None:
        if degree not in DEGREES:
            raise CurveRefused("smoothing_degree", f"degree must be 2, 3 or 4; got {degree}")
        return _fit(flow, head, degree)
    found: list[Smoothing] = []
    refused: CurveRefused | None = None
    for each in DEGREES:
        if each > 2 and flow.size < each + 3:
            break
        try:
            found.append(_fit(flow, head, each))
        except CurveRefused as error:
            refused = error
    if refused is not None and not found:
        raise refused
    return min(found, key=lambda one: np.nan_to_num(one.deviation))


def _fit(flow: FloatArray, head: FloatArray, degree: int) -> Smoothing:
    """Fit one degree and refuse it where it rises against the rows."""
    if flow.size < degree + 1:
        raise CurveRefused(
            "too_few_rows_to_smooth",
            f"a polynomial of degree {degree} needs {degree + 1} rows or more; got {flow.size}",
        )
    last = float(flow[-1])
    share = flow / last
    found = _least_squares(share, head, degree, level=False)
    row = _rise(share, head, found)
    level = row is not None and head[0] >= head.max()
    if level:
        found = _least_squares(share, head, degree, level=True)
    if row is not None and _rise(share, head, found) is not None:
        raise CurveRefused(
            "smoothed_rises",
            f"the smoothed curve of degree {degree} rises between rows {row + 1} and {row + 2},"
            " where the tested head falls; draw it through the rows or change the degree",
            row=row,
        )
    slope = np.asarray(np.polyder(found), dtype=np.float64)
    pieces = share if degree < max(DEGREES) else np.linspace(share[0], 1.0, _QUARTIC_PIECES + 1)
    curve = hermite(pieces * last, _at(found, pieces), _at(slope, pieces) / last)
    fitted = _at(found, share)
    turns = _inside(slope, float(share[0]), 1.0)
    peak = max(float(fitted[0]), *(float(np.polyval(found, t)) for t in (*turns, 1.0)))
    return Smoothing(
        degree=degree,
        coefficients=read_only(found),
        curve=curve,
        fitted=read_only(fitted),
        residual=read_only(head - fitted),
        peak_head=peak,
        level_at_first_row=level,
    )


def _least_squares(
    share: FloatArray, head: FloatArray, degree: int, *, level: bool
) -> FloatArray:
    """Return the coefficients, highest power first; `level`: no slope at the start."""
    powers = np.vander(share - share[0], degree + 1)
    used = [i for i in range(degree + 1) if not (level and i == degree - 1)]
    solved, *_ = np.linalg.lstsq(powers[:, used], head, rcond=None)
    counted: FloatArray = np.zeros(degree + 1)
    counted[used] = solved
    moved = np.poly1d(counted)(np.poly1d([1.0, -float(share[0])]))
    found: FloatArray = np.zeros(degree + 1)
    found[degree + 1 - moved.coeffs.size :] = moved.coeffs
    return found


def _rise(share: FloatArray, head: FloatArray, polynomial: FloatArray) -> int | None:
    """Return the first pair of falling rows between which it rises, but for a hump's top."""
    top = int(np.argmax(head))
    level = _LEVEL * float(np.abs(head).max())
    slope = np.asarray(np.polyder(polynomial), dtype=np.float64)
    bend = np.asarray(np.polyder(slope), dtype=np.float64)
    for i in range(share.size - 1):
        if head[i + 1] >= head[i] or (i == top and top > 0):
            continue
        left, right = float(share[i]), float(share[i + 1])
        at = (left, right, *_inside(bend, left, right))
        if max(float(np.polyval(slope, t)) for t in at) > level:
            return i
    return None


def _at(polynomial: FloatArray, share: FloatArray) -> FloatArray:
    """Return the value of a polynomial."""
    return np.asarray(np.polyval(polynomial, share), dtype=np.float64)


def _inside(polynomial: FloatArray, low: float, high: float) -> list[float]:
    """Return the real roots of a polynomial between two bounds."""
    roots = np.roots(polynomial)
    real = np.real(roots[np.abs(np.imag(roots)) <= 1e-9 * np.maximum(1.0, np.abs(roots))])
    return [float(t) for t in real if low < t < high]
