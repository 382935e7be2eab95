"""Slots of a set with their pumps and legs, from the document."""

import math
from functools import lru_cache

import numpy as np

from server.hydraulics.leg_curve import LegCurve, leg_curve
from server.hydraulics.pump_curve import PumpCurve
from server.station.conduit import Leg
from server.station.pump import Pump
from server.station.pump_set import PumpSet
from server.station.pump_set import Slot as EnteredSlot
from server.station.station import Station
from server.studies.duty_result import SlotFacts
from server.studies.limits import StudyLimits
from server.studies.lowering.curves import KEPT, SlotCurve, slot_curve
from server.studies.lowering.lowered import Slot, Unit
from server.studies.lowering.needs import Needs, si_or_none
from server.studies.lowering.pipes import branches

DRIVE_EFFICIENCY = 0.97  # default where none is entered, criteria.md [-]
NPSH_EXPONENT = 2.0
MOST_COMBINATIONS = 512  # numbers running that are looked at
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
    index: dict[tuple[str, str, float | None, str, bool], int] = {}
    slots = []
    for slot in pump_set.slots:
        path = f"{base}/{slot.id}"
        pump, leg = pumps.get(slot.pump or ""), legs.get(slot.leg or "")
        if pump is None:
            needs.stop(f"{path}/pump")
        if leg is None:
            needs.stop(f"{path}/leg")
        if pump is None or leg is None:
            continue
        curve = slot_curve(pump, slot, path, needs)
        if curve is None:
            continue
        fixed = slot.drive == "fixed"
        key = (pump.id, curve.entered.id, curve.diameter, leg.id, fixed)
        if key not in index:
            unit = _unit(pump, curve.curve, leg, fixed, needs)
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


def _unit(pump: Pump, lowered: PumpCurve, leg: Leg, fixed: bool, needs: Needs) -> Unit | None:
    """Return a pump in its leg, None when its curve cannot be had."""
    suction, discharge, suction_bore, discharge_bore, cracking, open_at, assumed = branches(
        leg, needs
    )
    path = f"/pumps/{pump.id}"
    motor = needs.part(f"{path}/motor_efficiency", pump.motor_efficiency)
    # straight on the line nothing is lost in a drive
    drive = 1.0
    if not fixed:
        drive = needs.default(
            f"{path}/drive_efficiency", pump.drive_efficiency, DRIVE_EFFICIENCY
        )
    region = pump.allowable_region
    needs.part(f"{path}/allowable_region/low", region.low)
    needs.part(f"{path}/allowable_region/high", region.high)
    if not math.isfinite(suction + discharge):
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
        fixed=fixed,
        npsh_exponent=NPSH_EXPONENT if pump.npsh_exponent is None else pump.npsh_exponent,
        motor_efficiency=motor,
        drive_efficiency=drive,
    )


@lru_cache(maxsize=KEPT)
def _leg(curve: PumpCurve, loss: float) -> LegCurve:
    return leg_curve(curve, loss=loss)


def _facts(
    slot: EnteredSlot,
    pump: Pump,
    curve: SlotCurve,
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
        curve=curve.entered.id,
        fixed=unit.fixed,
        diameter=curve.diameter,
        trim_ratio=curve.trim_ratio,
        smoothing_residual=(None if of.smoothing is None else of.smoothing.largest_residual),
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
        largest_shaft_power=_largest_power(of, 1.0 if unit.fixed else highest_speed, density),
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
