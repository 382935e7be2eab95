"""Where the states of a set end: the last row, no flow, the ends of the preferred region."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from server.hydraulics.falling_root import falling_root
from server.hydraulics.leg_curve import LegCurve
from server.studies.combinations import Mask, unit_counts
from server.studies.lowering.lowered import Floats, LoweredSet
from server.studies.system_heads import Draw, required_head

SLOPE_STEP = 1e-6  # share of the unknown over which the slope of a system is taken


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Parallel:
    """Units at one common speed: X(y), flow over speed against head over speed squared."""

    legs: tuple[LegCurve, ...]
    count: tuple[int, ...]

    def total(self, y: Floats) -> Floats:
        """Return X(y): a leg above its peak adds nothing, one past its last row that row's flow."""
        total = np.zeros(np.shape(y))
        for leg, n in zip(self.legs, self.count, strict=True):
            total = total + n * leg.largest_flow(y)
        return total

    @property
    def last_head(self) -> float:
        """The y at which the first leg reaches its last row [m]."""
        return max(leg.last_head for leg in self.legs)

    @property
    def peak_head(self) -> float:
        """The largest y at which anything flows [m]."""
        return max(leg.peak_head for leg in self.legs)

    @property
    def shutoff_head(self) -> float:
        """Head of the highest leg at no flow, nan where one is not given [m]."""
        given = [np.nan if leg.shutoff_head is None else leg.shutoff_head for leg in self.legs]
        return float(np.max(given))


def parallel(of: LoweredSet, legs: Sequence[LegCurve], mask: Mask) -> Parallel:
    """Return the units of a combination in parallel."""
    counts = unit_counts(of.slots, mask)
    return Parallel(legs=tuple(legs[unit] for unit, _ in counts), count=tuple(n for _, n in counts))


def flow_at_end(of: LoweredSet, legs: Sequence[LegCurve], masks: Sequence[Mask]) -> Floats:
    """Return the flow at top speed at which the first unit reaches its last row, (K,) [m3/s]."""
    ends = []
    for mask in masks:
        units = parallel(of, legs, mask)
        ends.append(of.control.highest_speed * float(units.total(np.array(units.last_head))))
    return np.array(ends, dtype=np.float64)


def zero_flow_speed(
    of: LoweredSet, legs: Sequence[LegCurve], masks: Sequence[Mask], draw: Draw
) -> Floats:
    """Return the speed that holds the set point at no flow, shape (C, K)."""
    head = required_head(of, np.zeros(draw.flow.shape), draw.aged, draw.shift)
    shutoff = np.array([parallel(of, legs, mask).shutoff_head for mask in masks], dtype=np.float64)
    return np.asarray(np.sqrt(np.maximum(head, 0.0)[:, None] / shutoff), dtype=np.float64)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class PreferredFlows:
    """Flows between which all units of a combination lie in their preferred region, (K, 3).

    Along the control curve without fire; nan where there are none within the speed limits or
    the best-efficiency point of a unit is not known.
    """

    start: Floats  # [m3/s]
    end: Floats  # [m3/s]


def preferred_flows(
    of: LoweredSet, legs: Sequence[LegCurve], masks: Sequence[Mask], aged: bool, shift: Floats
) -> PreferredFlows:
    """Return where combinations enter and leave their preferred region, per supply state.

    Parameters
    ----------
    of : LoweredSet
        The set.
    legs : sequence of LegCurve
        Leg of each unit.
    masks : sequence of Mask, length K
        Combinations.
    aged : bool
        Whether the pipes are aged.
    shift : ndarray, shape (3,)
        Shifts of the supply's curve. [Pa]
    """
    units = [parallel(of, legs, mask) for mask in masks]
    y = np.array([_region_heads(of, legs, mask) for mask in masks]).reshape(len(masks), 2)
    x = np.stack([one.total(heads) for one, heads in zip(units, y, strict=True)]) if units else y
    known = np.isfinite(y)[:, :, None] & np.isfinite(shift)
    # [K, start/end, state]
    heads = np.where(known, np.nan_to_num(y, nan=1.0)[:, :, None], np.nan)
    over = np.broadcast_to(x[:, :, None], heads.shape)
    shifts = np.broadcast_to(np.nan_to_num(shift), heads.shape)
    low, high = of.control.lowest_speed, of.control.highest_speed

    def asked(speed: Floats) -> Floats:
        return required_head(of, speed * np.nan_to_num(over), aged, shifts) / speed**2 - heads

    at_low, at_high = asked(np.full(heads.shape, low)), asked(np.full(heads.shape, high))
    speed = falling_root(
        lambda s: (asked(s), (asked(s * (1.0 + SLOPE_STEP)) - asked(s)) / (s * SLOPE_STEP)),
        np.full(heads.shape, low), np.full(heads.shape, high),
    )  # fmt: skip
    flow = speed * over
    # where a speed limit comes before the end of the region, the limit is the end of the range
    too_slow, too_fast = at_low[:, 0] < 0, at_high[:, 1] > 0
    start, end = flow[:, 0], flow[:, 1]
    if too_slow.any():
        start = np.where(too_slow, _flows_at_speed(of, units, low, aged, shift), start)
    if too_fast.any():
        end = np.where(too_fast, _flows_at_speed(of, units, high, aged, shift), end)
    empty = ~(end > start)
    return PreferredFlows(start=np.where(empty, np.nan, start), end=np.where(empty, np.nan, end))


def _region_heads(of: LoweredSet, legs: Sequence[LegCurve], mask: Mask) -> tuple[float, float]:
    """Return y where the last unit enters its preferred region and where the first leaves it."""
    enters, leaves = [], []
    for i in mask:
        slot, leg = of.slots[i], legs[of.slots[i].unit]
        best = slot.facts.best_efficiency_flow
        if best is None:
            return np.nan, np.nan
        low, high = slot.preferred
        enters.append(float(leg.head(max(low * best, leg.first_flow))))
        leaves.append(float(leg.head(min(high * best, leg.last_flow))))
    return min(enters), max(leaves)


def _flows_at_speed(
    of: LoweredSet, units: Sequence[Parallel], speed: float, aged: bool, shift: Floats
) -> Floats:
    """Return the flow at which combinations hold the set point at one speed, (K, 3)."""
    flows = np.full((len(units), shift.size), np.nan)
    shifts = np.nan_to_num(shift)
    for k, one in enumerate(units):

        def gap(y: Floats, one: Parallel = one) -> Floats:
            return required_head(of, speed * one.total(y), aged, shifts) - speed**2 * y

        def with_slope(y: Floats, one: Parallel = one) -> tuple[Floats, Floats]:
            value, step = gap(y, one), SLOPE_STEP * y
            return value, (gap(y - step, one) - value) / -step

        low, high = np.full(shift.shape, one.last_head), np.full(shift.shape, one.peak_head)
        y = falling_root(with_slope, low, high)
        flows[k] = np.where(np.isfinite(shift), speed * one.total(np.nan_to_num(y)), np.nan)
        flows[k][np.isnan(y)] = np.nan
    return flows
