"""A supply tank at its cut-out level: NPSH and the water over the outlet are least there."""

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from server.hydraulics.suction import submergence
from server.studies.assembly import Solved
from server.studies.cases import STATES, Cases
from server.studies.combinations import Mask
from server.studies.duty_result import CutOut
from server.studies.filling_choice import stage_combinations
from server.studies.lowering.lowered import LoweredSet
from server.studies.running import Running
from server.studies.system_heads import Draw
from server.studies.zone_states import zone_states


def cut_out(
    of: LoweredSet, cases: Cases, masks: Sequence[Mask], solved: Solved, running: Running
) -> CutOut | None:
    """Return what runs in each scenario with the tank at its cut-out; None without one."""
    if of.supply.kind != "tank" or np.isnan(of.supply.cut_out) or not masks:
        return None
    low = _at_cut_out(of, cases)
    zone = zone_states(of, low, solved.combinations)
    again = Solved.of_zone(of, low, solved.available[::STATES], solved.combinations, zone)
    chosen = running.scenario_chosen[::STATES]
    stages = stage_combinations(of, low, masks) if of.floats else [()] * chosen.size
    pairs = [
        (c, k) for c, own in enumerate(chosen) for k in sorted({int(own), *stages[c]} - {-1})
    ]
    rows = np.array(pairs, dtype=np.intp).reshape(-1, 2)
    c, k = rows[:, 0], rows[:, 1]
    number = solved.combinations.sum(axis=1)
    flow = again.states.flow[c, k]
    bore = of.supply.outlet_bore
    needed = np.full(flow.shape, np.nan)
    if np.isfinite(bore):
        known = np.isfinite(flow)
        needed[known] = submergence(flow[known], bore=bore)
    level = float(of.supply.grade(0.0, of.supply.cut_out))
    return CutOut(
        cases=tuple(
            low.cases[i].with_units(int(number[j]) if of.floats else None) for i, j in pairs
        ),
        combination=k,
        state=again.states.state[c, k],
        flow=flow,
        npsh_available=again.npsh_available[c, k],
        npsh_required=again.states.slot["npsh_required"][c, k],
        depth=level - of.supply.outlet_level,
        submergence=needed,
    )


def _at_cut_out(of: LoweredSet, cases: Cases) -> Cases:
    """Return the low case of each scenario with the supply at its cut-out instead."""
    draw = cases.draw
    number = draw.flow[::STATES].size
    return Cases(
        cases=tuple(replace(case, supply="cut_out") for case in cases.cases[::STATES]),
        shown=cases.shown[::STATES],
        is_fire=cases.is_fire[::STATES],
        draw=Draw(
            domestic=draw.domestic[::STATES],
            fire=draw.fire[::STATES],
            fire_point=np.asarray(draw.fire_point)[::STATES],
            aged=np.asarray(draw.aged)[::STATES],
            shift=np.full(number, of.supply.cut_out),
            way=np.asarray(draw.way)[::STATES],
        ),
        tank_state=cases.tank_state[::STATES],
        running=cases.running[::STATES],
        jockeys=cases.jockeys[::STATES],
    )
