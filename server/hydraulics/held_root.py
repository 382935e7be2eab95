"""The one root behind `control.hold_head`: the share of legs at a common speed."""

from dataclasses import dataclass

import numpy as np

from server.hydraulics.arrays import BoolArray, FloatArray, StateArray
from server.hydraulics.equal_legs import equal_legs
from server.hydraulics.falling_root import falling_root
from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.states import State

_NEWTON_ONLY = 12  # steps after which the few rows that are left are settled by secants
_LAST_WIDTH = 1e-13  # of their last bracket, as a share of the head
_ROUNDING = 1e-14  # share of the head below which a step changes nothing
_MEND = 1e-12  # share of the flow missing above which the shares are mended
_LEAST_STEP = 1e-6  # share of the head within which a mended root must stay
_JUMP = 1e-6  # share of the flow missing above which no share fits
_SMALL_FLOW = 1e-6  # below which such shares are of this flow [m3/s]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Sharing:
    """Kinds of leg G and how many of each run, for M cases and combinations in one row."""

    kinds: tuple[LegCurve, ...]
    count: FloatArray  # (M, G)

    @property
    def end_head(self) -> FloatArray:
        """Head at tested speed where the first leg reaches its last row, shape (M,) [m]."""
        return self._largest([k.last_head for k in self.kinds])

    @property
    def peak_head(self) -> FloatArray:
        """Highest head at tested speed of any leg, shape (M,) [m]."""
        return self._largest([k.peak_head for k in self.kinds])

    @property
    def shutoff_head(self) -> FloatArray:
        """Highest shut-off head; nan if that of a leg is not given, shape (M,) [m]."""
        given = [np.nan if k.shutoff_head is None else k.shutoff_head for k in self.kinds]
        unknown = np.any((self.count > 0) & np.isnan(given), axis=1)
        return np.where(unknown, np.nan, self._largest(np.nan_to_num(given).tolist()))

    @property
    def single_kind(self) -> BoolArray:
        """Where legs of one kind run, shape (M,)."""
        return np.asarray((self.count > 0).sum(axis=1) == 1, dtype=np.bool_)

    @property
    def shares_uniquely(self) -> BoolArray:
        """Where every leg has one flow for each head, shape (M,)."""
        falls = np.array([k.shares_uniquely for k in self.kinds])
        return np.asarray(~np.any((self.count > 0) & ~falls, axis=1), dtype=np.bool_)

    def flows(self, u: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Return the flow of one leg of each kind and its derivative, shape (M, G)."""
        pairs = [kind.invert(u) for kind in self.kinds]
        return np.stack([p[0] for p in pairs], axis=1), np.stack([p[1] for p in pairs], axis=1)

    def open_at(self, u: FloatArray) -> BoolArray:
        """Return where a leg stands at its shut-off head or below, shape (M, G)."""
        heads = [k.peak_head if k.shutoff_head is None else k.shutoff_head for k in self.kinds]
        return np.asarray(u[:, None] <= np.array(heads) * (1.0 + _ROUNDING), dtype=np.bool_)

    def unknown_at(self, u: FloatArray) -> BoolArray:
        """Return where a leg that runs would stand before its first row, shape (M,)."""
        before = np.stack([k.before_start(u) for k in self.kinds], axis=1)
        return np.asarray(np.any((self.count > 0) & before, axis=1), dtype=np.bool_)

    def head_slope(self, x: FloatArray) -> FloatArray:
        """Return d(head)/d(flow) of the set at tested speed, shape (M,) [m/(m3/s)]."""
        per_head: FloatArray = np.zeros(x.shape[0])
        for k, kind in enumerate(self.kinds):
            at = np.clip(x[:, k], kind.first_flow, kind.last_flow)
            slope = np.minimum(kind.curve.slope(at), -1e-9)
            if not kind.falls_throughout:
                slope = kind.curve.slope(at)
            runs = (self.count[:, k] > 0) & ((x[:, k] > 0) | self.single_kind)
            safe = np.where(slope == 0, -1e-9, slope)
            per_head += np.where(runs, self.count[:, k] / safe, 0.0)
        some = per_head != 0
        return np.asarray(np.where(some, 1.0 / np.where(some, per_head, 1.0), 0.0), np.float64)

    def take(self, rows: BoolArray) -> "Sharing":
        """Return the rows marked."""
        return Sharing(kinds=self.kinds, count=self.count[rows])

    def _largest(self, heads: list[float]) -> FloatArray:
        """Return the largest head of the legs that run, -inf where none does."""
        of_running = np.where(self.count > 0, np.array(heads), -np.inf)
        return np.asarray(of_running.max(axis=1), dtype=np.float64)


@dataclass(slots=True, kw_only=True, eq=False)
class Root:
    """Heads and flows at tested speed, and what is odd about them; arrays over M."""

    u: FloatArray  # (M,) head over speed squared [m]
    x: FloatArray  # (M, G) flow of one leg of each kind over speed [m3/s]
    past_end: BoolArray
    unknown: BoolArray
    rising: BoolArray


def held_root(
    sharing: Sharing, flow: FloatArray, head: FloatArray, low: FloatArray, high: FloatArray
) -> tuple[StateArray, Root]:
    """Return which limit the speed stands at, if any, and the root there.

    Parameters
    ----------
    sharing : Sharing
        Legs that run.
    flow, head : ndarray, shape (M,)
        Demand [m3/s] and head asked [m].
    low, high : ndarray, shape (M,)
        Limits of the speed ratio. [-]
    """
    count, end, peak = sharing.count, sharing.end_head, sharing.peak_head
    runs = count.sum(axis=1) > 0
    end, peak = np.where(runs, end, 0.0), np.where(runs, peak, 0.0)
    at_top, at_low = head / high**2, head / low**2
    total_top = (count * sharing.flows(at_top)[0]).sum(axis=1)
    total_low = (count * sharing.flows(at_low)[0]).sum(axis=1)
    still = flow == 0
    shutoff = np.where(runs, sharing.shutoff_head, np.nan)
    top = np.where(still, at_top > shutoff, high * total_top < flow)
    lowest = np.where(still, at_low < shutoff, low * total_low > flow) | (head <= 0)
    limit = np.where(lowest, State.LOW_SPEED, np.where(top, State.TOP_SPEED, State.SOLVED))

    # The flow asked of the legs at tested speed is `fixed` + `factor` sqrt(u).
    limited = limit != State.SOLVED
    fixed = np.where(limited, flow / np.where(limit == State.TOP_SPEED, high, low), 0.0)
    factor = np.where(limited, 0.0, flow / np.sqrt(np.where(limited, 1.0, head)))
    floor = np.where(limit == State.TOP_SPEED, end, np.maximum(end, at_low))
    floor = np.where(limited, floor, np.maximum(end, at_top))
    ceiling = np.where(limit == State.LOW_SPEED, peak, np.minimum(peak, at_low))
    ceiling = np.where(limit == State.TOP_SPEED, np.minimum(peak, at_top), ceiling)

    least = (count * sharing.flows(floor)[0]).sum(axis=1)
    asked = fixed + factor * np.sqrt(np.maximum(floor, 0.0))
    slack = 1e-12 * np.maximum(asked, least)
    root = Root(
        u=np.where(still, shutoff, floor),
        x=np.zeros(count.shape),
        past_end=runs & ~still & ((least < asked - slack) | (ceiling < end)),
        unknown=still & np.isnan(shutoff),
        rising=np.zeros(flow.shape, dtype=np.bool_),
    )
    by_flow = sharing.single_kind & ~sharing.shares_uniquely
    moving = runs & ~still & ~root.past_end & ~by_flow
    if moving.any():
        _solve(sharing.take(moving), moving, root, fixed, factor, floor, ceiling)
    root.unknown |= sharing.unknown_at(root.u) & ~still
    states = limit.astype(np.int8)
    for k, kind in enumerate(sharing.kinds):
        rows = ~still & sharing.single_kind & (count[:, k] > 0)
        if kind.shares_uniquely or not rows.any():
            continue
        each = flow[rows] / count[rows, k]
        equal = equal_legs(kind, each=each, head=head[rows], low=low[rows], high=high[rows])
        states[rows], root.u[rows], root.x[rows, k] = equal.limit, equal.u, equal.x
        root.past_end[rows], root.unknown[rows] = equal.past_end, equal.unknown
        root.rising[rows] = equal.rising
    return states, root


def _solve(
    sharing: Sharing,
    rows: BoolArray,
    root: Root,
    fixed: FloatArray,
    factor: FloatArray,
    floor: FloatArray,
    ceiling: FloatArray,
) -> None:
    """Find the roots of the marked rows and put them into `root`."""
    a, b = fixed[rows], factor[rows]
    count = sharing.count
    u = _bracketed_root(sharing, a, b, floor[rows].copy(), ceiling[rows].copy())
    x, _ = sharing.flows(u)
    wanted = a + b * np.sqrt(np.maximum(u, 0.0))
    # A gap that is left is a jump of the largest flow: no share of these legs fits the demand.
    jumped = np.abs((count * x).sum(axis=1) - wanted) > _JUMP * np.maximum(wanted, _SMALL_FLOW)
    jumped &= ~sharing.shares_uniquely
    _mend(sharing, a, b, u, x, ~jumped)
    root.u[rows], root.x[rows], root.unknown[rows] = u, x, jumped


def _bracketed_root(
    sharing: Sharing, a: FloatArray, b: FloatArray, low: FloatArray, high: FloatArray
) -> FloatArray:
    """Return where the flow of the legs meets a + b sqrt(u); rows that are found drop out.

    Where a leg is about to open, flow runs as a root of head and Newton steps fail: secants in
    the bracket settle the few such rows.
    """
    answer = 0.5 * (low + high)
    place, of, u = np.arange(a.size), sharing, answer.copy()
    for _ in range(_NEWTON_ONLY):
        x, gain = of.flows(u)
        wave = np.sqrt(np.maximum(u, 0.0))
        off = (of.count * x).sum(axis=1) - a - b * wave
        bend = np.where(wave > 0, 0.5 * b / np.where(wave > 0, wave, 1.0), 0.0)
        slope = (of.count * gain).sum(axis=1) - bend
        low, high = np.where(off > 0, u, low), np.where(off < 0, u, high)
        newton = u - off / np.where(slope < 0, slope, -1.0)
        bisect = (slope >= 0) | (newton < low) | (newton > high)
        ahead = np.where(bisect, 0.5 * (low + high), newton)
        near = (off == 0) | (np.abs(ahead - u) <= _ROUNDING * np.maximum(1.0, np.abs(u)))
        u = np.where(off == 0, u, ahead)
        if near.any():
            answer[place[near]] = u[near]
            left = ~near
            if not left.any():
                return answer
            place, of, u = place[left], of.take(left), u[left]
            a, b, low, high = a[left], b[left], low[left], high[left]

    def gap(head: FloatArray) -> FloatArray:
        x, _ = of.flows(head)
        return np.asarray((of.count * x).sum(axis=1) - a - b * np.sqrt(np.maximum(head, 0.0)))

    found = falling_root(gap, low, high, width=_LAST_WIDTH).root
    # a gap that never passes zero is a jump of the largest flow, or lies at an end
    answer[place] = np.where(np.isfinite(found), found, u)
    return answer


def _mend(
    sharing: Sharing,
    a: FloatArray,
    b: FloatArray,
    u: FloatArray,
    x: FloatArray,
    rows: BoolArray,
) -> None:
    """Settle, in place, flows where a curve is level, near shut-off: Newton in the flows."""
    for _ in range(3):
        wanted = a + b * np.sqrt(np.maximum(u, 0.0))
        off = (sharing.count * x).sum(axis=1) - wanted
        rough = rows & (np.abs(off) > _MEND * np.maximum(wanted, _SMALL_FLOW))
        if not rough.any():
            return
        at, n, y = u[rough], sharing.count[rough], x[rough]
        may_flow = sharing.open_at(at)
        miss, inverse = np.zeros_like(y), np.zeros_like(y)
        for k, kind in enumerate(sharing.kinds):
            inside = np.clip(y[:, k], kind.first_flow, kind.last_flow)
            flows = (n[:, k] > 0) & may_flow[:, k]
            slope = np.minimum(kind.curve.slope(inside), -1e-9)
            miss[:, k] = np.where(flows, at - kind.head(inside), 0.0)
            inverse[:, k] = np.where(flows, 1.0 / slope, 0.0)
        wave = np.sqrt(np.maximum(at, np.finfo(np.float64).tiny))
        steepness = (n * inverse).sum(axis=1) - 0.5 * b[rough] / wave
        change = -(off[rough] + (n * miss * inverse).sum(axis=1)) / np.where(
            steepness < 0, steepness, -np.inf
        )
        change = np.clip(change, -_LEAST_STEP * at, _LEAST_STEP * at)
        u[rough] = at + change
        moved = y + (miss + change[:, None]) * inverse
        x[rough] = np.where(may_flow, np.maximum(moved, 0.0), 0.0)
