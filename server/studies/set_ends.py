"""Where the states of a set end: the last row, no flow, the ends of the preferred region.

Units at one common speed share y = head/speed^2; a set's flow over speed, X(y), is explicit in
it (see `server.hydraulics.leg_curve`). Every end is a y, or a speed at a known y and X.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from server.hydraulics.falling_root import falling_root
from server.hydraulics.leg_curve import LegCurve
from server.studies.lowering.lowered import Flags, Floats, LoweredSet
from server.studies.system_heads import Draw, required_head


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class CommonSpeed:
    """M combinations of units at one common speed each."""

    legs: tuple[LegCurve, ...]  # T kinds
    count: Floats  # (M, T) how many of each
    relative: tuple[float, ...]  # speed of each kind over the common one: 1 with a drive

    def kind_flows(self, y: Floats) -> tuple[Floats, ...]:
        """Return the flow over speed of one leg of each kind; 0 of a kind not there."""
        there = [bool(np.any(self.count[:, t])) for t in range(len(self.legs))]
        return tuple(
            _at_own_speed(leg, y, own) if runs else np.zeros(y.shape)
            for leg, own, runs in zip(self.legs, self.relative, there, strict=True)
        )

    def total(self, y: Floats) -> Floats:
        """Return X(y), y of shape (M, ...): a leg above its peak adds nothing."""
        return self.sum_of(self.kind_flows(y))

    def sum_of(self, flows: Sequence[Floats]) -> Floats:
        """Return the flow of the sets from that of one leg of each kind."""
        spread = (slice(None),) + (None,) * (flows[0].ndim - 1)
        total = np.zeros(flows[0].shape)
        for t, x in enumerate(flows):
            total += self.count[:, t][spread] * x
        return total

    def take(self, rows: Flags) -> "CommonSpeed":
        """Return the combinations marked."""
        return CommonSpeed(legs=self.legs, count=self.count[rows], relative=self.relative)

    @property
    def last_head(self) -> Floats:
        """The y at which the first leg reaches its last row, (M,) [m]."""
        return self._largest([leg.last_head for leg in self.legs])

    @property
    def peak_head(self) -> Floats:
        """The largest y at which anything flows, (M,) [m]."""
        return self._largest([leg.peak_head for leg in self.legs])

    @property
    def shutoff_head(self) -> Floats:
        """Head of the highest leg at no flow, nan where one is not given, (M,) [m]."""
        given = [np.nan if leg.shutoff_head is None else leg.shutoff_head for leg in self.legs]
        return self._largest(given)

    def _largest(self, heads: Sequence[float]) -> Floats:
        """Return the largest head of the legs that run, each at its own speed, (M,)."""
        own = np.array(heads) * np.square(self.relative)
        return np.asarray(np.where(self.count > 0, own, -np.inf).max(axis=1), dtype=np.float64)


def _at_own_speed(leg: LegCurve, y: Floats, own: float) -> Floats:
    """Return the flow over the common speed of a leg that runs at `own` times that speed."""
    return leg.largest_flow(y) if own == 1.0 else own * leg.largest_flow(y / own**2)


def relative_speeds(of: LoweredSet) -> tuple[float, ...]:
    """Return the speed of each kind of unit over the drives' highest."""
    top = of.control.highest_speed
    return tuple(1.0 / top if unit.fixed else 1.0 for unit in of.units)


def at_common_speed(of: LoweredSet, combinations: Flags) -> CommonSpeed:
    """Return combinations (M, N) of slots as counts of their units."""
    kinds = np.array([slot.unit for slot in of.slots])
    count = [(combinations & (kinds == t)).sum(axis=1) for t in range(len(of.units))]
    legs = tuple(unit.leg for unit in of.units)
    return CommonSpeed(
        legs=legs,
        count=np.stack(count, axis=1).astype(np.float64),
        relative=relative_speeds(of),
    )


def flow_at_end(of: LoweredSet, units: CommonSpeed) -> Floats:
    """Return the flow at top speed with the first unit at its last row, (M,) [m3/s]."""
    return of.control.highest_speed * units.total(units.last_head)


