"""The tank that the station draws from, and every stage towards the tank that it fills."""

import numpy as np

from server.figures.duty_rows import DutyRow
from server.memo.blocks import Block, Cell, Column, Paragraph, Table
from server.memo.source import MemoSource
from server.station.entry import Quantity
from server.studies.findings.case_words import scenario_name
from server.units import Dimension as D


def tank_blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the levels of the supply tank, and what runs at its cut-out."""
    made: list[Block] = [
        Paragraph(("A tank gives its level, whatever is drawn from it.",)),
        _levels(of),
    ]
    if of.judged is not None and of.judged.result.made.cut_out is not None:
        made.append(_cut_out(of))
    return tuple(made)


def _levels(of: MemoSource) -> Table:
    tank = of.station.supply.tank
    lip = tank.outlet_level
    given: tuple[tuple[str, Quantity | None], ...] = (
        ("cut-out", tank.cut_out), ("low", tank.low), ("normal", tank.normal),
        ("top", tank.top),
    )  # fmt: skip
    rows: list[tuple[Cell, ...]] = []
    for name, level in given:
        over = None if level is None or lip is None else level.si - lip.si
        rows.append((name, None if level is None else level.si, over))
    return Table(
        "Levels of the supply tank",
        (
            Column("State"), Column("Level", D.LEVEL, 2),
            Column("Over the outlet lip", D.HEAD, 2),
        ),
        tuple(rows),
    )  # fmt: skip


def _cut_out(of: MemoSource) -> Table:
    """Return the state of the largest flow of each number running at the cut-out."""
    assert of.judged is not None
    result, made = of.judged.result, of.judged.result.made.cut_out
    assert made is not None
    largest: dict[int, int] = {}
    for m, k in enumerate(made.combination):
        best = largest.get(int(k), m)
        if np.isfinite(made.flow[m]) and made.flow[m] >= made.flow[best]:
            largest[int(k)] = m
    rows: list[tuple[Cell, ...]] = []
    for k, m in largest.items():
        margin = made.npsh_available[m] - made.npsh_required[m]
        n = int(np.nanargmin(margin)) if np.isfinite(margin).any() else None
        rows.append((
            scenario_name(of.station, made.cases[m]),
            float(result.combinations[k].sum()),
            float(made.flow[m]),
            _n(made.depth),
            _n(made.submergence[m]),
            None if n is None else _n(made.npsh_available[m, n]),
            None if n is None else _n(made.npsh_required[m, n]),
        ))  # fmt: skip
    return Table(
        "Supply tank at its cut-out, the largest flow of each number running",
        (
            Column("Scenario"), Column("Running", D.NUMBER, 0), Column("Flow", D.FLOW),
            Column("Water over outlet", D.HEAD, 2), Column("Needed over it", D.HEAD, 2),
            Column("NPSH available", D.HEAD), Column("NPSH required", D.HEAD),
        ),
        tuple(rows),
        ("Needed over the outlet: S = D (1 + 2.3 Fr), ANSI/HI 9.8 (from memory).",),
    )  # fmt: skip


def stage_table(of: MemoSource) -> Table:
    """Return every number running in the state that each scenario shows."""
    assert of.judged is not None
    result = of.judged.result
    rows: list[tuple[Cell, ...]] = []
    for duty in of.duties:
        own = [r for r in duty.all_rows if r.of.supply == duty.own.of.supply]
        rows += [_stage(row, result.tank_flow, result.chosen) for row in _by_number(own)]
    return Table(
        "Every number running, in the state shown",
        (
            Column("Scenario"), Column("State"), Column("Running"), Column("Flow", D.FLOW),
            Column("Head given", D.HEAD), Column("Of best-efficiency flow"),
            Column("Shaft power", D.POWER), Column("NPSH margin", D.HEAD),
            Column("Into the tank", D.FLOW),
        ),
        tuple(rows),
        ("Below zero the tank feeds. The level of the tank starts and stops the pumps, so that "
         "every number running comes about in every scenario.",),
    )  # fmt: skip


def _by_number(rows: list[DutyRow]) -> list[DutyRow]:
    return sorted(rows, key=lambda row: row.of.units or 0)


def _stage(
    row: DutyRow, tank_flow: np.ndarray[tuple[int, ...], np.dtype[np.float64]],
    chosen: np.ndarray[tuple[int, ...], np.dtype[np.intp]],
) -> tuple[Cell, ...]:  # fmt: skip
    k = int(chosen[row.case])
    into = _n(tank_flow[row.case, k]) if k >= 0 and not row.reason else None
    return (
        row.title, row.state, row.running, row.flow, row.head,
        ("no duty",) if row.mark is None else (row.mark,), row.shaft_power, row.npsh_margin,
        into,
    )  # fmt: skip


def _n(value: float | np.floating) -> float | None:
    return float(value) if np.isfinite(value) else None
