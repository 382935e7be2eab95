"""The head figure: what the set gives, what is asked of it, every duty point."""

from collections.abc import Sequence

import numpy as np

from server.figures.band import BandMark, slot_mark, worst_mark
from server.figures.case_words import (
    case_words,
    combination_words,
    running_words,
    scenario_title,
    state_words,
)
from server.figures.chart import (
    Area,
    Axis,
    BehindTable,
    Column,
    Floats,
    Marker,
    Panel,
    Role,
    Series,
)
from server.figures.system_words import asked_words, band_words, end_words
from server.studies.duty_curves import DutyCurves, RunningSet
from server.studies.findings.judged_set import JudgedSet
from server.studies.shapes import Region
from server.units import Dimension as D

BEHIND_ROWS = 13
MARK_ROLES = {
    Region.INSIDE: Role.DUTY_INSIDE,
    Region.EDGE: Role.DUTY_EDGE,
    Region.OUTSIDE: Role.DUTY_OUTSIDE,
    Region.NOT_CHECKED: Role.DUTY_EDGE,
}


def head_panel(curves: DutyCurves) -> Panel:
    """Return the panel of the head."""
    top = max((float(np.max(s.head)) for s in curves.sets if s.head.size), default=1.0)
    asked = [
        float(np.nanmax(r))
        for r in (curves.required_low, curves.required_high)
        if np.any(np.isfinite(r))
    ]
    # a head far above every pump is cut off: the pumps must stay readable
    high = min(max([top, *asked]), 1.3 * top)
    return Panel("head", Axis("Head, manifold to manifold", D.HEAD, 0.0, 1.06 * high))


def flow_axis(curves: DutyCurves, judged: JudgedSet) -> Axis:
    """Return the common flow axis: past the largest duty and the longest curve."""
    ends = [float(s.flow[-1]) for s in curves.sets if s.flow.size]
    demand = judged.result.demand
    asked = float(np.nanmax(demand)) if demand.size else 0.0
    return Axis(
        "Station flow", D.FLOW, 0.0, max([1.04 * e for e in ends] + [1.1 * asked, 1e-3])
    )


def head_series(
    curves: DutyCurves, judged: JudgedSet, chosen: str | None
) -> tuple[Series, ...]:
    """Return curves at top speed, the chosen case's held curve, and the required head."""
    series: list[Series] = []
    numbers = {s.combination: i for i, s in enumerate(_mains(curves.sets))}
    for running in curves.sets:
        if not running.flow.size:
            continue
        role = Role.SMALL_CURVE if running.small else Role.SET_CURVE
        name = combination_words(judged, running.combination)
        series.append(
            Series(
                f"top-{running.combination}",
                name,
                role,
                running.flow,
                running.head,
                dash=numbers.get(running.combination, 0),
                named=True,
            )
        )
    low, high = end_words(judged.result)
    for held in curves.held:
        case = judged.result.cases[held.case]
        if case.scenario == chosen:
            title = scenario_title(judged, case.scenario)
            name = f"{running_words(judged, held.case)} at the speed of {title}"
            series.append(
                Series(
                    f"held-{case.scenario}", name, Role.HELD_CURVE, held.flow, held.head, dash=2
                )
            )
    for key, name, role, required in (
        ("required-low", low, Role.SYSTEM_LOW, curves.required_low),
        ("required-high", high, Role.SYSTEM_HIGH, curves.required_high),
    ):
        if np.any(np.isfinite(required)):
            series.append(Series(key, name, role, curves.flow, required, named=True))
    return tuple(series)


def head_areas(curves: DutyCurves) -> tuple[Area, ...]:
    """Return the band from low to high supply, and the preferred regions between their loci."""
    areas: list[Area] = []
    for running in curves.sets:
        if running.preferred_flow.size:
            areas.append(
                Area(
                    f"preferred-{running.combination}",
                    "preferred region",
                    Role.PREFERRED,
                    running.preferred_flow,
                    running.preferred_head,
                )
            )
    if np.all(np.isfinite(curves.required_low)) and np.all(np.isfinite(curves.required_high)):
        areas.append(
            Area(
                "band",
                "low to high supply",
                Role.SYSTEM_BAND,
                np.concatenate([curves.flow, curves.flow[::-1]]),
                np.concatenate([curves.required_low, curves.required_high[::-1]]),
            )
        )
    return tuple(areas)


