"""Grades from the supply to the customer, and the head that the control asks for."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.set_point import compensated_pressure
from server.studies.lowering.lowered import Floats, LoweredSet


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Draw:
    """What the zone draws in each of some states, and in which state supply and pipes are.

    All have one shape (...): station flow is domestic plus fire, where a fire flows.
    """

    domestic: Floats  # [m3/s]
    fire: Floats  # [m3/s]
    fire_point: ArrayLike  # index into points, -1 none
    aged: ArrayLike  # whether the pipes are aged
    shift: Floats  # of the supply's curve, nan where that state is not stated [Pa]
    way: ArrayLike = 0  # which of the station's ways: all barrels, or one out

    @property
    def flow(self) -> Floats:
        """Return the flow through the station."""
        return self.domestic + self.fire


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class SystemHeads:
    """Grades and losses of a draw; shapes (...) and, for points, (..., P)."""

    supply_grade: Floats  # at the connection [m]
    suction_grade: Floats  # at the suction manifold [m]
    main_loss: Floats  # [m]
    zone_loss: Floats  # (..., P) from the end of the main [m]
    required_head: Floats  # manifold to manifold, to hold the set point [m]


def system_heads(of: LoweredSet, draw: Draw) -> SystemHeads:
    """Return the grades on the way and the head that holds the set point.

    In a closed zone the flow is imposed, so all of this is known before any pump is.
    """
    flow = draw.flow
    supply = of.supply.grade(flow, draw.shift)
    lost = reach_losses(of, flow, draw.aged, draw.way)
    suction = supply - lost[..., : of.suction_reaches].sum(axis=-1)
    main = lost[..., of.suction_reaches :].sum(axis=-1)
    zone = of.points.loss(draw.domestic, draw.fire, draw.fire_point)
    return SystemHeads(
        supply_grade=supply, suction_grade=suction, main_loss=main, zone_loss=zone,
        required_head=_asked(of, draw, main, zone, suction) - suction,
    )  # fmt: skip


def reach_losses(of: LoweredSet, flow: Floats, aged: ArrayLike, way: ArrayLike) -> Floats:
    """Return the head lost in each reach, suction line first, (..., R) [m]."""
    viscosity = of.water.kinematic_viscosity
    lost = of.ways[0].reach_losses(flow, aged, viscosity)
    if len(of.ways) == 1:
        return lost
    which = np.broadcast_to(np.asarray(way, dtype=np.intp), flow.shape)
    for i, line in enumerate(of.ways[1:], start=1):
        rows = which == i
        if rows.any():
            old = np.broadcast_to(np.asarray(aged, dtype=np.bool_), flow.shape)
            lost[rows] = line.reach_losses(flow[rows], old[rows], viscosity)
    return lost


def reach_velocities(of: LoweredSet, flow: Floats, way: ArrayLike) -> Floats:
    """Return the velocity in each reach, suction line first, (..., R) [m/s]."""
    velocity = of.ways[0].velocities(flow)
    if len(of.ways) == 1:
        return velocity
    which = np.broadcast_to(np.asarray(way, dtype=np.intp), flow.shape)
    for i, line in enumerate(of.ways[1:], start=1):
        rows = which == i
        if rows.any():
            velocity[rows] = line.velocities(flow[rows])
    return velocity


def _asked(of: LoweredSet, draw: Draw, main: Floats, zone: Floats, suction: Floats) -> Floats:
    """Return the grade at the discharge manifold that the control, else the zone, asks for.

    Behind a reducing valve where there is one. Fixed speed holds nothing: there it is the
    grade that the requirements of the points need.
    """
    control, points = of.control, of.points
    if control.kind == "fixed_speed":
        # a point whose figures are absent is named elsewhere; the others ask what they ask
        most = np.fmax.reduce(_required_grade(of, draw) + zone, axis=-1, initial=-np.inf)
        # where no point asks for anything, no head is asked for
        return np.where(np.isfinite(most), main + most, suction)
    pressure = control.pressure
    held = (
        pressure if control.kind != "flow_compensated" else set_pressure(of, draw.flow)
    ) / of.water.weight
    if control.point < 0:
        return np.asarray(control.discharge_gauge_level + held)
    at = control.point
    return np.asarray(points.elevation[at] + held + main + zone[..., at])


def set_pressure(of: LoweredSet, flow: Floats) -> Floats:
    """Return the set point at a station flow [Pa]; only a flow-compensated one moves."""
    control = of.control
    if control.kind != "flow_compensated":
        return np.full(flow.shape, control.pressure)
    return compensated_pressure(
        flow, at_no_flow=control.pressure_at_no_flow, at_full_flow=control.pressure,
        full_flow=control.flow,
    )  # fmt: skip


def _required_grade(of: LoweredSet, draw: Draw) -> Floats:
    """Return the grade that each point needs, -inf where it asks for nothing, (..., P) [m]."""
    return np.asarray(of.points.elevation + least_pressures(of, draw) / of.water.weight)


def least_pressures(of: LoweredSet, draw: Draw) -> Floats:
    """Return the pressure that each point requires, -inf where it asks for none, (..., P)."""
    points = of.points
    flowing = np.asarray(draw.fire_point)[..., None] == np.arange(len(points.facts))
    burning = (np.asarray(draw.fire) > 0)[..., None] | flowing
    in_fire = np.where(flowing, points.least_residual, points.least_fire)
    return np.where(burning, in_fire, points.least_normal)


def required_head(of: LoweredSet, flow: Floats, aged: ArrayLike, shift: ArrayLike) -> Floats:
    """Return the head that holds the set point at a flow without fire, shape (...)."""
    none = np.zeros(flow.shape)
    shifts = np.broadcast_to(np.asarray(shift, dtype=np.float64), flow.shape)
    draw = Draw(domestic=flow, fire=none, fire_point=-1, aged=aged, shift=shifts)
    return system_heads(of, draw).required_head


def point_pressures(
    of: LoweredSet, zone_entry: Floats, zone_loss: Floats
) -> tuple[Floats, Floats]:
    """Return grade [m] and gauge pressure [Pa] at each point, shape (..., P)."""
    grade = zone_entry[..., None] - zone_loss
    return grade, of.water.weight * (grade - of.points.elevation)
