"""The supplying zone checked both ways: its own worst flows beside the station's draw."""

from dataclasses import dataclass
from typing import Literal

from server.hydraulics.water import GRAVITY
from server.station.supply import SupplyingZone
from server.studies.lowering.lowered import ZONE_EXPONENT

PATH = "/supply/supplying_zone"
FIELDS = (
    "loss", "at_flow", "source_grade", "lowest_customer_level", "maximum_day", "peak_hour",
    "fire_flow",
)  # fmt: skip
Check = Literal["peak_hour", "fire_there", "fire_here"]


@dataclass(frozen=True, slots=True)
class ZoneCheck:
    """Pressure at the supplying zone's highest ground in one of the three checks."""

    check: Check
    flow: float  # its own and the station's [m3/s]
    pressure: float  # gauge [Pa]


def absent_fields(zone: SupplyingZone) -> tuple[str, ...]:
    """Return the paths of the figures of the supplying zone that are not entered."""
    return tuple(f"{PATH}/{name}" for name in FIELDS if getattr(zone, name) is None)


def check_supplying_zone(
    zone: SupplyingZone, *, station_peak: float, station_fire: float | None, density: float
) -> tuple[ZoneCheck, ...]:
    """Return the three checks; none while a figure of the zone is absent.

    Parameters
    ----------
    zone : SupplyingZone
        The zone as entered; its loss, known at one flow, grows with flow to the power 1.852.
    station_peak : float
        Largest draw of the station without a fire. [m3/s]
    station_fire : float or None
        Its largest draw with a fire; None when no fire is pumped. [m3/s]
    density : float
        Of the water. [kg/m3]

    Notes
    -----
    The station's whole draw is put on the path to the zone's worst customer: on the safe side.

    References
    ----------
    .. [1] Washington State Department of Health, publication 331-123, sections 10.2 and 10.2.2.
    """
    if (
        zone.loss is None or zone.at_flow is None or zone.source_grade is None
        or zone.lowest_customer_level is None or zone.maximum_day is None
        or zone.peak_hour is None or zone.fire_flow is None
    ):  # fmt: skip
        return ()
    flows: list[tuple[Check, float]] = [
        ("peak_hour", zone.peak_hour.si + station_peak),
        ("fire_there", zone.fire_flow.si + zone.maximum_day.si + station_peak),
    ]
    if station_fire is not None:
        flows.append(("fire_here", zone.peak_hour.si + station_fire))
    checks = []
    for check, flow in flows:
        lost = zone.loss.si * (flow / zone.at_flow.si) ** ZONE_EXPONENT
        head = zone.source_grade.si - lost - zone.lowest_customer_level.si
        checks.append(ZoneCheck(check, flow, density * GRAVITY * head))
    return tuple(checks)
