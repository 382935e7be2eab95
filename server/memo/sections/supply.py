"""What the supply gives, and what is left of it at the station."""

import numpy as np

from server.figures.duty_rows import wet, worst
from server.figures.supply_chart import supply_chart
from server.memo.blocks import Block, Cell, Column, Figure, Heading, Paragraph, Table
from server.memo.sections.tanks import tank_blocks
from server.memo.source import MemoSource
from server.studies.findings import words
from server.studies.shapes import SUPPLY_STATES
from server.studies.supply_curve import NoSupplyCurve, SupplyCurve, supply_curve
from server.units import Dimension as D


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section."""
    made: list[Block] = [Heading("Supply")]
    curve = supply_curve(of.station, None if of.judged is None else of.judged.result)
    if of.station.supply.kind == "tank":
        return (*made, *tank_blocks(of))
    if isinstance(curve, NoSupplyCurve):
        names = "; ".join(words.field_words(of.station, m.path) for m in curve.missing)
        made.append(Paragraph((f"The supply is not computed. What is missing: {names}.",)))
        return tuple(made)
    made.append(Figure(supply_chart(curve, of.station, of.view), scale=0.72))
    made.append(_limits(curve))
    if of.duties:
        made.append(_suction(of))
    return tuple(made)


def _limits(curve: SupplyCurve) -> Table:
    rows: list[tuple[Cell, ...]] = []
    for i, state in enumerate(SUPPLY_STATES):
        if np.any(np.isfinite(curve.pressure[i])):
            at = float(curve.flow_at_limit[i])
            rows.append(
                (
                    state,
                    float(curve.pressure[i, 0]),
                    curve.limit,
                    at if np.isfinite(at) else None,
                )
            )
        else:
            rows.append((f"{state}, not stated", None, curve.limit, None))
    return Table(
        "Draw at which the supplying main reaches its least pressure",
        (
            Column("Supply state"),
            Column("At no draw", D.PRESSURE),
            Column("Least pressure", D.PRESSURE),
            Column("Draw there", D.FLOW),
        ),
        tuple(rows),
        (
            "At the connection, at ground level. A dash: the limit is not reached by the "
            "curve, or the state is not stated.",
        ),
    )


def _suction(of: MemoSource) -> Table:
    rows: list[tuple[Cell, ...]] = []
    for duty in of.duties:
        main, gauge = (
            worst(duty.states, lambda r: r.connection_pressure, dry="connection"),
            worst(duty.states, lambda r: r.suction_pressure, dry="suction"),
        )
        rows.append(
            (
                duty.own.title,
                duty.own.of.supply,
                wet(duty.own, "connection", duty.own.connection_pressure),
                wet(duty.own, "suction", duty.own.suction_pressure),
                None if main is None else wet(main, "connection", main.connection_pressure),
                None if gauge is None else wet(gauge, "suction", gauge.suction_pressure),
                "–" if main is None else main.of.supply,
            )
        )
    return Table(
        "Pressure on the suction side by scenario",
        (
            Column("Scenario"),
            Column("State shown"),
            Column("Supplying main", D.PRESSURE),
            Column("Suction gauge", D.PRESSURE),
            Column("Main, worst", D.PRESSURE),
            Column("Gauge, worst", D.PRESSURE),
            Column("Worst at"),
        ),
        tuple(rows),
    )
