"""The largest flow of some units at top speed that still meets a requirement.

Read along y = head/speed^2, in which the flow of the set is explicit: as y rises the flow falls
and every pressure rises, so each limit is one root, and the smallest flow over the limits
governs. Nameplates are never added.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from server.hydraulics import affinity
from server.hydraulics.falling_root import falling_root
from server.studies.limits import StudyLimits
from server.studies.lowering.lowered import Flags, Floats, LoweredSet
from server.studies.set_ends import CommonSpeed
from server.studies.system_heads import Draw, SystemHeads, point_pressures, system_heads

LARGE = 1e12  # stands for "never binds" while a root is sought [Pa]
SUCTION_LIMITS = ("connection", "suction_gauge", "npsh")


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Asked:
    """What M states must hold; they are paired with the M combinations of units."""

    fire_flow: Floats  # (M,) [m3/s]
    fire_point: Floats  # (M,) index into points, -1 none
    shift: Floats  # (M,) of the supply's low state [Pa]
    least: Floats  # (M, P) pressure, -inf where a point asks for none [Pa]


@dataclass(frozen=True, slots=True, kw_only=True)
class Capacity:
    """Largest flow of some units, without and with what limits the suction side."""

    by_head: float  # [m3/s]
    by_head_limit: str
    by_all: float  # [m3/s]
    by_all_limit: str
    not_counted: tuple[str, ...]  # limits for which a figure is absent
    share: float  # largest flow over best-efficiency flow at by_head, nan when not known


NO_UNIT = Capacity(by_head=0.0, by_head_limit="no_unit", by_all=0.0, by_all_limit="no_unit",
                   not_counted=(), share=np.nan)  # fmt: skip


def capacities(
    of: LoweredSet, limits: StudyLimits, units: CommonSpeed, asked: Asked
) -> tuple[Capacity, ...]:
    """Return the capacity of M combinations, each for what is asked of it."""
    speed, points = of.control.highest_speed, len(of.points.facts)
    names = [f"point:{p.id}" for p in of.points.facts] + list(SUCTION_LIMITS)
    shape = (units.count.shape[0], len(names))

    def short(y: Floats) -> Floats:
        """Return what is asked less what is had; a limit not known never binds."""
        return -np.nan_to_num(_excess(of, limits, units, asked, y), nan=LARGE, posinf=LARGE)

    low = np.array(np.broadcast_to(units.last_head[:, None], shape))
    high = np.array(np.broadcast_to(units.peak_head[:, None], shape))
    # without a root between, the limit binds at once (y at the peak) or never (at the last row)
    found = falling_root(short, low, high)
    is_asked = np.isfinite(np.pad(asked.least, ((0, 0), (0, len(SUCTION_LIMITS)))))
    unknown = is_asked & (found.at_low <= -LARGE)
    y, at_end, at_shut = found.root, found.at_low, found.at_high
    y = np.where(at_shut > 0, high, np.where(at_end <= 0, low, y))
    flow = speed * units.total(y)
    flow[at_shut > 0] = 0.0
    end = speed * units.total(units.last_head)
    free = at_end <= 0
    rows = []
    for m in range(shape[0]):
        head, head_limit, at = _least(end[m], flow[m, :points], free[m, :points], names)
        everything, all_limit, _ = _least(end[m], flow[m], free[m], names)
        y_head = float(units.last_head[m]) if at is None else float(y[m, at])
        rows.append(
            Capacity(by_head=head, by_head_limit=head_limit, by_all=everything,
                     by_all_limit=all_limit,
                     not_counted=tuple(names[i] for i in np.flatnonzero(unknown[m])),
                     share=_largest_share(units, m, y_head))
        )  # fmt: skip
    return tuple(rows)


def _excess(
    of: LoweredSet, limits: StudyLimits, units: CommonSpeed, asked: Asked, y: Floats
) -> Floats:
    """Return pressure over what is asked, (M, P + 3): points, connection, gauge, NPSH [Pa]."""
    speed, points, weight = of.control.highest_speed, len(of.points.facts), of.water.weight
    each = units.kind_flows(y)
    heads = _heads(of, asked, speed * units.sum_of(each))
    entry = (heads.suction_grade + speed**2 * y - heads.main_loss)[:, :points]
    pressure = point_pressures(of, entry, heads.zone_loss[:, :points])[1]
    over = np.empty(y.shape)
    over[:, :points] = np.diagonal(pressure, axis1=1, axis2=2) - asked.least
    connection = heads.supply_grade[:, points] - of.supply.connection_level
    over[:, points] = weight * connection - limits.suction_main
    gauge = heads.suction_grade[:, points + 1] - of.supply.suction_gauge_level
    over[:, points + 1] = weight * gauge - limits.suction_gauge
    npsh = _npsh_excess(
        of, limits, units, [x[:, points + 2] for x in each], heads.suction_grade[:, points + 2]
    )
    over[:, points + 2] = weight * npsh
    return over


def _heads(of: LoweredSet, asked: Asked, flow: Floats) -> SystemHeads:
    """Return the grades at low supply on aged pipes, the fire served first."""
    fire = np.minimum(flow, asked.fire_flow[:, None])
    draw = Draw(
        domestic=flow - fire, fire=fire, fire_point=asked.fire_point[:, None] + 0 * flow,
        aged=True, shift=asked.shift[:, None] + 0 * flow,
    )  # fmt: skip
    return system_heads(of, draw)


def _npsh_excess(
    of: LoweredSet,
    limits: StudyLimits,
    units: CommonSpeed,
    each: Sequence[Floats],
    suction_grade: Floats,
) -> Floats:
    """Return the least NPSH available over what criteria ask, nan where it is not known [m]."""
    least = np.full(suction_grade.shape, np.inf)
    for t, x in enumerate(each):
        if not np.any(units.count[:, t]):
            continue
        one, flow = of.units[t], of.control.highest_speed * x
        speed = of.control.highest_speed * units.relative[t]
        required = affinity.npsh_required(
            one.curve, flow, speed=speed, exponent=one.npsh_exponent
        )
        available = of.npsh_available(suction_grade, one.suction_coefficient * flow * flow)
        asked = np.maximum(limits.npsh_ratio * required, required + limits.npsh_margin)
        least = np.where(units.count[:, t] > 0, np.minimum(least, available - asked), least)
    return least


def _least(
    end: float, flow: Floats, free: Flags, names: Sequence[str]
) -> tuple[float, str, int | None]:
    """Return the smallest limit, its name and place; the end of the curve if none is before."""
    before = np.where(free, np.inf, flow)
    at = int(np.argmin(before))
    return (
        (float(before[at]), names[at], at)
        if before[at] < end
        else (float(end), "curve_end", None)
    )


def _largest_share(units: CommonSpeed, row: int, y: float) -> float:
    """Return the largest share of best-efficiency flow among the units of one combination."""
    shares = []
    for leg, count, own in zip(units.legs, units.count[row], units.relative, strict=True):
        if count > 0:
            best, x = leg.pump.best, float(leg.largest_flow(y / own**2))
            shares.append(np.nan if best is None else x / best.flow)
    return float(np.max(shares))
