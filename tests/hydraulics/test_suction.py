"""NPSH available and submergence: published examples, balance, wrong input.

Sources
    S14      checks/pumps.md: 200 kPa read 0.4 m above datum, 1.5 m/s, 15 degC, 300 m: 30.732 m,
             computed with the iapws library.
    F17      checks/surge.md: S m = D + 0.935 Q/D^1.5 (g 9.81).
"""

import pytest

from server.hydraulics import water
from server.hydraulics.suction import npsh_available, submergence


def test_a_gauge_on_a_main_gives_the_published_figure():
    density = water.density(15.0)
    grade = 0.4 + 200e3 / (density * water.GRAVITY) + 1.5**2 / (2 * water.GRAVITY)
    available = npsh_available(
        grade,
        eye_level=0.0,
        branch_loss=0.0,
        atmospheric_pressure=water.atmospheric_pressure(300.0),
        vapour_pressure=water.vapour_pressure(15.0),
        density=density,
    )

    assert float(available) == pytest.approx(30.732, abs=0.02)


def test_each_metre_of_grade_level_or_loss_counts_as_a_metre():
    figures = {"atmospheric_pressure": 1e5, "vapour_pressure": 2e3, "density": 998.0}
    base = npsh_available(10.0, eye_level=2.0, branch_loss=0.5, **figures)

    assert npsh_available(
        11.0, eye_level=2.0, branch_loss=0.5, **figures
    ) - base == pytest.approx(1)
    assert npsh_available(
        10.0, eye_level=3.0, branch_loss=0.5, **figures
    ) - base == pytest.approx(-1)
    assert npsh_available(
        10.0, eye_level=2.0, branch_loss=1.5, **figures
    ) - base == pytest.approx(-1)


def test_submergence_is_that_of_its_published_metric_form():
    assert float(submergence(0.2, bore=0.5)) == pytest.approx(
        0.5 + 0.935 * 0.2 / 0.5**1.5, rel=1e-3
    )


def test_without_flow_the_submergence_is_the_bore():
    assert submergence(0.0, bore=0.4) == 0.4


def test_a_loss_below_zero_is_refused():
    with pytest.raises(ValueError, match="branch_loss must not be below zero"):
        npsh_available(
            1.0,
            eye_level=0.0,
            branch_loss=-0.1,
            atmospheric_pressure=1e5,
            vapour_pressure=2e3,
            density=998.0,
        )


def test_what_is_not_known_leaves_the_head_unknown_and_only_there():
    figures = {"atmospheric_pressure": 1e5, "vapour_pressure": 2e3, "density": 998.0}
    available = npsh_available(
        [10.0, float("nan"), 10.0],
        eye_level=2.0,
        branch_loss=[0.5, 0.5, float("nan")],
        **figures,
    )

    assert available[0] == pytest.approx((1e5 - 2e3) / (998.0 * water.GRAVITY) + 7.5)
    assert [value != value for value in available] == [False, True, True]


@pytest.mark.parametrize(
    ("name", "value", "said"),
    [
        ("suction_grade", float("inf"), "suction_grade must not be infinite"),
        ("eye_level", float("-inf"), "eye_level must not be infinite"),
        ("atmospheric_pressure", 0.0, "atmospheric_pressure must be above zero"),
    ],
)
def test_a_figure_that_cannot_be_is_refused(name, value, said):
    figures = {
        "suction_grade": 10.0,
        "eye_level": 0.0,
        "branch_loss": 0.0,
        "atmospheric_pressure": 1e5,
        "vapour_pressure": 2e3,
        "density": 998.0,
    }
    with pytest.raises(ValueError, match=said):
        npsh_available(**{**figures, name: value})
