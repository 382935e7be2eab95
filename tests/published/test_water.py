"""Properties of water against published values.

Sources: data/iapws_sr6_08.csv, iapws_r7_97.csv, hydraulic_institute_vapour_pressure.csv,
iapws_library_water.csv, vapour_and_atmospheric_head.csv; the libraries CoolProp and iapws.
"""

import pytest
from CoolProp.CoolProp import PropsSI
from scipy.optimize import brentq

from server import units
from server.hydraulics import water
from tests.published.sources import Row, checks


@pytest.fixture
def wide_range(monkeypatch: pytest.MonkeyPatch) -> None:
    """Let the equations run where their authors tabulate them: outside 0 to 60 degC."""
    monkeypatch.setattr(water, "LOWEST_TEMPERATURE", -20.0)
    monkeypatch.setattr(water, "HIGHEST_TEMPERATURE", 350.0)


def celsius(row: Row) -> float:
    return row["temperature_K"] - water.KELVIN


@pytest.mark.usefixtures("wide_range")
@pytest.mark.parametrize("row", checks("iapws_sr6_08", quantity="density"))
def test_density_is_that_of_the_release(row: Row) -> None:
    density = float(water.density(celsius(row)))

    assert density == pytest.approx(row["expected"], abs=row["half_digit"], rel=0)


@pytest.mark.usefixtures("wide_range")
@pytest.mark.parametrize("row", checks("iapws_sr6_08", quantity="dynamic_viscosity"))
def test_viscosity_is_that_of_the_release(row: Row) -> None:
    viscosity = float(water.dynamic_viscosity(celsius(row)))

    assert viscosity == pytest.approx(row["expected"], abs=row["half_digit"], rel=0)


@pytest.mark.usefixtures("wide_range")
@pytest.mark.parametrize("row", checks("iapws_r7_97", quantity="pressure"))
def test_vapour_pressure_is_that_of_the_release(row: Row) -> None:
    pressure = float(water.vapour_pressure(celsius(row))) / 1e6

    assert pressure == pytest.approx(row["pressure_MPa"], abs=row["half_digit"], rel=0)


@pytest.mark.usefixtures("wide_range")
@pytest.mark.parametrize("row", checks("iapws_r7_97", quantity="temperature"))
def test_vapour_pressure_inverted_gives_the_saturation_temperature_of_the_release(
    row: Row,
) -> None:
    wanted = row["pressure_MPa"] * 1e6
    boiling = brentq(lambda t: float(water.vapour_pressure(t)) - wanted, 50.0, 340.0, xtol=1e-9)

    assert boiling + water.KELVIN == pytest.approx(
        row["temperature_K"], abs=row["half_digit"], rel=0
    )


@pytest.mark.parametrize("row", checks("hydraulic_institute_vapour_pressure"))
def test_vapour_pressure_is_that_of_the_trade_table(row: Row) -> None:
    temperature = units.to_si(row["temperature_F"], "degF")
    pressure = units.from_si(float(water.vapour_pressure(temperature)), "psi")

    assert pressure == pytest.approx(row["expected_psi"], rel=row["relative"])


@pytest.mark.parametrize("row", checks("iapws_library_water"))
def test_properties_are_those_of_the_iapws_library(row: Row) -> None:
    t = row["temperature_C"]

    assert float(water.density(t)) == pytest.approx(row["density"], rel=1e-9)
    assert float(water.dynamic_viscosity(t)) == pytest.approx(
        row["dynamic_viscosity"], rel=1e-9
    )
    assert float(water.vapour_pressure(t)) == pytest.approx(row["vapour_pressure"], rel=1e-9)
    assert float(water.kinematic_viscosity(t)) == pytest.approx(
        row["dynamic_viscosity"] / row["density"], rel=1e-9
    )


@pytest.mark.parametrize("temperature", range(5, 61, 5))
def test_properties_are_those_of_the_full_formulation(temperature: int) -> None:
    """IAPWS-95 and the 2008 viscosity through CoolProp: 1e-5, 1e-4 and 1e-4 of the value."""
    kelvin = temperature + water.KELVIN

    def of(name: str) -> float:
        return float(PropsSI(name, "T", kelvin, "P", water.SEA_LEVEL_PRESSURE, "Water"))

    assert float(water.density(temperature)) == pytest.approx(of("D"), rel=1e-5)
    assert float(water.dynamic_viscosity(temperature)) == pytest.approx(of("V"), rel=1e-4)
    assert float(water.vapour_pressure(temperature)) == pytest.approx(
        float(PropsSI("P", "T", kelvin, "Q", 0, "Water")), rel=1e-4
    )


@pytest.mark.parametrize("row", checks("vapour_and_atmospheric_head"))
def test_vapour_and_atmospheric_heads_are_those_of_the_full_formulation(row: Row) -> None:
    t = row["temperature_C"]
    weight = float(water.density(t)) * water.GRAVITY

    assert float(water.vapour_pressure(t)) / weight == pytest.approx(
        row["vapour_head_m"], abs=8e-5
    )
    assert float(water.atmospheric_pressure(0.0)) / weight == pytest.approx(
        row["atmospheric_head_m"], abs=5e-4
    )
