"""The supplying zone both ways, by hand.

Loss 2 m at 100 L/s, growing with flow to the power 1.852; source grade 160 m, ground 125 m,
999 kg/m3.
"""

import pytest

from server.station.entry import Quantity
from server.station.supply import SupplyingZone
from server.studies.supplying_zone import absent_fields, check_supplying_zone


def _zone(**changes: Quantity | None) -> SupplyingZone:
    figures = {
        "loss": Quantity(value=2, unit="m"), "at_flow": Quantity(value=100, unit="L/s"),
        "source_grade": Quantity(value=160, unit="m"),
        "lowest_customer_level": Quantity(value=125, unit="m"),
        "maximum_day": Quantity(value=30, unit="L/s"),
        "peak_hour": Quantity(value=50, unit="L/s"),
        "fire_flow": Quantity(value=25, unit="L/s"),
    }  # fmt: skip
    return SupplyingZone(**{**figures, **changes})


def test_three_checks_have_the_flows_of_the_published_rule() -> None:
    checks = check_supplying_zone(
        _zone(), station_peak=0.036, station_fire=0.060, density=999.0
    )
    flows = {check.check: check.flow for check in checks}
    assert flows == {
        "peak_hour": pytest.approx(0.086),  # 50 + 36
        "fire_there": pytest.approx(0.091),  # 25 + 30 + 36
        "fire_here": pytest.approx(0.110),  # 50 + 60
    }


def test_pressure_at_the_highest_ground_is_grade_less_loss_less_level() -> None:
    (check,) = [
        c
        for c in check_supplying_zone(
            _zone(), station_peak=0.050, station_fire=None, density=999.0
        )
        if c.check == "peak_hour"
    ]
    # 100 L/s in all: 160 - 2 - 125 = 33 m
    assert check.pressure == pytest.approx(999.0 * 9.80665 * 33.0)


def test_no_pumped_fire_leaves_two_checks() -> None:
    checks = check_supplying_zone(_zone(), station_peak=0.036, station_fire=None, density=999.0)
    assert [check.check for check in checks] == ["peak_hour", "fire_there"]


def test_absent_figure_is_named_and_nothing_is_computed() -> None:
    zone = _zone(loss=None)
    assert absent_fields(zone) == ("/supply/supplying_zone/loss",)
    assert (
        check_supplying_zone(zone, station_peak=0.036, station_fire=None, density=999.0) == ()
    )
