"""Slots of a set with their pumps and legs, from the document."""

import math
from functools import lru_cache

import numpy as np

from server.hydraulics.errors import CurveRefused
from server.hydraulics.leg_curve import LegCurve, leg_curve
from server.hydraulics.pump_curve import PumpCurve, pump_curve
from server.station.conduit import Leg
from server.station.pump import Curve, CurveTable, Pump
from server.station.pump_set import PumpSet
from server.station.pump_set import Slot as EnteredSlot
from server.station.station import Station
from server.studies.duty_result import SlotFacts
from server.studies.limits import StudyLimits
from server.studies.lowering.lowered import Slot, Unit
from server.studies.lowering.needs import NOT_IN_THIS_VERSION, Needs, si_or_none
from server.studies.lowering.pipes import branches
from server.units import to_si

DRIVE_EFFICIENCY = 0.97  # default where none is entered, criteria.md [-]
NPSH_EXPONENT = 2.0
COLUMNS = ("flow", "head", "efficiency", "shaft_power", "npsh_required")
MOST_COMBINATIONS = 512  # numbers running that are looked at
KEPT = 64  # curves of pumps kept between lowerings
POWER_READINGS = 241  # readings of a curve for its largest power


def units_and_slots(
    station: Station,
    pump_set: PumpSet,
    limits: StudyLimits,
    highest_speed: float,
    density: float,
    needs: Needs,
) -> tuple[tuple[Unit, ...], tuple[Slot, ...]]:
    """Return the units that stand in the set and its slots, in slot order."""
    base = f"/sets/{pump_set.id}/slots"
    if not pump_set.slots:
        needs.stop(base)
    pumps = {pump.id: pump for pump in station.pumps}
    legs = {leg.id: leg for leg in station.legs}
    order = {horizon.id: i for i, horizon in enumerate(station.horizons)}
    units: list[Unit] = []
    index: dict[tuple[str, str, str], int] = {}
    slots = []
    for slot in pump_set.slots:
        path = f"{base}/{slot.id}"
        pump, leg = pumps.get(slot.pump or ""), legs.get(slot.leg or "")
        if pump is None:
            needs.stop(f"{path}/pump")
        if leg is None:
            needs.stop(f"{path}/leg")
        if slot.drive == "fixed":
            needs.stop(f"{path}/drive", NOT_IN_THIS_VERSION)
        if pump is None or leg is None:
            continue
        curve = _curve_of(pump, slot, path, needs)
        if curve is None:
            continue
        key = (pump.id, curve.id, leg.id)
        if key not in index:
            unit = _unit(pump, curve, leg, needs)
            if unit is None:
                continue
            index[key] = len(units)
            units.append(unit)
        unit = units[index[key]]
        facts = _facts(slot, pump, curve, unit, limits, highest_speed, density)
        since = order.get(slot.from_horizon or "", 0)
        slots.append(Slot(facts=facts, unit=index[key], from_year=since))
    if pump_set.slots and all(slot.role == "standby" for slot in pump_set.slots):
        needs.stop(base, "only_standby_units")
    kinds = [slot.unit for slot in slots]
    if math.prod(kinds.count(kind) + 1 for kind in set(kinds)) > MOST_COMBINATIONS:
        needs.stop(base, "too_many_unlike_units")
    return tuple(units), tuple(slots)


def _curve_of(pump: Pump, slot: EnteredSlot, path: str, needs: Needs) -> Curve | None:
    if not pump.curves:
        needs.stop(f"/pumps/{pump.id}/curves")
        return None
    if slot.curve is None:
        return pump.curves[0]
    found = next((curve for curve in pump.curves if curve.id == slot.curve), None)
    if found is None:
        needs.stop(f"{path}/curve")
    return found


def _unit(pump: Pump, curve: Curve, leg: Leg, needs: Needs) -> Unit | None:
    """Return a pump in its leg, None when its curve cannot be had."""
    lowered = _curve(pump, curve, needs)
    suction, discharge, suction_bore, discharge_bore, cracking, open_at, assumed = branches(
        leg, needs
    )
    path = f"/pumps/{pump.id}"
    motor = needs.part(f"{path}/motor_efficiency", pump.motor_efficiency)
    drive = needs.default(f"{path}/drive_efficiency", pump.drive_efficiency, DRIVE_EFFICIENCY)
    region = pump.allowable_region
    needs.part(f"{path}/allowable_region/low", region.low)
    needs.part(f"{path}/allowable_region/high", region.high)
    if lowered is None or not math.isfinite(suction + discharge):
        return None
    return Unit(
        curve=lowered,
        leg=_leg(lowered, suction + discharge),
        suction_coefficient=suction,
        discharge_coefficient=discharge,
        suction_bore=suction_bore,
        discharge_bore=discharge_bore,
        cracking_head=cracking,
        full_open_velocity=open_at,
        full_open_assumed=assumed,
        npsh_exponent=NPSH_EXPONENT if pump.npsh_exponent is None else pump.npsh_exponent,
        motor_efficiency=motor,
        drive_efficiency=drive,
    )


