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
from server.studies.tank_states import tank_way

LARGE = 1e12  # stands for "never binds" while a root is sought [Pa]
TANK_LEVEL, FULL = "tank_level", 2  # the limit of a filling station; place of the top level
SUCTION_LIMITS = ("connection", "suction_gauge", "npsh")


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Asked:
    """What M states must hold; they are paired with the M combinations of units."""

    fire_flow: Floats  # (M,) [m3/s]
    fire_point: Floats  # (M,) index into points, -1 none
    shift: Floats  # (M,) of the supply's low state [Pa]
    least: Floats  # (M, P) pressure, -inf where a point asks for none [Pa]
    drawn: Floats  # (M,) from the zone while its tank is filled [m3/s]


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
    speed = of.control.highest_speed
    zone = [TANK_LEVEL] if of.floats else [f"point:{p.id}" for p in of.points.facts]
    names, points = [*zone, *SUCTION_LIMITS], len(zone)
    shape = (units.count.shape[0], len(names))

    def short(y: Floats) -> Floats:
        """Return what is asked less what is had; a limit not known never binds."""
        return -np.nan_to_num(_excess(of, limits, units, asked, y), nan=LARGE, posinf=LARGE)

    low = np.array(np.broadcast_to(units.last_head[:, None], shape))
    high = np.array(np.broadcast_to(units.peak_head[:, None], shape))
    # without a root between, the limit binds at once (y at the peak) or never (at the last row)
    found = falling_root(short, low, high)
    is_asked = np.ones(shape, dtype=np.bool_)
    if not of.floats:
        is_asked[:, :points] = np.isfinite(asked.least)
    if of.supply.kind == "tank":
        # a tank is no main: nobody else draws from it, and its level is its own limit
        is_asked[:, points : points + 2] = False
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
        if of.control.kind == "held_flow":
            head, head_limit = _at_most(head, head_limit, of.control.flow)
            everything, all_limit = _at_most(everything, all_limit, of.control.flow)
        y_head = float(units.last_head[m]) if at is None else float(y[m, at])
        rows.append(
            Capacity(by_head=head, by_head_limit=head_limit, by_all=everything,
                     by_all_limit=all_limit,
                     not_counted=tuple(names[i] for i in np.flatnonzero(unknown[m])),
                     share=_largest_share(units, m, y_head))
        )  # fmt: skip
    return tuple(rows)


def _at_most(flow: float, limit: str, held: float) -> tuple[float, str]:
    """Return a capacity under a control that holds a flow."""
    return (held, "held_flow") if held < flow else (flow, limit)


def _excess(
    of: LoweredSet, limits: StudyLimits, units: CommonSpeed, asked: Asked, y: Floats
) -> Floats:
    """Return pressure over what is asked, (M, L): points or tank, main, gauge, NPSH [Pa]."""
    speed, weight = of.control.highest_speed, of.water.weight
    each = units.kind_flows(y)
    flow = speed * units.sum_of(each)
    head = speed**2 * y - of.control.valve_loss * flow * flow
    points = y.shape[1] - len(SUCTION_LIMITS)
    over = np.empty(y.shape)
    if of.floats:
        heads = _tank_heads(of, asked, flow)
        over[:, :points] = (weight * (head - heads.required_head))[:, :points]
    else:
        heads = _heads(of, asked, flow)
        entry = (heads.suction_grade + head - heads.main_loss)[:, :points]
        pressure = point_pressures(of, entry, heads.zone_loss[:, :points])[1]
        over[:, :points] = np.diagonal(pressure, axis1=1, axis2=2) - asked.least
    connection = heads.supply_grade[:, points] - of.supply.connection_level
    over[:, points] = weight * connection - limits.suction_main
    gauge = heads.suction_grade[:, points + 1] - of.supply.suction_gauge_level
    over[:, points + 1] = weight * gauge - limits.suction_gauge
    if of.supply.kind == "tank":
        over[:, points : points + 2] = np.nan
    npsh = _npsh_excess(
        of, limits, units, [x[:, points + 2] for x in each], heads.suction_grade[:, points + 2]
    )
    over[:, points + 2] = weight * npsh
    return over


def _tank_heads(of: LoweredSet, asked: Asked, flow: Floats) -> SystemHeads:
    """Return the grades on the way to the full tank, at low supply on aged pipes."""
    number = asked.drawn.size
    draw = Draw(
        domestic=asked.drawn, fire=np.zeros(number), fire_point=-1,
        aged=np.ones(number, dtype=np.bool_), shift=asked.shift,
        way=np.zeros(number, dtype=np.intp),
    )  # fmt: skip
    way = tank_way(of, draw, np.full(number, FULL))
    case = np.broadcast_to(np.arange(number)[:, None], flow.shape)
    grades = way.grades(flow, case)
    return SystemHeads(
        supply_grade=grades.supply_grade, suction_grade=grades.suction_grade,
        main_loss=grades.before_draw, zone_loss=np.zeros((*flow.shape, 0)),
        required_head=grades.required_head,
    )  # fmt: skip


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
        # beyond the set's own kinds stand the same ones with weaker curves
        one, flow = of.units[t % len(of.units)], of.control.highest_speed * x
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
