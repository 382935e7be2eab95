"""The frozen scalar baseline: legs in parallel by one root inside another, one case at a time.

Frozen: it is what our array solver is measured against, so it must not change when that does.
The manifold head is found by brentq, and for every head it tries each pump's flow by brentq.
All numbers are plain floats and the pieces of a curve are found by bisection, which is as quick
as a scalar program in this language gets without giving up the curve. A pump whose shut-off
head is not above the manifold head is held shut and costs nothing.
"""

from bisect import bisect_right
from collections.abc import Sequence
from dataclasses import dataclass

from scipy.optimize import brentq

HEAD_STEP = 1e-12  # [m]
FLOW_STEP = 1e-14  # [m3/s]
RELATIVE_STEP = 8.881784197001252e-16  # the least that brentq takes


@dataclass(frozen=True, slots=True)
class ScalarLeg:
    """A pump curve as cubics in plain floats, and the loss of its branches."""

    breaks: tuple[float, ...]
    cubics: tuple[tuple[float, float, float, float], ...]
    loss: float
    shutoff_head: float
    last_head: float

    def head(self, flow: float, speed: float) -> float:
        """Return the head of the leg at a flow and a speed."""
        x = flow / speed
        i = min(max(bisect_right(self.breaks, x) - 1, 0), len(self.cubics) - 1)
        c0, c1, c2, c3 = self.cubics[i]
        t = x - self.breaks[i]
        return speed * speed * (((c0 * t + c1) * t + c2) * t + c3) - self.loss * flow * flow

    def flow(self, head: float, speed: float) -> float:
        """Return the flow at a manifold head, zero when held shut, cut at the last row."""
        square = speed * speed
        if square * self.shutoff_head <= head:
            return 0.0
        if square * self.last_head >= head:
            return speed * self.breaks[-1]
        return float(
            brentq(
                lambda q: self.head(q, speed) - head,
                0.0,
                speed * self.breaks[-1],
                xtol=FLOW_STEP,
                rtol=RELATIVE_STEP,
            )
        )


def scalar_leg(
    breaks: Sequence[float], coefficients: Sequence[Sequence[float]], loss: float
) -> ScalarLeg:
    """Return a leg from rows and the coefficients of its pieces, highest power first."""
    rows = tuple(float(x) for x in breaks)
    cubics = tuple(
        (float(a), float(b), float(c), float(d))
        for a, b, c, d in zip(*coefficients, strict=True)
    )
    c0, c1, c2, c3 = cubics[-1]
    width = rows[-1] - rows[-2]
    last = ((c0 * width + c1) * width + c2) * width + c3 - loss * rows[-1] ** 2
    return ScalarLeg(rows, cubics, float(loss), cubics[0][3], last)


def operating_point(
    legs: Sequence[ScalarLeg], speeds: Sequence[float], static_head: float, coefficient: float
) -> tuple[float, float]:
    """Return manifold head and flow of legs in parallel on static head + coefficient x Q^2."""

    def gap(head: float) -> float:
        total = 0.0
        for leg, speed in zip(legs, speeds, strict=True):
            total += leg.flow(head, speed)
        return head - static_head - coefficient * total * total

    highest = max(s * s * leg.shutoff_head for leg, s in zip(legs, speeds, strict=True))
    if highest <= static_head:
        return static_head, 0.0
    head = float(brentq(gap, static_head, highest, xtol=HEAD_STEP, rtol=RELATIVE_STEP))
    return head, sum(leg.flow(head, s) for leg, s in zip(legs, speeds, strict=True))
