"""Supplies: the flow test, its inverse, several tests, and refusals.

Sources
    F6.3     checks/hydraulics.md section 6, the curve through one test (NFPA 291 exponent).
    Demo     demo/closed_zone.md section 2: tests A and B of the invented town, 1.5 kPa apart.
"""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.hydraulics.errors import SupplyRefused
from server.hydraulics.supply import (
    FixedGradeSupply,
    FlowTestSupply,
    TankSupply,
    compare_flow_tests,
    fit_flow_tests,
)

RHO = 999.2
TEST_A = FlowTestSupply(
    gauge_level=112.0, static_pressure=350e3, residual_pressure=260e3, test_flow=0.040
)
TEST_B = FlowTestSupply(
    gauge_level=112.0, static_pressure=346e3, residual_pressure=301e3, test_flow=0.028
)


def test_the_curve_passes_through_both_points_of_the_test():
    assert TEST_A.pressure([0.0, 0.040]).tolist() == [350e3, 260e3]


def test_the_grade_is_gauge_level_plus_pressure_head():
    grade = TEST_A.grade(0.040, density=RHO, shift_pressure=-40e3)

    assert float(grade) == pytest.approx(112.0 + 220e3 / (RHO * 9.80665), rel=1e-14)


@given(st.floats(0.0, 0.2), st.floats(-60e3, 60e3))
def test_the_flow_at_a_pressure_is_the_inverse_of_the_pressure(draw, shift):
    pressure = TEST_A.pressure(draw, shift_pressure=shift)

    assert float(TEST_A.flow_at(pressure, shift_pressure=shift)) == pytest.approx(
        draw, rel=1e-9, abs=1e-9
    )


@given(st.floats(-0.1, 0.2), st.floats(1e-6, 0.1))
def test_more_draw_never_leaves_more_pressure(draw, more):
    assert TEST_A.pressure(draw + more) < TEST_A.pressure(draw)


def test_two_tests_are_compared_from_one_static():
    comparison = compare_flow_tests(TEST_A, others=[TEST_B])

    assert comparison.expected_pressure[0] == pytest.approx(303.5e3, abs=50)
    assert comparison.shifted_pressure[0] == pytest.approx(305.0e3, abs=1e-6)
    assert comparison.difference[0] == pytest.approx(1.5e3, abs=50)
    assert comparison.drop_ratio[0] == pytest.approx(0.13, abs=0.005)


def test_a_fit_of_one_test_is_that_test():
    fit = fit_flow_tests([TEST_A])

    assert fit.supply.pressure(0.03) == pytest.approx(TEST_A.pressure(0.03), rel=1e-14)
    assert fit.scatter == pytest.approx(0.0, abs=1e-9)


def test_a_fit_lies_between_its_tests_and_says_how_far_they_are():
    fit = fit_flow_tests([TEST_A, TEST_B])
    fall_a, fall_b = TEST_A.drop / 0.040**TEST_A.exponent, TEST_B.drop / 0.028**TEST_B.exponent
    fall = fit.supply.drop / fit.supply.test_flow**fit.supply.exponent

    assert min(fall_a, fall_b) < fall < max(fall_a, fall_b)
    assert 0 < fit.scatter < 1.5e3


def test_how_far_the_test_is_stretched_is_a_ratio():
    assert float(TEST_A.extrapolation_ratio(0.060)) == pytest.approx(1.5)
    assert TEST_A.drop_ratio == pytest.approx(90 / 350)


@pytest.mark.parametrize(
    ("change", "reason"),
    [
        ({"residual_pressure": 350e3}, "residual_not_below_static"),
        ({"residual_pressure": 360e3}, "residual_not_below_static"),
        ({"test_flow": 0.0}, "test_flow_not_positive"),
        ({"exponent": 0.5}, "exponent_below_one"),
    ],
)
def test_a_test_without_a_falling_curve_is_refused_with_its_reason(change, reason):
    figures = {
        "gauge_level": 112.0,
        "static_pressure": 350e3,
        "residual_pressure": 260e3,
        "test_flow": 0.040,
    }
    with pytest.raises(SupplyRefused) as refused:
        FlowTestSupply(**(figures | change))

    assert refused.value.reason == reason


def test_a_figure_that_is_no_number_is_refused():
    with pytest.raises(ValueError, match="static_pressure must be a finite number"):
        FlowTestSupply(
            gauge_level=112.0, static_pressure=np.nan, residual_pressure=1.0, test_flow=0.04
        )


def test_fixed_and_tank_grades_do_not_depend_on_the_draw():
    fixed = FixedGradeSupply(grade_level=140.0)
    tank = TankSupply(water_level=52.5, outlet_level=50.0)

    assert fixed.grade([0.0, 0.1], density=RHO).tolist() == [140.0, 140.0]
    assert tank.grade([0.0, 0.1], density=RHO).tolist() == [52.5, 52.5]
    assert tank.depth_over_outlet == 2.5


def test_a_shift_moves_a_fixed_grade_by_its_head():
    fixed = FixedGradeSupply(grade_level=140.0)

    assert float(fixed.grade(0.0, density=RHO, shift_pressure=-9806.65)) == pytest.approx(
        140.0 - 1000.0 / RHO
    )


def test_a_tank_below_its_outlet_is_refused():
    with pytest.raises(SupplyRefused, match="water_level must be above outlet_level"):
        TankSupply(water_level=50.0, outlet_level=50.0)
