"""What the supply gives against draw, in each of its states, with its tests."""

from dataclasses import dataclass

import numpy as np

from server.hydraulics.supply import FlowTestSupply
from server.hydraulics.water import GRAVITY
from server.station.station import Station
from server.studies.duty_result import DutyResult, Missing
from server.studies.limits import limits_of
from server.studies.lowering import supply as lowered_supply
from server.studies.lowering.lowered import Floats, Supply
from server.studies.lowering.needs import ABSENT, Needs
from server.studies.shapes import SupplyState

READINGS = 101
LEVEL = "level_whatever_is_drawn"  # why a tank has no curve


@dataclass(frozen=True, slots=True)
class FlowTestPoint:
    """A flow test as two points of the curve, at the ground level of the connection."""

    id: str
    title: str
    made_at: str
    basis: bool
    flow: float  # [m3/s]
    static_pressure: float  # gauge [Pa]
    residual_pressure: float  # gauge [Pa]


@dataclass(frozen=True, slots=True, eq=False)
class SupplyCurve:
    """Gauge pressure at the connection against draw; nan for a state not stated."""

    flow: Floats  # (n,) [m3/s]
    pressure: Floats  # (3, n) low, normal, high [Pa]
    limit: float  # least pressure of the supplying main [Pa]
    flow_at_limit: Floats  # (3,) nan when the limit is not reached on the curve [m3/s]
    tests: tuple[FlowTestPoint, ...]
    tested_flow: float | None  # largest flow that was tested [m3/s]
    demands: tuple[
        tuple[str, SupplyState, float, float], ...
    ]  # scenario, state, flow, pressure
    level: float  # of the connection [m]


@dataclass(frozen=True, slots=True)
class NoSupplyCurve:
    """Why there is no curve: the fields that stand in the way."""

    missing: tuple[Missing, ...]


def supply_curve(station: Station, result: DutyResult | None) -> SupplyCurve | NoSupplyCurve:
    """Return the supply's curve; it needs no pump.

    Parameters
    ----------
    station : Station
        The document.
    result : DutyResult or None
        Marks what its scenarios draw, where a set is solved.
    """
    needs = Needs()
    water = lowered_supply.water(station.site, needs)
    if station.supply.kind == "tank":
        return NoSupplyCurve((Missing("/supply/kind", LEVEL),))
    source = lowered_supply.supply(station, water, needs)
    if source is None or needs.stops or not np.isfinite(source.connection_level):
        missing = tuple(needs.stops) or (Missing("/supply/connection_level", ABSENT),)
        return NoSupplyCurve(missing)
    limit = limits_of(station).suction_main
    tests = _tests(station, source)
    demands = _demands(result)
    # as far as the largest demand too where it finds no water, and so no pressure
    asked = [] if result is None else [float(q) for q in result.demand if np.isfinite(q)]
    largest = max([0.02, *(1.1 * t.flow for t in tests), *(1.12 * q for q in asked)])
    flow = np.linspace(0.0, largest, READINGS)
    pressure = np.stack([_pressure(source, flow, shift) for shift in source.shift])
    return SupplyCurve(
        flow=flow,
        pressure=pressure,
        limit=limit,
        flow_at_limit=np.array([_at_limit(source, shift, limit) for shift in source.shift]),
        tests=tests,
        tested_flow=max((t.flow for t in tests), default=None),
        demands=demands,
        level=source.connection_level,
    )


def _pressure(source: Supply, flow: Floats, shift: float) -> Floats:
    """Return the pressure at the connection, nan below a vacuum: there is no water then."""
    grade = source.grade(flow, shift)
    pressure = (grade - source.connection_level) * source.water.density * GRAVITY
    return np.where(pressure < source.water.lowest_pressure, np.nan, pressure)


def _at_limit(source: Supply, shift: float, limit: float) -> float:
    """Return the draw at which the pressure falls to the limit; nan if it never does."""
    if not np.isfinite(shift) or not isinstance(source.source, FlowTestSupply):
        return float("nan")
    moved = (
        (source.connection_level - source.source.gauge_level) * source.water.density * GRAVITY
    )
    flow = (
        float(source.source.flow_at(limit + moved, shift_pressure=shift)) + source.draw_in_test
    )
    return flow if flow > 0 else float("nan")


def _tests(station: Station, source: Supply) -> tuple[FlowTestPoint, ...]:
    """Return the tests that are complete, moved from their gauge to the connection's level."""
    points = []
    for test in station.supply.flow_tests if station.supply.kind == "main" else ():
        needed = (
            test.gauge_level,
            test.static_pressure,
            test.residual_pressure,
            test.test_flow,
        )
        if any(quantity is None for quantity in needed):
            continue
        level, static, residual, flow = (q.si for q in needed if q is not None)
        moved = (level - source.connection_level) * source.water.density * GRAVITY
        draw = 0.0 if test.station_draw is None else test.station_draw.si
        points.append(
            FlowTestPoint(
                test.id,
                test.title,
                test.made_at or "",
                test.use == "basis",
                flow + draw,
                static + moved,
                residual + moved,
            )
        )
    return tuple(points)


def _demands(result: DutyResult | None) -> tuple[tuple[str, SupplyState, float, float], ...]:
    if result is None:
        return ()
    return tuple(
        (
            case.scenario,
            case.supply,
            float(result.demand[i]),
            float(result.connection_pressure[i]),
        )
        for i, case in enumerate(result.cases)
        if result.shown[i]
        and np.isfinite(result.demand[i])
        and np.isfinite(result.connection_pressure[i])
    )
