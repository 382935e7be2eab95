"""Regions of a pump's curve against published figures, in the physics as in the profiles.

Sources: data/operating_region_rules.csv, thermal_minimum_flow.csv.
"""

import pytest

from server import units
from server.hydraulics.operating_region import (
    minimum_continuous_flow,
    preferred_ends,
    thermal_minimum_flow,
)
from server.hydraulics.specific_speed import US_PER_SI
from tests.published.sources import Row, checks

DENSITY = 8.34 * 0.45359237 / units.US_GALLON  # water of 8.34 lb a US gallon [kg/m3]
ENDS = {
    "preferred-region-low": (4000.0, 0),
    "preferred-region-high": (4000.0, 1),
    "preferred-region-low-high-specific-speed": (5000.0, 0),
    "preferred-region-high-high-specific-speed": (5000.0, 1),
}  # rule: specific speed on its side of 4500 in US units, which end


@pytest.mark.parametrize(
    "row", checks("operating_region_rules", id="R1") + checks("operating_region_rules", id="R2")
)
def test_preferred_region_of_the_physics_is_that_in_print(row: Row) -> None:
    ns, end = ENDS[row.text("rule")]

    assert float(preferred_ends(ns / US_PER_SI)[end]) == row["value"]


@pytest.mark.parametrize("row", checks("operating_region_rules", id="R7"))
def test_assumed_minimum_flow_is_that_in_print(row: Row) -> None:
    least = minimum_continuous_flow(0.8, best_flow=0.02)

    assert least is not None
    assert least.assumed
    assert float(least.flow) == pytest.approx(0.8 * 0.02 * row["value"] / 100.0, rel=1e-12)


@pytest.mark.parametrize("row", checks("thermal_minimum_flow"))
def test_flow_that_carries_the_heat_away_is_that_of_the_formula(row: Row) -> None:
    flow = thermal_minimum_flow(
        units.to_si(row["power_hp"], "hp"),
        density=float(DENSITY),
        temperature_rise=row["rise_F"] / 1.8,
    )

    assert units.from_si(float(flow), "gpm_us") == pytest.approx(row["expected_gpm"], rel=2e-3)
