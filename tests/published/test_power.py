"""Shaft power and efficiency of a pump against published examples.

Sources: data/hydraulic_institute_shaft_power.csv, technical_paper_410_power.csv,
energy_shaft_power.csv, assessment_centre_pump_efficiency.csv,
energy_manager_exam_efficiency.csv.
"""

import pytest

from server import units
from server.hydraulics.pump_curve import pump_curve
from tests.published.sources import Row, checks

POUND_PER_CUBIC_FOOT = 0.45359237 / 0.3048**3  # [kg/m3]
UNIT_GRAVITY = 1000.0  # water of specific gravity 1, as the pump table takes it [kg/m3]


def shaft_power(flow: float, head: float, efficiency: float, rho: float) -> float:
    """Return the shaft power at a row, in W; the neighbouring rows are made up."""
    curve = pump_curve(
        [0.5 * flow, flow, 1.5 * flow],
        head=[1.1 * head, head, 0.8 * head],
        efficiency=[0.9 * efficiency, efficiency, 0.9 * efficiency],
        tested_speed=1450.0,
    )
    return float(curve.shaft_power(flow, density=rho))


@pytest.mark.parametrize("row", checks("hydraulic_institute_shaft_power"))
def test_shaft_power_is_that_of_the_pump_table(row: Row) -> None:
    power = shaft_power(
        units.to_si(row["flow"], row.text("flow_unit")),
        units.to_si(row["head"], row.text("head_unit")),
        row["efficiency"],
        UNIT_GRAVITY,
    )

    assert units.from_si(power, row.text("power_unit")) == pytest.approx(
        row["expected"], abs=row["absolute"]
    )


@pytest.mark.parametrize(
    "row", checks("technical_paper_410_power") + checks("energy_shaft_power")
)
def test_shaft_power_in_us_units_is_that_of_the_problem(row: Row) -> None:
    power = shaft_power(
        units.to_si(row["flow_gpm"], "gpm_us"),
        units.to_si(row["head_ft"], "ft"),
        row["efficiency"],
        row["density_lb_ft3"] * POUND_PER_CUBIC_FOOT,
    )

    assert units.from_si(power, "hp") == pytest.approx(row["expected_hp"], rel=1e-3)


@pytest.mark.parametrize(
    "row",
    checks("assessment_centre_pump_efficiency") + checks("energy_manager_exam_efficiency"),
)
def test_efficiency_from_a_power_row_is_that_of_the_example(row: Row) -> None:
    flow = units.to_si(row["flow"], row.text("flow_unit"))
    power = units.to_si(row["power"], row.text("power_unit"))
    curve = pump_curve(
        [0.5 * flow, flow, 1.5 * flow],
        head=[1.1 * row["head_m"], row["head_m"], 0.8 * row["head_m"]],
        shaft_power=[0.9 * power, power, 1.4 * power],
        tested_speed=1450.0,
    )

    assert float(curve.efficiency(flow)) == pytest.approx(row["expected"], abs=row["absolute"])
