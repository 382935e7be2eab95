"""Efficiency by named rules: lost with speed, and the least for a size and specific speed.

Sources
    A11, A12  checks/pumps.md section 2: values of the Sarbu-Borza formula (from memory).
    E1, E2, E4  checks/pumps.md section 9a: Commission Regulation (EU) 547/2012, Annex III; E1
              is a value that another program's public repository prints.
"""

import numpy as np
import pytest

from server.hydraulics import affinity, speed_loss
from server.hydraulics.attainable_efficiency import PumpType, least_best_efficiency
from server.hydraulics.pump_curve import pump_curve
from server.hydraulics.speed_loss import sarbu_borza, speed_factor
from tests.hydraulics.demo_pumps import main_pump

MAIN = main_pump()


@pytest.mark.parametrize(
    ("tested", "speed", "expected"),
    [(0.8, 0.9, 0.79788), (0.8, 0.7, 0.79274), (0.8, 0.5, 0.78565), (0.7, 0.7, 0.68911)],
)
def test_efficiency_lost_with_speed_is_that_of_the_formula(tested, speed, expected):
    assert float(sarbu_borza(tested, speed=speed)) == pytest.approx(expected, abs=5e-6)


def test_at_tested_speed_nothing_is_lost():
    flow = np.linspace(0, MAIN.last_flow, 20)
    assert speed_loss.efficiency(MAIN, flow, speed=1.0) == pytest.approx(
        affinity.efficiency(MAIN, flow, speed=1.0), rel=1e-14
    )


def test_slower_the_pump_takes_more_power_than_by_affinity_alone():
    power = speed_loss.shaft_power(MAIN, [0.0, 0.008], speed=0.6, density=998.0)
    plain = affinity.shaft_power(MAIN, [0.0, 0.008], speed=0.6, density=998.0)

    assert power / plain == pytest.approx(
        MAIN.best.efficiency / float(sarbu_borza(MAIN.best.efficiency, speed=0.6)), rel=1e-12
    )
    assert np.all(power > plain)


def test_power_times_efficiency_is_the_power_given_to_the_water():
    flow, speed = 0.01, 0.7
    water = 998.0 * 9.80665 * flow * affinity.head(MAIN, flow, speed=speed)
    power = speed_loss.shaft_power(MAIN, flow, speed=speed, density=998.0)

    assert float(power * speed_loss.efficiency(MAIN, flow, speed=speed)) == pytest.approx(
        float(water), rel=1e-12
    )


def test_without_best_efficiency_the_loss_is_not_known():
    bare = pump_curve(MAIN.rows.flow, head=MAIN.rows.head, tested_speed=2950)
    assert np.isnan(speed_factor(bare, speed=[0.8, 1.0])).all()
    assert np.isnan(speed_factor(MAIN, speed=np.nan))


@pytest.mark.parametrize("wrong", [-0.1, 1.1])
def test_an_efficiency_that_cannot_be_is_refused(wrong):
    with pytest.raises(ValueError, match="efficiency must be between 0 and 1"):
        sarbu_borza(wrong, speed=0.9)


@pytest.mark.parametrize(
    ("flow", "head", "pump_type", "speed", "index", "expected"),
    [
        (100.0, 32.0, "esob", 1450, 0.10, 66.429),
        (100.0, 32.0, "esob", 1450, 0.40, 70.939),
        (50.0, 40.0, "escc", 2900, 0.10, 62.885),
        (50.0, 40.0, "escc", 2900, 0.40, 68.045),
    ],
)
def test_the_least_efficiency_is_that_of_the_rule(
    flow, head, pump_type, speed, index, expected
):
    least = least_best_efficiency(
        flow / 3600, head=head, pump_type=PumpType(pump_type), nominal_speed=speed, index=index
    )
    assert 100 * float(least) == pytest.approx(expected, abs=0.01)


def test_the_least_efficiency_is_that_of_a_published_check():
    """E1: ns 14.876 at 7.260 m3/h; the head follows from the specific speed."""
    flow = 7.260 / 3600
    head = (1450 * flow**0.5 / 14.876) ** (4 / 3)
    least = least_best_efficiency(
        flow, head=head, pump_type=PumpType.END_SUCTION_OWN_BEARING, nominal_speed=1450
    )
    assert 100 * float(least) == pytest.approx(48.74, abs=0.01)


def test_outside_the_scope_of_the_rule_nothing_is_said():
    small, narrow = least_best_efficiency(
        [1 / 3600, 20 / 3600],
        head=[10.0, 200.0],
        pump_type=PumpType.IN_LINE,
        nominal_speed=1450,
    )
    assert np.isnan([small, narrow]).all()


@pytest.mark.parametrize(("speed", "index"), [(980, 0.4), (1450, 0.7)])
def test_a_constant_that_the_rule_does_not_have_is_refused(speed, index):
    with pytest.raises(ValueError, match="no constant"):
        least_best_efficiency(
            0.02, head=30.0, pump_type=PumpType.IN_LINE, nominal_speed=speed, index=index
        )


def test_stages_count_by_their_own_head():
    def least(head, stages):
        return float(least_best_efficiency(
            0.01, head=head, stages=stages, nominal_speed=2900,
            pump_type=PumpType.VERTICAL_MULTISTAGE,
        ))  # fmt: skip

    assert least(90.0, 3) == pytest.approx(least(30.0, 1), rel=1e-13)
