"""Requirements by horizon: the table of the Summary and of the memo's first page."""

from collections.abc import Iterable

from server.station.station import Station
from server.studies.duty_result import DutyResult, FirmCapacity
from server.studies.findings.criteria import Criterion
from server.studies.findings.judged_set import amount
from server.studies.findings.reading import Reading
from server.studies.findings.requirement_table import (
    NO_DUTY,
    Keep,
    RequirementCell,
    RequirementRow,
    Table,
)
from server.studies.findings.tank_requirements import npsh_row, suction_rows, tank_rows
from server.studies.shapes import Amount
from server.units import Dimension as D

__all__ = ["RequirementCell", "RequirementRow", "requirement_rows"]


def requirement_rows(
    station: Station,
    result: DutyResult,
    readings: Iterable[Reading],
    criteria: dict[str, Criterion],
) -> tuple[RequirementRow, ...]:
    """Return the rows for one set.

    Parameters
    ----------
    station : Station
        The document.
    result : DutyResult
        Duty of the set that is proposed.
    readings : iterable of Reading
        All comparisons of the judgement.
    criteria : dict of str to Criterion
        The limits that hold.
    """
    own = [r for r in readings if r.pump_set in (None, result.pump_set)]
    demand = {scenario.id: scenario.demand for scenario in station.scenarios}
    fires = {scenario.id for scenario in station.scenarios if scenario.fire is not None}

    def of_demand(kind: str) -> Keep:
        return lambda r: (
            r.case is not None
            and demand.get(r.case.scenario) == kind
            and r.case.scenario not in fires
        )

    def in_fire(r: Reading) -> bool:
        return r.case is not None and r.case.scenario in fires

    by_code: dict[str, list[Reading]] = {}
    for reading in own:
        by_code.setdefault(reading.code, []).append(reading)
    table = Table(station, own, by_code)
    firm: dict[str, list[FirmCapacity]] = {}
    for capacity in result.made.firm_capacity:
        firm.setdefault(capacity.requirement, []).append(capacity)
    if result.zone_kind == "floating_tank":
        return tank_rows(station, result, table, firm.get("tank_refill", []), criteria)
    critical = _point(station, "critical")
    least = _asked(station, criteria, "critical", "required_pressure", "service-pressure-min")
    most = _asked(station, criteria, "lowest", "highest_pressure", "service-pressure-max")
    service = amount("service", least, D.PRESSURE)
    highest = amount("limit", most, D.PRESSURE)
    suction = suction_rows(station, result, table, criteria)
    return (
        table.firm("peak_hour", (service,), (("point", critical),), firm.get("peak_hour", []),
                   ("pressure_low", *NO_DUTY), of_demand("peak_hour")),
        table.plain("maximum_day", (service,), (("point", critical),),
                    ("pressure_low", *NO_DUTY), of_demand("maximum_day")),
        table.firm("maximum_day_fire", _fire_limits(station, criteria),
                   (("point", _point(station, "hydrant")),), firm.get("maximum_day_fire", []),
                   ("hydrant_residual_low", "fire_pressure_low", *NO_DUTY), in_fire),
        table.region("minimum_night", of_demand("minimum_night")),
        npsh_row(table, criteria),
        *suction[:1],
        table.plain("highest_pressure", (highest,), (("point", _point(station, "lowest")),),
                    ("pressure_high",), lambda r: True),
        *suction[1:],
    )  # fmt: skip


def _point(station: Station, role: str) -> str:
    return next((p.title for p in station.zone.points if p.role == role and p.title), "")


def _asked(
    station: Station, criteria: dict[str, Criterion], role: str, field: str, key: str
) -> float | None:
    """Return the limit typed at the first point of a role, else the criterion's."""
    for point in station.zone.points:
        if point.role == role and (typed := getattr(point, field)) is not None:
            return float(typed.si)
    return criteria[key].si


def _fire_limits(station: Station, criteria: dict[str, Criterion]) -> tuple[Amount, ...]:
    key = "hydrant-residual-min"
    residual = _asked(station, criteria, "hydrant", "residual_pressure", key)
    return (
        amount("residual", residual, D.PRESSURE),
        amount("fire", criteria["fire-pressure-min"].si, D.PRESSURE),
    )
