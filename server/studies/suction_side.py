"""The suction side of each case, and where its water column breaks.

In a closed zone the demand is imposed, so all of this is known before any pump is. A computed
pressure below a vacuum is no pressure: there is no water at that place.
"""

from dataclasses import dataclass

import numpy as np

from server.studies.duty_result import Place, Places
from server.studies.lowering.lowered import Floats, LoweredSet
from server.studies.system_heads import SystemHeads


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class SuctionSide:
    """Grades and gauge pressures from the supply to the manifold; nan where there is none."""

    breaks_at: Places  # (...) first place without water
    supply_grade: Floats  # [m]
    connection_pressure: Floats  # [Pa]
    gauge_pressure: Floats  # at the suction gauge [Pa]
    suction_grade: Floats  # at the suction manifold [m]


def suction_side(of: LoweredSet, heads: SystemHeads) -> SuctionSide:
    """Return the suction side of some draws, shape (...)."""
    weight, lowest = of.water.weight, of.water.lowest_pressure
    connection = weight * (heads.supply_grade - of.supply.connection_level)
    gauge = weight * (heads.suction_grade - of.supply.suction_gauge_level)
    eye = weight * (heads.suction_grade - of.eye_level)
    # nan, a level not given, is never below
    dry_main = connection < lowest
    dry_gauge = gauge < lowest
    dry = dry_main | dry_gauge | (eye < lowest)
    breaks_at = np.where(dry, Place.PUMP_EYE, Place.NOWHERE)
    breaks_at = np.where(dry_gauge, Place.SUCTION_GAUGE, breaks_at)
    breaks_at = np.where(dry_main, Place.CONNECTION, breaks_at).astype(np.int8)
    return SuctionSide(
        breaks_at=breaks_at,
        supply_grade=np.where(dry_main, np.nan, heads.supply_grade),
        connection_pressure=np.where(dry_main, np.nan, connection),
        gauge_pressure=np.where(dry, np.nan, gauge),
        suction_grade=np.where(dry, np.nan, heads.suction_grade),
    )


def breaks_before_eye(of: LoweredSet, suction_grade: Floats, branch_loss: Floats) -> Places:
    """Return where the column breaks in a suction branch, shape (C, K): at any running pump.

    The suction grade is that of each case, or of each combination in it.
    """
    grade = suction_grade[:, None] if suction_grade.ndim == 1 else suction_grade
    eye = of.water.weight * (grade[..., None] - branch_loss - of.eye_level)
    broken = (eye < of.water.lowest_pressure).any(axis=2)
    return np.where(broken, Place.PUMP_EYE, Place.NOWHERE).astype(np.int8)
