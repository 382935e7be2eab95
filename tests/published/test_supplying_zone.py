"""The supplying zone's check both ways against the rule in print.

Sources: data/washington_both_ways.csv.
"""

import pytest

from server.station.entry import Quantity
from server.station.supply import SupplyingZone
from server.studies.supplying_zone import check_supplying_zone
from tests.published.sources import Row, checks


def litres_per_second(value: float) -> Quantity:
    return Quantity(value=value, unit="L/s")


@pytest.mark.parametrize("row", checks("washington_both_ways"))
def test_supplying_zone_is_checked_at_the_flows_of_the_rule(row: Row) -> None:
    zone = SupplyingZone(
        lowest_customer_level=Quantity(value=100.0, unit="m"),
        loss=Quantity(value=10.0, unit="m"),
        at_flow=litres_per_second(100.0),
        source_grade=Quantity(value=150.0, unit="m"),
        peak_hour=litres_per_second(row["peak_there"]),
        maximum_day=litres_per_second(row["maximum_day_there"]),
        fire_flow=litres_per_second(row["fire_there"]),
    )
    made = check_supplying_zone(
        zone,
        station_peak=row["peak_here"] / 1000.0,
        station_fire=row["fire_with_maximum_day_here"] / 1000.0,
        density=1000.0,
    )
    flows = {each.check: each.flow for each in made}

    assert 1000.0 * flows[row.text("check")] == pytest.approx(row["expected"], rel=1e-12)
