"""Pumps as stated: shape and extent of the curve, power against efficiency, the motor."""

from collections.abc import Iterator

import numpy as np

from server.hydraulics.water import GRAVITY
from server.station.pump import Curve, Pump
from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.findings.reading import Reading
from server.studies.shapes import Amount, Finding, Path, Severity
from server.units import Dimension as D
from server.units import to_si


def judge_pumps(judged: JudgedSet) -> tuple[list[Reading], list[Finding]]:
    """Return readings of every curve in the set, each curve once."""
    readings: list[Reading] = []
    findings: list[Finding] = []
    seen: set[str] = set()
    for n in range(len(judged.slots)):
        path = judged.curve_path(n)
        if path in seen:
            continue
        seen.add(path)
        readings.extend(_shape(judged, n, path))
        readings.extend(_motor(judged, n))
        readings.extend(_best_efficiency(judged, n, path))
        pump, curve = _entered(judged, n)
        if pump is not None and curve is not None:
            readings.extend(_rows(judged, n, path, curve))
            findings.extend(_hump(judged, n, path, curve))
    return readings, findings


def _entered(judged: JudgedSet, n: int) -> tuple[Pump | None, Curve | None]:
    for pump in judged.station.pumps:
        if pump.id == judged.slots[n].pump:
            for curve in pump.curves:
                if curve.id == judged.slots[n].curve:
                    return pump, curve
            return pump, None
    return None, None


def _reading(
    judged: JudgedSet, n: int, code: str, severity: Severity, key: str, provided: Amount,
    required: Amount, at_least: bool, mend: tuple[Path, ...], subject: Path,
) -> Reading:  # fmt: skip
    return Reading(
        code=code, severity=severity, subject=subject, pump_set=judged.id,
        criterion=judged.criterion(key), case=None, provided=provided, required=required,
        sense="at_least" if at_least else "at_most", mend=mend, at_limit_share=0.0,
        names=(("pump", judged.pump_title(n)), ("set", judged.title)),
    )  # fmt: skip


def _shape(judged: JudgedSet, n: int, path: Path) -> Iterator[Reading]:
    slot, table = judged.slots[n], (f"{path}/table",)
    if slot.rise_to_shutoff is not None:
        rise = amount("rise", slot.rise_to_shutoff, D.RATIO, 0)
        for code, key, at_least in (
            ("shutoff_rise_small", "shutoff-rise-min", True),
            ("shutoff_rise_large", "shutoff-rise-max", False),
        ):
            yield _reading(judged, n, code, Severity.CAUTION, key, rise,
                           amount("required", judged.limit(key), D.RATIO, 0), at_least, table,
                           path)  # fmt: skip
    if slot.best_efficiency_flow:
        yield _reading(judged, n, "last_row_short", Severity.CAUTION, "curve-last-row-min",
                       amount("last", slot.last_flow / slot.best_efficiency_flow, D.RATIO, 0),
                       amount("required", judged.limit("curve-last-row-min"), D.RATIO, 0), True,
                       table, path)  # fmt: skip


def _best_efficiency(judged: JudgedSet, n: int, path: Path) -> Iterator[Reading]:
    """Yield how far the maker's best-efficiency flow lies from that of the rows."""
    slot, field = judged.slots[n], f"{path}/best_efficiency_flow"
    _, curve = _entered(judged, n)
    if curve is None or curve.best_efficiency_flow is None:
        return
    stated, by_rows = slot.best_efficiency_flow, slot.best_efficiency_flow_by_rows
    if stated is None or by_rows is None:
        return  # the rows show no top: what is stated is all there is
    key = "best-efficiency-difference-max"
    yield _reading(judged, n, "best_efficiency_disagrees", Severity.CAUTION, key,
                   amount("difference", abs(stated / by_rows - 1.0), D.RATIO, 1),
                   amount("required", judged.limit(key), D.RATIO, 0), False,
                   (field, f"{path}/table"),
                   path).varied(others=(amount("by_rows", by_rows, D.FLOW),))  # fmt: skip


def _motor(judged: JudgedSet, n: int) -> Iterator[Reading]:
    slot = judged.slots[n]
    if slot.motor_power is None or slot.largest_shaft_power is None:
        return
    field = f"{judged.pump_path(n)}/motor_power"
    share = judged.limit("motor-load-max")
    yield _reading(judged, n, "motor_overloaded", Severity.FAIL, "motor-load-max",
                   amount("power", slot.largest_shaft_power, D.POWER),
                   amount("motor", slot.motor_power * share, D.POWER), False, (field,),
                   field)  # fmt: skip


def _rows(judged: JudgedSet, n: int, path: Path, curve: Curve) -> Iterator[Reading]:
    table = (f"{path}/table",)
    yield _reading(judged, n, "curve_rows_few", Severity.CAUTION, "curve-rows-min",
                   amount("rows", float(len(curve.table.rows)), D.NUMBER, 0),
                   amount("required", judged.limit("curve-rows-min"), D.NUMBER, 0), True,
                   table, path)  # fmt: skip
    worst = _power_disagreement(curve, judged.result.density)
    if worst is not None:
        yield _reading(judged, n, "power_disagrees", Severity.CAUTION, "power-disagreement-max",
                       amount("difference", worst, D.RATIO),
                       amount("required", judged.limit("power-disagreement-max"), D.RATIO, 0),
                       False,
                       table, path)  # fmt: skip


def _columns(curve: Curve) -> dict[str, list[float | None]]:
    """Return the columns of a table in SI, by name."""
    units = curve.table.units
    names = ("flow", "head", "efficiency", "shaft_power", "npsh_required")
    used = [(name, getattr(units, name)) for name in names if getattr(units, name) is not None]
    return {
        name: [
            None if i >= len(row) or (cell := row[i]) is None else to_si(cell, unit)
            for row in curve.table.rows
        ]
        for i, (name, unit) in enumerate(used)
    }


def _power_disagreement(curve: Curve, density: float) -> float | None:
    """Return the largest difference of tabled power and power by efficiency, of the latter."""
    columns = _columns(curve)
    if "efficiency" not in columns or "shaft_power" not in columns:
        return None
    differences = [
        abs(power / (density * GRAVITY * q * h / efficiency) - 1.0)
        for q, h, efficiency, power in zip(
            columns["flow"], columns["head"], columns["efficiency"], columns["shaft_power"],
            strict=True,
        )
        if q and h and efficiency and power
    ]  # fmt: skip
    return max(differences, default=None)


def _hump(judged: JudgedSet, n: int, path: Path, curve: Curve) -> Iterator[Finding]:
    """Yield a head that rises before it falls: units in parallel share load not uniquely."""
    heads = [h for h in _columns(curve)["head"] if h is not None]
    if len(heads) < 2 or np.all(np.diff(heads) < 0):
        return
    flows = [q for q in _columns(curve)["flow"] if q is not None]
    peak = int(np.argmax(heads))
    yield Finding(
        code="head_not_falling", severity=Severity.CAUTION, subject=path, pump_set=judged.id,
        provided=amount("peak_flow", flows[peak], D.FLOW),
        required=amount("shutoff", heads[0], D.HEAD),
        others=(amount("peak", heads[peak], D.HEAD),),
        names=(("pump", judged.pump_title(n)), ("set", judged.title)), basis="physics",
        mend=(f"{path}/table",),
    )  # fmt: skip
