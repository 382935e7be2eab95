"""Firm capacity, the number of units, and the zone with the station off."""

from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from server.studies.duty_result import FirmCapacity, StationOff
from server.studies.findings.judge_suction import SUCTION_LIMITS, low_state
from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.findings.reading import Reading, broken
from server.studies.shapes import Case, Finding, Path, Severity
from server.units import Dimension as D

_OFF_CODES = {
    Severity.STOP: "station_off",
    Severity.NOT_CHECKED: "station_off_not_checked",
}
FIRM_CODES = {
    "peak_hour": "firm_peak_hour_short",
    "maximum_day_fire": "firm_fire_short",
    "tank_refill": "firm_refill_short",
}


def judge_capacity(
    judged: JudgedSet, suction: list[Reading]
) -> tuple[list[Reading], list[Finding]]:
    """Return the readings of firm capacity, and what happens when the station is off.

    Parameters
    ----------
    judged : JudgedSet
        The set.
    suction : list of Reading
        Readings of the suction side: a capacity short for the same reason is told there.
    """
    told = any(broken(reading) and reading.code.startswith("suction_") for reading in suction)
    readings = [firm_reading(judged, firm, told) for firm in judged.result.made.firm_capacity]
    readings.append(_units(judged))
    off = judged.result.made.station_off
    findings = list(_not_checked(judged))
    return readings, findings if off is None else [*findings, *_station_off(judged, off)]


def _not_checked(judged: JudgedSet) -> Iterator[Finding]:
    """Yield that a limit could not be counted: then a capacity that seems enough may not be."""
    open_ = [firm for firm in judged.result.made.firm_capacity if is_open(firm)]
    if not open_:
        return
    limits = dict.fromkeys(name for firm in open_ for name in firm.not_counted)
    yield Finding(
        code="firm_not_checked", severity=Severity.NOT_CHECKED, subject=judged.path,
        pump_set=judged.id, criterion=judged.criterion("firm-units-out"),
        governing=firm_case(judged, open_[0]),
        cases=tuple(firm_case(judged, firm) for firm in open_),
        names=(("set", judged.title),), basis="firm-units-out",
        mend=tuple(path for name in limits for path in _fields_of(judged, name)),
        because="absent",
    )  # fmt: skip


def is_open(firm: FirmCapacity) -> bool:
    """Return whether a capacity is enough by the limits that are known, but not by all."""
    return bool(firm.not_counted) and firm.by_all >= firm.required_flow


def _fields_of(judged: JudgedSet, limit: str) -> tuple[Path, ...]:
    """Return the absent fields for want of which a limit could not be counted."""
    bases: tuple[Path, ...] = {
        "connection": ("/supply/connection_level",),
        "suction_gauge": ("/site/suction_gauge_level",),
        "npsh": ("/site/eye_level", "/site/altitude", "/pumps/"),
    }.get(limit, (f"/zone/points/{limit.removeprefix('point:')}/",))
    return tuple(
        path
        for path, reason in judged.result.needs_missing
        if path.startswith(bases)
        and reason == ("no_npsh_rows" if path.startswith("/pumps/") else "absent")
    )


def firm_case(judged: JudgedSet, firm: FirmCapacity) -> Case:
    """Return the case in which a firm capacity is found."""
    return Case(
        f"made:firm-{firm.requirement}", judged.id, firm.horizon, "low", "aged", firm.unit_out
    )


def firm_reading(judged: JudgedSet, firm: FirmCapacity, told: bool) -> Reading:
    """Return the reading of one firm capacity."""
    by_suction = firm.by_all_limit in SUCTION_LIMITS and firm.by_head >= firm.required_flow
    slots = {slot.id: slot.title for slot in judged.slots}
    return Reading(
        code="told_elsewhere" if by_suction and told else FIRM_CODES[firm.requirement],
        severity=Severity.FAIL, subject=judged.path, pump_set=judged.id,
        criterion=judged.criterion("firm-units-out"), case=firm_case(judged, firm),
        provided=amount("firm", None if is_open(firm) else firm.by_all, D.FLOW),
        required=amount("required", firm.required_flow, D.FLOW), sense="at_least",
        others=(amount("by_head", firm.by_head, D.FLOW),
                amount("short", firm.required_flow - firm.by_all, D.FLOW),
                amount("hours", firm.hours, D.TIME)),
        names=(("set", judged.title), ("out", slots.get(firm.unit_out, "a unit")),
               ("limit", limit_words(judged, firm.by_all_limit))),
        mend=_mend_firm(judged, firm),
    )  # fmt: skip


