"""One leg: suction branch, pump and discharge branch between the two manifolds.

At speed ratio s a leg gives the head s^2 H(q/s) - k q^2. In the homologous flow x = q/s that is
s^2 G(x) with G(x) = H(x) - k x^2: the branch losses, being quadratic, scale as the pump does.
So one curve G serves all speeds, and a leg's flow at a manifold head h is s times the x at
which G falls to h/s^2.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import BoolArray, FloatArray, read_only
from server.hydraulics.piecewise_cubic import PiecewiseCubic
from server.hydraulics.pump_curve import PumpCurve

_SAMPLES = 64  # points in each falling piece that the guesses are taken from
_GUESSES = 1024  # steps in the table of first guesses
_FREE_STEPS = 2  # Newton steps from it without a bracket
_STEPS = 120  # of Newton and bisection together, for the few points that are left
_LEVEL = -1e-12  # the least slope that a step is divided by [m/(m3/s)]
_HEAD_ROUNDING = 8.0 * np.finfo(np.float64).eps


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class LegCurve:
    """Head of a leg, manifold to manifold, against homologous flow. Made by `leg_curve`.

    Attributes
    ----------
    pump : PumpCurve
        The pump in the leg.
    loss : float
        Branch losses over flow squared. [m/(m3/s)2]
    curve : PiecewiseCubic
        G(x), with a break at each turn. [m] against [m3/s]
    shutoff_head : float or None
        G(0); None when the pump's first row is above zero flow. [m]
    peak_head, peak_flow : float
        Highest head and where it stands. [m], [m3/s]
    falls_throughout : bool
        Whether the head falls from every row to the next.
    falling_head : ndarray, shape (E + 1,)
        Heads, rising, between the pieces of the falling envelope. [m]
    falling_left, falling_right : ndarray, shape (E,)
        Flows between which each piece lies. [m3/s]
    falling_base : ndarray, shape (E,)
        Flow that the coefficients of each piece count from. [m3/s]
    falling_coefficients : ndarray, shape (4, E)
        Highest power first.
    guess_flow, guess_step : ndarray, shape (G,)
        Flow at evenly spaced heads from the last row to the peak, and the step to the next one.
    guess_scale : float
        Such steps in a metre. [1/m]
    """

    pump: PumpCurve
    loss: float
    curve: PiecewiseCubic
    shutoff_head: float | None
    peak_head: float
    peak_flow: float
    falls_throughout: bool
    falling_head: FloatArray
    falling_left: FloatArray
    falling_right: FloatArray
    falling_base: FloatArray
    falling_coefficients: FloatArray
    guess_flow: FloatArray
    guess_step: FloatArray
    guess_scale: float

    @property
    def first_flow(self) -> float:
        """Flow of the first row [m3/s]."""
        return self.curve.first

    @property
    def last_flow(self) -> float:
        """Flow of the last row [m3/s]."""
        return self.curve.last

    @property
    def last_head(self) -> float:
        """Head at the last row [m]."""
        return float(self.falling_head[0])

    @property
    def shares_uniquely(self) -> bool:
        """Whether the leg has one flow for each head, from nothing up."""
        return self.falls_throughout and self.shutoff_head is not None

    def head(self, flow: ArrayLike) -> FloatArray:
        """Return the head at tested speed, nan outside the rows [m]."""
        return self.curve(flow)

    def largest_flow(self, head: ArrayLike) -> FloatArray:
        """Return the largest flow at which the leg still gives a head, at tested speed.

        Parameters
        ----------
        head : array_like, shape (...)
            Manifold head. [m]

        Returns
        -------
        ndarray, shape (...)
            Flow; zero above the peak (held shut), that of the last row below its head (past the
            end of the curve: the caller asks `past_end`). [m3/s]
        """
        return self.invert(head)[0]

    def invert(self, head: ArrayLike) -> tuple[FloatArray, FloatArray]:
        """Return `largest_flow` and its derivative with head, which is zero where it is cut."""
        shape = np.shape(head)
        wanted = np.asarray(head, dtype=np.float64).ravel()
        shut, past = self.held_shut(wanted), self.past_end(wanted)
        target = np.clip(wanted, self.last_head, self.peak_head)
        piece = np.searchsorted(self.falling_head[1:-1], target, side="left")
        c0, c1, c2, c3 = np.take(self.falling_coefficients, piece, axis=1)
        base = self.falling_base[piece]
        low, high = self.falling_left[piece] - base, self.falling_right[piece] - base
        c3 = c3 - target
        place = (target - self.last_head) * self.guess_scale
        cell = np.minimum(place.astype(np.intp), _GUESSES - 1)
        t = self.guess_flow[cell] + (place - cell) * self.guess_step[cell] - base
        t = np.minimum(np.maximum(t, low), high)
        enough = _HEAD_ROUNDING * max(abs(self.peak_head), abs(self.last_head))
        double, triple = 2.0 * c1, 3.0 * c0
        # From so near a guess two Newton steps settle all but points beside a level end.
        for _ in range(_FREE_STEPS):
            excess = ((c0 * t + c1) * t + c2) * t + c3
            slope = np.minimum((triple * t + double) * t + c2, _LEVEL)
            t = np.minimum(np.maximum(t - excess / slope, low), high)
        excess = ((c0 * t + c1) * t + c2) * t + c3
        rough = np.abs(excess) > enough
        if rough.any():
            cubic = tuple(c[rough] for c in (c0, c1, c2, c3))
            t[rough] = _bracketed(cubic, t[rough], low[rough], high[rough], enough)
        slope = np.minimum((triple * t + double) * t + c2, _LEVEL)
        flow = np.where(shut, 0.0, np.where(past, self.last_flow, base + t))
        gain = np.where(shut | past, 0.0, 1.0 / slope)
        return flow.reshape(shape), gain.reshape(shape)

    def held_shut(self, head: ArrayLike) -> BoolArray:
        """Return where the head is above the peak, so that the check valve stays shut."""
        return np.asarray(np.asarray(head, dtype=np.float64) > self.peak_head, dtype=np.bool_)

    def cannot_start(self, head: ArrayLike) -> BoolArray:
        """Return where a running pump could hold the head but a starting one could not."""
        wanted = np.asarray(head, dtype=np.float64)
        if self.shutoff_head is None:
            return np.zeros(wanted.shape, dtype=np.bool_)
        start = self.shutoff_head * (1.0 + _HEAD_ROUNDING)
        return np.asarray((wanted > start) & (wanted <= self.peak_head), dtype=np.bool_)

    def past_end(self, head: ArrayLike) -> BoolArray:
        """Return where the head is below that of the last row, so that no flow is stated."""
        slack = _HEAD_ROUNDING * max(abs(self.peak_head), abs(self.last_head))
        return np.asarray(
            np.asarray(head, dtype=np.float64) < self.last_head - slack, dtype=np.bool_
        )

    def before_start(self, head: ArrayLike) -> BoolArray:
        """Return where the head is above that of a first row that is not at zero flow."""
        wanted = np.asarray(head, dtype=np.float64)
        if self.shutoff_head is not None:
            return np.zeros(wanted.shape, dtype=np.bool_)
        return np.asarray(wanted > self.peak_head, dtype=np.bool_)


def _bracketed(
    cubic: tuple[FloatArray, ...], t: FloatArray, low: FloatArray, high: FloatArray,
    enough: float,
) -> FloatArray:  # fmt: skip
    """Return the roots of falling cubics by Newton steps kept inside a shrinking bracket.

    They start at `t`, which is near.
    """
    c0, c1, c2, c3 = cubic
    for _ in range(_STEPS):
        excess = ((c0 * t + c1) * t + c2) * t + c3
        slope = np.minimum((3.0 * c0 * t + 2.0 * c1) * t + c2, _LEVEL)
        # The piece falls: too much head means that the flow sought is further right.
        low, high = np.where(excess > 0, t, low), np.where(excess < 0, t, high)
        ahead = t - excess / slope
        outside = (ahead < low) | (ahead > high)
        ahead = np.where(outside, 0.5 * (low + high), ahead)
        found = (np.abs(excess) <= enough) | (ahead == t)
        t = np.where(found, t, ahead)
        if found.all():
            break
    return t


def leg_curve(pump: PumpCurve, *, loss: float) -> LegCurve:
    """Return the curve of a leg.

    Parameters
    ----------
    pump : PumpCurve
        Pump of the leg.
    loss : float
        Sum of the branch losses over flow squared, zero or more; see
        `fittings.quadratic_coefficient`. [m/(m3/s)2]

    Raises
    ------
    ValueError
        If `loss` is below zero or not a finite number.
    """
    if not (np.isfinite(loss) and loss >= 0):
        raise ValueError(f"loss must not be below zero; got {loss:g} m/(m3/s)2")
    curve = _split_at_turns(_less_loss(pump.head_curve, float(loss)))
    heads = np.array(curve(curve.breaks))
    peak = int(np.argmax(heads))
    pieces = _falling_envelope(curve, heads)
    left, right, base, coefficients, steps = pieces
    guess_flow = _flow_at_even_heads(steps, left, right, base, coefficients)
    return LegCurve(
        pump=pump,
        loss=float(loss),
        curve=curve,
        shutoff_head=float(heads[0]) if curve.first == 0 else None,
        peak_head=float(heads[peak]),
        peak_flow=float(curve.breaks[peak]),
        falls_throughout=bool(np.all(np.diff(heads) < 0)),
        falling_head=read_only(steps),
        falling_left=read_only(left),
        falling_right=read_only(right),
        falling_base=read_only(base),
        falling_coefficients=read_only(coefficients),
        guess_flow=read_only(guess_flow[:-1]),
        guess_step=read_only(np.diff(guess_flow)),
        guess_scale=_GUESSES / float(steps[-1] - steps[0]),
    )


def _less_loss(head: PiecewiseCubic, loss: float) -> PiecewiseCubic:
    """Take the branch losses off a head curve."""
    start = head.breaks[:-1]
    c0, c1, c2, c3 = head.coefficients
    lowered = np.array([c0, c1 - loss, c2 - 2.0 * loss * start, c3 - loss * start**2])
    return PiecewiseCubic(breaks=head.breaks, coefficients=read_only(lowered))


def _split_at_turns(curve: PiecewiseCubic) -> PiecewiseCubic:
    """Put a break where a piece turns, so that every piece rises or falls throughout."""
    turns: list[float] = []
    widths = np.diff(curve.breaks)
    for start, width, (c0, c1, c2, _) in zip(
        curve.breaks, widths, curve.coefficients.T, strict=False
    ):
        roots = np.roots(np.array([3.0 * c0, 2.0 * c1, c2]))
        real = roots[np.abs(roots.imag) <= 1e-12 * np.abs(roots)].real
        turns.extend(start + r for r in real if 1e-9 * width < r < width * (1.0 - 1e-9))
    if not turns:
        return curve
    breaks = np.unique(np.concatenate([curve.breaks, turns]))
    of = np.searchsorted(curve.breaks, breaks[:-1], side="right") - 1
    d = breaks[:-1] - curve.breaks[of]
    c0, c1, c2, c3 = curve.coefficients[:, of]
    moved = np.array(
        [
            c0,
            c1 + 3.0 * c0 * d,
            c2 + (2.0 * c1 + 3.0 * c0 * d) * d,
            ((c0 * d + c1) * d + c2) * d + c3,
        ]
    )
    return PiecewiseCubic(breaks=read_only(breaks), coefficients=read_only(moved))


def _falling_envelope(
    curve: PiecewiseCubic, heads: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray, FloatArray]:
    """Return the falling pieces that the largest flow runs along, heads rising."""
    left, right, columns, base, steps = [], [], [], [], [float(heads[-1])]
    for i in range(curve.breaks.size - 2, -1, -1):
        if heads[i] <= steps[-1]:
            continue
        end = float(curve.breaks[i + 1])
        if heads[i + 1] < steps[-1]:
            end = _where_falling(curve, i, steps[-1])
        left.append(float(curve.breaks[i]))
        right.append(end)
        base.append(float(curve.breaks[i]))
        columns.append(curve.coefficients[:, i])
        steps.append(float(heads[i]))
    return np.array(left), np.array(right), np.array(base), np.array(columns).T, np.array(steps)


def _where_falling(curve: PiecewiseCubic, piece: int, head: float) -> float:
    """Return the flow at which one falling piece meets a head, by bisection."""
    low, high = float(curve.breaks[piece]), float(curve.breaks[piece + 1])
    for _ in range(200):
        middle = 0.5 * (low + high)
        if middle in (low, high):
            break
        low, high = (middle, high) if float(curve(middle)) > head else (low, middle)
    return low


def _flow_at_even_heads(
    steps: FloatArray,
    left: FloatArray,
    right: FloatArray,
    base: FloatArray,
    coefficients: FloatArray,
) -> FloatArray:
    """Return flows at evenly spaced heads, roughly: the table of first guesses."""
    share = np.linspace(1.0, 0.0, _SAMPLES)
    flow = left[:, None] + share * (right - left)[:, None]
    t = flow - base[:, None]
    c0, c1, c2, c3 = (c[:, None] for c in coefficients)
    head = ((c0 * t + c1) * t + c2) * t + c3
    even = np.linspace(steps[0], steps[-1], _GUESSES + 1)
    return np.interp(even, np.maximum.accumulate(head.ravel()), flow.ravel())
