"""Standard atmospheric pressure against published tables.

Sources: data/us_standard_atmosphere_1976.csv, icao_pressure_levels.csv,
us_atmosphere_reference_table.csv, us_atmosphere_second_table.csv.
"""

import pytest
from scipy.optimize import brentq

from server import units
from server.hydraulics.water import atmospheric_pressure
from tests.published.sources import Row, checks

EARTH_RADIUS = 6356766.0  # of the standard atmosphere [m]


@pytest.mark.parametrize("row", checks("us_standard_atmosphere_1976"))
def test_pressure_is_that_of_the_standard_atmosphere(row: Row) -> None:
    assert float(atmospheric_pressure(row["elevation_m"])) == pytest.approx(
        row["expected_Pa"], rel=1e-6
    )


@pytest.mark.parametrize("row", checks("icao_pressure_levels"))
def test_level_of_a_pressure_is_that_of_the_icao_table(row: Row) -> None:
    wanted = row["pressure_hPa"] * 100.0
    z = brentq(lambda m: float(atmospheric_pressure(m)) - wanted, -400.0, 5000.0, xtol=1e-6)
    geopotential = EARTH_RADIUS * z / (EARTH_RADIUS + z)

    assert geopotential == pytest.approx(row["geopotential_height_m"], abs=1.0)


@pytest.mark.parametrize("row", checks("us_atmosphere_reference_table"))
def test_pressure_is_that_of_the_table_in_feet(row: Row) -> None:
    # the table's formula takes its feet as geopotential
    geopotential = units.to_si(row["elevation_ft"], "ft")
    pressure = atmospheric_pressure(EARTH_RADIUS * geopotential / (EARTH_RADIUS - geopotential))

    assert units.from_si(float(pressure), "psi") == pytest.approx(row["expected_psi"], abs=3e-3)


@pytest.mark.parametrize("row", checks("us_atmosphere_second_table"))
def test_pressure_is_that_of_the_second_table_in_feet(row: Row) -> None:
    pressure = atmospheric_pressure(units.to_si(row["elevation_ft"], "ft"))

    assert units.from_si(float(pressure), "psi") == pytest.approx(row["expected_psi"], abs=5e-4)
