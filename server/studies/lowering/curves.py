"""The curve that stands in a slot: fitted or smoothed, at the slot's own diameter."""

import math
from dataclasses import dataclass
from functools import lru_cache

from server.hydraulics.diameters import curve_for_diameter
from server.hydraulics.errors import CurveRefused
from server.hydraulics.pump_curve import PumpCurve, pump_curve
from server.hydraulics.smoothed_curve import smoothed
from server.hydraulics.trim import trimmed
from server.station.pump import Curve, CurveTable, Pump
from server.station.pump_set import Slot
from server.studies.lowering.needs import Needs, si_or_none
from server.units import to_si

COLUMNS = ("flow", "head", "efficiency", "shaft_power", "npsh_required")
KEPT = 64  # curves of pumps kept between lowerings
SAME_DIAMETER = 1e-9  # relative


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class SlotCurve:
    """The curve of a slot and where it comes from."""

    entered: Curve  # the tested curve, or the largest of those that it is read between
    curve: PumpCurve
    diameter: float | None  # [m]
    trim_ratio: float | None  # trimmed over tested diameter; None: not trimmed


def slot_curve(pump: Pump, slot: Slot, path: str, needs: Needs) -> SlotCurve | None:
    """Return the curve of a pump in a slot at `path`, None when it cannot be had."""
    if not pump.curves:
        needs.stop(f"/pumps/{pump.id}/curves")
        return None
    chosen = pump.curves[0]
    if slot.curve is not None:
        found = next((curve for curve in pump.curves if curve.id == slot.curve), None)
        if found is None:
            needs.stop(f"{path}/curve")
            return None
        chosen = found
    if slot.diameter is None:
        lowered = _tested(pump, chosen, needs)
        if lowered is None:
            return None
        return SlotCurve(
            entered=chosen, curve=lowered, diameter=si_or_none(chosen.diameter), trim_ratio=None
        )
    sized = [curve for curve in pump.curves if curve.diameter is not None]
    if slot.curve is None and len(sized) > 1:
        return _among(pump, sized, slot.diameter.si, path, needs)
    if chosen.diameter is None:
        needs.stop(f"/pumps/{pump.id}/curves/{chosen.id}/diameter")
        return None
    return _cut(pump, chosen, slot.diameter.si, path, needs)


def _among(
    pump: Pump, sized: list[Curve], diameter: float, path: str, needs: Needs
) -> SlotCurve | None:
    """Return the curve between tested diameters, or trimmed from the smallest of them."""
    sizes = [curve.diameter.si for curve in sized if curve.diameter is not None]
    smallest = sized[sizes.index(min(sizes))]
    if diameter < min(sizes) * (1.0 - SAME_DIAMETER):
        return _cut(pump, smallest, diameter, path, needs)
    lowered = [_tested(pump, curve, needs) for curve in sized]
    if None in lowered:
        return None
    near = next((s for s in sizes if math.isclose(s, diameter, rel_tol=SAME_DIAMETER)), None)
    try:
        read = _between(tuple(lowered), tuple(sizes), diameter if near is None else near)
    except CurveRefused as refused:
        needs.stop(f"{path}/diameter", refused.reason)
        return None
    largest = sized[sizes.index(max(sizes))]
    return SlotCurve(entered=largest, curve=read, diameter=diameter, trim_ratio=None)


def _cut(
    pump: Pump, tested: Curve, diameter: float, path: str, needs: Needs
) -> SlotCurve | None:
    """Return a tested curve trimmed to a diameter."""
    lowered = _tested(pump, tested, needs)
    if lowered is None or tested.diameter is None:
        return None
    full = tested.diameter.si
    ratio = diameter / full
    if math.isclose(ratio, 1.0, rel_tol=SAME_DIAMETER):
        return SlotCurve(entered=tested, curve=lowered, diameter=full, trim_ratio=None)
    least = None if pump.least_diameter is None else pump.least_diameter.si / full
    try:
        cut = _trimmed(lowered, ratio, least)
    except CurveRefused as refused:
        needs.stop(f"{path}/diameter", refused.reason)
        return None
    return SlotCurve(entered=tested, curve=cut, diameter=diameter, trim_ratio=ratio)


def _tested(pump: Pump, curve: Curve, needs: Needs) -> PumpCurve | None:
    """Return a tested curve, None when its rows cannot carry one."""
    path = f"/pumps/{pump.id}/curves/{curve.id}"
    speed = needs.must(f"/pumps/{pump.id}/speed", pump.speed)
    if not curve.table.rows:
        needs.stop(f"{path}/table")
        return None
    if not math.isfinite(speed):
        return None
    eyes = 2 if pump.kind == "double_suction" else 1
    best = si_or_none(curve.best_efficiency_flow)
    try:
        lowered = _fitted(curve.table, best, speed, pump.stages, eyes)
    except CurveRefused as refused:
        stated = refused.reason == "bep_outside_rows"
        needs.stop(f"{path}/{'best_efficiency_flow' if stated else 'table'}", refused.reason)
        return None
    if curve.fit == "smoothed":
        try:
            lowered = _smoothed(lowered)
        except CurveRefused as refused:
            needs.stop(f"{path}/fit", refused.reason)
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
def _smoothed(curve: PumpCurve) -> PumpCurve:
    return smoothed(curve)


@lru_cache(maxsize=KEPT)
def _trimmed(curve: PumpCurve, ratio: float, least: float | None) -> PumpCurve:
    return trimmed(curve, ratio=ratio, least_ratio=least).curve


@lru_cache(maxsize=KEPT)
def _between(
    curves: tuple[PumpCurve, ...], diameters: tuple[float, ...], diameter: float
) -> PumpCurve:
    return curve_for_diameter(curves, diameters=diameters, diameter=diameter)


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
