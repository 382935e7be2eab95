"""What a set holds and between which speeds, from the document."""

from server.station.entry import Quantity
from server.station.pump_set import Control as Entered
from server.station.pump_set import PumpSet
from server.station.station import Station
from server.studies.duty_result import PointFacts
from server.studies.limits import StudyLimits
from server.studies.lowering.lowered import Control
from server.studies.lowering.needs import NAN, NOT_IN_THIS_VERSION, Needs

HELD_KINDS = (
    "zone_point_pressure", "discharge_pressure", "flow_compensated", "reducing_valve"
)  # fmt: skip
TANK_KINDS = ("levels", "held_flow")  # they move water into a tank; a closed zone has none
PRESSURE_AT_TANK = "pressure_held_at_floating_tank"
NO_TANK = "control_without_tank"
FALLING_SET_POINT = "set_point_falls_with_flow"


def control(
    station: Station,
    pump_set: PumpSet,
    points: tuple[PointFacts, ...],
    limits: StudyLimits,
    floats: bool,
    needs: Needs,
) -> Control:
    """Return what the set holds and between which speeds.

    Parameters
    ----------
    station : Station
        The document.
    pump_set : PumpSet
        One of its sets.
    points : tuple of PointFacts
        The named points.
    limits : StudyLimits
        Limits by the criteria, for the speeds that are empty.
    floats : bool
        Whether a tank floats on the zone: it fixes the grade, so no pressure can be held.
    needs : Needs
        Gathers what is absent.
    """
    path, entered = f"/sets/{pump_set.id}/control", pump_set.control
    kind = entered.kind
    if kind is None:
        needs.stop(f"{path}/kind")
    elif floats and kind in HELD_KINDS:
        needs.stop(f"{path}/kind", PRESSURE_AT_TANK)
    elif not floats and station.zone.kind is not None and kind in TANK_KINDS:
        needs.stop(f"{path}/kind", NO_TANK)
    if entered.running_rule != "fewest_units":
        needs.stop(f"{path}/running_rule", NOT_IN_THIS_VERSION)
    at = _held_point(path, entered, points, needs)
    level_path, level = "/site/discharge_gauge_level", station.site.discharge_gauge_level
    if kind in HELD_KINDS and at < 0:
        gauge = needs.must(level_path, level)
    else:
        gauge = needs.part(level_path, level)
    pressure = needs.must(f"{path}/pressure", entered.pressure) if kind in HELD_KINDS else NAN
    flow = NAN
    if kind in ("flow_compensated", "held_flow"):
        flow = needs.must(f"{path}/flow", entered.flow)
    lowest = _speed(entered.lowest_speed, limits.speed_lowest)
    highest = _speed(entered.highest_speed, limits.speed_highest)
    if lowest > highest:
        needs.stop(f"{path}/lowest_speed", "lowest_speed_above_highest")
    return Control(
        kind=kind or "fixed_speed",
        point=at,
        pressure=pressure,
        discharge_gauge_level=gauge,
        lowest_speed=lowest,
        highest_speed=highest,
        flow=flow,
        pressure_at_no_flow=_at_no_flow(path, entered, pressure, needs),
        valve_loss=_valve_loss(path, entered, needs),
        stages=_stages(path, entered, needs),
    )


def _speed(entered: Quantity | None, criterion: float) -> float:
    return criterion if entered is None else entered.si


def _at_no_flow(path: str, entered: Entered, pressure: float, needs: Needs) -> float:
    """Return the lower end of a set point that rises with flow."""
    if entered.kind != "flow_compensated":
        return NAN
    lower = needs.must(f"{path}/pressure_at_no_flow", entered.pressure_at_no_flow)
    if lower > pressure:
        needs.stop(f"{path}/pressure_at_no_flow", FALLING_SET_POINT)
    return lower


def _valve_loss(path: str, entered: Entered, needs: Needs) -> float:
    """Return the loss of a reducing valve wide open over flow squared."""
    if entered.kind != "reducing_valve":
        return 0.0
    lost = needs.must(f"{path}/valve_loss", entered.valve_loss)
    if lost == 0:
        return 0.0
    return lost / needs.must(f"{path}/valve_loss_at", entered.valve_loss_at) ** 2


def _stages(path: str, entered: Entered, needs: Needs) -> tuple[tuple[float, float], ...]:
    """Return start and stop level of each stage."""
    if entered.kind != "levels":
        return ()
    if not entered.stages:
        needs.stop(f"{path}/stages")
    return tuple(
        (
            needs.part(f"{path}/stages/{stage.id}/start", stage.start),
            needs.part(f"{path}/stages/{stage.id}/stop", stage.stop),
        )
        for stage in entered.stages
    )


def _held_point(
    path: str, entered: Entered, points: tuple[PointFacts, ...], needs: Needs
) -> int:
    """Return the index of the point that is held; its elevation and loss must be known."""
    by_point = entered.kind == "zone_point_pressure"
    if not by_point and not (entered.kind == "reducing_valve" and entered.point is not None):
        return -1
    at = next((i for i, point in enumerate(points) if point.id == entered.point), -1)
    if at < 0:
        needs.stop(f"{path}/point")
        return -1
    held = f"/zone/points/{points[at].id}/"
    for missing in tuple(needs.leaves_out):
        if missing.path.startswith(held) and "/branch/" not in missing.path:
            needs.stop(missing.path, missing.reason)
    return at
