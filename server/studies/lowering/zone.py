"""Named points, scenarios and the demand of each horizon from the document."""

from typing import Literal

import numpy as np

from server.station.demand import Fire, Horizon, Scenario
from server.station.station import Station
from server.station.zone import BranchLoss, LossAtFlow, Point
from server.studies.duty_result import PointFacts
from server.studies.lowering.lowered import ZONE_EXPONENT, Growth, ZonePoints
from server.studies.lowering.lowered import Scenario as LoweredScenario
from server.studies.lowering.needs import NAN, NOT_IN_THIS_VERSION, Needs, si_or_none

DemandName = Literal["average_day", "maximum_day", "peak_hour", "minimum_night", "none"]


def points(station: Station, needs: Needs) -> ZonePoints:
    """Return the named points; one without elevation or loss stays, with nan."""
    zone = station.zone
    if zone.kind is None:
        needs.stop("/zone/kind")
    elif zone.kind != "closed":
        needs.stop("/zone/kind", NOT_IN_THIS_VERSION)
    if not zone.points:
        needs.stop("/zone/points")
    rows = [_point(point, needs) for point in zone.points]
    numbers = np.array([row[1:] for row in rows], dtype=np.float64).reshape(len(rows), 4)
    return ZonePoints(
        facts=tuple(row[0] for row in rows),
        elevation=numbers[:, 0],
        coefficient=numbers[:, 1],
        fire_share=numbers[:, 2],
        branch_coefficient=numbers[:, 3],
    )


def _point(point: Point, needs: Needs) -> tuple[PointFacts, float, float, float, float]:
    path = f"/zone/points/{point.id}"
    elevation = needs.part(f"{path}/elevation", point.elevation)
    loss = _coefficient(f"{path}/loss", point.loss, needs)
    share = 1.0 if point.fire_share is None else point.fire_share
    without_branch = point.branch.loss is None and point.branch.at_flow is None
    branch = 0.0 if without_branch else _coefficient(f"{path}/branch", point.branch, needs)
    facts = PointFacts(
        id=point.id, title=point.title, role=point.role, elevation=elevation,
        required_pressure=si_or_none(point.required_pressure),
        fire_pressure=si_or_none(point.fire_pressure),
        residual_pressure=si_or_none(point.residual_pressure),
        highest_pressure=si_or_none(point.highest_pressure),
        highest_pressure_abnormal=si_or_none(point.highest_pressure_abnormal),
    )  # fmt: skip
    return facts, elevation, loss, share, branch


def _coefficient(path: str, given: LossAtFlow | BranchLoss, needs: Needs) -> float:
    """Return c of h = c Q^1.852 from a loss at a flow; a loss of zero needs no flow."""
    loss = needs.part(f"{path}/loss", given.loss)
    if loss == 0:
        return 0.0
    flow = needs.part(f"{path}/at_flow", given.at_flow)
    return float(loss / flow**ZONE_EXPONENT)


def scenarios(station: Station, needs: Needs) -> tuple[LoweredScenario, ...]:
    """Return the scenarios in use; one without its flow is left out and told."""
    used = [scenario for scenario in station.scenarios if scenario.on]
    lowered = tuple(
        one for scenario in used if (one := _scenario(station, scenario, needs)) is not None
    )
    if not used:
        needs.stop("/scenarios")
    elif not lowered:
        # nothing is left to solve: what left each scenario out now stands in the way
        for missing in needs.leaves_out:
            if missing.path.startswith(("/scenarios", "/horizons", "/fires")):
                needs.stop(missing.path, missing.reason)
    return lowered


def _scenario(station: Station, scenario: Scenario, needs: Needs) -> LoweredScenario | None:
    path = f"/scenarios/{scenario.id}"
    order = {horizon.id: i for i, horizon in enumerate(station.horizons)}
    if scenario.horizon is None or scenario.horizon not in order:
        needs.leave_out(f"{path}/horizon")
        return None
    horizon = station.horizons[order[scenario.horizon]]
    fire = _fire_of(station, scenario)
    if scenario.fire is not None and fire is None:
        needs.leave_out(f"{path}/fire")
        return None
    asked = scenario.demand or (fire.beside if fire is not None else None)
    if asked is None:
        needs.leave_out(f"{path}/demand")
        return None
    domestic = _domestic(horizon, asked, needs)
    burning, at = (0.0, -1) if fire is None else _fire_flow(station, fire, needs)
    if not np.isfinite(domestic + burning):
        return None
    return LoweredScenario(
        id=scenario.id, horizon=horizon.id, horizon_order=order[horizon.id],
        domestic=domestic, fire=burning, fire_point=at, is_fire=fire is not None,
        shown=scenario.supply, pipes=scenario.pipes, largest_out=scenario.out == "largest",
        low_shift=_low_shift(horizon),
    )  # fmt: skip


def _low_shift(horizon: Horizon) -> float:
    """Return the year's own shift of the low state, nan where the supply's holds."""
    return NAN if horizon.low_state is None else horizon.low_state.si


def _fire_of(station: Station, scenario: Scenario) -> Fire | None:
    return next((fire for fire in station.fires if fire.id == scenario.fire), None)


def _domestic(horizon: Horizon, name: DemandName, needs: Needs) -> float:
    if name == "none":
        return 0.0
    return needs.part(f"/horizons/{horizon.id}/demand/{name}", getattr(horizon.demand, name))


def _fire_flow(station: Station, fire: Fire, needs: Needs) -> tuple[float, int]:
    """Return the flow of a fire that the pumps carry, and the index of its hydrant."""
    path = f"/fires/{fire.id}"
    if fire.carried_by != "pumps":
        needs.leave_out(f"{path}/carried_by", NOT_IN_THIS_VERSION)
        return NAN, -1
    flow = needs.part(f"{path}/flow", fire.flow)
    at = next((i for i, point in enumerate(station.zone.points) if point.id == fire.point), -1)
    if at < 0:
        needs.leave_out(f"{path}/point")
    return flow, at


def growth(station: Station, needs: Needs) -> tuple[Growth, ...]:
    """Return what each horizon asks of firm capacity; what is absent is told and left out."""
    rows = []
    for order, horizon in enumerate(station.horizons):
        path = f"/horizons/{horizon.id}"
        peak = needs.part(f"{path}/demand/peak_hour", horizon.demand.peak_hour)
        fires = []
        for fire in station.fires:
            beside = _domestic(horizon, fire.beside, needs)
            flow, at = _fire_flow(station, fire, needs)
            if np.isfinite(beside + flow):
                fires.append((fire.id, beside, flow, at))
        if horizon.year is None:
            needs.leave_out(f"{path}/year")
        rows.append(
            Growth(
                id=horizon.id,
                order=order,
                year=horizon.year,
                peak_hour=None if np.isnan(peak) else peak,
                fires=tuple(fires),
                low_shift=_low_shift(horizon),
            )
        )
    return tuple(rows)
