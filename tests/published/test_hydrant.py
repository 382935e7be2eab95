"""The supply curve of a hydrant flow test against NFPA 291 and published tests.

Sources: data/flow_test_lecture.csv, fair_geyer_okun_flow_test.csv, flow_test_own_case.csv,
demand_flow_test.csv, demand_flow_test_residual.csv, nfpa_291_powers.csv,
flow_test_supply_curve.csv, flow_test_supply_coefficient.csv.
"""

import pytest

from server import units
from server.hydraulics.supply import FlowTestSupply
from tests.published.sources import Row, checks

DENSITY = 998.2072  # of the supply curve's example, 20 degC [kg/m3]


def supply(static_psi: float, residual_psi: float, flow_gpm: float) -> FlowTestSupply:
    return FlowTestSupply(
        gauge_level=0.0,
        static_pressure=units.to_si(static_psi, "psi"),
        residual_pressure=units.to_si(residual_psi, "psi"),
        test_flow=units.to_si(flow_gpm, "gpm_us"),
    )


TEXTBOOK_TEST = supply(74, 46, 2980)


def available(row: Row) -> float:
    """Flow in US gal/min at the pressure of the row."""
    tested = supply(row["static_psi"], row["residual_psi"], row["flow_gpm"])
    flow = tested.flow_at(units.to_si(row["at_psi"], "psi"))
    return units.from_si(float(flow), "gpm_us")


@pytest.mark.parametrize(
    "row",
    checks("flow_test_lecture")
    + checks("fair_geyer_okun_flow_test")
    + checks("flow_test_own_case"),
)
def test_available_flow_is_that_of_the_test(row: Row) -> None:
    assert available(row) == pytest.approx(row["expected_gpm"], abs=0.1)


@pytest.mark.parametrize("row", checks("demand_flow_test"))
def test_available_flow_at_20_psi_is_that_of_the_anchor(row: Row) -> None:
    assert available(row) == pytest.approx(row["expected_gpm"], rel=1e-3)


@pytest.mark.parametrize("row", checks("demand_flow_test_residual"))
def test_residual_pressure_at_a_flow_is_that_of_the_anchor(row: Row) -> None:
    pressure = supply(60, 45, 1000).pressure(units.to_si(row["flow_gpm"], "gpm_us"))
    residual = units.from_si(float(pressure), "psi")

    assert residual == pytest.approx(row["expected_psi"], abs=row["absolute_psi"])
    assert (residual >= 20.0) == (row.text("holds_20_psi") == "yes")


@pytest.mark.parametrize("row", checks("nfpa_291_powers"))
def test_power_of_a_pressure_drop_is_that_of_the_table(row: Row) -> None:
    # a test of 1 m3/s at a drop of 1 Pa: the flow at a drop of h is h^0.54
    unit_test = FlowTestSupply(
        gauge_level=0.0, static_pressure=200.0, residual_pressure=199.0, test_flow=1.0
    )

    assert float(unit_test.flow_at(200.0 - row["drop_psi"])) == pytest.approx(
        row["expected"], abs=0.005
    )


@pytest.mark.parametrize("row", checks("flow_test_supply_curve"))
def test_residual_on_the_supply_curve_is_that_computed(row: Row) -> None:
    flow = units.to_si(row["flow_gpm"], "gpm_us")

    assert units.from_si(float(TEXTBOOK_TEST.pressure(flow)), "psi") == pytest.approx(
        row["expected_psi"], abs=1e-4
    )
    assert float(TEXTBOOK_TEST.grade(flow, density=DENSITY)) == pytest.approx(
        row["expected_m"], abs=1e-4
    )


@pytest.mark.parametrize("row", checks("flow_test_supply_coefficient"))
def test_coefficient_of_the_supply_curve_is_that_computed(row: Row) -> None:
    static = float(TEXTBOOK_TEST.grade(0.0, density=DENSITY))
    at_one = float(TEXTBOOK_TEST.grade(1.0, density=DENSITY))

    assert static == pytest.approx(row["static_head_m"], abs=1e-4)
    assert static - at_one == pytest.approx(row["coefficient"], abs=1e-3)


def test_the_exponent_is_that_of_nfpa_291() -> None:
    # the curve passes through the test point; twice the flow takes 2^(1/0.54) of the drop
    drop = TEXTBOOK_TEST.static_pressure - float(
        TEXTBOOK_TEST.pressure(2.0 * TEXTBOOK_TEST.test_flow)
    )

    assert float(TEXTBOOK_TEST.pressure(TEXTBOOK_TEST.test_flow)) == pytest.approx(
        TEXTBOOK_TEST.residual_pressure, rel=1e-12
    )
    assert drop / TEXTBOOK_TEST.drop == pytest.approx(2.0 ** (1.0 / 0.54), rel=1e-12)
