"""Specific speed and suction specific speed against published values.

Sources: data/specific_speed_si.csv, specific_speed_us.csv, suction_specific_speed_us.csv,
specific_speed_conversion.csv; the library fluids.
"""

import pytest
from fluids.pump import specific_speed as fluids_specific_speed

from server import units
from server.hydraulics.specific_speed import US_PER_SI, specific_speed, suction_specific_speed
from tests.published.sources import Row, checks


@pytest.mark.parametrize("row", checks("specific_speed_si"))
def test_specific_speed_is_that_of_the_fluids_library(row: Row) -> None:
    ns = float(specific_speed(row["speed_rpm"], flow=row["flow_m3_s"], head=row["head_m"]))

    assert ns == pytest.approx(row["expected_si"], rel=1e-4)
    assert ns * US_PER_SI == pytest.approx(row["expected_us"], rel=1e-4)
    assert ns == pytest.approx(
        fluids_specific_speed(row["flow_m3_s"], row["head_m"], row["speed_rpm"]), rel=1e-12
    )


@pytest.mark.parametrize("row", checks("specific_speed_us"))
def test_specific_speed_in_us_units_is_that_of_the_example(row: Row) -> None:
    ns = float(
        specific_speed(
            row["speed_rpm"],
            flow=units.to_si(row["flow_gpm"], "gpm_us"),
            head=units.to_si(row["head_ft"], "ft"),
            stages=row["stages"],
            eyes=row["eyes"],
        )
    )

    assert ns * US_PER_SI == pytest.approx(row["expected_us"], rel=1e-3)
    if row.has("expected_si"):
        assert ns == pytest.approx(row["expected_si"], rel=1e-3)


@pytest.mark.parametrize("row", checks("suction_specific_speed_us"))
def test_suction_specific_speed_is_that_of_the_pump_table(row: Row) -> None:
    s = suction_specific_speed(
        row["speed_rpm"],
        flow=units.to_si(row["flow_gpm"], "gpm_us"),
        npsh_required=units.to_si(row["npsh_ft"], "ft"),
    )

    assert float(s) * US_PER_SI == pytest.approx(row["expected_us"], rel=1e-3)


@pytest.mark.parametrize("row", checks("specific_speed_conversion"))
def test_us_specific_speed_of_one_si_unit_is_that_in_print(row: Row) -> None:
    assert row["printed"] == pytest.approx(US_PER_SI, rel=1e-3)
    assert row["computed"] == pytest.approx(US_PER_SI, abs=5e-4)
