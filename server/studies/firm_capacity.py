"""Firm capacity: the largest flow with each installed unit in turn out.

At low supply, on aged pipes, all other units at top speed; a standby counts as installed. The
flow is found where a requirement is just met or a unit stands at its last row: nameplates are
never added. Everything is read along y = head/speed^2, in which the set's flow is explicit.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from server.hydraulics import affinity
from server.hydraulics.falling_root import falling_root
from server.hydraulics.leg_curve import LegCurve
from server.studies.cases import installed_slots, shifts
from server.studies.duty_result import FirmCapacity
from server.studies.limits import StudyLimits
from server.studies.lowering.lowered import Floats, Growth, LoweredSet
from server.studies.set_ends import SLOPE_STEP, Parallel, parallel
from server.studies.system_heads import Draw, SystemHeads, point_pressures, system_heads

PEAK_HOUR, FIRE = "peak_hour", "maximum_day_fire"


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Requirement:
    """What must be held in one horizon, and the flow that is asked for."""

    name: str
    fire: str | None
    horizon: Growth
    required_flow: float  # [m3/s]
    fire_flow: float  # [m3/s]
    fire_point: int
    least: Floats  # (P,) pressure, -inf where a point asks for none [Pa]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Capacity:
    """Largest flow of some units, without and with what limits the suction side."""

    by_head: float
    by_head_limit: str
    by_all: float
    by_all_limit: str
    share: float  # largest per cent of best-efficiency flow at by_head, as a ratio


NOTHING = Capacity(by_head=0.0, by_head_limit="no_unit", by_all=0.0, by_all_limit="no_unit", share=np.nan)


def firm_capacity(
    of: LoweredSet, limits: StudyLimits, legs: Sequence[LegCurve]
) -> tuple[FirmCapacity, ...]:
    """Return the firm capacity of each horizon for peak hour and for each fire with its demand."""
    found: list[FirmCapacity] = []
    for requirement in requirements(of, limits):
        order = requirement.horizon.order
        if np.isnan(shifts(of, requirement.horizon.low_shift)[0]):
            continue
        installed = installed_slots(of.slots, order)
        known: dict[tuple[int, ...], Capacity] = {}

        def capacity_of(
            some: Sequence[int], known: dict[tuple[int, ...], Capacity] = known,
            requirement: Requirement = requirement,
        ) -> Capacity:  # fmt: skip
            mains = working(of, some)
            kinds = tuple(sorted(of.slots[i].unit for i in mains))
            if kinds not in known:
                known[kinds] = _capacity(of, limits, legs, mains, requirement)
            return known[kinds]

        outs = [(capacity_of([i for i in installed if i != out]), out) for out in installed]
        if not outs:
            continue
        # among equals the last in slot order counts as the one that is out
        worst, out = min(outs, key=lambda one: (one[0].by_all, one[0].by_head, -one[1]))
        by_head = min((one for one, _ in outs), key=lambda one: one.by_head)
        found.append(
            FirmCapacity(
                requirement=requirement.name, fire=requirement.fire,
                horizon=requirement.horizon.id, required_flow=requirement.required_flow,
                by_head=by_head.by_head, by_head_limit=by_head.by_head_limit,
                by_all=worst.by_all, by_all_limit=worst.by_all_limit,
                unit_out=of.slots[out].facts.id, all_running=capacity_of(installed).by_head,
                best_efficiency_share=by_head.share,
                runs_out=_runs_out(of, requirement, worst.by_all),
            )
        )  # fmt: skip
    return tuple(found)


def working(of: LoweredSet, some: Sequence[int]) -> tuple[int, ...]:
    """Return the units that work together: the mains, or the jockeys where there is no main."""
    mains = tuple(i for i in some if of.slots[i].facts.role != "jockey")
    return mains or tuple(some)


def requirements(of: LoweredSet, limits: StudyLimits) -> tuple[Requirement, ...]:
    """Return what each horizon asks, as far as its demand is entered."""
    normal, rows = _normal_pressures(of, limits), []
    for horizon in of.growth:
        if horizon.peak_hour is not None:
            rows.append(
                Requirement(name=PEAK_HOUR, fire=None, horizon=horizon,
                            required_flow=horizon.peak_hour, fire_flow=0.0, fire_point=-1,
                            least=normal)
            )  # fmt: skip
        for fire, domestic, flow, point in horizon.fires:
            rows.append(
                Requirement(name=FIRE, fire=fire, horizon=horizon, required_flow=domestic + flow,
                            fire_flow=flow, fire_point=point,
                            least=_fire_pressures(of, limits, point))
            )  # fmt: skip
    return tuple(rows)


def _normal_pressures(of: LoweredSet, limits: StudyLimits) -> Floats:
    """Return the least pressure of each point; a hydrant asks for none unless it is typed."""
    least = []
    for point in of.points.facts:
        default = -np.inf if point.role == "hydrant" else limits.service_pressure
        least.append(default if point.required_pressure is None else point.required_pressure)
    return np.array(least, dtype=np.float64)


def _fire_pressures(of: LoweredSet, limits: StudyLimits, flowing: int) -> Floats:
    """Return the residual at the operating hydrant and the fire minimum at all other points."""
    least = []
    for i, point in enumerate(of.points.facts):
        typed = point.residual_pressure if i == flowing else point.fire_pressure
        default = limits.hydrant_residual if i == flowing else limits.fire_pressure
        least.append(default if typed is None else typed)
    return np.array(least, dtype=np.float64)


def _capacity(
    of: LoweredSet, limits: StudyLimits, legs: Sequence[LegCurve], mains: tuple[int, ...],
    requirement: Requirement,
) -> Capacity:  # fmt: skip
    """Return the largest flow of some units at top speed that meets a requirement."""
    if not mains:
        return NOTHING
    units = parallel(of, legs, mains)
    speed = of.control.highest_speed
    points = len(of.points.facts)

    def excess(y: Floats) -> Floats:
        """Return pressure over what is asked, rising with y: points, connection, gauge, NPSH."""
        flow = speed * units.total(y)
        heads = _heads(of, requirement, flow)
        entry = heads.suction_grade + speed**2 * y - heads.main_loss
        pressure = point_pressures(of, entry, heads.zone_loss)[1]
        over = np.empty(y.shape)
        over[:points] = np.diagonal(pressure[:points]) - requirement.least
        weight = of.water.weight
        over[points] = weight * (heads.supply_grade[points] - of.supply.connection_level) - limits.suction_main
        over[points + 1] = (
            weight * (heads.suction_grade[points + 1] - of.supply.suction_gauge_level) - limits.suction_gauge
        )
        over[points + 2] = weight * _npsh_excess(of, limits, legs, mains, y[points + 2], heads.suction_grade[points + 2])
        return over

    names = [f"point:{p.id}" for p in of.points.facts] + ["connection", "suction_gauge", "npsh"]
    flows = _limit_flows(excess, units, speed, len(names))
    end = speed * float(units.total(np.array(units.last_head)))
    head = _least(end, flows[:points], names[:points])
    everything = _least(end, flows, names)
    share = _share_at(of, legs, mains, units, head[0] / speed)
    return Capacity(
        by_head=head[0], by_head_limit=head[1], by_all=everything[0], by_all_limit=everything[1],
        share=share,
    )  # fmt: skip


def _heads(of: LoweredSet, requirement: Requirement, flow: Floats) -> SystemHeads:
    """Return the grades at low supply on aged pipes, the fire first served."""
    aged = of.main.knows("aged") and of.suction_line.knows("aged")
    fire = np.minimum(flow, requirement.fire_flow)
    draw = Draw(
        domestic=flow - fire, fire=fire, fire_point=requirement.fire_point, aged=aged,
        shift=np.full(flow.shape, shifts(of, requirement.horizon.low_shift)[0]),
    )  # fmt: skip
    return system_heads(of, draw)


def _npsh_excess(
    of: LoweredSet, limits: StudyLimits, legs: Sequence[LegCurve], mains: Sequence[int], y: float,
    suction_grade: float,
) -> float:  # fmt: skip
    """Return the least NPSH available over what criteria ask, nan where it is not known [m]."""
    speed, water = of.control.highest_speed, of.water
    least = np.inf
    for unit in {of.slots[i].unit for i in mains}:
        one = of.units[unit]
        flow = speed * float(legs[unit].largest_flow(y))
        required = float(
            affinity.npsh_required(one.curve, flow, speed=speed, exponent=one.npsh_exponent)
        )
        loss = one.suction_coefficient * flow * flow
        vapour = (water.atmosphere - water.vapour_pressure) / water.weight
        available = vapour + suction_grade - loss - of.eye_level
        asked = max(limits.npsh_ratio * required, required + limits.npsh_margin)
        least = min(least, available - asked) if asked == asked else np.nan
    return least


def _limit_flows(
    excess: Callable[[Floats], Floats], units: Parallel, speed: float, size: int
) -> Floats:
    """Return the flow at which each excess passes zero; inf where it never binds, 0 where always."""
    low, high = np.full(size, units.last_head), np.full(size, units.peak_head)

    def short(y: Floats) -> tuple[Floats, Floats]:
        value, step = -np.nan_to_num(excess(y), nan=np.inf, posinf=np.inf), SLOPE_STEP * y
        value = np.maximum(value, -1e300)
        back = np.maximum(-np.nan_to_num(excess(y - step), nan=np.inf, posinf=np.inf), -1e300)
        return value, (value - back) / step

    at_end, at_shut = short(low)[0], short(high)[0]
    y = falling_root(short, low, high)
    flows = np.where(np.isnan(y), 0.0, speed * units.total(np.nan_to_num(y, nan=units.peak_head)))
    return np.where(at_end <= 0, np.inf, np.where(at_shut > 0, 0.0, flows))


def _least(end: float, flows: Floats, names: Sequence[str]) -> tuple[float, str]:
    """Return the smallest limit and its name; the end of the curve where none comes before."""
    at = int(np.argmin(flows))
    return (float(flows[at]), names[at]) if flows[at] < end else (end, "curve_end")


def _share_at(
    of: LoweredSet, legs: Sequence[LegCurve], mains: Sequence[int], units: Parallel, over: float
) -> float:
    """Return the largest share of best-efficiency flow at a flow over speed of the set."""
    y = falling_root(
        lambda y: (units.total(y) - over, (units.total(y * (1 + SLOPE_STEP)) - units.total(y)) / (y * SLOPE_STEP)),
        np.array(units.last_head), np.array(units.peak_head),
    )  # fmt: skip
    shares = [np.nan]
    for i in mains:
        best = of.slots[i].facts.best_efficiency_flow
        shares.append(np.nan if best is None else float(legs[of.slots[i].unit].largest_flow(y)) / best)
    known = [share for share in shares if share == share]
    return max(known) if len(known) == len(mains) else np.nan


def _runs_out(of: LoweredSet, requirement: Requirement, capacity: float) -> int | None:
    """Return the year in which the demand passes a capacity, growing linearly between horizons."""
    path = []
    for horizon in of.growth:
        asked = horizon.peak_hour
        if requirement.name == FIRE:
            fires = {fire: domestic + flow for fire, domestic, flow, _ in horizon.fires}
            asked = fires.get(requirement.fire or "")
        if asked is not None and horizon.year is not None:
            path.append((horizon.year, asked))
    path.sort()
    if path and path[0][1] > capacity:
        return path[0][0]
    for (year, asked), (later, more) in zip(path, path[1:], strict=False):
        if more > capacity:
            return int(year + (capacity - asked) / (more - asked) * (later - year))
    return None
