"""States of every combination against a tank that floats on the zone: the flow follows.

The tank fixes the grade at the end of the main; the demand is drawn there or part-way, and what
the pumps do not carry the tank feeds. Pumps without a drive, or started by level, run at one
speed; a held flow asks the drives for the speed that passes it.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.hydraulics.case_system import TabledSystem
from server.hydraulics.combinations import solve_combinations, spread
from server.hydraulics.held_flow import hold_flow
from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.parallel import ParallelResult
from server.hydraulics.states import State
from server.studies.lowering.lowered import Flags, Floats, Indices, LoweredSet
from server.studies.set_states import (
    RawStates,
    SetStates,
    full_speeds,
    states_of,
    taken,
    without_drive,
)
from server.studies.system_heads import Draw, reach_losses, reach_velocities

LEAST_FLOW = 1e-3  # the slopes of a system are tabled up to this flow at least [m3/s]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class TankWay:
    """The way from the supply to the tank for C draws: the level and the draw of each."""

    of: LoweredSet
    draw: Draw  # arrays (C,)
    level: Floats  # (C,) of the tank; nan where that state is not stated [m]

    @property
    def known(self) -> Flags:
        """Where supply state and tank level are stated, (C,)."""
        shift = np.asarray(self.draw.shift, dtype=np.float64)
        return np.asarray(np.isfinite(shift) & np.isfinite(self.level), dtype=np.bool_)

    def alike(self) -> tuple[Indices, Indices]:
        """Return the first of each kind of case that is one state, and each case's kind."""
        assert self.of.tank is not None
        at_tank = bool(np.all(self.of.tank.before_draw >= 1.0))
        shape = self.level.shape
        drawn = np.zeros(shape) if at_tank else self.draw.flow
        keys = np.stack([
            np.broadcast_to(np.asarray(column, dtype=np.float64), shape)
            for column in (self.level, self.draw.shift, self.draw.aged, self.draw.way, drawn)
        ], axis=1)  # fmt: skip
        _, first, back = np.unique(
            np.nan_to_num(keys, nan=-np.inf), axis=0, return_index=True, return_inverse=True
        )
        return first.astype(np.intp), back.reshape(-1).astype(np.intp)

    def take(self, rows: Indices) -> "TankWay":
        """Return some of the cases."""
        draw, shape = self.draw, self.level.shape

        def part(values: ArrayLike) -> NDArray[np.generic]:
            return np.broadcast_to(np.asarray(values), shape)[rows]

        return TankWay(
            of=self.of,
            draw=Draw(
                domestic=draw.domestic[rows], fire=draw.fire[rows],
                fire_point=part(draw.fire_point), aged=part(draw.aged),
                shift=draw.shift[rows], way=part(draw.way),
            ),
            level=self.level[rows],
        )  # fmt: skip

    def grades(self, flow: Floats, case: Indices) -> "WayGrades":
        """Return grades and losses for station flows of cases, any one shape."""
        of, draw = self.of, self.draw
        assert of.tank is not None  # a floating tank
        aged = np.asarray(draw.aged, dtype=np.bool_)[case]
        way = np.asarray(draw.way, dtype=np.intp)[case]
        supply = of.supply.grade(flow, draw.shift[case])
        lost = reach_losses(of, flow, aged, way)
        suction, main = lost[..., : of.suction_reaches], lost[..., of.suction_reaches :]
        before = of.tank.before_draw
        to_tank = flow - draw.flow[case]
        after: Floats = np.zeros(flow.shape)
        if np.any(before < 1.0):
            beyond = reach_losses(of, to_tank, aged, way)[..., of.suction_reaches :]
            after = beyond @ (1.0 - before)
        return WayGrades(
            supply_grade=supply,
            suction_grade=supply - suction.sum(axis=-1),
            before_draw=main @ before,
            draw_grade=self.level[case] + after,
            tank_flow=to_tank,
        )

    def head(self, flow: Floats, case: Indices) -> Floats:
        """Return the head asked between the manifolds [m]."""
        return self.grades(flow, case).required_head

    def system(self) -> TabledSystem:
        """Return the way as a system curve; cases that are not stated ask for no head."""
        known = self.known
        ends = [unit.curve.last_flow for unit in self.of.units]
        slots = [ends[slot.unit] for slot in self.of.slots]

        def asked(flow: Floats, case: Indices) -> Floats:
            # not nan: the root of an unknown case is looked for beside the others and dropped
            return np.where(known[case], self.head(flow, case), 0.0)

        return TabledSystem(
            function=asked,
            case_count=known.size,
            largest_flow=max(sum(slots, 0.0), LEAST_FLOW),
        )

    def velocities(self, flow: Floats, case: Indices) -> Floats:
        """Return the velocity in each reach: the faster part of one with the draw in it."""
        of = self.of
        assert of.tank is not None
        way = np.asarray(self.draw.way, dtype=np.intp)[case]
        all_way = reach_velocities(of, flow, way)
        before = np.concatenate([np.ones(of.suction_reaches), of.tank.before_draw])
        if np.all(before >= 1.0):
            return all_way
        beyond = np.abs(reach_velocities(of, flow - self.draw.flow[case], way))
        faster = np.where(before > 0, np.maximum(all_way, beyond), beyond)
        return np.where(before >= 1.0, all_way, faster)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class WayGrades:
    """Grades on the way to the tank, one shape."""

    supply_grade: Floats  # [m]
    suction_grade: Floats  # at the suction manifold [m]
    before_draw: Floats  # loss from the discharge manifold to the draw [m]
    draw_grade: Floats  # where the demand is drawn: at the tank, or part-way [m]
    tank_flow: Floats  # into the tank, negative when it feeds [m3/s]

    def taken(self, rows: Indices, tank_flow: Floats) -> "WayGrades":
        """Return the grades of some rows, each with its own flow into the tank."""
        return WayGrades(
            supply_grade=self.supply_grade[rows],
            suction_grade=self.suction_grade[rows],
            before_draw=self.before_draw[rows],
            draw_grade=self.draw_grade[rows],
            tank_flow=tank_flow,
        )

    @property
    def required_head(self) -> Floats:
        """Head asked between the manifolds [m]."""
        return self.draw_grade + self.before_draw - self.suction_grade


