"""The result put together: pressures follow from grades, and no water is no number."""

from dataclasses import dataclass, fields, is_dataclass, replace

import numpy as np

from server.hydraulics.states import State
from server.studies.cases import Cases
from server.studies.duty_result import DutyResult, MadeCases, Place
from server.studies.lowering.lowered import Flags, Floats, LoweredSet
from server.studies.nearest import nearest_states
from server.studies.running import Running
from server.studies.set_ends import at_common_speed, zero_flow_speed
from server.studies.set_states import SetStates
from server.studies.shapes import Stamp
from server.studies.suction_side import breaks_before_eye
from server.studies.system_heads import point_pressures, set_pressure
from server.studies.zone_states import ZoneStates


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Solved:
    """Every combination in every case with its pressures; nan where there is no water."""

    cases: Cases
    available: Flags  # (C, K)
    combinations: Flags  # (K, N)
    zone: ZoneStates
    states: SetStates  # those of the zone, blank where not allowed or without water
    has_supply: Flags  # (C,) or (C, K) water up to the manifold
    discharge_grade: Floats  # (C, K) [m]
    discharge_pressure: Floats  # (C, K) as computed [Pa]
    point_grade: Floats  # (C, K, P) [m]
    point_pressure: Floats  # (C, K, P) [Pa]
    dry_point: Flags  # (C, K, P)
    held_pressure: Floats  # (C, K) at the held point, else at the discharge gauge [Pa]
    npsh_available: Floats  # (C, K, N) [m]

    @property
    def some_supply(self) -> Flags:
        """Where water reaches the manifold, for some combination at least, (C,)."""
        has = self.has_supply
        if has.ndim == 1 or not has.shape[1]:
            return has if has.ndim == 1 else np.ones(has.shape[0], dtype=np.bool_)
        return np.asarray(has.any(axis=1), dtype=np.bool_)

    @classmethod
    def of_zone(
        cls, of: LoweredSet, cases: Cases, available: Flags, combinations: Flags,
        zone: ZoneStates,
    ) -> "Solved":  # fmt: skip
        """Return the pressures that follow from states and grades."""
        states = _only_stated(of, zone, available)
        suction = _by_combination(zone.heads.suction_grade)
        discharge = suction + states.station_head
        entry = zone.entry_grade * np.where(np.isfinite(states.station_head), 1.0, np.nan)
        grade, pressure = point_pressures(of, entry, zone.heads.zone_loss[:, None, :])
        gauge = of.water.weight * (discharge - of.control.discharge_gauge_level)
        dry = np.asarray(pressure < of.water.lowest_pressure, dtype=np.bool_)
        clear = _by_combination(zone.side.suction_grade)
        return cls(
            cases=cases,
            available=available,
            combinations=combinations,
            zone=zone,
            states=states,
            has_supply=np.asarray(zone.side.breaks_at == Place.NOWHERE, dtype=np.bool_),
            discharge_grade=discharge,
            discharge_pressure=gauge,
            point_grade=np.where(dry, np.nan, grade),
            point_pressure=np.where(dry, np.nan, pressure),
            dry_point=dry,
            held_pressure=gauge if of.control.point < 0 else pressure[..., of.control.point],
            npsh_available=of.npsh_available(clear[..., None], states.slot["suction_loss"]),
        )


def _by_combination(values: Floats) -> Floats:
    return values[:, None] if values.ndim == 1 else values


def _only_stated(of: LoweredSet, zone: ZoneStates, available: Flags) -> SetStates:
    """Blank the combinations that a case does not allow, and those without water to pump."""
    states, side = zone.states, zone.side
    in_branch = breaks_before_eye(of, side.suction_grade, states.slot["suction_loss"])
    broken = side.breaks_at if side.breaks_at.ndim == 2 else side.breaks_at[:, None]
    dry = (broken != Place.NOWHERE) | (in_branch != Place.NOWHERE)
    # past the last row no duty is stated anyway, and the demand is too much for the pumps too
    dry &= available & (states.state != State.END_OF_CURVE)
    state = np.where(available, states.state, np.int8(State.NOT_AVAILABLE))
    there = np.where(available & ~dry, 1.0, np.nan)
    allowed = np.where(available, 1.0, np.nan)
    return replace(
        states,
        state=np.where(dry, np.int8(State.NO_WATER), state),
        flow=states.flow * there,
        station_head=states.station_head * there,
        valve_loss=states.valve_loss * there,
        head_per_per_cent=states.head_per_per_cent * there,
        flow_at_end=states.flow_at_end * allowed,
        speed_at_end=states.speed_at_end * allowed,
        lack=states.lack * allowed,
        energy_residual=states.energy_residual * there,
        mass_residual=states.mass_residual * there,
        slot={name: values * there[..., None] for name, values in states.slot.items()},
    )


