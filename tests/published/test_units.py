"""Unit factors against their definitions and printed values.

Sources: data/unit_definitions.csv, unit_products.csv, foot_of_water.csv,
demand_unit_anchors.csv.
"""

import pytest

from server import units
from server.hydraulics.water import GRAVITY, density
from tests.published.sources import Row, checks


@pytest.mark.parametrize("row", checks("unit_definitions"))
def test_unit_is_that_of_its_definition(row: Row) -> None:
    value = units.from_si(units.to_si(1.0, row.text("unit")), row.text("in_unit"))

    assert value == pytest.approx(row["expected"], rel=1e-11)


@pytest.mark.parametrize("row", checks("unit_products"))
def test_power_of_a_flow_and_a_pressure_is_that_of_the_definitions(row: Row) -> None:
    flow = units.to_si(row["flow"], row.text("flow_unit"))
    pressure = units.to_si(row["pressure"], row.text("pressure_unit"))

    assert units.from_si(flow * pressure, row.text("power_unit")) == pytest.approx(
        row["expected"], rel=1e-9
    )


@pytest.mark.parametrize("row", checks("foot_of_water"))
def test_foot_of_water_is_that_of_its_temperature(row: Row) -> None:
    of = {
        "conventional": 1000.0,
        "4 degC": float(density(4.0)),
        "60 degF": float(density(units.to_si(60.0, "degF"))),
    }
    foot = of[row.text("water")] * GRAVITY * units.to_si(1.0, "ft")

    assert foot == pytest.approx(row["expected_Pa"], abs=row["absolute_Pa"])


@pytest.mark.parametrize("row", checks("demand_unit_anchors"))
def test_pressure_and_its_head_are_those_of_the_anchor(row: Row) -> None:
    pressure = units.to_si(row["pressure_psi"], "psi")
    head = pressure / (1000.0 * GRAVITY)

    assert head == pytest.approx(row["expected_m"], rel=1e-3)
    if row.has("expected_kPa"):
        assert units.from_si(pressure, "kPa") == pytest.approx(row["expected_kPa"], rel=1e-3)
    if row.has("expected_ft"):
        assert units.from_si(head, "ft") == pytest.approx(row["expected_ft"], rel=1e-3)
