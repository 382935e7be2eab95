"""The duty figure: head over efficiency, power and NPSH, on one flow axis."""

from collections.abc import Sequence

import numpy as np

from server.figures.case_words import combination_words, scenario_title
from server.figures.chart import Axis, BehindTable, Chart, Column, Marker, Panel, Role, Series
from server.figures.head_chart import (
    MARK_ROLES,
    alt_of,
    behind_tables,
    caption_of,
    duty_markers,
    flow_axis,
    head_areas,
    head_panel,
    head_series,
)
from server.figures.system_words import along_words
from server.studies.along_curves import AlongControl
from server.studies.duty_curves import DutyCurves
from server.studies.findings.judged_set import JudgedSet
from server.units import Dimension as D

SMALL_SHARE = 0.3
BEHIND_ROWS = 11


def duty_chart(curves: DutyCurves, judged: JudgedSet, chosen: str | None = None) -> Chart:
    """Return the duty figure of a set.

    Parameters
    ----------
    curves : DutyCurves
        The set's curves.
    judged : JudgedSet
        Its result and criteria.
    chosen : str or None
        Scenario whose point stands out and whose held curve is drawn.
    """
    panels = [head_panel(curves)]
    series = list(head_series(curves, judged, chosen))
    markers = list(duty_markers(judged, chosen))
    for key, title, dimension in (
        ("efficiency", "Efficiency of the pumps", D.RATIO),
        ("power", "Shaft power, all pumps", D.POWER),
        ("npsh", "NPSH", D.HEAD),
    ):
        lines = _lines(key, curves, judged, len(panels))
        if not lines:
            continue
        high = max(float(np.nanmax(line.y)) for line in lines)
        panels.append(
            Panel(
                key,
                Axis(title, dimension, 0.0, 1.0 if key == "efficiency" else 1.12 * high),
                SMALL_SHARE,
            )
        )
        series.extend(lines)
        markers.extend(_markers(key, judged, chosen, markers, len(panels) - 1))
    return Chart(
        key="duty",
        title=f"Duty of {judged.title}",
        caption=caption_of(curves, judged)
        + f" Below: {along_words(judged.result)} at {curves.along_state} supply; each point in "
        "its own state.",
        alt=alt_of(judged),
        x=flow_axis(curves, judged),
        panels=tuple(panels),
        series=tuple(series),
        areas=head_areas(curves),
        markers=tuple(markers),
        tables=(*behind_tables(curves, judged), *_along_tables(curves, judged)),
    )


def head_chart(curves: DutyCurves, judged: JudgedSet, chosen: str | None = None) -> Chart:
    """Return the head figure alone."""
    return Chart(
        key="head",
        title=f"Head of {judged.title}",
        caption=caption_of(curves, judged),
        alt=alt_of(judged),
        x=flow_axis(curves, judged),
        panels=(head_panel(curves),),
        series=head_series(curves, judged, chosen),
        areas=head_areas(curves),
        markers=duty_markers(judged, chosen),
        tables=behind_tables(curves, judged),
    )


def _lines(key: str, curves: DutyCurves, judged: JudgedSet, panel: int) -> list[Series]:
    """Return the lines of one small panel; empty when nothing of it is known."""
    lines: list[Series] = []
    number = 0
    for along, running in zip(curves.along, curves.sets, strict=True):
        dash = 0 if running.small else number
        number += 0 if running.small else 1
        role = Role.SMALL_CURVE if running.small else Role.SET_CURVE
        name = combination_words(judged, along.combination)
        wanted = {
            "efficiency": [("efficiency", name, role, along.efficiency)],
            "power": [("power", name, role, along.shaft_power)],
            "npsh": [
                (
                    "available",
                    f"available, {curves.along_state} supply",
                    Role.AVAILABLE,
                    along.npsh_available,
                ),
                ("required", f"required, {name}", role, along.npsh_required),
            ],
        }[key]
        for part, told, look, values in wanted:
            known = np.isfinite(values)
            if known.any():
                first, last = int(np.argmax(known)), int(values.size - np.argmax(known[::-1]))
                lines.append(
                    Series(
                        f"{part}-{along.combination}",
                        told,
                        look,
                        along.flow[first:last],
                        values[first:last],
                        panel,
                        dash,
                    )
                )
    return _named(lines, key)