def tank_way(of: LoweredSet, draw: Draw, tank_state: Indices) -> TankWay:
    """Return the way to the tank for some draws.

    Parameters
    ----------
    of : LoweredSet
        A set on a zone with a floating tank.
    draw : Draw
        Arrays (C,).
    tank_state : ndarray of int, shape (C,)
        0 low, 1 normal, 2 top.
    """
    assert of.tank is not None
    return TankWay(of=of, draw=draw, level=of.tank.levels[tank_state])


def tank_states(
    of: LoweredSet, combinations: Flags, way: TankWay
) -> tuple[SetStates, WayGrades]:
    """Return the states of K combinations in the C cases of a way, and the grades there.

    Cases that differ by a demand drawn at the tank only are one state: it is solved once.
    """
    first, back = way.alike()
    if first.size < way.level.size:
        states, grades = tank_states(of, combinations, way.take(first))
        flow = states.flow[back] - way.draw.flow[:, None]
        return taken(states, back), grades.taken(back, np.nan_to_num(flow))
    legs = [of.units[slot.unit].leg for slot in of.slots]
    system, known = way.system(), way.known
    found = solve_combinations(
        legs, system=system, combinations=combinations, speeds=full_speeds(of)
    )
    if of.control.kind == "held_flow":
        raw = _held_flow(of, combinations, legs, system, found)
    else:
        shape = (known.size, *combinations.shape)
        raw = RawStates(
            state=found.state, flow=found.flow, head=found.manifold_head,
            leg_flow=found.leg_flow, speed=spread(full_speeds(of), shape),
            held_shut=combinations & (found.leg_state == State.HELD_SHUT),
            cannot_start=found.cannot_start,
            flow_at_end=found.last_row_flow,
            speed_at_end=np.full(shape[:2], of.control.highest_speed),
            lack=_lack(found), energy_residual=found.energy_residual,
            mass_residual=found.mass_residual,
        )  # fmt: skip
    states = states_of(of, combinations, raw, known)
    case = np.broadcast_to(np.arange(known.size)[:, None], states.flow.shape)
    # without a state the grades are those at rest: what the tank gives with the pumps off
    flow = np.where(np.isfinite(states.flow), states.flow, 0.0)
    return states, way.grades(flow, case)


def _held_flow(
    of: LoweredSet,
    combinations: Flags,
    legs: Sequence[LegCurve],
    system: TabledSystem,
    ends: ParallelResult,
) -> RawStates:
    """Return the states that pass the flow that is held, or what a limit of speed passes."""
    held = hold_flow(
        of.control.flow, system=system, legs=legs, combinations=combinations,
        lowest_speed=of.control.lowest_speed, highest_speed=of.control.highest_speed,
        variable=~without_drive(of),
    )  # fmt: skip
    return RawStates(
        state=held.state, flow=held.flow, head=held.head, leg_flow=held.leg_flow,
        speed=held.speed, held_shut=held.held_shut, cannot_start=held.cannot_start,
        flow_at_end=ends.last_row_flow,
        speed_at_end=np.full(held.state.shape, of.control.highest_speed),
        lack=np.where(held.held, 0.0, _lack(ends)), fixed_exceeds=held.fixed_exceeds,
        energy_residual=held.energy_residual, mass_residual=held.mass_residual,
    )  # fmt: skip


def _lack(found: ParallelResult) -> Floats:
    """Return the head missing at no flow, or less than nothing: too much at the last row."""
    past = found.state == State.END_OF_CURVE
    return np.where(past, -found.last_row_surplus, found.static_shortfall)
