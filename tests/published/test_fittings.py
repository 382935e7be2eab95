"""Velocity and losses in fittings and valves against published values.

Sources: data/flow_coefficient_definitions.csv, valve_kv_own_cases.csv, valve_cv_own_cases.csv,
valves_in_series.csv, kv_definition_example.csv, throttle_valve_own_case.csv,
hydraulic_institute_velocity.csv, velocity_own_case.csv.
"""

import math

import pytest

from server import units
from server.hydraulics.fittings import k_from_cv, k_from_kv, minor_head_loss, velocity
from server.hydraulics.water import GRAVITY
from tests.published.sources import Row, checks


@pytest.mark.parametrize("row", checks("flow_coefficient_definitions"))
def test_kv_of_a_cv_is_that_of_the_definitions(row: Row) -> None:
    # Kv is defined with water of 1000 kg/m3, our Cv with water of 60 degF, 999.0 kg/m3
    ratio = float(k_from_kv(1.0, bore=0.1) / k_from_cv(1.0, bore=0.1)) * 1000.0 / 999.0

    assert math.sqrt(ratio) == pytest.approx(row["expected"], rel=1e-9)


@pytest.mark.parametrize("row", checks("valve_kv_own_cases"))
def test_loss_coefficient_of_a_kv_is_that_of_the_own_case(row: Row) -> None:
    k = k_from_kv(row["kv_m3_h"], bore=units.to_si(row["bore_mm"], "mm"))

    assert float(k) == pytest.approx(row["expected"], abs=1e-6)


@pytest.mark.parametrize("row", checks("valve_cv_own_cases"))
def test_loss_coefficient_of_a_cv_is_that_of_the_own_case(row: Row) -> None:
    k = float(k_from_cv(row["cv_gpm"], bore=units.to_si(row["bore_in"], "in")))

    assert k == pytest.approx(row["water_60F"], abs=1e-6)
    assert k == pytest.approx(row["handbook_891"], rel=8e-4)


@pytest.mark.parametrize("row", checks("valves_in_series"))
def test_two_valves_in_series_lose_as_the_one_of_the_example(row: Row) -> None:
    two = 2.0 * float(k_from_cv(row["cv_each"], bore=0.9))
    one = float(k_from_cv(row["cv_together"] + 0.1, bore=0.9))
    other = float(k_from_cv(row["cv_together"] - 0.1, bore=0.9))

    assert one < two < other


def bar_lost(row: Row) -> float:
    """Pressure lost in the valve by water of 1000 kg/m3, whatever the bore."""
    bore = 0.15
    k = k_from_kv(row["kv_m3_h"], bore=bore)
    loss = float(minor_head_loss(units.to_si(row["flow_m3_h"], "m3/h"), bore=bore, k=k))
    return units.from_si(loss * 1000.0 * GRAVITY, "bar")


@pytest.mark.parametrize("row", checks("kv_definition_example"))
def test_pressure_lost_in_a_valve_is_that_of_the_example(row: Row) -> None:
    assert bar_lost(row) == pytest.approx(row["pressure_bar"], rel=1e-12)


@pytest.mark.parametrize("row", checks("throttle_valve_own_case"))
def test_pressure_lost_in_a_throttled_valve_is_that_of_the_own_case(row: Row) -> None:
    assert bar_lost(row) == pytest.approx(row["pressure_bar"], rel=1e-12)


@pytest.mark.parametrize(
    "row", checks("hydraulic_institute_velocity") + checks("velocity_own_case")
)
def test_velocity_is_that_of_the_table(row: Row) -> None:
    speed = velocity(
        units.to_si(row["flow_gpm"], "gpm_us"), bore=units.to_si(row["bore_in"], "in")
    )

    assert units.from_si(float(speed), "ft/s") == pytest.approx(
        row["expected_ft_s"], abs=row["absolute"]
    )
