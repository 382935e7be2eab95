"""The shape of a pump's curve against published figures.

Sources: data/hydraulic_institute_rise_to_shutoff.csv.
"""

import pytest

from server import units
from server.hydraulics.pump_curve import pump_curve
from tests.published.sources import Row, checks


@pytest.mark.parametrize("row", checks("hydraulic_institute_rise_to_shutoff"))
def test_rise_to_shutoff_is_that_of_the_pump_table(row: Row) -> None:
    rated = units.to_si(row["rated_gpm"], "gpm_us")
    head = units.to_si(row["rated_ft"], "ft")
    curve = pump_curve(
        [0.0, rated, 1.3 * rated],
        head=[units.to_si(row["shutoff_ft"], "ft"), head, 0.8 * head],
        tested_speed=1770.0,
        bep_flow=rated,
    )

    assert curve.rise_to_shutoff is not None
    assert 100.0 * curve.rise_to_shutoff == pytest.approx(row["expected_percent"], abs=0.01)