def duty_markers(judged: JudgedSet, chosen: str | None) -> tuple[Marker, ...]:
    """Return a point for every shown case with a duty; points on one another share one name."""
    result = judged.result
    markers: list[Marker] = []
    named: dict[tuple[int, int], str] = {}
    cases = [(int(c), int(result.chosen[c])) for c in np.flatnonzero(result.shown)]
    stated = set(judged.stated)
    drawn = [pair for pair in cases if pair in stated]
    for c, k in drawn:
        key = _near(result.flow[c, k], result.station_head[c, k])
        title = scenario_title(judged, result.cases[c].scenario)
        named[key] = f"{named[key]}; {_lower(title)}" if key in named else title
    told: set[tuple[int, int]] = set()
    for c, k in drawn:
        key = _near(result.flow[c, k], result.station_head[c, k])
        mark = worst_mark(judged, c, k)
        scenario = result.cases[c].scenario
        markers.append(
            Marker(
                scenario,
                named[key] if key not in told else scenario_title(judged, scenario),
                Role.DUTY_INSIDE if mark is None else MARK_ROLES[mark.region],
                float(result.flow[c, k]),
                float(result.station_head[c, k]),
                chosen=scenario == chosen,
                named=key not in told,
            )
        )
        told.add(key)
    return tuple(markers)


def behind_tables(curves: DutyCurves, judged: JudgedSet) -> tuple[BehindTable, ...]:
    """Return the numbers behind the head figure: the duty points, and each curve."""
    return (_duty_table(judged), *_curve_tables(curves, judged))


def _duty_table(judged: JudgedSet) -> BehindTable:
    result = judged.result
    rows: list[tuple[float | str | None, ...]] = []
    for c in np.flatnonzero(result.shown):
        case, k = int(c), int(result.chosen[c])
        solved = (case, k) in set(judged.stated)
        marks = (
            [slot_mark(judged, case, k, n) for n in judged.running(case, k)] if solved else []
        )
        rows.append(
            (
                case_words(judged, case),
                _number(result.flow[case, k]) if solved else None,
                _number(result.station_head[case, k]) if solved else None,
                _number(result.required_head[case]),
                running_words(judged, case),
                _marks_text(marks),
            )
        )
    return BehindTable(
        "Duty points",
        (
            Column("Scenario"),
            Column("Flow", D.FLOW),
            Column("Head delivered", D.HEAD),
            Column(_capital(asked_words(result)), D.HEAD),
            Column("Running"),
            Column("Of best-efficiency flow"),
        ),
        tuple(rows),
    )


def _curve_tables(curves: DutyCurves, judged: JudgedSet) -> list[BehindTable]:
    tables: list[BehindTable] = []
    for running in curves.sets:
        at = _spread(running.flow.size)
        tables.append(
            BehindTable(
                f"{_capital(combination_words(judged, running.combination))} at top speed",
                (Column("Flow", D.FLOW), Column("Head", D.HEAD)),
                tuple((float(running.flow[i]), float(running.head[i])) for i in at),
            )
        )
    at = _spread(curves.flow.size)
    ends = ("Low supply", "High supply")
    if judged.result.zone_kind == "floating_tank":
        ends = ("Low supply, full tank", "High supply, low tank")
    tables.append(
        BehindTable(
            f"{_capital(asked_words(judged.result))}, {curves.pipes} pipes",
            (
                Column("Flow", D.FLOW),
                Column(ends[0], D.HEAD),
                Column(ends[1], D.HEAD),
            ),
            tuple(
                (
                    float(curves.flow[i]),
                    _number(curves.required_low[i]),
                    _number(curves.required_high[i]),
                )
                for i in at
            ),
        )
    )
    return tables


def _marks_text(marks: Sequence[BandMark]) -> str:
    texts = list(dict.fromkeys(f"{m.text}" for m in marks))
    return "; ".join(texts) if texts else "no duty"


def _mains(sets: Sequence[RunningSet]) -> list[RunningSet]:
    return [s for s in sets if not s.small]


def _spread(size: int) -> list[int]:
    return (
        sorted({round(i) for i in np.linspace(0, size - 1, min(size, BEHIND_ROWS))})
        if size
        else []
    )


def _near(flow: float, head: float) -> tuple[int, int]:
    """Return a key that points share when they would be drawn on one another."""
    return round(flow * 1e4), round(head * 10)


def _number(value: Floats | float) -> float | None:
    return float(value) if np.isfinite(value) else None


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]


def _lower(text: str) -> str:
    return text[:1].lower() + text[1:]


def caption_of(curves: DutyCurves, judged: JudgedSet) -> str:
    """Return what the figure shows, in two sentences."""
    return (
        "Curves of the pumps that run together, at top speed; hatched where all of them are "
        "in their"
        f" preferred region. Blue: {band_words(curves, judged.result)}."
    )


def alt_of(judged: JudgedSet) -> str:
    """Return the figure in words: each duty point with flow, head state and region."""
    result = judged.result
    parts: list[str] = []
    for c, k in judged.stated:
        if not result.shown[c]:
            continue
        mark = worst_mark(judged, c, k)
        told = "" if mark is None else f", {mark.text} of best-efficiency flow"
        parts.append(
            f"{scenario_title(judged, result.cases[c].scenario)} ({state_words(judged, c)}):"
            f" {running_words(judged, c)}{told}"
        )
    return (
        "Head against station flow. " + ("; ".join(parts) if parts else "No duty point.") + "."
    )
