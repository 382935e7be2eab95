"""The tank on the zone and the ways of the main to it, from the document."""

import numpy as np

from server.station.station import Station
from server.studies.lowering.lowered import Floats, ZoneTank
from server.studies.lowering.needs import NAN, Needs

TANK_STATES = ("low", "normal", "top")
PAST_THE_MAIN = "past_the_main"
NOT_BESIDE_FIRE = "draw_not_beside_fire_tank"


def zone_tank(station: Station, needs: Needs) -> ZoneTank | None:
    """Return the tank of a zone that has one; its levels are named where they are absent.

    Only the levels that the scenarios use stand in the way: the others leave nothing out.
    """
    zone, entered = station.zone, station.zone.tank
    if zone.kind not in ("tank", "both"):
        return None
    used = {scenario.tank_state or "normal" for scenario in station.scenarios if scenario.on}
    levels = []
    for name in TANK_STATES:
        quantity = getattr(entered, name)
        if quantity is None and name in used:
            needs.stop(f"/zone/tank/{name}")
        levels.append(NAN if quantity is None else quantity.si)
    known = [level for level in levels if not np.isnan(level)]
    if known != sorted(known):
        needs.stop("/zone/tank/low", "tank_levels_out_of_order")
    fire_only = zone.kind == "both" and entered.use == "fire_only"
    if entered.top is None and not fire_only:
        # firm capacity stands on the full tank
        needs.leave_out("/zone/tank/top")
    area = needs.part("/zone/tank/area", entered.area)
    if fire_only and entered.demand_at is not None:
        needs.leave_out("/zone/tank/demand_at", NOT_BESIDE_FIRE)
    return ZoneTank(
        levels=np.array(levels),
        area=area,
        fire_only=fire_only,
        before_draw=_before_draw(station, fire_only, needs),
    )


def _before_draw(station: Station, fire_only: bool, needs: Needs) -> Floats:
    """Return the share of each reach of the main that lies before the draw: 1 at the tank.

    By laid length: fittings of a reach that is cut are shared by length too.
    """
    drawn = station.zone.tank.demand_at
    lengths = np.array([
        NAN if reach.length is None else reach.length.si
        for reach in station.discharge_main.reaches
    ])  # fmt: skip
    if drawn is None or fire_only or not np.isfinite(lengths).all():
        return np.ones(lengths.size)
    ends = np.cumsum(lengths)
    if lengths.size and drawn.si > ends[-1] * (1.0 + 1e-9):
        needs.stop("/zone/tank/demand_at", PAST_THE_MAIN)
    along = np.where(lengths > 0, lengths, 1.0)
    share = np.clip((drawn.si - (ends - lengths)) / along, 0.0, 1.0)
    # a reach of no length, fittings only, lies before the draw where it ends there
    return np.where(lengths > 0, share, (ends <= drawn.si).astype(np.float64))