def zero_flow_speed(of: LoweredSet, units: CommonSpeed, draw: Draw) -> Floats:
    """Return the speed that holds the set point at no flow, shape (C, M)."""
    head = required_head(of, np.zeros(draw.flow.shape), draw.aged, draw.shift)
    ratio = np.maximum(head, 0.0)[:, None] / units.shutoff_head
    return np.asarray(np.sqrt(ratio), dtype=np.float64)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class PreferredFlows:
    """Flows between which all units of a combination lie in their preferred region, (M, 3).

    Along the control curve without fire; nan where there are none within the speed limits or
    the best-efficiency point of a unit is not known.
    """

    start: Floats  # [m3/s]
    end: Floats  # [m3/s]


def preferred_flows(
    of: LoweredSet, units: CommonSpeed, aged: bool, shift: Floats
) -> PreferredFlows:
    """Return where combinations enter and leave their preferred region, per supply state.

    Parameters
    ----------
    of : LoweredSet
        The set.
    units : CommonSpeed
        M combinations.
    aged : bool
        Whether the pipes are aged.
    shift : ndarray, shape (3,)
        Shifts of the supply's curve, nan for a state not stated. [Pa]
    """
    ends = _region_heads(of, units)  # (M, 2)
    known = np.isfinite(ends)[:, :, None] & np.isfinite(shift)
    heads = np.where(known, np.nan_to_num(ends, nan=1.0)[:, :, None], 1.0)
    flows = units.total(heads)
    shifts = np.broadcast_to(np.nan_to_num(shift), heads.shape)
    low, high = of.control.lowest_speed, of.control.highest_speed

    def gap(speed: Floats) -> Floats:
        return required_head(of, speed * flows, aged, shifts) / speed**2 - heads

    bottom, top = np.full(heads.shape, low), np.full(heads.shape, high)
    found = falling_root(gap, bottom, top)
    flow = np.where(known, found.root * flows, np.nan)
    start, end = flow[:, 0], flow[:, 1]
    # where a speed limit comes before the end of the region, the limit is the end of the range
    too_slow = known[:, 0] & (found.at_low[:, 0] < 0)
    too_fast = known[:, 1] & (found.at_high[:, 1] > 0)
    for limited, speed, flows_there in ((too_slow, low, start), (too_fast, high, end)):
        rows = np.asarray(limited.any(axis=1), dtype=np.bool_)
        if rows.any():
            at_limit = _flows_at_speed(of, units.take(rows), speed, aged, shift)
            flows_there[rows] = np.where(limited[rows], at_limit, flows_there[rows])
    empty = ~(end > start)
    return PreferredFlows(
        start=np.where(empty, np.nan, start), end=np.where(empty, np.nan, end)
    )


def _region_heads(of: LoweredSet, units: CommonSpeed) -> Floats:
    """Return y where the last unit enters its preferred region and the first leaves."""
    enters, leaves = [], []
    for t, leg in enumerate(units.legs):
        low, high = next(
            (slot.preferred for slot in of.slots if slot.unit == t), (np.nan, np.nan)
        )
        best = leg.pump.best
        flow = np.nan if best is None else best.flow
        within = np.clip(np.array([low, high]) * flow, leg.first_flow, leg.last_flow)
        entering, leaving = leg.head(within)
        enters.append(entering)
        leaves.append(leaving)
    running = units.count > 0
    return np.stack([
        np.where(running, enters, np.inf).min(axis=1),
        np.where(running, leaves, -np.inf).max(axis=1),
    ], axis=1)  # fmt: skip


def _flows_at_speed(
    of: LoweredSet, units: CommonSpeed, speed: float, aged: bool, shift: Floats
) -> Floats:
    """Return the flow at which combinations hold the set point at one speed, (M, 3)."""
    shape = (units.count.shape[0], shift.size)
    shifts = np.broadcast_to(np.nan_to_num(shift), shape)

    def gap(y: Floats) -> Floats:
        return required_head(of, speed * units.total(y), aged, shifts) - speed**2 * y

    low = np.array(np.broadcast_to(units.last_head[:, None], shape))
    high = np.array(np.broadcast_to(units.peak_head[:, None], shape))
    y = falling_root(gap, low, high).root
    flow = speed * units.total(np.where(np.isnan(y), high, y))
    return np.where(np.isnan(y) | np.isnan(shift), np.nan, flow)
