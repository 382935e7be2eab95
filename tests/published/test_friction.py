"""Friction in pipes against published and independent values, by both laws.

Sources: data/colebrook_white_grid.csv, darcy_weisbach_own_cases.csv,
hydraulic_institute_system_curve.csv, white_moody_examples.csv, white_oil_example.csv,
pe_review_fluid_flow.csv, solved_problem_12_inch.csv, university_series_pipes.csv,
hazen_williams_own_cases.csv, fair_geyer_okun_diagram.csv, water_engineering_example_5_36.csv,
ductile_iron_hydraulic_analysis.csv, hazen_williams_diameter_problem.csv,
hazen_williams_equivalent_c.csv; the library fluids.
"""

import numpy as np
import pytest
from fluids.friction import Clamond
from scipy.optimize import brentq

from server import units
from server.hydraulics.conduit import FrictionLaw, conduit
from server.hydraulics.fittings import minor_head_loss, velocity
from server.hydraulics.friction import (
    colebrook_head_loss,
    darcy_friction_factor,
    hazen_williams_head_loss,
)
from server.hydraulics.water import GRAVITY
from tests.published.sources import Row, checks

FOOT = units.to_si(1.0, "ft")
POUND_PER_CUBIC_FOOT = 0.45359237 / FOOT**3  # [kg/m3]


def area(bore: float) -> float:
    return 0.25 * np.pi * bore**2


@pytest.mark.parametrize("row", checks("colebrook_white_grid"))
def test_friction_factor_is_the_colebrook_white_root(row: Row) -> None:
    factor = float(darcy_friction_factor(row["reynolds"], row["relative_roughness"]))

    assert factor == pytest.approx(row["expected"], rel=1e-11)


def test_friction_factor_is_that_of_the_fluids_library_over_its_whole_range() -> None:
    """fluids.friction.Clamond, within 2e-15 of 40-digit values; ours within 1e-14."""
    reynolds, rough = np.meshgrid(np.geomspace(4e3, 1e8, 25), [0, 1e-7, 1e-5, 1e-3, 1e-2, 0.05])
    expected = np.vectorize(Clamond)(reynolds, rough)

    np.testing.assert_allclose(darcy_friction_factor(reynolds, rough), expected, rtol=1e-14)


@pytest.mark.parametrize("row", checks("darcy_weisbach_own_cases"))
def test_darcy_weisbach_loss_is_that_of_the_own_case(row: Row) -> None:
    bore, roughness = row["bore_m"], units.to_si(row["roughness_mm"], "mm")
    viscosity = row["dynamic_viscosity_uPa_s"] * 1e-6 / row["density"]
    speed = float(velocity(row["flow_m3_s"], bore=bore))
    reynolds = speed * bore / viscosity
    loss = colebrook_head_loss(
        row["flow_m3_s"],
        length=row["length_m"],
        bore=bore,
        roughness=roughness,
        kinematic_viscosity=viscosity,
    )

    # velocity and factor are printed to 6 and 7 digits
    assert speed == pytest.approx(row["velocity_m_s"], rel=5e-6)
    assert reynolds == pytest.approx(row["reynolds"], rel=1e-6)
    assert float(darcy_friction_factor(reynolds, roughness / bore)) == pytest.approx(
        row["friction_factor"], rel=1e-6
    )
    assert float(loss) == pytest.approx(row["expected_m"], rel=2e-6, abs=5e-9)


@pytest.mark.parametrize("row", checks("hydraulic_institute_system_curve", id="DW-HI4"))
def test_system_curve_in_feet_is_that_of_the_data_book(row: Row) -> None:
    bore = units.to_si(4.026, "in")
    friction = 0.02 * units.to_si(1255, "ft") / bore
    flow = units.to_si(row["flow"], "gpm_us")
    loss = float(minor_head_loss(flow, bore=bore, k=friction + 3.79))

    assert 265.0 + loss / FOOT == pytest.approx(row["expected"], abs=0.5)


@pytest.mark.parametrize("row", checks("hydraulic_institute_system_curve", id="DW-HI4m"))
def test_system_curve_in_metres_is_that_of_the_data_book(row: Row) -> None:
    bore = 0.10226
    flow = units.to_si(row["flow"], "m3/h")
    loss = float(minor_head_loss(flow, bore=bore, k=0.02 * 382.52 / bore + 3.79))

    assert 80.77 + loss == pytest.approx(row["expected"], abs=0.15)


@pytest.mark.parametrize("row", checks("white_moody_examples"))
def test_loss_is_that_of_moodys_example(row: Row) -> None:
    bore = row["bore_ft"] * FOOT
    loss = colebrook_head_loss(
        row["velocity_ft_s"] * FOOT * area(bore),
        length=row["length_ft"] * FOOT,
        bore=bore,
        roughness=row["roughness_ft"] * FOOT,
        kinematic_viscosity=row["viscosity_ft2_s"] * FOOT**2,
    )

    assert float(loss) / FOOT == pytest.approx(row["expected_ft"], rel=row["relative"])


@pytest.mark.parametrize("row", checks("white_oil_example"))
def test_friction_factor_is_that_of_the_oil_example(row: Row) -> None:
    factor = float(darcy_friction_factor(row["reynolds"], row["relative_roughness"]))

    assert factor == pytest.approx(row["expected_factor"], rel=0.01)
    assert float(velocity(0.2, bore=0.2)) == pytest.approx(row["velocity_m_s"], rel=0.01)


