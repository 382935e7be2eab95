"""Every combination in every case, with the grades from the supply to the points.

In a closed zone the demand is imposed, so the way there is known before any pump is; against a
floating tank, and where a fire tank opens, each combination has its own flow and its own way.
"""

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from server.hydraulics.fire_tank import fire_tank
from server.hydraulics.states import State
from server.studies.cases import Cases
from server.studies.closed_states import closed_states
from server.studies.lowering.lowered import Flags, Floats, Indices, LoweredSet
from server.studies.set_states import RawStates, SetStates, full_speeds, states_of
from server.studies.suction_side import SuctionSide, suction_side
from server.studies.system_heads import (
    Draw,
    SystemHeads,
    reach_losses,
    reach_velocities,
    system_heads,
)
from server.studies.tank_states import tank_states, tank_way


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class ZoneStates:
    """States and grades; each array (C,) where all combinations share it, else (C, K)."""

    heads: SystemHeads  # at the demanded flow, the pumps left out
    states: SetStates
    side: SuctionSide
    main_loss: Floats  # from the discharge manifold to the entry of the zone [m]
    entry_grade: Floats  # (C, K) where the zone's own losses begin [m]
    velocity: Floats  # (..., R) in each reach, suction line first [m/s]
    static_head: Floats  # (C,) between the manifolds at no flow; nan where not known [m]
    tank_level: Floats  # (C,) nan without a tank [m]
    tank_flow: Floats  # (C, K) into the tank, negative when it feeds [m3/s]
    tank_draws_down: Flags  # (C, K) a fire tank would feed in normal service too
    closed_grade: Floats  # (C, K) at a fire tank's node with the tank shut [m]

    @property
    def own_ways(self) -> bool:
        """Whether each combination has its own flow on the way."""
        return self.side.suction_grade.ndim == 2


def zone_states(of: LoweredSet, cases: Cases, combinations: Flags) -> ZoneStates:
    """Return the states of K combinations in C cases."""
    if of.floats:
        return _floating(of, cases, combinations)
    closed = _closed(of, cases.draw, combinations)
    if of.tank is None:
        return closed
    return _with_fire_tank(of, cases, combinations, closed)


def _closed(of: LoweredSet, draw: Draw, combinations: Flags) -> ZoneStates:
    heads = system_heads(of, draw)
    states = closed_states(of, combinations, draw.flow, heads.required_head)
    shape = states.state.shape
    return ZoneStates(
        heads=heads,
        states=states,
        side=suction_side(of, heads),
        main_loss=heads.main_loss,
        entry_grade=(heads.suction_grade - heads.main_loss)[:, None] + states.station_head,
        velocity=reach_velocities(of, draw.flow, draw.way),
        static_head=np.full(shape[0], np.nan),
        tank_level=np.full(shape[0], np.nan),
        tank_flow=np.full(shape, np.nan),
        tank_draws_down=np.zeros(shape, dtype=np.bool_),
        closed_grade=np.full(shape, np.nan),
    )


def _floating(of: LoweredSet, cases: Cases, combinations: Flags) -> ZoneStates:
    draw = cases.draw
    way = tank_way(of, draw, cases.tank_state)
    states, grades = tank_states(of, combinations, way)
    zone = of.points.loss(draw.domestic, draw.fire, draw.fire_point)
    own = SystemHeads(
        supply_grade=grades.supply_grade,
        suction_grade=grades.suction_grade,
        main_loss=grades.before_draw,
        zone_loss=zone,
        required_head=grades.required_head,
    )
    case = np.arange(draw.flow.size)
    each = np.broadcast_to(case[:, None], states.flow.shape)
    rest = np.zeros(draw.flow.shape)
    flowing = np.where(np.isfinite(states.flow), states.flow, 0.0)
    return ZoneStates(
        heads=own,
        states=states,
        side=suction_side(of, own),
        main_loss=grades.before_draw,
        entry_grade=np.where(np.isfinite(states.flow), grades.draw_grade, np.nan),
        velocity=way.velocities(flowing, each),
        static_head=np.where(way.known, way.head(rest, case), np.nan),
        tank_level=way.level,
        tank_flow=np.where(np.isfinite(states.flow), grades.tank_flow, np.nan),
        tank_draws_down=np.zeros(states.state.shape, dtype=np.bool_),
        closed_grade=np.full(states.state.shape, np.nan),
    )


