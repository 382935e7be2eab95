"""Operating region: ends, edges, minimum flow, and the band of flows under a control.

Sources
    R5, R6   checks/pumps.md: 900 gal/min gives 630 to 1080; 250 m3/h at 80 % speed 140 to 240.
    T7       checks/pumps.md: 50 hp and 15 degF give 16.95 gal/min.
    Demo     demo/closed_zone.md: the jockey's preferred flows by supply state.
"""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.hydraulics import operating_region as region
from server.hydraulics.leg_curve import leg_curve
from server.hydraulics.operating_region import Region
from server.hydraulics.states import State
from tests.hydraulics.demo_pumps import jockey_pump

JOCKEY = leg_curve(jockey_pump(), loss=0.0)


def test_the_region_goes_with_the_speed():
    """250 m3/h at full speed: at 80 % the preferred region is 140 to 240 m3/h."""
    ends = region.per_cent_of_best([140 / 3600, 240 / 3600], speed=0.8, best_flow=250 / 3600)

    assert ends == pytest.approx([70.0, 120.0])


@pytest.mark.parametrize(
    ("per_cent", "expected"),
    [
        (69.999999, Region.OUTSIDE),
        (70.0, Region.EDGE),
        (71.9, Region.EDGE),
        (72.0, Region.INSIDE),
        (100.0, Region.INSIDE),
        (118.0, Region.INSIDE),
        (118.1, Region.EDGE),
        (120.0, Region.EDGE),
        (120.000001, Region.OUTSIDE),
        (np.nan, Region.UNKNOWN),
    ],
)
def test_ends_are_inside_and_judged_unrounded(per_cent, expected):
    assert region.region(per_cent, lower=70.0, upper=120.0) == expected


def test_ratios_are_judged_as_per_cent_are_and_last_digits_put_nothing_outside():
    ends = {"lower": 0.7, "upper": 1.2, "edge": 0.02}

    assert region.region(70 * 0.01, **ends) == Region.EDGE
    assert region.region(1.2 * (1 + 1e-12), **ends) == Region.EDGE
    assert region.region(0.699999, **ends) == Region.OUTSIDE
    assert region.region(1.0, **ends) == Region.INSIDE


def test_the_ends_are_those_of_the_criteria_when_they_are_given():
    lower, upper = region.preferred_ends(
        [35.0, 95.0, np.nan], ordinary=(0.65, 1.25), narrow=(0.8, 1.1), narrow_above=90.0
    )

    assert lower.tolist() == [0.65, 0.8, 0.65]
    assert upper.tolist() == [1.25, 1.1, 1.25]


def test_an_end_that_is_not_known_leaves_the_region_unknown():
    assert region.region(100.0, lower=np.nan, upper=120.0) == Region.UNKNOWN


def test_high_specific_speed_narrows_the_preferred_region():
    lower, upper = region.preferred_ends([35.0, 87.0, 88.0])

    assert lower.tolist() == [70.0, 70.0, 80.0]
    assert upper.tolist() == [120.0, 120.0, 115.0]


def test_the_makers_minimum_goes_before_the_assumed_one():
    stated = region.minimum_continuous_flow(0.8, best_flow=0.02, stated_flow=0.006)
    assumed = region.minimum_continuous_flow(0.8, best_flow=0.02)

    assert (float(stated.flow), stated.assumed) == (pytest.approx(0.0048), False)
    assert (float(assumed.flow), assumed.assumed) == (pytest.approx(0.004), True)
    assert region.minimum_continuous_flow(0.8, best_flow=None) is None


def test_the_thermal_minimum_is_that_of_a_published_constant():
    flow = region.thermal_minimum_flow(
        50 * 745.69987, density=1000.0, temperature_rise=15 / 1.8
    )

    assert float(flow) / 6.30901964e-5 == pytest.approx(16.95, rel=2e-3)


@given(st.floats(0.5, 0.9), st.integers(1, 4), st.floats(0.003, 0.011))
def test_at_the_flow_found_the_pumps_stand_at_the_place_asked(speed, count, place):
    static = speed**2 * float(JOCKEY.head(place)) - 2.0
    factor = 2.0 / (count * speed * place) ** 2
    found = region.control_flows(
        JOCKEY,
        homologous_flow=place,
        count=count,
        required_head=lambda flow: static + factor * flow**2,
        lowest_speed=0.3,
        highest_speed=1.0,
    )

    assert found.state == State.SOLVED
    assert float(found.speed) == pytest.approx(speed, rel=1e-9)
    assert float(found.flow) == pytest.approx(count * speed * place, rel=1e-9)


def test_a_place_that_the_control_cannot_hold_is_cut_at_the_speed_limit():
    heads = np.array([100.0, 1.0])
    found = region.control_flows(
        JOCKEY,
        homologous_flow=[0.008, 0.008],
        count=1,
        required_head=lambda flow: heads + 0.0 * flow,
        lowest_speed=0.5,
        highest_speed=1.0,
    )

    assert found.state.tolist() == [State.TOP_SPEED, State.LOW_SPEED]
    assert found.flow == pytest.approx([0.008, 0.004])


def test_a_place_past_the_last_row_has_no_flow():
    found = region.control_flows(
        JOCKEY,
        homologous_flow=0.012,
        count=1,
        required_head=lambda flow: 30.0 + flow,
        lowest_speed=0.5,
        highest_speed=1.0,
    )

    assert found.state == State.END_OF_CURVE
    assert np.isnan(found.flow)
    assert not found.within


def test_a_speed_of_nothing_is_refused():
    with pytest.raises(ValueError, match="speed and best_flow must be above zero"):
        region.per_cent_of_best(0.01, speed=0.0, best_flow=0.02)