def assembled(
    of: LoweredSet, stamp: Stamp, solved: Solved, running: Running, made: MadeCases
) -> DutyResult:
    """Return the result: the cases of the scenarios and, where levels rule, of each stage."""
    water, levels, zone = of.water, of.control, solved.zone
    rows, chosen = running.rows, running.chosen
    states, side, draw = solved.states, zone.side, solved.cases.draw
    slot = states.slot
    gauge, held, lowest = solved.discharge_pressure, solved.held_pressure, water.lowest_pressure
    units = at_common_speed(of, solved.combinations)

    def case(values: Floats) -> Floats:
        """Return what belongs to a case: at the combination that runs, where that tells."""
        return values[rows] if not zone.own_ways else running.at_chosen(values)

    required = zone.heads.required_head
    has_supply = solved.has_supply if required.ndim == 2 else solved.some_supply
    velocity = case(zone.velocity)
    demand = draw.flow[rows]
    nearest = nearest_states(
        of, states=states, available=solved.available, combinations=solved.combinations,
        draw=draw, chosen=running.scenario_chosen,
    )  # fmt: skip
    result = DutyResult(
        stamp=stamp,
        pump_set=of.pump_set,
        control=levels.kind,
        zone_kind=running.zone_kind,
        supply_kind=of.supply.kind,
        slots=tuple(one.facts for one in of.slots),
        points=of.points.facts,
        held_point=None if levels.point < 0 else of.points.facts[levels.point].id,
        set_point=None if np.isnan(levels.pressure) else levels.pressure,
        lowest_speed=levels.lowest_speed,
        highest_speed=levels.highest_speed,
        density=water.density,
        lowest_pressure=lowest,
        cases=running.cases,
        shown=running.shown,
        is_fire=solved.cases.is_fire[rows],
        demand=demand,
        fire_flow=draw.fire[rows],
        fire_point=np.asarray(draw.fire_point, dtype=np.intp)[rows],
        set_pressure=set_pressure(of, demand),
        combinations=solved.combinations,
        available=solved.available[rows],
        chosen=chosen,
        choice_class=running.choice_class,
        state=states.state[rows],
        flow=states.flow[rows],
        station_head=states.station_head[rows],
        valve_loss=states.valve_loss[rows],
        required_head=running.asked(zone, np.where(has_supply, required, np.nan)),
        set_point_held=(states.state == State.SOLVED)[rows],
        fixed_exceeds=(states.fixed_exceeds & solved.available)[rows],
        binding=nearest.binding[rows],
        nearest_flow=nearest.flow[rows],
        lack=nearest.lack[rows],
        held_pressure=np.where(held < lowest, np.nan, held)[rows],
        speed=slot["speed"][rows],
        leg_flow=slot["leg_flow"][rows],
        best_efficiency_share=slot["best_efficiency_share"][rows],
        efficiency=slot["efficiency"][rows],
        npsh_available=solved.npsh_available[rows],
        npsh_required=slot["npsh_required"][rows],
        shaft_power=slot["shaft_power"][rows],
        wire_power=slot["wire_power"][rows],
        point_pressure=solved.point_pressure[rows],
        point_grade=solved.point_grade[rows],
        point_without_water=solved.dry_point[rows],
        suction_breaks_at=running.breaks_at(side.breaks_at),
        supply_grade=case(side.supply_grade),
        connection_pressure=case(side.connection_pressure),
        suction_pressure=case(side.gauge_pressure),
        suction_grade=case(side.suction_grade),
        discharge_without_water=(gauge < lowest)[rows],
        discharge_grade=solved.discharge_grade[rows],
        discharge_pressure=np.where(gauge < lowest, np.nan, gauge)[rows],
        zone_entry_grade=np.where(np.isfinite(states.station_head), zone.entry_grade, np.nan)[
            rows
        ],
        tank_level=zone.tank_level[rows],
        tank_flow=(zone.tank_flow * np.where(np.isfinite(states.flow), 1.0, np.nan))[rows],
        tank_draws_down=zone.tank_draws_down[rows],
        closed_grade=zone.closed_grade[rows],
        suction_line_velocity=velocity[..., : of.suction_reaches],
        main_velocity=velocity[..., of.suction_reaches :],
        suction_branch_velocity=slot["suction_velocity"][rows],
        discharge_branch_velocity=slot["discharge_velocity"][rows],
        pressure_per_speed=(water.weight * states.head_per_per_cent)[rows],
        zero_flow_speed=(
            np.full(states.state.shape, np.nan)
            if of.floats
            else zero_flow_speed(of, units, draw)
        )[rows],
        flow_at_end=states.flow_at_end[rows],
        speed_at_end=states.speed_at_end[rows],
        energy_residual=states.energy_residual[rows],
        mass_residual=states.mass_residual[rows],
        made=made,
        needs_missing=of.needs_missing,
    )
    _lock(result)
    return result


def _lock(part: object) -> None:
    """Make the arrays of a result read-only: it is shared by every reader."""
    if isinstance(part, np.ndarray):
        part.flags.writeable = False
    elif is_dataclass(part):
        for field in fields(part):
            _lock(getattr(part, field.name))
