"""The speed at which a pump opens its check valve against published figures.

Sources: data/least_speed_own_cases.csv, speed_that_opens_a_check_valve.csv,
speed_to_open_check_valve.csv.
"""

import pytest

from server.hydraulics.control import opening_speed
from server.hydraulics.leg_curve import leg_curve
from tests.published.published_pumps import from_formula
from tests.published.sources import Row, checks


@pytest.mark.parametrize(
    "row",
    checks("least_speed_own_cases")
    + checks("speed_that_opens_a_check_valve")
    + checks("speed_to_open_check_valve"),
)
def test_opening_speed_is_that_of_the_own_case(row: Row) -> None:
    shutoff = row["shutoff_head_m"]
    pump = from_formula(lambda q: shutoff - 1000.0 * q * q, last_flow=0.1)
    s = float(opening_speed(row["static_head_m"], leg=leg_curve(pump, loss=50.0)))

    assert s == pytest.approx(row["expected"], abs=5.1e-5)
