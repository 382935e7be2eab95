"""Grades from the supply to the customer, and the head that the control asks for."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

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
    flow, viscosity = draw.flow, of.water.kinematic_viscosity
    supply = of.supply.grade(flow, draw.shift)
    lost = of.route.reach_losses(flow, draw.aged, viscosity)
    suction = supply - lost[..., : of.suction_reaches].sum(axis=-1)
    main = lost[..., of.suction_reaches :].sum(axis=-1)
    zone = of.points.loss(draw.domestic, draw.fire, draw.fire_point)
    held = of.control.pressure / of.water.weight
    if of.control.point < 0:
        asked = of.control.discharge_gauge_level + held
    else:
        asked = (
            of.points.elevation[of.control.point] + held + main + zone[..., of.control.point]
        )
    return SystemHeads(
        supply_grade=supply, suction_grade=suction, main_loss=main, zone_loss=zone,
        required_head=asked - suction,
    )  # fmt: skip


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
