"""Firm capacity: the largest flow with each installed unit in turn out.

At low supply, on aged pipes, all other units at top speed; a standby counts as installed.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from server.studies.capacity import NO_UNIT, Asked, Capacity, capacities
from server.studies.cases import installed_slots, shifts
from server.studies.duty_result import FirmCapacity
from server.studies.limits import StudyLimits
from server.studies.lowering.lowered import Floats, Growth, LoweredSet
from server.studies.set_ends import CommonSpeed, relative_speeds

PEAK_HOUR, FIRE = "peak_hour", "maximum_day_fire"
SAME = 1e-6  # of a capacity: what roots are sought to, with room
Counts = tuple[int, ...]  # how many of each unit


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Requirement:
    """What must be held in one horizon, and the flow that is asked for."""

    name: str
    fire: str | None
    horizon: Growth
    required_flow: float  # [m3/s]
    fire_flow: float  # [m3/s]
    fire_point: int
    shift: float  # of the supply's low state [Pa]
    least: Floats  # (P,) pressure, -inf where a point asks for none [Pa]

    @property
    def physics(self) -> tuple[object, ...]:
        """Return what the capacity depends on: horizons that share it are solved once."""
        return (self.fire_flow, self.fire_point, self.shift, tuple(self.least))


def firm_capacity(of: LoweredSet, limits: StudyLimits) -> tuple[FirmCapacity, ...]:
    """Return the firm capacity of each horizon for peak hour and for each fire."""
    if not of.route.knows("aged"):
        return ()
    asked = [one for one in requirements(of, limits) if not np.isnan(one.shift)]
    solved = _solve(of, limits, asked)
    found = []
    for one in asked:
        installed = installed_slots(of.slots, one.horizon.order)
        if not installed:
            continue

        def left(some: Sequence[int], one: Requirement = one) -> Capacity:
            return solved[working(of, some), one.physics]

        without = [(left([i for i in installed if i != out]), out) for out in installed]
        worst, out = worst_out(without)
        by_head = min((pair[0] for pair in without), key=lambda capacity: capacity.by_head)
        not_counted = dict.fromkeys(name for each, _ in without for name in each.not_counted)
        found.append(
            FirmCapacity(
                requirement=one.name,
                fire=one.fire,
                horizon=one.horizon.id,
                required_flow=one.required_flow,
                by_head=by_head.by_head,
                by_head_limit=by_head.by_head_limit,
                by_all=worst.by_all,
                by_all_limit=worst.by_all_limit,
                unit_out=of.slots[out].facts.id,
                all_running=left(installed).by_head,
                best_efficiency_share=by_head.share,
                runs_out=_runs_out(of, one, worst.by_all),
                not_counted=tuple(not_counted),
            )
        )
    return tuple(found)


def worst_out(without: Sequence[tuple[Capacity, int]]) -> tuple[Capacity, int]:
    """Return the least capacity and the unit that is out: by all limits, then by head.

    Where the suction side limits them all, capacities differ by rounding only: the choice goes
    on by head, and among equals the last in slot order counts as the one that is out.
    """
    least = min(capacity.by_all for capacity, _ in without)
    left = [pair for pair in without if pair[0].by_all <= least * (1 + SAME)]
    least = min(capacity.by_head for capacity, _ in left)
    left = [pair for pair in left if pair[0].by_head <= least * (1 + SAME)]
    return max(left, key=lambda pair: pair[1])


def _solve(
    of: LoweredSet, limits: StudyLimits, asked: Sequence[Requirement]
) -> dict[tuple[Counts, tuple[object, ...]], Capacity]:
    """Return every capacity that is looked up, solved side by side."""
    jobs: dict[tuple[Counts, tuple[object, ...]], Requirement] = {}
    for one in asked:
        installed = installed_slots(of.slots, one.horizon.order)
        for some in [installed, *([i for i in installed if i != out] for out in installed)]:
            jobs.setdefault((working(of, some), one.physics), one)
    solved = {key: NO_UNIT for key in jobs if not any(key[0])}
    rest = {key: one for key, one in jobs.items() if any(key[0])}
    if not rest:
        return solved
    legs = tuple(unit.leg for unit in of.units)
    units = CommonSpeed(
        legs=legs,
        count=np.array([n for n, _ in rest], dtype=np.float64),
        relative=relative_speeds(of),
    )
    rows = tuple(rest.values())
    together = Asked(
        fire_flow=np.array([one.fire_flow for one in rows]),
        fire_point=np.array([one.fire_point for one in rows], dtype=np.float64),
        shift=np.array([one.shift for one in rows]),
        least=np.stack([one.least for one in rows]),
    )
    solved.update(zip(rest, capacities(of, limits, units, together), strict=True))
    return solved


def working(of: LoweredSet, some: Sequence[int]) -> Counts:
    """Return the units that work together: the mains, or the jockeys where there is no main."""
    mains = [i for i in some if of.slots[i].facts.role != "jockey"] or list(some)
    units = [of.slots[i].unit for i in mains]
    return tuple(units.count(t) for t in range(len(of.units)))


def requirements(of: LoweredSet, limits: StudyLimits) -> tuple[Requirement, ...]:
    """Return what each horizon asks, as far as its demand is entered."""
    normal, rows = _normal_pressures(of, limits), []
    for horizon in of.growth:
        shift = float(shifts(of, horizon.low_shift)[0])
        if horizon.peak_hour is not None:
            rows.append(
                Requirement(
                    name=PEAK_HOUR,
                    fire=None,
                    horizon=horizon,
                    required_flow=horizon.peak_hour,
                    fire_flow=0.0,
                    fire_point=-1,
                    shift=shift,
                    least=normal,
                )
            )
        for fire, domestic, flow, point in horizon.fires:
            rows.append(
                Requirement(
                    name=FIRE,
                    fire=fire,
                    horizon=horizon,
                    required_flow=domestic + flow,
                    fire_flow=flow,
                    fire_point=point,
                    shift=shift,
                    least=_fire_pressures(of, limits, point),
                )
            )
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


def _runs_out(of: LoweredSet, requirement: Requirement, capacity: float) -> int | None:
    """Return the year in which the demand, linear between horizons, passes a capacity."""
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