def _curve(pump: Pump, curve: Curve, needs: Needs) -> PumpCurve | None:
    path = f"/pumps/{pump.id}/curves/{curve.id}"
    speed = needs.must(f"/pumps/{pump.id}/speed", pump.speed)
    if curve.fit == "smoothed":
        needs.stop(f"{path}/fit", NOT_IN_THIS_VERSION)
    if not curve.table.rows:
        needs.stop(f"{path}/table")
        return None
    if not math.isfinite(speed):
        return None
    eyes = 2 if pump.kind == "double_suction" else 1
    try:
        lowered = _fitted(
            curve.table, si_or_none(curve.best_efficiency_flow), speed, pump.stages, eyes
        )
    except CurveRefused as refused:
        stated = refused.reason == "bep_outside_rows"
        needs.stop(f"{path}/{'best_efficiency_flow' if stated else 'table'}", refused.reason)
        return None
    _say_what_the_rows_lack(f"{path}/table", lowered, needs)
    return lowered


@lru_cache(maxsize=KEPT)
def _fitted(
    table: CurveTable, best_flow: float | None, speed: float, stages: int, eyes: int
) -> PumpCurve:
    """Return the curve through a table; kept, as most edits leave the pumps alone."""
    columns = _columns(table)
    return pump_curve(
        columns["flow"] or [],
        head=columns["head"],
        tested_speed=speed * 60.0,  # a minute, as specific speed counts it
        efficiency=columns["efficiency"],
        shaft_power=columns["shaft_power"],
        npsh_required=columns["npsh_required"],
        bep_flow=best_flow,
        stages=stages,
        eyes=eyes,
    )


@lru_cache(maxsize=KEPT)
def _leg(curve: PumpCurve, loss: float) -> LegCurve:
    return leg_curve(curve, loss=loss)


def _say_what_the_rows_lack(path: str, curve: PumpCurve, needs: Needs) -> None:
    if curve.npsh_curve is None:
        needs.leave_out(path, "no_npsh_rows")
    if curve.efficiency_curve is None and curve.power_curve is None:
        needs.leave_out(path, "no_efficiency_rows")
    if curve.best is None:
        needs.leave_out(path, "best_efficiency_unknown")
    if curve.shutoff_head is None:
        needs.leave_out(path, "no_shutoff_row")


def _columns(table: CurveTable) -> dict[str, list[float | None] | None]:
    """Return the columns of the table in SI; a column without a unit is not in the table."""
    present = [name for name in COLUMNS if getattr(table.units, name)]
    columns: dict[str, list[float | None] | None] = dict.fromkeys(COLUMNS)
    for place, name in enumerate(present):
        unit = getattr(table.units, name)
        cells = [row[place] if place < len(row) else None for row in table.rows]
        columns[name] = [None if cell is None else to_si(cell, unit) for cell in cells]
    return columns


def _facts(
    slot: EnteredSlot,
    pump: Pump,
    curve: Curve,
    unit: Unit,
    limits: StudyLimits,
    highest_speed: float,
    density: float,
) -> SlotFacts:
    of = unit.curve
    region = pump.allowable_region
    specific_speed, rise = _figures(of)
    preferred = limits.preferred_region(specific_speed)
    minimum = si_or_none(pump.minimum_flow)
    return SlotFacts(
        id=slot.id,
        title=slot.title,
        role=slot.role,
        pump=pump.id,
        curve=curve.id,
        best_efficiency_flow=None if of.best is None else of.best.flow,
        best_efficiency_flow_by_rows=None if of.fitted_best is None else of.fitted_best.flow,
        best_efficiency=None if of.best is None else of.best.efficiency,
        shutoff_head=of.shutoff_head,
        last_flow=of.last_flow,
        preferred_low=preferred[0],
        preferred_high=preferred[1],
        allowable_low=si_or_none(region.low),
        allowable_high=si_or_none(region.high),
        minimum_flow=limits.minimum_flow if minimum is None else minimum,
        minimum_flow_assumed=minimum is None,
        motor_power=si_or_none(pump.motor_power),
        largest_shaft_power=_largest_power(of, highest_speed, density),
        motor_efficiency=si_or_none(pump.motor_efficiency),
        drive_efficiency=None if math.isnan(unit.drive_efficiency) else unit.drive_efficiency,
        specific_speed=specific_speed,
        rise_to_shutoff=rise,
        suction_bore=unit.suction_bore,
        discharge_bore=unit.discharge_bore,
    )


@lru_cache(maxsize=KEPT)
def _figures(curve: PumpCurve) -> tuple[float | None, float | None]:
    """Return specific speed and rise to shut-off, alike for all slots that share a curve."""
    return curve.specific_speed, curve.rise_to_shutoff


@lru_cache(maxsize=KEPT)
def _largest_power(curve: PumpCurve, speed: float, density: float) -> float | None:
    """Return the largest shaft power from the first to the last row at the highest speed."""
    flows = np.linspace(curve.first_flow, curve.last_flow, POWER_READINGS)
    power = curve.shaft_power(flows, density=density)
    if not np.any(np.isfinite(power)):
        return None
    return float(np.nanmax(power)) * speed**3
