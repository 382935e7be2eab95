"""The rows of a pump's test curve as typed, and what makes them refused."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from server.hydraulics.arrays import FloatArray, read_only
from server.hydraulics.errors import CurveRefused

FEWEST_ROWS = 3
Column = Sequence[float | None] | FloatArray | None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class PumpRows:
    """Checked rows, shape (R,); nan where a cell is empty."""

    flow: FloatArray  # [m3/s]
    head: FloatArray  # [m]
    efficiency: FloatArray  # ratio [-]
    shaft_power: FloatArray  # [W]
    npsh_required: FloatArray  # [m]


def pump_rows(
    flow: Column,
    *,
    head: Column,
    efficiency: Column,
    shaft_power: Column,
    npsh_required: Column,
) -> PumpRows:
    """Return the rows checked.

    Parameters
    ----------
    flow, head : sequence of float, length R of 3 or more
        Flow, zero or more and rising [m3/s]; head of the pump [m].
    efficiency, shaft_power, npsh_required : sequence of float or None, length R, or None
        Efficiency as a ratio 0 to 1 [-], shaft power [W], NPSH required [m]; a cell may be
        empty.

    Raises
    ------
    CurveRefused
        With a reason code and the row, counted from 0.
    """
    q = _column(flow, None, "flow")
    rows = PumpRows(
        flow=q,
        head=_column(head, q.size, "head"),
        efficiency=_column(efficiency, q.size, "efficiency"),
        shaft_power=_column(shaft_power, q.size, "shaft_power"),
        npsh_required=_column(npsh_required, q.size, "npsh_required"),
    )
    if q.size < FEWEST_ROWS:
        raise CurveRefused(
            "too_few_rows", f"a pump curve must have {FEWEST_ROWS} rows or more; got {q.size}"
        )
    _check_flow_and_head(rows)
    _check_others(rows)
    return rows


def _column(given: Column, size: int | None, name: str) -> FloatArray:
    """Return a column as floats, nan for an empty cell."""
    if given is None:
        return read_only(np.full(size or 0, np.nan))
    column = np.array(
        [np.nan if cell is None else float(cell) for cell in given], dtype=np.float64
    )
    if np.any(np.isinf(column)):
        row = int(np.flatnonzero(np.isinf(column))[0])
        raise CurveRefused(
            "not_finite", f"{name} must be finite; got inf in row {row + 1}", row=row
        )
    if size is not None and column.size != size:
        raise CurveRefused(
            "rows_uneven", f"{name} must have one cell a row: {size}; got {column.size}"
        )
    return read_only(column)


def _check_flow_and_head(rows: PumpRows) -> None:
    """Refuse rows that cannot be read as a head curve."""
    for name, column in (("flow", rows.flow), ("head", rows.head)):
        if np.any(np.isnan(column)):
            row = int(np.flatnonzero(np.isnan(column))[0])
            raise CurveRefused(
                f"{name}_missing", f"{name} must be given; row {row + 1} has none", row=row
            )
    q, h = rows.flow, rows.head
    if q.min() < 0:
        row = int(np.argmin(q))
        raise CurveRefused(
            "flow_below_zero",
            f"flow must not be below zero; got {q[row]:g} m3/s in row {row + 1}",
            row=row,
        )
    steps = np.diff(q)
    if np.any(steps == 0):
        row = int(np.flatnonzero(steps == 0)[0]) + 1
        raise CurveRefused(
            "flows_equal",
            f"two rows must not have the same flow; got {q[row]:g} m3/s twice",
            row=row,
        )
    if np.any(steps < 0):
        row = int(np.flatnonzero(steps < 0)[0]) + 1
        raise CurveRefused(
            "flows_not_rising",
            f"flow must rise from row to row; row {row + 1} is lower",
            row=row,
        )
    if np.all(np.diff(h) >= 0):
        raise CurveRefused(
            "head_rising_throughout",
            "head must fall toward the last row; it rises from the first row to the last",
        )
    if h[-1] >= h.max():
        raise CurveRefused(
            "head_highest_at_last_row",
            f"head must fall toward the last row; the last row has the highest, {h[-1]:g} m",
            row=h.size - 1,
        )
    if h.max() <= 0:
        raise CurveRefused(
            "head_not_above_zero", f"head must be above zero; got {h.max():g} m at most"
        )


def _check_others(rows: PumpRows) -> None:
    """Refuse efficiency, power and NPSH that cannot be."""
    rules = (
        (rows.efficiency > 1, "efficiency_above_one", "efficiency must not be above 1 (100 %)"),
        (rows.efficiency < 0, "efficiency_below_zero", "efficiency must not be below zero"),
        (rows.shaft_power <= 0, "power_not_above_zero", "shaft_power must be above zero"),
        (rows.npsh_required <= 0, "npsh_not_above_zero", "npsh_required must be above zero"),
    )
    for wrong, reason, sentence in rules:
        if np.any(wrong):
            row = int(np.flatnonzero(wrong)[0])
            raise CurveRefused(reason, f"{sentence}; see row {row + 1}", row=row)
