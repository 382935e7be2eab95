"""The invented tank-filling station of the demonstration: its pump, legs, lines and states."""

import numpy as np

from server.hydraulics.case_system import loss_by_case
from server.hydraulics.conduit import FrictionLaw, conduit
from server.hydraulics.fittings import quadratic_coefficient
from server.hydraulics.floating_tank import FloatingTank, floating_tank
from server.hydraulics.leg_curve import LegCurve, leg_curve
from server.hydraulics.pump_curve import PumpCurve, pump_curve
from server.hydraulics.water import kinematic_viscosity

DW = FrictionLaw.DARCY_WEISBACH
VISCOSITY = float(kinematic_viscosity(12.0))
BORES = [0.352, 0.257, 0.352]
BARRELS = [1, 2, 1]
LARGEST_FLOW = 3 * 0.070
SUCTION = conduit(DW, length=[22], bore=[0.4], resistance=[0.3e-3], k=[2.4])


def pump_t() -> PumpCurve:
    """Pump T: 2950 rev/min, 232 mm."""
    return pump_curve(
        np.array([0, 12.5, 22.5, 32.5, 42.5, 50.0, 57.5, 65.0, 70.0]) / 1000,
        head=[87.1, 85.9, 83.1, 78.8, 72.9, 67.5, 61.2, 54.0, 48.7],
        efficiency=np.array([0, 38.5, 59.4, 72.4, 78.5, 79.5, 77.8, 72.1, 65.6]) / 100,
        shaft_power=[22000.0] + [None] * 8,
        npsh_required=[2.98, 3.03, 3.20, 3.57, 4.17, 4.80, 5.60, 6.58, 7.35],
        tested_speed=2950,
    )


def leg_t() -> LegCurve:
    """Leg: 250 mm K 1.3 before, 200 mm K 4.8 after the pump."""
    loss = quadratic_coefficient(1.3, bore=0.25) + quadratic_coefficient(4.8, bore=0.2)
    return leg_curve(pump_t(), loss=float(loss))


def main_line(age: str, *, reaches: slice = slice(None), barrels: list[int] = BARRELS):
    """Return the main, or some of its reaches, at one age."""
    roughness = {"new": [1e-4, 5e-5, 1e-4], "aged": [1e-3, 3e-4, 1e-3]}[age]
    return conduit(
        DW,
        length=[2150, 240, 980][reaches],
        bore=BORES[reaches],
        resistance=roughness[reaches],
        k=[8, 3, 6][reaches],
        barrels=barrels[reaches],
    )


def tank_station(
    supply: list[float],
    level: list[float],
    age: list[str],
    *,
    draw: list[float] | float = 0.0,
    after_reach: int = 3,
    barrels: list[int] = BARRELS,
) -> FloatingTank:
    """Return the way to the reservoir for states of supply level, reservoir level and age."""
    parts = [slice(0, after_reach), slice(after_reach, 3)]
    line_of = [["new", "aged"].index(one) for one in age]
    before, after = (
        loss_by_case(
            [main_line(a, reaches=part, barrels=barrels) for a in ("new", "aged")],
            line_of=line_of,
            kinematic_viscosity=VISCOSITY,
        )
        for part in parts
    )
    suction_loss = loss_by_case(
        [SUCTION], line_of=[0] * len(level), kinematic_viscosity=VISCOSITY
    )
    levels = np.array(supply)
    return floating_tank(
        level=level,
        draw=draw,
        before=before,
        after=after,
        suction_grade=lambda flow, case: levels[case] - suction_loss(flow, case),
        largest_flow=LARGEST_FLOW,
    )


def three_states() -> FloatingTank:
    """Hardest, normal and easiest."""
    return tank_station([121.6, 123.2, 124.4], [182.6, 181.2, 180.0], ["aged", "aged", "new"])
