"""Branches of a leg: stretches on which its head only falls or only rises with flow."""

from dataclasses import dataclass

import numpy as np

from server.hydraulics.arrays import FloatArray
from server.hydraulics.leg_curve import LegCurve

_BISECTIONS = 80
_NO_WIDTH = 1e-13  # of the head: a level stretch is no branch to be found by its head [-]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Branch:
    """A way for a leg to stand at a head, at its running speed.

    `leg` is None for the shut branch: the check valve is held shut and nothing flows.
    """

    leg: LegCurve | None
    speed: float
    left: float  # flows at tested speed between which it runs [m3/s]
    right: float
    low: float  # heads at the running speed between which it runs [m]
    high: float

    @property
    def shut(self) -> bool:
        """Whether nothing flows."""
        return self.leg is None

    def flow(self, head: FloatArray) -> FloatArray:
        """Return the flow at heads within the branch, by bisection [m3/s]."""
        if self.leg is None:
            return np.zeros(head.shape)
        tested = head / self.speed**2
        falls = float(self.leg.head(self.left)) > float(self.leg.head(self.right))
        a, b = np.full(head.shape, self.left), np.full(head.shape, self.right)
        for _ in range(_BISECTIONS):
            middle = 0.5 * (a + b)
            right = (self.leg.head(middle) > tested) == falls
            a, b = np.where(right, middle, a), np.where(right, b, middle)
        return np.asarray(self.speed * 0.5 * (a + b), dtype=np.float64)

    def head(self, flow: float) -> float:
        """Return the head at a flow within the branch; nan for the shut one [m]."""
        if self.leg is None:
            return float("nan")
        x = float(np.clip(flow / self.speed, self.leg.first_flow, self.leg.last_flow))
        return self.speed**2 * float(self.leg.head(x))

    def slope(self, flow: float) -> float:
        """Return d(head)/d(flow) at a flow [m/(m3/s)]."""
        if self.leg is None:
            return -np.inf
        x = float(np.clip(flow / self.speed, self.leg.first_flow, self.leg.last_flow))
        return self.speed * float(self.leg.curve.slope(x))

    @property
    def startable_head(self) -> float:
        """Head up to which a leg at rest can start: its shut-off head; inf where not given."""
        if self.leg is None:
            return np.inf
        shutoff = self.leg.shutoff_head
        return np.inf if shutoff is None else self.speed**2 * shutoff


def branches(leg: LegCurve, *, speed: float) -> tuple[Branch, ...]:
    """Return the branches of a running leg: its rising and falling stretches, and shut.

    Parameters
    ----------
    leg : LegCurve
        The leg.
    speed : float
        Running over tested speed, above zero. [-]

    Notes
    -----
    A leg whose first row is above zero flow has no shut branch: its shut-off head is not given.
    """
    breaks = leg.curve.breaks
    heads = np.array(leg.curve(breaks))
    turn = np.sign(np.diff(heads))
    found = []
    start = 0
    for i in range(1, breaks.size):
        if i == breaks.size - 1 or turn[i] != turn[i - 1]:
            found.append((start, i))
            start = i
    made = [
        Branch(
            leg=leg,
            speed=speed,
            left=float(breaks[a]),
            right=float(breaks[b]),
            low=speed**2 * float(min(heads[a], heads[b])),
            high=speed**2 * float(max(heads[a], heads[b])),
        )
        for a, b in found
        if abs(heads[b] - heads[a]) > _NO_WIDTH * leg.peak_head
    ]
    if leg.shutoff_head is not None:
        shutoff = speed**2 * leg.shutoff_head
        made.append(Branch(leg=None, speed=speed, left=0, right=0, low=shutoff, high=np.inf))
    return tuple(made)
