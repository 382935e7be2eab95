"""One pump alone in the easiest system: how far it runs out, at low supply.

Made for each kind of pump in the set, at top speed, on new pipes where their wall is known. A
closed zone draws what it likes (a burst, hydrants opened), so the flow ends where the pump's
rows do, or before, where the zone could take no more: where the pressure at the point that is
easiest to reach has fallen to that of the air. NPSH and motor are judged there.
"""

import numpy as np

from server.hydraulics.falling_root import falling_root
from server.studies.cases import shifts
from server.studies.duty_result import OnePumpAlone
from server.studies.lowering.lowered import Floats, LoweredSet
from server.studies.set_ends import CommonSpeed, relative_speeds
from server.studies.set_states import unit_readings
from server.studies.shapes import PipeAge
from server.studies.suction_side import breaks_before_eye, suction_side
from server.studies.system_heads import Draw, SystemHeads, system_heads


def one_pump_alone(of: LoweredSet) -> OnePumpAlone | None:
    """Return each kind of pump alone at top speed; None where low supply is not stated."""
    shift = float(shifts(of, np.nan)[0])
    if np.isnan(shift) or not of.units:
        return None
    pipes: PipeAge = "new" if of.route.knows("new") else "aged"
    number, top = len(of.units), of.control.highest_speed
    alone = CommonSpeed(
        legs=tuple(unit.leg for unit in of.units),
        count=np.eye(number),
        relative=relative_speeds(of),
    )

    def heads_at(y: Floats) -> SystemHeads:
        flow = top * alone.total(y)
        draw = Draw(
            domestic=flow, fire=np.zeros(flow.shape), fire_point=-1, aged=pipes == "aged",
            shift=np.full(flow.shape, shift),
        )  # fmt: skip
        return system_heads(of, draw)

    def short(y: Floats, heads: SystemHeads) -> Floats:
        """Return what the zone asks when wide open less what the pump gives."""
        asked = (of.points.elevation + heads.zone_loss).T
        easiest = np.fmin.reduce(asked) + heads.main_loss - heads.suction_grade
        return np.asarray(easiest - top**2 * y, dtype=np.float64)

    end = alone.last_head
    at_end = heads_at(end)
    to_last_row = short(end, at_end) <= 0
    y, heads = end, at_end
    if not to_last_row.all():
        found = falling_root(lambda y: short(y, heads_at(y)), end, alone.peak_head).root
        y = np.where(to_last_row, end, found)
    flows = np.isfinite(y)
    y = np.where(flows, y, end)
    if not to_last_row.all():
        heads = heads_at(y)
    side = suction_side(of, heads)
    flow = np.where(flows, top * alone.total(y), np.nan)
    read = [
        unit_readings(of, t, flow[t : t + 1], np.full(1, top * alone.relative[t]))
        for t in range(number)
    ]  # each its own kind, at one flow
    slot = {name: np.concatenate([one[name] for one in read]) for name in read[0]}
    in_branch = breaks_before_eye(of, side.suction_grade, slot["suction_loss"][:, None, None])
    breaks_at = np.where(side.breaks_at != 0, side.breaks_at, in_branch[:, 0])
    has_water = np.where(breaks_at == 0, 1.0, np.nan)
    return OnePumpAlone(
        slots=tuple(next(s.facts.id for s in of.slots if s.unit == t) for t in range(number)),
        pipes=pipes,
        flow=flow,
        to_last_row=to_last_row,
        suction_breaks_at=np.where(flows, breaks_at, 0).astype(np.int8),
        suction_pressure=side.gauge_pressure * has_water,
        best_efficiency_share=slot["best_efficiency_share"],
        npsh_available=of.npsh_available(side.suction_grade, slot["suction_loss"]) * has_water,
        npsh_required=slot["npsh_required"],
        shaft_power=slot["shaft_power"],
    )
