"""Affinity laws: a published table, homologous points, wrong input.

Sources
    EDL      Hydraulic Institute, Engineering Data Library, section 1, worked example: 1740 to
    1566
             rev/min, read in checks/pumps.md, row W3 (misprints of its last rows corrected
             there).
"""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.hydraulics import affinity
from server.hydraulics.pump_curve import pump_curve
from tests.hydraulics.demo_pumps import main_pump

PUMP = main_pump()
speeds = st.floats(0.5, 1.2)
flows = st.floats(0.0005, 0.0252)


def test_a_published_table_is_moved_to_nine_tenths_of_its_speed():
    flow = np.arange(0, 2201, 200.0)
    head = [213, 206, 198, 190, 183, 176, 168, 159, 147, 135, 117, 98]
    expected = [172.53, 166.86, 160.38, 153.90, 148.23, 142.56]
    expected += [136.08, 128.79, 119.07, 109.35, 94.77, 79.38]
    pump = pump_curve(flow, head=head, tested_speed=1740)

    assert affinity.head(pump, flow * 0.9, speed=1566 / 1740) == pytest.approx(
        expected, abs=0.005
    )


@given(flows, speeds)
def test_homologous_points_keep_efficiency_and_scale_the_rest(flow, speed):
    at = flow * speed
    eta = PUMP.efficiency(flow)

    assert affinity.head(PUMP, at, speed=speed) == pytest.approx(
        speed**2 * PUMP.head(flow), rel=1e-9
    )
    assert affinity.efficiency(PUMP, at, speed=speed) == pytest.approx(eta, rel=1e-9)
    assert affinity.shaft_power(PUMP, at, speed=speed, density=999.0) == pytest.approx(
        speed**3 * PUMP.shaft_power(flow, density=999.0), rel=1e-9
    )
    assert affinity.npsh_required(PUMP, at, speed=speed) == pytest.approx(
        speed**2 * PUMP.npsh_required(flow), rel=1e-9
    )


@given(flows, st.floats(0.6, 0.99))
def test_more_speed_gives_more_head_at_the_same_flow(flow, speed):
    slow, fast = affinity.head(PUMP, flow * 0.6, speed=[speed, speed * 1.01])

    assert fast > slow


def test_a_smaller_exponent_asks_for_more_npsh_at_low_speed():
    two = affinity.npsh_required(PUMP, 0.01, speed=0.8)
    smaller = affinity.npsh_required(PUMP, 0.01, speed=0.8, exponent=1.3)

    assert smaller > two


def test_tested_speed_changes_nothing():
    assert affinity.head(PUMP, PUMP.rows.flow, speed=1.0) == pytest.approx(PUMP.rows.head)


def test_a_pump_that_is_not_in_the_combination_stays_masked():
    assert np.isnan(affinity.head(PUMP, [0.01, np.nan], speed=[1.0, np.nan])).tolist() == [
        False,
        True,
    ]


@pytest.mark.parametrize("wrong", [0.0, -0.5])
def test_a_speed_that_is_not_above_zero_is_refused(wrong):
    with pytest.raises(ValueError, match="speed must be above zero"):
        affinity.head(PUMP, 0.01, speed=[1.0, wrong])


@pytest.mark.parametrize("wrong", [1.2, 2.1])
def test_an_exponent_outside_its_range_is_refused(wrong):
    with pytest.raises(ValueError, match=r"exponent must be between 1.3 and 2; got"):
        affinity.npsh_required(PUMP, 0.01, speed=0.8, exponent=wrong)
