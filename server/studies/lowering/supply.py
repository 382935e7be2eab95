"""Water and supply from the document to the physics."""

import numpy as np

from server.hydraulics.errors import SupplyRefused
from server.hydraulics.supply import FixedGradeSupply, FlowTestSupply, fit_flow_tests
from server.hydraulics.tank_levels import tank_levels
from server.hydraulics.water import (
    GRAVITY,
    atmospheric_pressure,
    density,
    kinematic_viscosity,
    vapour_pressure,
)
from server.station.station import Station
from server.station.supply import FlowTest, GradeLine, Site, SupplyTank
from server.studies.lowering.lowered import Bypass, Floats, Supply, Water
from server.studies.lowering.needs import NAN, Needs, si_or_none

FRICTION_TEMPERATURE = 10.0  # default where none is entered, criteria.md [degC]
HIGHEST_TEMPERATURE = 20.0  # default where none is entered [degC]


def water(site: Site, needs: Needs) -> Water:
    """Return the water: friction at the usual temperature, vapour pressure at the highest."""
    path = "/site/water_temperature"
    usual = needs.default(f"{path}/normal", site.water_temperature.normal, FRICTION_TEMPERATURE)
    warm = needs.default(f"{path}/high", site.water_temperature.high, HIGHEST_TEMPERATURE)
    altitude = needs.part("/site/altitude", site.altitude)
    weather = 0.0 if site.weather_allowance is None else site.weather_allowance.si
    return Water(
        density=float(density(usual)),
        kinematic_viscosity=float(kinematic_viscosity(usual)),
        vapour_pressure=float(vapour_pressure(warm)),
        atmosphere=float(atmospheric_pressure(altitude)) - weather
        if altitude == altitude
        else NAN,
    )


def supply(station: Station, of: Water, needs: Needs) -> Supply | None:
    """Return the supply, None when it cannot be had: then `needs` says why."""
    entered = station.supply
    source: FlowTestSupply | FixedGradeSupply | None = None
    shift: Floats = np.full(3, NAN)
    draw, cut_out, outlet, bore = 0.0, NAN, NAN, NAN
    if entered.kind is None:
        needs.stop("/supply/kind")
    elif entered.kind == "tank":
        source, shift, cut_out = _tank(entered.tank, of, needs)
        outlet = needs.part("/supply/tank/outlet_level", entered.tank.outlet_level)
        bore = needs.part("/supply/tank/outlet_bore", entered.tank.outlet_bore)
    elif entered.kind == "main":
        source, draw = _tested_main(entered.flow_tests, needs)
        states = entered.states
        shift = np.array([
            needs.part("/supply/states/low", states.low),
            needs.part("/supply/states/normal", states.normal),
            needs.part("/supply/states/high", states.high),
        ])  # fmt: skip
        if not np.any(np.isfinite(shift)):
            needs.stop("/supply/states/low")
    else:
        source, shift = _grade_line(entered.grade_line, of, needs)
    connection = NAN
    if entered.kind != "tank":
        connection = needs.part("/supply/connection_level", entered.connection_level)
    gauge = needs.part("/site/suction_gauge_level", station.site.suction_gauge_level)
    if source is None or entered.kind is None:
        return None
    return Supply(
        kind=entered.kind, source=source, draw_in_test=draw, shift=shift, water=of,
        connection_level=connection, suction_gauge_level=gauge,
        cut_out=cut_out, outlet_level=outlet, outlet_bore=bore,
    )  # fmt: skip


def _tested_main(
    tests: tuple[FlowTest, ...], needs: Needs
) -> tuple[FlowTestSupply | None, float]:
    """Return the main by its basis test or the fit of several, and the station's draw."""
    basis = [test for test in tests if test.use == "basis"]
    if not basis:
        needs.stop("/supply/flow_tests")
        return None, 0.0
    lowered: list[FlowTestSupply] = []
    for test in basis:
        path = f"/supply/flow_tests/{test.id}"
        level = needs.must(f"{path}/gauge_level", test.gauge_level)
        static = needs.must(f"{path}/static_pressure", test.static_pressure)
        residual = needs.must(f"{path}/residual_pressure", test.residual_pressure)
        flow = needs.must(f"{path}/test_flow", test.test_flow)
        if not np.isfinite(level + static + residual + flow):
            continue
        try:
            lowered.append(
                FlowTestSupply(gauge_level=level, static_pressure=static,
                               residual_pressure=residual, test_flow=flow)
            )  # fmt: skip
        except SupplyRefused as refused:
            field = (
                "test_flow"
                if refused.reason == "test_flow_not_positive"
                else "residual_pressure"
            )
            needs.stop(f"{path}/{field}", refused.reason)
    if len(lowered) < len(basis):
        return None, 0.0
    first_draw = basis[0].station_draw
    draw = 0.0 if first_draw is None else first_draw.si
    return (lowered[0] if len(lowered) == 1 else fit_flow_tests(lowered).supply), draw


def _grade_line(
    entered: GradeLine, of: Water, needs: Needs
) -> tuple[FixedGradeSupply | None, Floats]:
    """Return the line at its normal level or the first stated, and the states as shifts."""
    path = "/supply/grade_line"
    levels = np.array([
        needs.part(f"{path}/low", entered.low),
        needs.part(f"{path}/normal", entered.normal),
        needs.part(f"{path}/high", entered.high),
    ])  # fmt: skip
    base = _base(levels)
    if base is None:
        needs.stop(f"{path}/low")
        return None, levels
    return FixedGradeSupply(grade_level=base), (levels - base) * of.weight


def _tank(
    entered: SupplyTank, of: Water, needs: Needs
) -> tuple[FixedGradeSupply | None, Floats, float]:
    """Return a tank at its normal level or the first stated, its states and its cut-out."""
    path = "/supply/tank"
    levels = np.array([
        needs.part(f"{path}/low", entered.low),
        needs.part(f"{path}/normal", entered.normal),
        needs.part(f"{path}/top", entered.top),
    ])  # fmt: skip
    cut_out = needs.part(f"{path}/cut_out", entered.cut_out)
    base = _base(levels)
    if base is None:
        needs.stop(f"{path}/low")
        return None, levels, NAN
    try:
        tank_levels(
            cut_out=si_or_none(entered.cut_out), low=si_or_none(entered.low),
            normal=si_or_none(entered.normal), top=si_or_none(entered.top),
            outlet_level=si_or_none(entered.outlet_level),
        )  # fmt: skip
    except SupplyRefused as refused:
        ordered = refused.reason == "tank_levels_out_of_order"
        needs.stop(f"{path}/{'low' if ordered else 'outlet_level'}", refused.reason)
    shift = (levels - base) * of.weight
    return FixedGradeSupply(grade_level=base), shift, (cut_out - base) * of.weight


def _base(levels: Floats) -> float | None:
    """Return the normal level, else the first stated one."""
    known = levels[np.isfinite(levels)]
    if not known.size:
        return None
    return float(levels[1]) if np.isfinite(levels[1]) else float(known[0])


def bypass(station: Station, needs: Needs) -> Bypass | None:
    """Return the bypass where one is fitted and described; never one that was not entered."""
    entered = station.supply.bypass
    if not entered.fitted:
        return None
    bore = needs.part("/supply/bypass/bore", entered.bore)
    if entered.k is None:
        needs.leave_out("/supply/bypass/k")
        return None
    if bore != bore:
        return None
    return Bypass(coefficient=entered.k / (2.0 * GRAVITY * (0.25 * np.pi * bore**2) ** 2))
