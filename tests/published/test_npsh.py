"""NPSH available against published examples.

Sources: data/technical_paper_410_npsh.csv, operations_handbook_npsh.csv,
pump_handbook_npsh.csv, best_practice_25_npsh.csv, practical_pumping_handbook_npsh.csv,
npsh_si_own_cases.csv, fluid_mechanics_companion_14_3.csv,
fluid_mechanics_companion_14_3_pump.csv.
"""

import numpy as np
import pytest
from scipy.optimize import brentq

from server import units
from server.hydraulics.fittings import minor_head_loss
from server.hydraulics.friction import colebrook_head_loss
from server.hydraulics.suction import npsh_available
from server.hydraulics.water import GRAVITY, atmospheric_pressure, density, vapour_pressure
from tests.published.sources import Row, checks, source

FOOT = units.to_si(1.0, "ft")
POUND_PER_CUBIC_FOOT = 0.45359237 / FOOT**3  # [kg/m3]
ATMOSPHERE = 101325.0  # [Pa]


@pytest.mark.parametrize("row", checks("technical_paper_410_npsh"))
def test_npsh_of_a_pressurised_tank_is_that_of_the_problem(row: Row) -> None:
    rho = row["density_lb_ft3"] * POUND_PER_CUBIC_FOOT
    available = npsh_available(
        units.to_si(row["gauge_psi"], "psi") / (rho * GRAVITY),
        eye_level=row["lift_ft"] * FOOT,
        branch_loss=row["loss_ft"] * FOOT,
        atmospheric_pressure=ATMOSPHERE,
        vapour_pressure=units.to_si(row["vapour_psi"], "psi"),
        density=rho,
    )

    assert units.from_si(float(available), "ft") == pytest.approx(row["expected_ft"], rel=1e-3)
    assert float(available) < row["required_ft"] * FOOT


@pytest.mark.parametrize(
    "row",
    checks("operations_handbook_npsh")
    + checks("pump_handbook_npsh")
    + checks("best_practice_25_npsh"),
)
def test_npsh_of_heads_in_feet_is_that_of_the_handbook(row: Row) -> None:
    weight = 1000.0 * GRAVITY
    available = npsh_available(
        row["grade_ft"] * FOOT,
        eye_level=row["eye_ft"] * FOOT,
        branch_loss=row["loss_ft"] * FOOT,
        atmospheric_pressure=row["atmosphere_ft"] * FOOT * weight,
        vapour_pressure=row["vapour_ft"] * FOOT * weight,
        density=1000.0,
    )

    assert units.from_si(float(available), "ft") == pytest.approx(
        row["expected_ft"], abs=row["absolute_ft"]
    )


@pytest.mark.parametrize("row", checks("practical_pumping_handbook_npsh"))
def test_npsh_of_warm_water_is_that_of_the_handbook(row: Row) -> None:
    # the handbook's 2.31 ft a psi is water of 62.34 lb/ft3
    rho = row["specific_gravity"] * 144.0 / 2.31 * POUND_PER_CUBIC_FOOT
    available = npsh_available(
        row["grade_ft"] * FOOT,
        eye_level=0.0,
        branch_loss=row["loss_ft"] * FOOT,
        atmospheric_pressure=units.to_si(row["atmosphere_psi"], "psi"),
        vapour_pressure=units.to_si(row["vapour_psi"], "psi"),
        density=rho,
    )

    assert units.from_si(float(available), "ft") == pytest.approx(row["expected_ft"], abs=0.05)


@pytest.mark.parametrize("row", checks("npsh_si_own_cases"))
def test_npsh_at_altitude_is_that_of_the_own_case(row: Row) -> None:
    t = row["temperature_C"]
    rho = float(density(t))
    grade = (
        row["gauge_level_m"]
        + units.to_si(row["gauge_kPa"], "kPa") / (rho * GRAVITY)
        + row["velocity_m_s"] ** 2 / (2.0 * GRAVITY)
    )
    available = npsh_available(
        grade,
        eye_level=0.0,
        branch_loss=row["loss_m"],
        atmospheric_pressure=atmospheric_pressure(row["altitude_m"]),
        vapour_pressure=vapour_pressure(t),
        density=rho,
    )

    assert float(available) == pytest.approx(row["expected_m"], abs=row["absolute_m"])


def companion_npsh(row: Row, flow: float) -> float:
    """NPSH available of the companion's suction pipe at a flow, in m."""
    bore = units.to_si(4.0, "in")
    friction = colebrook_head_loss(
        flow,
        length=10.5 * FOOT,
        bore=bore,
        roughness=units.to_si(0.02, "in"),
        kinematic_viscosity=row["viscosity_Pa_s"] / row["density"],
    )
    # the book's kinetic energy factor of 1.05 takes 0.05 of a velocity head from the NPSH
    fittings = minor_head_loss(flow, bore=bore, k=0.5 + 3 * 0.3 + 6.0 + 0.05)
    return float(
        npsh_available(
            1.219,
            eye_level=0.0,
            branch_loss=float(friction + fittings),
            atmospheric_pressure=101.3e3,
            vapour_pressure=units.to_si(row["vapour_kPa"], "kPa"),
            density=row["density"],
        )
    )


@pytest.mark.parametrize(
    "row",
    checks("fluid_mechanics_companion_14_3"),
)
def test_flow_limited_by_npsh_is_that_of_the_companion(row: Row) -> None:
    rows = source("fluid_mechanics_companion_14_3_pump").rows
    flows = [units.to_si(r["flow_gpm"], "gpm_us") for r in rows]
    required = [r["required_ft"] * FOOT for r in rows]
    limit = brentq(
        lambda q: companion_npsh(row, q) - float(np.interp(q, flows, required)),
        flows[0],
        flows[-1],
    )

    if row.has("npsh_m"):
        flow = units.to_si(row["flow_gpm"], "gpm_us")

        assert companion_npsh(row, flow) == pytest.approx(row["npsh_m"], abs=0.02)
    assert units.from_si(limit, "gpm_us") == pytest.approx(row["limit_gpm"], rel=0.01)