def _with_fire_tank(
    of: LoweredSet, cases: Cases, combinations: Flags, closed: ZoneStates
) -> ZoneStates:
    """Return the states with a tank that opens where the grade would fall below its level."""
    assert of.tank is not None
    draw, states = cases.draw, closed.states
    level = of.tank.levels[cases.tank_state]
    shift = np.asarray(draw.shift, dtype=np.float64)
    usable = np.isfinite(shift) & np.isfinite(level) & (draw.flow > 0)
    rows = np.flatnonzero(usable)
    if not rows.size:
        return replace(closed, tank_level=level, tank_flow=np.zeros(states.state.shape))
    aged, way = np.asarray(draw.aged, np.bool_)[rows], np.asarray(draw.way, np.intp)[rows]

    def on_way(flow: Floats, case: Indices) -> tuple[Floats, Floats, Floats]:
        lost = reach_losses(of, flow, aged[case], way[case])
        supply = of.supply.grade(flow, shift[rows][case])
        suction = supply - lost[..., : of.suction_reaches].sum(axis=-1)
        return supply, suction, lost[..., of.suction_reaches :].sum(axis=-1)

    def lift(flow: Floats, case: Indices) -> Floats:
        _, suction, main = on_way(flow, case)
        return np.asarray(main - suction)

    fed = fire_tank(
        draw.flow[rows], level=level[rows], tank_loss=0.0, lift=lift,
        closed_head=states.station_head[rows],
        closed_held=(states.state[rows] == State.SOLVED) & (of.control.kind != "fixed_speed"),
        legs=[of.units[slot.unit].leg for slot in of.slots], combinations=combinations,
        speeds=full_speeds(of),
    )  # fmt: skip
    raw = _opened(of, combinations, states, rows, opens=fed.opens, state=fed.state,
                  flow=fed.station_flow, head=fed.head, leg_flow=fed.leg_flow,
                  energy=fed.energy_residual, draws_down=fed.draws_down)  # fmt: skip
    known = np.asarray(np.isfinite(shift), dtype=np.bool_)
    now = states_of(of, combinations, raw, known)
    shape = now.state.shape
    flowing = np.where(np.isfinite(now.flow), now.flow, draw.flow[:, None])
    each = np.broadcast_to(np.arange(shape[0])[:, None], shape)
    lost = reach_losses(of, flowing, np.asarray(draw.aged)[each], np.asarray(draw.way)[each])
    supply = of.supply.grade(flowing, shift[each])
    suction = supply - lost[..., : of.suction_reaches].sum(axis=-1)
    main = lost[..., of.suction_reaches :].sum(axis=-1)
    own = SystemHeads(
        supply_grade=supply, suction_grade=suction, main_loss=main,
        zone_loss=closed.heads.zone_loss, required_head=closed.heads.required_head,
    )  # fmt: skip
    tank_flow = np.zeros(shape)
    tank_flow[rows] = -fed.tank_flow
    draws_down = np.zeros(shape, dtype=np.bool_)
    draws_down[rows] = fed.draws_down
    return ZoneStates(
        heads=own,
        states=now,
        side=suction_side(of, own),
        main_loss=main,
        entry_grade=suction + now.station_head - main,
        velocity=reach_velocities(of, flowing, np.asarray(draw.way)[each]),
        static_head=closed.static_head,
        tank_level=level,
        tank_flow=np.where(np.isfinite(now.flow), tank_flow, np.nan),
        tank_draws_down=draws_down,
        closed_grade=closed.entry_grade,
    )


def _opened(
    of: LoweredSet, combinations: Flags, states: SetStates, rows: Indices, *,
    opens: Flags, state: NDArray[np.int8], flow: Floats, head: Floats, leg_flow: Floats,
    energy: Floats, draws_down: Flags,
) -> RawStates:  # fmt: skip
    """Return the closed states with those in which the tank is open put in their place."""

    def put(whole: Floats, part: Floats, where: Flags = opens) -> Floats:
        out = np.array(whole)
        extra = (...,) + (None,) * (part.ndim - 2)
        out[rows] = np.where(where[extra], part, out[rows])
        return out

    now = np.array(states.state)
    # with the tank open the set point is not held, whatever the speed
    open_state = np.where(state == State.SOLVED, np.int8(State.TOP_SPEED), state)
    now[rows] = np.where(opens | draws_down, open_state, now[rows])
    silent = np.where(draws_down, np.nan, head)
    speeds = np.broadcast_to(full_speeds(of), leg_flow.shape)
    legs = put(states.slot["leg_flow"], leg_flow)
    running_speed = put(np.where(np.isnan(states.slot["speed"]), 1.0, states.slot["speed"]),
                        np.array(speeds))  # fmt: skip
    total = put(states.flow, flow, opens | draws_down)
    return RawStates(
        state=now,
        flow=total,
        head=put(states.station_head, silent, opens | draws_down),
        leg_flow=legs,
        speed=running_speed,
        held_shut=combinations & (legs == 0) & (total > 0)[..., None],
        cannot_start=np.zeros(legs.shape, dtype=np.bool_),
        flow_at_end=states.flow_at_end,
        speed_at_end=states.speed_at_end,
        lack=states.lack,
        energy_residual=put(states.energy_residual, energy),
        mass_residual=put(states.mass_residual, np.zeros(energy.shape)),
        head_per_per_cent=states.head_per_per_cent,
        fixed_exceeds=states.fixed_exceeds,
        valve_loss=states.valve_loss,
    )
