"""Pump curves of the published examples, made of rows of the source's own formula."""

from collections.abc import Callable

import numpy as np

from server import units
from server.hydraulics.pump_curve import PumpCurve, pump_curve

ROWS = 241  # of a formula's curve: the cubic between rows is then within 1e-6 of the formula


def from_formula(
    head: Callable[[float], float],
    *,
    last_flow: float,
    flow_unit: str = "m3/s",
    head_unit: str = "m",
    efficiency: Callable[[float], float] | None = None,
    tested_speed: float = 1450.0,
) -> PumpCurve:
    """Return the curve of a formula in the source's units; efficiency as a ratio."""
    flows = np.linspace(0.0, last_flow, ROWS)
    return pump_curve(
        [units.to_si(q, flow_unit) for q in flows],
        head=[units.to_si(head(q), head_unit) for q in flows],
        efficiency=None if efficiency is None else [efficiency(q) for q in flows],
        tested_speed=tested_speed,
    )
