"""Smoothed head curves: exact polynomials met, residuals told, rises refused.

Sources
    numpy    polyfit, an independent route to the same least squares.
    Own      rows on a known polynomial are met to rounding.
"""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.hydraulics.errors import CurveRefused
from server.hydraulics.leg_curve import leg_curve
from server.hydraulics.pump_curve import pump_curve
from server.hydraulics.smoothed_curve import smoothed
from server.hydraulics.smoothed_head import smoothed_head
from tests.hydraulics.demo_pumps import main_pump

FLOW = np.linspace(0.0, 0.04, 9)
WAVE = 0.3 * np.array([1, -1, 1, -1, 1, -1, 1, -1, 1])


@pytest.mark.parametrize("degree", [2, 3, 4])
def test_rows_on_a_polynomial_are_met(degree):
    share = FLOW / FLOW[-1]
    head = 60 - 10 * share - 12 * share**degree
    drawn = smoothed_head(FLOW, head, degree=degree)

    assert np.abs(drawn.residual).max() < 1e-12
    between = np.linspace(0, 0.04, 300)
    expected = 60 - 10 * between / 0.04 - 12 * (between / 0.04) ** degree
    assert drawn.curve(between) == pytest.approx(expected, abs=3e-9)


@pytest.mark.parametrize("degree", [2, 3, 4])
def test_the_fit_is_that_of_least_squares(degree):
    head = 60 - 8 * FLOW / 0.04 - 14 * (FLOW / 0.04) ** 2 + WAVE
    drawn = smoothed_head(FLOW, head, degree=degree)
    expected = np.polyval(np.polyfit(FLOW / 0.04, head, degree), FLOW / 0.04)

    assert drawn.fitted == pytest.approx(expected, rel=1e-12)
    assert drawn.residual == pytest.approx(head - expected, abs=1e-11)
    assert drawn.largest_residual == pytest.approx(np.abs(head - expected).max(), rel=1e-9)


def test_residuals_of_least_squares_are_at_right_angles_to_every_power():
    drawn = smoothed_head(FLOW, 60 - 22 * (FLOW / 0.04) ** 1.7 + WAVE, degree=3)
    powers = np.vander(FLOW / 0.04, 4)

    assert powers.T @ drawn.residual == pytest.approx(np.zeros(4), abs=1e-11)


def test_a_smoothed_pump_keeps_its_rows_and_tells_its_residuals():
    tested = main_pump()
    drawn = smoothed(tested)

    assert drawn.rows is tested.rows
    assert drawn.smoothing is not None
    assert drawn.smoothing.degree in (2, 3, 4)
    assert drawn.head(drawn.rows.flow) == pytest.approx(
        drawn.rows.head - drawn.smoothing.residual, abs=1e-9
    )
    assert 0 < drawn.smoothing.largest_residual < 1.0
    assert drawn.shutoff_head == pytest.approx(float(drawn.head(0.0)), abs=1e-12)
    assert drawn.falls_throughout
    assert drawn.hump == pytest.approx(0.0, abs=1e-12)
    assert drawn.efficiency(0.018) == tested.efficiency(0.018)


def test_a_smoothed_pump_makes_a_leg_of_falling_head():
    leg = leg_curve(smoothed(main_pump(), degree=4), loss=1700.0)

    assert leg.shares_uniquely
    head = leg.head(0.02)
    assert float(leg.largest_flow(head)) == pytest.approx(0.02, rel=1e-12)


def test_a_polynomial_that_rises_where_the_rows_fall_is_refused_with_the_row():
    # steep, level, steep: a cubic through it has a saddle that rises
    head = [60.0, 50.0, 49.9, 49.8, 49.7, 40.0, 25.0]
    tested = pump_curve(np.linspace(0, 0.03, 7), head=head, tested_speed=1450)
    with pytest.raises(CurveRefused, match="degree 3 rises between rows 2 and 3") as refused:
        smoothed(tested, degree=3)
    assert refused.value.reason == "smoothed_rises"
    assert refused.value.row == 1


def test_rows_that_start_level_are_smoothed_without_a_hump():
    head = [50.0, 49.99, 49.98, 49.9, 49.0, 44.0, 36.0]
    tested = pump_curve(np.linspace(0, 0.03, 7), head=head, tested_speed=1450)
    drawn = smoothed(tested, degree=2)

    assert drawn.smoothing.level_at_first_row
    assert float(drawn.head_curve.slope(0.0)) == pytest.approx(0.0, abs=1e-9)
    assert drawn.falls_throughout
    assert leg_curve(drawn, loss=100.0).shares_uniquely


def test_a_hump_of_the_rows_is_kept():
    tested = pump_curve(
        np.linspace(0, 0.04, 7), head=[50, 51.5, 52, 50.8, 47, 41, 32], tested_speed=1450
    )
    drawn = smoothed(tested, degree=3)

    assert drawn.hump > 1.0
    assert drawn.peak_head == pytest.approx(
        float(drawn.head(np.linspace(0, 0.04, 4001)).max()), abs=1e-5
    )
    assert drawn.peak_head == pytest.approx(leg_curve(drawn, loss=0.0).peak_head, abs=1e-9)


@pytest.mark.parametrize(
    ("degree", "reason"), [(1, "smoothing_degree"), (5, "smoothing_degree")]
)
def test_other_degrees_are_refused(degree, reason):
    with pytest.raises(CurveRefused) as refused:
        smoothed(main_pump(), degree=degree)
    assert refused.value.reason == reason


def test_too_few_rows_are_refused():
    tested = pump_curve([0, 0.01, 0.02], head=[50, 46, 38], tested_speed=1450)
    with pytest.raises(CurveRefused, match="needs 4 rows") as refused:
        smoothed(tested, degree=3)
    assert refused.value.reason == "too_few_rows_to_smooth"
    assert smoothed(tested).smoothing.degree == 2


def drawn_or_refused(tested, degree):
    """Return the smoothed curve; None where it is refused because it rises."""
    try:
        return smoothed(tested, degree=degree)
    except CurveRefused as refused:
        if refused.reason != "smoothed_rises":
            raise
        return None


@settings(max_examples=60, deadline=None)
@given(
    st.lists(st.floats(0.5, 6.0), min_size=6, max_size=9),
    st.sampled_from([None, 2, 3, 4]),
)
def test_a_smoothed_curve_falls_where_its_rows_fall_or_is_refused(falls, degree):
    flow = np.linspace(0, 0.05, len(falls) + 1)
    head = 80 - np.concatenate([[0.0], np.cumsum(falls)])
    tested = pump_curve(flow, head=head, tested_speed=1450)
    drawn = drawn_or_refused(tested, degree)
    if drawn is None:
        return
    assert np.all(np.diff(drawn.head(np.linspace(0, 0.05, 500))) < 1e-9)
    assert np.sum(drawn.smoothing.residual**2) <= np.sum((head - head.mean()) ** 2)
