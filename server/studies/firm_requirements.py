"""What firm capacity is asked of: peak hour, maximum day with fire, the refill of a tank."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from server.studies.capacity import Asked
from server.studies.cases import shifts
from server.studies.limits import StudyLimits
from server.studies.lowering.lowered import Floats, Growth, LoweredSet

PEAK_HOUR, FIRE, TANK_REFILL = "peak_hour", "maximum_day_fire", "tank_refill"
DAY = 86400.0  # [s]


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
    drawn: float = 0.0  # from the zone while its tank is filled [m3/s]

    @property
    def physics(self) -> tuple[object, ...]:
        """Return what the capacity depends on: horizons that share it are solved once."""
        return (self.fire_flow, self.fire_point, self.shift, tuple(self.least), self.drawn)


def asked_of(rows: Sequence[Requirement]) -> Asked:
    """Return requirements side by side."""
    return Asked(
        fire_flow=np.array([one.fire_flow for one in rows]),
        fire_point=np.array([one.fire_point for one in rows], dtype=np.float64),
        shift=np.array([one.shift for one in rows]),
        least=np.stack([one.least for one in rows]),
        drawn=np.array([one.drawn for one in rows]),
    )


def requirements(of: LoweredSet, limits: StudyLimits) -> tuple[Requirement, ...]:
    """Return what each horizon asks, as far as its demand is entered.

    A tank that floats on the zone levels the hours out and holds the fire: there the maximum
    day is to be pumped in the hours of the criteria, into the full tank.
    """
    return _refills(of, limits) if of.floats else _closed(of)


def _refills(of: LoweredSet, limits: StudyLimits) -> tuple[Requirement, ...]:
    assert of.tank is not None
    # drawn at the tank itself, a demand does not change what the pumps meet
    part_way = bool(np.any(of.tank.before_draw < 1.0))
    if np.isnan(of.tank.levels[-1]) or not limits.tank_hours > 0:
        return ()
    return tuple(
        Requirement(
            name=TANK_REFILL,
            fire=None,
            horizon=horizon,
            required_flow=horizon.maximum_day * DAY / limits.tank_hours,
            fire_flow=0.0,
            fire_point=-1,
            shift=float(shifts(of, horizon.low_shift)[0]),
            least=np.full(len(of.points.facts), -np.inf),
            drawn=horizon.maximum_day if part_way else 0.0,
        )
        for horizon in of.growth
        if horizon.maximum_day is not None
    )


def _closed(of: LoweredSet) -> tuple[Requirement, ...]:
    points, rows = of.points, []
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
                    least=points.least_normal,
                )
            )
        for fire, domestic, flow, point in horizon.fires:
            flowing = np.arange(len(points.facts)) == point
            rows.append(
                Requirement(
                    name=FIRE,
                    fire=fire,
                    horizon=horizon,
                    required_flow=domestic + flow,
                    fire_flow=flow,
                    fire_point=point,
                    shift=shift,
                    least=np.where(flowing, points.least_residual, points.least_fire),
                )
            )
    return tuple(rows)


def runs_out(of: LoweredSet, requirement: Requirement, capacity: float) -> int | None:
    """Return the year in which the demand, linear between horizons, passes a capacity."""
    path = []
    for horizon in of.growth:
        asked = horizon.peak_hour
        if requirement.name == FIRE:
            fires = {fire: domestic + flow for fire, domestic, flow, _ in horizon.fires}
            asked = fires.get(requirement.fire or "")
        if requirement.name == TANK_REFILL:
            day, own = horizon.maximum_day, requirement.horizon.maximum_day
            # the hours of the criteria are the same in every year
            per_day = requirement.required_flow / own if own else 1.0
            asked = None if day is None else day * per_day
        if asked is not None and horizon.year is not None:
            path.append((horizon.year, asked))
    path.sort()
    if path and path[0][1] > capacity:
        return path[0][0]
    for (year, asked), (later, more) in zip(path, path[1:], strict=False):
        if more > capacity:
            return int(year + (capacity - asked) / (more - asked) * (later - year))
    return None