@pytest.mark.parametrize("row", checks("pe_review_fluid_flow"))
def test_length_for_a_pressure_drop_is_that_of_the_review_problem(row: Row) -> None:
    bore = units.to_si(row["bore_in"], "in")
    density = row["density_lb_ft3"] * POUND_PER_CUBIC_FOOT
    loss_per_metre = colebrook_head_loss(
        row["velocity_ft_s"] * FOOT * area(bore),
        length=1.0,
        bore=bore,
        roughness=row["roughness_ft"] * FOOT,
        kinematic_viscosity=row["viscosity_lb_ft_h"] / row["density_lb_ft3"] * FOOT**2 / 3600,
    )
    length = (
        units.to_si(row["pressure_psi"], "psi") / (density * GRAVITY) / float(loss_per_metre)
    )

    assert length / FOOT == pytest.approx(row["expected_ft"], rel=0.002)


@pytest.mark.parametrize("row", checks("solved_problem_12_inch"))
def test_pressure_at_the_end_is_that_of_the_solved_problem(row: Row) -> None:
    bore = row["bore_ft"] * FOOT
    loss = float(
        minor_head_loss(
            units.to_si(row["flow_ft3_s"], "ft3/s"),
            bore=bore,
            k=row["factor"] * row["length_ft"] / row["bore_ft"],
        )
    )
    weight = row["density_lb_ft3"] * POUND_PER_CUBIC_FOOT * GRAVITY
    fall = (row["rise_ft"] * FOOT + loss) * weight

    # the friction head is printed as 10.07 ft from a velocity rounded to 7.13 ft/s
    assert loss / FOOT == pytest.approx(row["friction_ft"], abs=0.02)
    assert row["start_psi"] - units.from_si(fall, "psi") == pytest.approx(
        row["expected_psi"], abs=0.05
    )


@pytest.mark.parametrize("row", checks("university_series_pipes"))
def test_loss_of_two_pipes_in_series_is_that_of_the_tutorial(row: Row) -> None:
    line = conduit(
        FrictionLaw.DARCY_WEISBACH,
        length=[300, 300],
        bore=[0.6, 0.4],
        resistance=[0.26e-3, 0.26e-3],
        k=[0.5, 0.24 + 1.0],
    )

    assert float(line.head_loss(0.5, kinematic_viscosity=1.31e-6)) == pytest.approx(
        row["expected_m"], rel=0.005
    )


@pytest.mark.parametrize("row", checks("hazen_williams_own_cases"))
def test_hazen_williams_loss_is_that_of_its_definition(row: Row) -> None:
    loss = float(
        hazen_williams_head_loss(
            row["flow_m3_s"],
            length=row["length_m"],
            bore=row["bore_m"],
            coefficient=row["coefficient"],
        )
    )

    assert loss == pytest.approx(row["expected_m"], rel=1e-6)
    assert 0.0005 < loss / row["rounded_form_m"] - 1.0 < 0.0012


def per_mille(row: Row, flow: float) -> float:
    bore = units.to_si(row["bore_in"], "in")
    return 1000.0 * float(
        hazen_williams_head_loss(flow, length=1.0, bore=bore, coefficient=row["coefficient"])
    )


@pytest.mark.parametrize("row", checks("fair_geyer_okun_diagram"))
def test_hazen_williams_loss_is_that_of_the_textbook_diagram(row: Row) -> None:
    slope = per_mille(row, units.to_si(row["flow_mgd"], "mgd_us"))

    assert slope == pytest.approx(row["printed_per_mille"], rel=0.03)
    assert slope == pytest.approx(row["computed_per_mille"], rel=1e-4)


@pytest.mark.parametrize("row", checks("water_engineering_example_5_36"))
def test_hazen_williams_loss_lies_between_the_two_printed_answers(row: Row) -> None:
    slope = per_mille(row, units.to_si(row["flow_mgd"], "mgd_us"))

    assert row["low_per_mille"] < slope < row["high_per_mille"]


@pytest.mark.parametrize("row", checks("ductile_iron_hydraulic_analysis"))
def test_hazen_williams_loss_is_that_of_the_ductile_iron_form(row: Row) -> None:
    flow = units.to_si(row["flow_gpm"], "gpm_us")
    speed = float(velocity(flow, bore=units.to_si(row["bore_in"], "in")))

    assert units.from_si(speed, "ft/s") == pytest.approx(row["velocity_ft_s"], abs=5e-6)
    assert per_mille(row, flow) == pytest.approx(row["expected_per_mille"], rel=5e-4)


@pytest.mark.parametrize("row", checks("hazen_williams_diameter_problem"))
def test_hazen_williams_bore_is_that_of_the_solved_problem(row: Row) -> None:
    flow = units.to_si(row["flow_gpm"], "gpm_us")

    def excess(bore: float) -> float:
        slope = hazen_williams_head_loss(
            flow, length=1000.0, bore=bore, coefficient=row["coefficient"]
        )
        return float(slope) - row["slope_per_mille"]

    bore = brentq(excess, 0.1, 1.0)

    assert units.from_si(bore, "in") == pytest.approx(row["expected_in"], abs=0.02)


@pytest.mark.parametrize("row", checks("hazen_williams_equivalent_c"))
def test_hazen_williams_coefficient_of_equal_loss_is_that_computed(row: Row) -> None:
    bore = row["bore_m"]
    flow = row["velocity_m_s"] * area(bore)
    loss = float(
        colebrook_head_loss(
            flow,
            length=1.0,
            bore=bore,
            roughness=units.to_si(row["roughness_mm"], "mm"),
            kinematic_viscosity=row["viscosity_m2_s"],
        )
    )

    def excess(c: float) -> float:
        return (
            float(hazen_williams_head_loss(flow, length=1.0, bore=bore, coefficient=c)) - loss
        )

    assert brentq(excess, 50.0, 200.0) == pytest.approx(row["expected"], rel=1e-4)
