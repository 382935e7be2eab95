"""The lower corner of a pump's acceptance grade: what a pump that just passes gives.

ISO 9906:2012, the same as ANSI/HI 14.6; figures from memory, to be confirmed. A measured curve
passes when it cuts the tolerance cross at the guaranteed point, so one that passes by its lower
corner gives flow and head less by their tolerances.
"""

from dataclasses import dataclass
from functools import lru_cache

from server.hydraulics.leg_curve import LegCurve, leg_curve
from server.hydraulics.pump_curve import pump_curve

KEPT = 64


@dataclass(frozen=True, slots=True)
class Grade:
    """A grade and its tolerances without sign, ratios."""

    name: str
    flow: float
    head: float


GRADE_1B = Grade("1B", 0.05, 0.03)
GRADE_2B = Grade("2B", 0.08, 0.05)
LARGE_PUMP = 100e3  # shaft power above which grade 1B is the default [W]


def grade_of(power: float) -> Grade:
    """Return the default grade of a pump by its shaft power [W]; unknown counts as small."""
    return GRADE_1B if power > LARGE_PUMP else GRADE_2B


@lru_cache(maxsize=KEPT)
def weak_leg(leg: LegCurve, grade: Grade) -> LegCurve:
    """Return a leg whose pump stands at the lower corner of a grade, along its whole curve."""
    rows = leg.pump.rows
    pump = pump_curve(
        rows.flow * (1.0 - grade.flow),
        head=list(leg.pump.heads * (1.0 - grade.head)),
        tested_speed=leg.pump.tested_speed,
        stages=leg.pump.stages,
        eyes=leg.pump.eyes,
    )
    return leg_curve(pump, loss=leg.loss)
