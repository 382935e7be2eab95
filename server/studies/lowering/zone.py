"""Named points, scenarios and the demand of each horizon from the document."""

from collections.abc import Sequence
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from server.station.demand import Fire, Horizon, Scenario
from server.station.station import Station
from server.station.zone import BranchLoss, LossAtFlow, Point
from server.studies.duty_result import PointFacts
from server.studies.limits import StudyLimits
from server.studies.lowering.lowered import ZONE_EXPONENT, Floats, Growth, ZonePoints
from server.studies.lowering.lowered import Scenario as LoweredScenario
from server.studies.lowering.needs import NAN, NOT_IN_THIS_VERSION, Needs, si_or_none
from server.studies.lowering.tank import TANK_STATES

DemandName = Literal["average_day", "maximum_day", "peak_hour", "minimum_night", "none"]


def points(station: Station, limits: StudyLimits, needs: Needs) -> ZonePoints:
    """Return the named points; one without elevation or loss stays, with nan."""
    zone = station.zone
    if zone.kind is None:
        needs.stop("/zone/kind")
    # a tank holds the grade of its zone, whatever the pumps do: points may be left out there
    if not zone.points and zone.kind != "tank":
        needs.stop("/zone/points")
    rows = [_point(point, needs) for point in zone.points]
    numbers = np.array([row[1:] for row in rows], dtype=np.float64).reshape(len(rows), 4)
    return ZonePoints(
        facts=tuple(row[0] for row in rows),
        elevation=numbers[:, 0],
        coefficient=numbers[:, 1],
        fire_share=numbers[:, 2],
        branch_coefficient=numbers[:, 3],
        **_asked([row[0] for row in rows], limits),
    )


def _asked(facts: Sequence[PointFacts], limits: StudyLimits) -> dict[str, Floats]:
    """Return the least pressures: typed at the point, else by the criteria.

    Without a fire a hydrant asks for none unless one is typed.
    """

    def column(typed: Sequence[float | None], default: Sequence[float]) -> NDArray[np.float64]:
        pairs = zip(typed, default, strict=True)
        return np.array([d if t is None else t for t, d in pairs], dtype=np.float64)

    normal = [-np.inf if p.role == "hydrant" else limits.service_pressure for p in facts]
    every = range(len(facts))
    return {
        "least_normal": column([p.required_pressure for p in facts], normal),
        "least_fire": column(
            [p.fire_pressure for p in facts], [limits.fire_pressure for _ in every]
        ),
        "least_residual": column(
            [p.residual_pressure for p in facts], [limits.hydrant_residual for _ in every]
        ),
    }


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


def scenarios(
    station: Station, barrels_out: Sequence[str], needs: Needs
) -> tuple[LoweredScenario, ...]:
    """Return the scenarios in use; one without its flow is left out and told.

    Parameters
    ----------
    station : Station
        The document.
    barrels_out : sequence of str
        Ids of the reaches that lie with one barrel out in some scenario.
    needs : Needs
        Gathers what is absent.
    """
    used = [scenario for scenario in station.scenarios if scenario.on]
    lowered = tuple(
        one
        for scenario in used
        if (one := _scenario(station, scenario, barrels_out, needs)) is not None
    )
    if not used:
        needs.stop("/scenarios")
    elif not lowered:
        # nothing is left to solve: what left each scenario out now stands in the way
        for missing in needs.leaves_out:
            if missing.path.startswith(("/scenarios", "/horizons", "/fires")):
                needs.stop(missing.path, missing.reason)
    return lowered


def barrels_out(station: Station, needs: Needs) -> tuple[str, ...]:
    """Return the reaches of which a scenario in use takes one barrel out.

    A single barrel cannot be out: then the main is shut, and the scenario is left out.
    """
    several = {reach.id: reach.barrels > 1 for reach in station.discharge_main.reaches}
    out = dict.fromkeys(
        scenario.barrel_out
        for scenario in station.scenarios
        if scenario.on and scenario.barrel_out is not None
    )
    for scenario in station.scenarios:
        if scenario.on and scenario.barrel_out is not None and not several[scenario.barrel_out]:
            needs.leave_out(f"/scenarios/{scenario.id}/barrel_out", "single_barrel")
    return tuple(reach for reach in out if several[reach])


def _scenario(
    station: Station, scenario: Scenario, out: Sequence[str], needs: Needs
) -> LoweredScenario | None:
    path = f"/scenarios/{scenario.id}"
    if scenario.barrel_out is not None and scenario.barrel_out not in out:
        return None
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
        low_shift=_low_shift(station, horizon),
        tank_state=TANK_STATES.index(scenario.tank_state or "normal"),
        way=0 if scenario.barrel_out is None else 1 + out.index(scenario.barrel_out),
    )  # fmt: skip


def _low_shift(station: Station, horizon: Horizon) -> float:
    """Return the year's own shift of the low state, nan where the supply's holds."""
    if horizon.low_state is None or station.supply.kind == "tank":
        return NAN
    return horizon.low_state.si


def _fire_of(station: Station, scenario: Scenario) -> Fire | None:
    return next((fire for fire in station.fires if fire.id == scenario.fire), None)


def _domestic(horizon: Horizon, name: DemandName, needs: Needs) -> float:
    if name == "none":
        return 0.0
    return needs.part(f"/horizons/{horizon.id}/demand/{name}", getattr(horizon.demand, name))


def _fire_flow(station: Station, fire: Fire, needs: Needs) -> tuple[float, int]:
    """Return the flow of a fire that the pumps carry, and the index of its hydrant."""
    path = f"/fires/{fire.id}"
    floats = station.zone.kind in ("tank", "both") and station.zone.tank.use == "floating"
    if fire.carried_by == "bypass" or (fire.carried_by == "storage" and not floats):
        needs.leave_out(f"{path}/carried_by", NOT_IN_THIS_VERSION)
        return NAN, -1
    flow = needs.part(f"{path}/flow", fire.flow)
    at = next((i for i, point in enumerate(station.zone.points) if point.id == fire.point), -1)
    if at < 0 and station.zone.points:
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
        day = NAN
        if station.zone.kind in ("tank", "both"):
            day = needs.part(f"{path}/demand/maximum_day", horizon.demand.maximum_day)
        if horizon.low_state is not None and station.supply.kind == "tank":
            needs.leave_out(f"{path}/low_state", "low_state_not_of_a_tank")
        if horizon.year is None:
            needs.leave_out(f"{path}/year")
        rows.append(
            Growth(
                id=horizon.id,
                order=order,
                year=horizon.year,
                maximum_day=None if np.isnan(day) else day,
                peak_hour=None if np.isnan(peak) else peak,
                fires=tuple(fires),
                low_shift=_low_shift(station, horizon),
            )
        )
    return tuple(rows)
