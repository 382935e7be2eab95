"""The tank on the zone and the ways of the main to it, from the document."""

import numpy as np

from server.station.station import Station
from server.studies.lowering.lowered import ZoneTank
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
    if entered.top is None:
        # firm capacity stands on the full tank
        needs.leave_out("/zone/tank/top")
    area = needs.part("/zone/tank/area", entered.area)
    fire_only = zone.kind == "both" and entered.use == "fire_only"
    draw_at = NAN
    if entered.demand_at is not None:
        draw_at = entered.demand_at.si
        path = "/zone/tank/demand_at"
        lengths = [reach.length for reach in station.discharge_main.reaches]
        whole = sum(length.si for length in lengths if length is not None)
        if fire_only:
            needs.leave_out(path, NOT_BESIDE_FIRE)
        elif draw_at > whole * (1.0 + 1e-9) and None not in lengths:
            needs.stop(path, PAST_THE_MAIN)
    return ZoneTank(levels=np.array(levels), area=area, fire_only=fire_only, draw_at=draw_at)
