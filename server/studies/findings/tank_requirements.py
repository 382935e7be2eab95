"""Requirement rows of a station that fills a tank, and those that depend on the supply."""

from server.station.station import Station
from server.studies.duty_result import DutyResult, FirmCapacity
from server.studies.findings.criteria import Criterion
from server.studies.findings.judged_set import amount
from server.studies.findings.reading import Reading
from server.studies.findings.requirement_table import NO_DUTY, RequirementRow, Table
from server.units import Dimension as D


def tank_rows(
    station: Station,
    result: DutyResult,
    table: Table,
    firm: list[FirmCapacity],
    criteria: dict[str, Criterion],
) -> tuple[RequirementRow, ...]:
    """Return the rows for a set that fills a tank.

    The tank levels the hours out and holds the fire, so that refill, every stage's region and
    the storage stand in the place of peak hour and fire.
    """
    hours = amount("hours", criteria["firm-tank-hours"].si, D.TIME)
    rows = [
        table.firm("tank_refill", (hours,), (), firm, NO_DUTY, lambda r: True),
        table.region("region", _without_fire),
        npsh_row(table, criteria),
        table.plain("motor", (), (), ("motor_overloaded",), lambda r: True),
        *suction_rows(station, result, table, criteria),
    ]
    if station.zone.points:
        least = amount("service", criteria["service-pressure-min"].si, D.PRESSURE)
        most = amount("limit", criteria["service-pressure-max"].si, D.PRESSURE)
        rows += [
            table.plain("peak_hour", (least,), (("point", ""),), ("pressure_low",),
                        lambda r: True),
            table.plain("highest_pressure", (most,), (("point", ""),), ("pressure_high",),
                        lambda r: True),
        ]  # fmt: skip
    if any(fire.carried_by == "storage" for fire in station.fires):
        rows.append(table.failing("fire_storage", ("fire_storage_short",), "fire_storage"))
    return tuple(rows)


def _without_fire(reading: Reading) -> bool:
    return reading.case is not None


def npsh_row(table: Table, criteria: dict[str, Criterion]) -> RequirementRow:
    """Return the row of NPSH in every state, cut-out and one pump alone included."""
    return table.plain(
        "npsh",
        (amount("ratio", criteria["npsh-ratio-min"].si, D.NUMBER, 1),
         amount("margin", criteria["npsh-margin-min"].si, D.HEAD)), (),
        ("npsh_broken", "npsh_short", "no_water_at_suction"), lambda r: True,
    )  # fmt: skip


def suction_rows(
    station: Station, result: DutyResult, table: Table, criteria: dict[str, Criterion]
) -> tuple[RequirementRow, ...]:
    """Return the rows of the supply: a main's least pressure, or a tank's outlet."""
    if result.supply_kind == "tank":
        return (table.plain("submergence", (), (), ("submergence_short",), lambda r: True),)
    limit = amount("limit", criteria["suction-main-minimum"].si, D.PRESSURE)
    return (
        table.plain("suction_main", (limit,),
                    (("supply", station.supply.title or "Supplying main"),), (), _of_main),
        table.plain("supplying_zone", (), (), ("supplying_zone_low",), lambda r: True),
    )  # fmt: skip


def _of_main(reading: Reading) -> bool:
    criterion = reading.criterion
    return criterion is not None and criterion.endswith("/suction-main-minimum")
