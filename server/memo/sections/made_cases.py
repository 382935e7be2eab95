"""Cases that are made besides the scenarios: shut zone, station off, a trip, hand-over."""

import numpy as np

from server.figures.case_words import combination_words, scenario_title, slot_title
from server.hydraulics.states import State
from server.memo.blocks import Block, Cell, Column, Heading, Paragraph, Spans, Table
from server.memo.source import MemoSource
from server.studies.duty_result import (
    AfterTrip,
    Handover,
    OnePumpAlone,
    Place,
    StationOff,
    ZeroFlow,
)
from server.studies.findings.judged_set import JudgedSet
from server.studies.shapes import SUPPLY_STATES
from server.units import Dimension as D
from server.units import shown

MOST_POINTS = 4


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section."""
    made: list[Block] = [Heading("Cases made besides the scenarios")]
    if of.judged is None:
        return (*made, Paragraph(("Not computed: the proposed set is not solved.",)))
    judged, cases = of.judged, of.judged.result.made
    if cases.zero_flow is not None:
        made.append(_zero_flow(judged, cases.zero_flow))
    if cases.station_off is not None:
        made.append(_station_off(of, judged, cases.station_off))
    if cases.after_trip is not None:
        made.append(_after_trip(of, judged, cases.after_trip))
    if cases.one_pump_alone is not None:
        made.append(_alone(judged, cases.one_pump_alone))
    if cases.handover is not None and len(cases.handover.fewer):
        made.append(_handover(judged, cases.handover))
    for name, case in (
        ("A shut zone", cases.zero_flow),
        ("The station off", cases.station_off),
        ("A trip", cases.after_trip),
        ("One pump alone", cases.one_pump_alone),
        ("Hand-over", cases.handover),
    ):
        if case is None:
            made.append(
                Paragraph((f"{name}: not computed, because what it needs is not given.",))
            )
    return tuple(made)


def _points(judged: JudgedSet) -> tuple[int, ...]:
    """Return the points shown: critical, lowest and hydrants before other customers."""
    order = {"critical": 0, "lowest": 1, "hydrant": 2}
    ranked = sorted(
        range(len(judged.points)), key=lambda p: (order.get(judged.points[p].role, 3), p)
    )
    return tuple(ranked[:MOST_POINTS])


def _zero_flow(judged: JudgedSet, zero: ZeroFlow) -> Table:
    points = _points(judged)
    rows: list[tuple[Cell, ...]] = []
    for i, state in enumerate(SUPPLY_STATES):
        if not np.isfinite(zero.point_pressure_held[i]).any():
            rows.append((f"{state}, not stated", "–", None, None, *(None for _ in points)))
            continue
        rows.append(
            (
                state,
                "set point held, no flow",
                _n(zero.speed_held[i]),
                None,
                *(_n(zero.point_pressure_held[i, p]) for p in points),
            )
        )
        rows.append(
            (
                state,
                "largest pump at top speed",
                judged.result.highest_speed,
                _n(zero.discharge_pressure_largest[i]),
                *(_n(zero.point_pressure_largest[i, p]) for p in points),
            )
        )
        rows.append(
            (
                state,
                "all at top speed, sensor lost",
                judged.result.highest_speed,
                _n(zero.discharge_pressure_all[i]),
                *(_n(zero.point_pressure_all[i, p]) for p in points),
            )
        )
    return Table(
        "The set against a shut zone, gauge pressures",
        (
            Column("Supply"),
            Column("State of the set"),
            Column("Speed", D.RATIO),
            Column("Discharge gauge", D.PRESSURE),
            *(Column(judged.points[p].title or "Point", D.PRESSURE) for p in points),
        ),
        tuple(rows),
    )


def _station_off(of: MemoSource, judged: JudgedSet, off: StationOff) -> Table:
    points = _points(judged)

    def cell(case: int, p: int) -> Spans:
        pressure = float(off.arithmetic_pressure[case, p])
        if off.drains[case, p]:
            return ("no water",)
        if not np.isfinite(pressure):
            return ("–",)
        return (
            shown(pressure, D.PRESSURE, of.view)
            + (", below atmosphere" if pressure < 0 else ""),
        )

    rows: tuple[tuple[Cell, ...], ...] = tuple(
        (scenario_title(judged, case.scenario), case.supply, *(cell(i, p) for p in points))
        for i, case in enumerate(off.cases)
        if i < len(judged.result.shown) and judged.result.shown[i]
    )
    how = (
        "through the bypass"
        if off.path == "bypass"
        else "as an upper bound: no bypass is entered"
    )
    unit = _unit(of)
    return Table(
        f"The station off: what the supply alone gives, {how}",
        (
            Column("Scenario"),
            Column("State"),
            *(Column(judged.points[p].title or "Point", unit=unit) for p in points),
        ),
        rows,
        (
            "“No water”: the grade line falls so far below the point that the main drains or "
            "the column breaks;"
            " no pressure is stated. Below atmosphere dirty water can be drawn in.",
        ),
    )


def _after_trip(of: MemoSource, judged: JudgedSet, trip: AfterTrip) -> Table:
    rows: list[tuple[Cell, ...]] = []
    for i, case in enumerate(trip.cases):
        if i >= len(judged.result.shown) or not judged.result.shown[i]:
            continue
        lost = "–" if trip.lost[i] is None else slot_title(judged, trip.lost[i] or "")
        state = State(int(trip.state[i]))
        if trip.running[i] == 0:
            told, share = "nothing runs until the standby has started", None
        elif state is State.END_OF_CURVE:
            told, share = "past the end of the curve: no duty", None
        elif state is State.NO_WATER:
            told, share = "no water to pump", None
        elif state in (State.SOLVED, State.TOP_SPEED, State.LOW_SPEED):
            told = "set point held" if state is State.SOLVED else "at the limit of speed"
            share = _n(trip.best_efficiency_share[i])
        else:
            told, share = "nothing flows", None
        rows.append(
            (
                scenario_title(judged, case.scenario),
                case.supply,
                lost,
                str(int(trip.running[i])),
                told,
                share,
                _trip_pressure(judged, trip, i),
                _n(trip.flow_at_end[i]) if trip.running[i] else None,
            )
        )
    return Table(
        "The largest running unit lost, before the standby has started",
        (
            Column("Scenario"),
            Column("State"),
            Column("Lost"),
            Column("Left"),
            Column("What the rest does"),
            Column("Largest of BEP", D.RATIO, 0),
            Column(f"{_held_title(judged)} then", D.PRESSURE),
            Column("Curves end at", D.FLOW),
        ),
        tuple(rows),
    )


def _critical(judged: JudgedSet) -> int | None:
    """Return the point whose pressure is told after a trip: the held one, else the critical."""
    if judged.held_index >= 0:
        return judged.held_index
    roles = [point.role for point in judged.points]
    return roles.index("critical") if "critical" in roles else 0 if roles else None


def _held_title(judged: JudgedSet) -> str:
    p = _critical(judged)
    return "Pressure" if p is None else judged.points[p].title or "Point"


def _trip_pressure(judged: JudgedSet, trip: AfterTrip, i: int) -> Cell:
    p = _critical(judged)
    if p is None:
        return None
    return "no water" if trip.point_without_water[i, p] else _n(trip.point_pressure[i, p])


def _alone(judged: JudgedSet, alone: OnePumpAlone) -> Table:
    rows: list[tuple[Cell, ...]] = []
    titles = {slot.id: judged.pump_title(n) for n, slot in enumerate(judged.slots)}
    motors = {slot.id: slot.motor_power for slot in judged.slots}
    for u, slot in enumerate(alone.slots):
        dry = Place(int(alone.suction_breaks_at[u])) is not Place.NOWHERE
        rows.append(
            (
                titles[slot],
                _n(alone.flow[u]),
                "its last row" if alone.to_last_row[u] else "the zone wide open",
                _n(alone.best_efficiency_share[u]),
                "no water" if dry else _n(alone.npsh_available[u]),
                _n(alone.npsh_required[u]),
                _n(alone.shaft_power[u]),
                motors[slot],
            )
        )
    return Table(
        f"One pump alone at top speed, low supply, {alone.pipes} pipes: as far out as it runs",
        (
            Column("Pump"),
            Column("Flow", D.FLOW),
            Column("ends at"),
            Column("Of BEP", D.RATIO, 0),
            Column("NPSH available", D.HEAD),
            Column("NPSH required", D.HEAD),
            Column("Shaft power", D.POWER),
            Column("Motor", D.POWER),
        ),
        tuple(rows),
        (
            "A closed zone may draw what it likes, as in a burst: the flow ends at the last "
            "row, or where the pressure at the point easiest to reach has fallen to that of "
            "the air.",
        ),
    )


def _handover(judged: JudgedSet, handover: Handover) -> Table:
    rows: list[tuple[Cell, ...]] = []
    for h, (fewer, more) in enumerate(zip(handover.fewer, handover.more, strict=True)):
        for i, state in enumerate(SUPPLY_STATES):
            end, start = _n(handover.fewer_end[h, i]), _n(handover.more_start[h, i])
            if end is None and start is None:
                continue
            told = "–"
            if end is not None and start is not None:
                told = "overlap" if end >= start else "gap"
            name = f"{combination_words(judged, fewer)} to {combination_words(judged, more)}"
            rows.append(
                (
                    name,
                    state,
                    end,
                    start,
                    None if end is None or start is None else abs(end - start),
                    told,
                )
            )
    return Table(
        "Hand-over between numbers of units, preferred regions along the held set point",
        (
            Column("From and to"),
            Column("Supply"),
            Column("Fewer leave at", D.FLOW),
            Column("More enter at", D.FLOW),
            Column("Width", D.FLOW),
            Column("Which is"),
        ),
        tuple(rows),
        (
            "Hand over by per cent of best-efficiency flow (flow over speed): one flow does "
            "not suit all supply states.",
        ),
    )


def _unit(of: MemoSource) -> str:
    from server.units import display_unit

    return display_unit(D.PRESSURE, of.view).printed


def _n(value: float) -> float | None:
    return float(value) if np.isfinite(value) else None