def _named(lines: list[Series], key: str) -> list[Series]:
    """Name the lines that need it: NPSH available once, the rest by their dash above."""
    if key != "npsh":
        return lines
    longest = {
        part: max(
            (line for line in lines if line.key.startswith(part)),
            key=lambda s: float(s.x[-1]),
            default=None,
        )
        for part in ("available", "required")
    }
    named: list[Series] = []
    for line in lines:
        part = line.key.split("-")[0]
        is_longest = longest.get(part) is line
        name = line.name if part == "available" else "required"
        named.append(
            Series(
                line.key,
                name if is_longest else line.name,
                line.role,
                line.x,
                line.y,
                line.panel,
                line.dash,
                is_longest,
            )
        )
    return named


def _markers(
    key: str, judged: JudgedSet, chosen: str | None, on_head: Sequence[Marker], panel: int
) -> list[Marker]:
    """Return the duty points of one small panel, from the result itself."""
    result = judged.result
    roles = {marker.key: marker.role for marker in on_head if marker.panel == 0}
    markers: list[Marker] = []
    for c, k in judged.stated:
        if not result.shown[c]:
            continue
        running = list(judged.running(c, k))
        value = _value(key, judged, c, k, running)
        if value is None:
            continue
        scenario = result.cases[c].scenario
        markers.append(
            Marker(
                scenario,
                scenario_title(judged, scenario),
                roles.get(scenario, next(iter(MARK_ROLES.values()))),
                float(result.flow[c, k]),
                value,
                panel,
                chosen=scenario == chosen,
            )
        )
    return markers


def _value(key: str, judged: JudgedSet, c: int, k: int, running: list[int]) -> float | None:
    result = judged.result
    if not running:
        return None
    power = float(np.sum(result.shaft_power[c, k, running]))
    if key == "power":
        value = power
    elif key == "npsh":
        value = (
            float(np.nanmin(result.npsh_available[c, k, running]))
            if np.any(np.isfinite(result.npsh_available[c, k, running]))
            else float("nan")
        )
    else:
        shares = result.efficiency[c, k, running]
        # all pumps together: what they give the water over what their shafts take
        useful = float(np.sum(result.shaft_power[c, k, running] * shares))
        value = useful / power if power > 0 else float("nan")
    return value if np.isfinite(value) else None


def _along_tables(curves: DutyCurves, judged: JudgedSet) -> list[BehindTable]:
    columns = (
        Column("Flow", D.FLOW),
        Column("Speed", D.RATIO),
        Column("Efficiency", D.RATIO),
        Column("Shaft power", D.POWER),
        Column("NPSH available", D.HEAD),
        Column("NPSH required", D.HEAD),
    )
    tables: list[BehindTable] = []
    for along in curves.along:
        known = np.flatnonzero(np.isfinite(along.speed))
        if not known.size:
            continue
        at = known[np.unique(np.linspace(0, known.size - 1, BEHIND_ROWS).astype(int))]
        name = combination_words(judged, along.combination)
        tables.append(
            BehindTable(
                f"{name[:1].upper()}{name[1:]} {along_words(judged.result)}, "
                f"{curves.along_state} supply",
                columns,
                tuple(_along_row(along, int(i)) for i in at),
            )
        )
    return tables


def _along_row(along: AlongControl, i: int) -> tuple[float | None, ...]:
    values = (
        along.flow[i],
        along.speed[i],
        along.efficiency[i],
        along.shaft_power[i],
        along.npsh_available[i],
        along.npsh_required[i],
    )
    return tuple(float(v) if np.isfinite(v) else None for v in values)