def limit_words(judged: JudgedSet, limit: str) -> str:
    """Return in words what limits a firm capacity."""
    if limit.startswith("point:"):
        titles = {point.id: point.title for point in judged.points}
        return f"the pressure at {titles.get(limit.removeprefix('point:'), 'a point')}"
    return {
        "curve_end": "the end of the pump curve",
        "connection": judged.station.supply.title or "the supplying main",
        "suction_gauge": "the suction gauge",
        "npsh": "the NPSH margin",
        "no_unit": "no unit left",
        "tank_level": "the full tank",
        "held_flow": "the flow that is held",
    }.get(limit, limit.replace("_", " "))


def _mend_firm(judged: JudgedSet, firm: FirmCapacity) -> tuple[Path, ...]:
    if firm.by_all_limit in SUCTION_LIMITS:
        return (low_state(judged), f"{judged.path}/slots")
    order = sorted(range(len(judged.slots)), key=lambda n: judged.slots[n].role == "jockey")
    tables = tuple(dict.fromkeys(f"{judged.curve_path(n)}/table" for n in order))
    # with one unit left none, a larger pump mends nothing: another slot does
    if firm.by_all <= 0:
        return (f"{judged.path}/slots", *tables)
    return (*tables, f"{judged.path}/slots")


def _units(judged: JudgedSet) -> Reading:
    number = sum(1 for slot in judged.slots if slot.pump is not None)
    return Reading(
        code="units_few", severity=Severity.FAIL, subject=f"{judged.path}/slots",
        pump_set=judged.id, criterion=judged.criterion("units-least"), case=None,
        provided=amount("units", float(number), D.NUMBER, 0),
        required=amount("required", judged.limit("units-least"), D.NUMBER, 0), sense="at_least",
        mend=(f"{judged.path}/slots",), names=(("set", judged.title),), at_limit_share=0.0,
    )  # fmt: skip


def _station_off(judged: JudgedSet, off: StationOff) -> Iterator[Finding]:
    """Yield what the zone has without the pumps: a stop unless standby power is named."""
    limit = judged.limit("station-off-pressure-min")
    served = [p for p, point in enumerate(judged.points) if point.role != "hydrant"]
    if not served:
        return
    pressures = off.arithmetic_pressure[:, served]
    low = [i for i in range(len(off.cases)) if bool((pressures[i] < limit).any())]
    if not low:
        return
    low.sort(key=lambda i: float(np.nanmin(pressures[i])))
    worst = low[0]
    p = served[int(np.nanargmin(pressures[worst]))]
    standby = judged.entered.standby_power
    path = f"{judged.path}/standby_power"
    drains = bool(off.drains[worst, p])
    severity, mend, because = _standby(judged, path)
    pressure, transfer = float(off.arithmetic_pressure[worst, p]), standby.transfer_time
    dry = sum(1 for i in low if bool(off.drains[i, served].any()))
    yield Finding(
        code=_OFF_CODES.get(severity, "station_off_relies_on_standby"),
        severity=severity, subject="/zone", pump_set=judged.id,
        criterion=judged.criterion("station-off-pressure-min"), governing=_off_case(off, worst),
        cases=tuple(dict.fromkeys(_off_case(off, i) for i in low)),
        # a figure below a vacuum is no pressure: it is not carried further
        provided=amount("pressure", None if drains else pressure, D.PRESSURE, 0),
        required=amount("required", limit, D.PRESSURE),
        others=(amount("transfer", None if transfer is None else transfer.si, D.TIME),),
        names=(("point", judged.points[p].title), ("set", judged.title),
               ("carries", standby.carries), ("kind", standby.kind or ""),
               ("water", "none" if drains else "below" if pressure < 0 else "low"),
               ("dry", str(dry)), ("number", str(len(low))), ("path", off.path)),
        basis="station-off-pressure-min", mend=mend, because=because,
    )  # fmt: skip


def _off_case(off: StationOff, i: int) -> Case:
    """Return a case with the station off: which unit is out no longer matters."""
    return replace(off.cases[i], out=None)


def _standby(judged: JudgedSet, path: Path) -> tuple[Severity, tuple[Path, ...], str | None]:
    """Return how the station off weighs by the standby power that is named."""
    standby = judged.entered.standby_power
    if standby.kind is None:
        return Severity.NOT_CHECKED, (f"{path}/kind",), "absent"
    if standby.kind == "none":
        return Severity.STOP, (f"{path}/kind", "/supply/bypass/fitted"), None
    if standby.transfer_time is None:
        return Severity.NOT_CHECKED, (f"{path}/transfer_time",), "absent"
    # a higher supply, or a lower zone, would do without
    return Severity.CAUTION, ("/supply/states/low", "/supply/bypass/fitted"), None
