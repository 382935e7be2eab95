"""What a set holds and between which speeds, from the document."""

from server.station.entry import Quantity
from server.station.pump_set import PumpSet
from server.station.station import Station
from server.studies.duty_result import PointFacts
from server.studies.limits import StudyLimits
from server.studies.lowering.lowered import Control
from server.studies.lowering.needs import NAN, NOT_IN_THIS_VERSION, Needs

HELD_KINDS = ("zone_point_pressure", "discharge_pressure")


def control(
    station: Station,
    pump_set: PumpSet,
    points: tuple[PointFacts, ...],
    limits: StudyLimits,
    needs: Needs,
) -> Control:
    """Return what the set holds and between which speeds."""
    path, entered = f"/sets/{pump_set.id}/control", pump_set.control
    at = -1
    if entered.kind is None:
        needs.stop(f"{path}/kind")
    elif entered.kind not in HELD_KINDS:
        needs.stop(f"{path}/kind", NOT_IN_THIS_VERSION)
    if entered.running_rule != "fewest_units":
        needs.stop(f"{path}/running_rule", NOT_IN_THIS_VERSION)
    level_path, level = "/site/discharge_gauge_level", station.site.discharge_gauge_level
    if entered.kind == "discharge_pressure":
        gauge = needs.must(level_path, level)
    else:
        gauge = needs.part(level_path, level)
        at = _held_point(path, entered.kind, entered.point, points, needs)
    pressure = (
        needs.must(f"{path}/pressure", entered.pressure) if entered.kind in HELD_KINDS else NAN
    )
    lowest = _speed(entered.lowest_speed, limits.speed_lowest)
    highest = _speed(entered.highest_speed, limits.speed_highest)
    if lowest > highest:
        needs.stop(f"{path}/lowest_speed", "lowest_speed_above_highest")
    return Control(
        point=at,
        pressure=pressure,
        discharge_gauge_level=gauge,
        lowest_speed=lowest,
        highest_speed=highest,
    )


def _speed(entered: Quantity | None, criterion: float) -> float:
    return criterion if entered is None else entered.si


def _held_point(
    path: str,
    kind: str | None,
    entered: str | None,
    points: tuple[PointFacts, ...],
    needs: Needs,
) -> int:
    """Return the index of the point that is held; its elevation and loss must be known."""
    if kind != "zone_point_pressure":
        return -1
    at = next((i for i, point in enumerate(points) if point.id == entered), -1)
    if at < 0:
        needs.stop(f"{path}/point")
        return -1
    held = f"/zone/points/{points[at].id}/"
    for missing in tuple(needs.leaves_out):
        if missing.path.startswith(held) and "/branch/" not in missing.path:
            needs.stop(missing.path, missing.reason)
    return at
