"""Specific speed against an independent library.

Sources
    fluids   fluids 1.3, ``pump.specific_speed`` (rev/min, m3/s, m).
    EDL      Hydraulic Institute, Engineering Data Library: 51.6 between US and SI units.
"""

import pytest
from fluids.pump import specific_speed as independent

from server.hydraulics.specific_speed import US_PER_SI, specific_speed, suction_specific_speed


def test_matches_an_independent_library():
    assert float(specific_speed(3550, flow=0.0402, head=100.0)) == pytest.approx(
        independent(0.0402, 100.0, 3550.0), rel=1e-12
    )


def test_the_us_figure_is_51_6_times_the_si_one():
    assert pytest.approx(51.645, abs=0.001) == US_PER_SI


def test_stages_share_the_head_and_eyes_the_flow():
    whole = specific_speed(1450, flow=0.1, head=90.0, stages=3, eyes=2)

    assert whole == pytest.approx(specific_speed(1450, flow=0.05, head=30.0))


def test_suction_specific_speed_puts_npsh_in_the_place_of_head():
    suction = suction_specific_speed(1780, flow=0.05678, npsh_required=3.3528)

    assert float(suction) * US_PER_SI == pytest.approx(8840.9, rel=1e-3)


def test_a_head_of_nothing_is_refused():
    with pytest.raises(ValueError, match="head must be above zero"):
        specific_speed(1450, flow=0.1, head=0.0)
