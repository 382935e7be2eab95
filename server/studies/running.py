"""What runs in each case: chosen by the demand, and each stage where a level rules."""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from server.hydraulics.states import State
from server.studies.cases import Cases
from server.studies.choice import choose
from server.studies.combinations import Mask
from server.studies.duty_result import Place, Places, ZoneKind
from server.studies.filling_choice import choose_filling, stage_combinations, stage_rows
from server.studies.lowering.lowered import Flags, Floats, Indices, LoweredSet
from server.studies.set_ends import at_common_speed, flow_at_end
from server.studies.shapes import Case
from server.studies.system_heads import least_pressures, set_pressure

if TYPE_CHECKING:
    from server.studies.assembly import Solved
    from server.studies.zone_states import ZoneStates


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Running:
    """The cases of the result: those of the scenarios, then the further stages of a tank."""

    zone_kind: ZoneKind
    scenario_chosen: Indices  # (C,) of the scenarios alone
    cases: tuple[Case, ...]  # C' of the result
    rows: Indices  # (C',) place among the scenarios' cases
    chosen: Indices  # (C',) combination that runs, -1 none
    choice_class: NDArray[np.int8]  # (C',)
    shown: Flags  # (C',)

    def at_chosen(self, values: Floats) -> Floats:
        """Return the values (C, K, ...) of what runs in each case, nan where nothing does."""
        if values.shape[1] == 0:
            return np.full((self.rows.size, *values.shape[2:]), np.nan)
        runs = (self.chosen >= 0).reshape(-1, *(1,) * (values.ndim - 2))
        return np.where(runs, values[self.rows, self.chosen], np.nan)

    def breaks_at(self, places: Places) -> Places:
        """Return where the suction side breaks, (C,) or (C, K) to (C',)."""
        if places.ndim == 1:
            return places[self.rows]
        if places.shape[1] == 0:
            return np.zeros(self.rows.size, dtype=np.int8)
        of_chosen = places[self.rows, self.chosen]
        return np.where(self.chosen >= 0, of_chosen, Place.NOWHERE).astype(np.int8)

    def asked(self, zone: "ZoneStates", required: Floats) -> Floats:
        """Return the head asked; at a tank that of the flow, or at rest where nothing runs."""
        if required.ndim == 1:
            return required[self.rows]
        return np.where(self.chosen >= 0, self.at_chosen(required), zone.static_head[self.rows])


def running_of(
    of: LoweredSet, cases: Cases, masks: Sequence[Mask], solved: "Solved"
) -> Running:
    """Return what runs: one combination a scenario, and every stage that a level starts."""
    if of.floats:
        return _filling(of, cases, masks, solved)
    states, draw = solved.states, cases.draw
    held, set_point, state = solved.held_pressure, set_pressure(of, draw.flow), states.state
    if of.control.kind == "fixed_speed":
        held, state = _spare(of, solved), states.state
        set_point = np.zeros(draw.flow.shape)
    required = solved.zone.heads.required_head
    known = np.asarray(np.isfinite(required) & solved.some_supply, dtype=np.bool_)
    units = at_common_speed(of, solved.combinations)
    chosen, classes = choose(
        of.slots,
        available=solved.available,
        known=known,
        state=state,
        share=states.slot["best_efficiency_share"],
        combinations=solved.combinations,
        held_pressure=held,
        set_point=set_point,
        flow_at_end=flow_at_end(of, units),
    )
    return Running(
        zone_kind="closed" if of.tank is None else "fire_tank",
        scenario_chosen=chosen,
        cases=cases.cases,
        rows=np.arange(chosen.size),
        chosen=chosen,
        choice_class=classes,
        shown=cases.shown,
    )


def _spare(of: LoweredSet, solved: "Solved") -> Floats:
    """Return the least pressure over what a point requires, (C, K) [Pa]."""
    least = least_pressures(of, solved.cases.draw)
    over = solved.point_pressure - least[:, None, :]
    return np.asarray(np.fmin.reduce(over, axis=2, initial=np.inf))


def _filling(of: LoweredSet, cases: Cases, masks: Sequence[Mask], solved: "Solved") -> Running:
    states = solved.states
    stages = stage_combinations(of, cases, masks)
    known = np.isfinite(solved.zone.static_head) & solved.some_supply
    chosen, classes = choose_filling(
        of,
        stages=stages,
        available=solved.available,
        known=known,
        states=states,
        combinations=solved.combinations,
        demand=cases.draw.flow,
    )
    rows, more = stage_rows(stages, chosen)
    usable = np.isfinite(solved.zone.static_head[rows]) if rows.size else np.zeros(0, bool)
    rows, more = rows[usable], more[usable]
    all_rows = np.concatenate([np.arange(chosen.size), rows]).astype(np.intp)
    all_chosen = np.concatenate([chosen, more]).astype(np.intp)
    number = solved.combinations.sum(axis=1)
    named = tuple(
        cases.cases[c].with_units(int(number[k]) if k >= 0 else None)
        for c, k in zip(all_rows, all_chosen, strict=True)
    )
    return Running(
        zone_kind="floating_tank",
        scenario_chosen=chosen,
        cases=named,
        rows=all_rows,
        chosen=all_chosen,
        choice_class=np.concatenate([classes, _stage_class(of, solved, rows, more)]),
        shown=np.concatenate([cases.shown, np.zeros(rows.size, dtype=np.bool_)]),
    )


def _stage_class(
    of: LoweredSet, solved: "Solved", rows: Indices, combination: Indices
) -> NDArray[np.int8]:
    """Return the class of a stage that the level runs: on its curve, or at a limit."""
    on_curve = solved.states.state[rows, combination] == State.SOLVED
    return np.where(on_curve, 2, 3).astype(np.int8)
