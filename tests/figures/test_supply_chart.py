"""The supply figure, against the demo's flow test.

Sources
    demo    test A gives 260 kPa at 40.0 L/s; the street main at low supply reaches 140 kPa at
            56.4 L/s (independent scalar calculator); the design fire leaves 119 kPa.
"""

import numpy as np
import pytest

from server.figures.chart import Role
from server.station.station import Station
from server.studies.supply_curve import NoSupplyCurve, supply_curve


def test_the_normal_curve_passes_through_the_basis_test(supply):
    normal = next(s for s in supply.series if s.key == "supply-normal")

    assert np.interp(0.040, normal.x, normal.y) == pytest.approx(260e3, rel=1e-4)


def test_the_low_state_meets_the_limit_where_the_calculator_says(main_curve):
    assert main_curve.flow_at_limit[0] * 1000 == pytest.approx(56.4, abs=0.05)


def test_a_scenario_under_the_limit_is_told_by_marker_and_words(supply):
    fire = next(m for m in supply.markers if m.key == "sc-f2re9k")

    assert fire.y == pytest.approx(119.3e3, abs=200)
    assert fire.role is Role.DUTY_OUTSIDE
    assert "below the limit: Maximum day and fire, design" in supply.alt


def test_both_tests_stand_at_the_level_of_the_connection(main_curve):
    a, b = main_curve.tests

    assert (a.basis, b.basis) == (True, False)
    assert b.residual_pressure == pytest.approx(301e3)


def test_a_state_that_is_not_stated_has_no_line(demo):
    states = demo.supply.states.model_copy(update={"low": None})
    supply = demo.supply.model_copy(update={"states": states})
    curve = supply_curve(demo.model_copy(update={"supply": supply}), None)

    assert np.isnan(curve.pressure[0]).all()
    assert np.isnan(curve.flow_at_limit[0])
    assert np.isfinite(curve.pressure[1]).all()


def test_an_empty_station_names_what_is_missing():
    curve = supply_curve(Station(), None)

    assert isinstance(curve, NoSupplyCurve)
    assert curve.missing[0].path == "/supply/kind"
