"""Fittings: definitions, an independent library, and wrong input.

Sources
    fluids   fluids 1.3, ``fittings.Cv_to_Kv`` and ``Kv_to_K``.
    S31      a utility fitting list that adds K with counts; see checks/hydraulics.md, 5.1.
"""

import fluids
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.hydraulics import fittings


def test_kv_and_cv_of_one_valve_give_one_loss():
    cv = 460.0
    kv = fluids.fittings.Cv_to_Kv(cv)

    # Kv is stated for 1000 kg/m3, Cv for water at 60 degF: 0.1 % apart.
    assert float(fittings.k_from_cv(cv, bore=0.15)) == pytest.approx(
        float(fittings.k_from_kv(kv, bore=0.15)), rel=1.1e-3
    )


def test_k_from_kv_is_that_of_an_independent_library():
    # The library rounds a constant: 0.07 % off.
    assert float(fittings.k_from_kv(100.0, bore=0.1)) == pytest.approx(
        fluids.fittings.Kv_to_K(100.0, 0.1), rel=1e-3
    )


@given(st.floats(1.0, 3000.0), st.floats(0.05, 1.0))
def test_the_loss_at_the_rated_flow_of_kv_is_one_bar(kv, bore):
    k = fittings.k_from_kv(kv, bore=bore)
    lost = fittings.minor_head_loss(kv / 3600.0, bore=bore, k=k)

    assert float(lost) * 1000.0 * 9.80665 == pytest.approx(1e5, rel=1e-12)


@given(st.floats(0.0, 20.0), st.floats(0.05, 1.0), st.floats(0.05, 1.0), st.floats(-1.0, 1.0))
def test_moving_a_coefficient_to_another_bore_keeps_the_loss(k, bore, other, flow):
    moved = fittings.k_at_bore(k, from_bore=bore, to_bore=other)

    assert float(fittings.minor_head_loss(flow, bore=other, k=moved)) == pytest.approx(
        float(fittings.minor_head_loss(flow, bore=bore, k=k)), rel=1e-12, abs=1e-300
    )


def test_a_loss_at_a_flow_comes_back_at_that_flow():
    k = fittings.k_from_head_loss(1.3, flow=0.04, bore=0.2)

    assert float(fittings.minor_head_loss(0.04, bore=0.2, k=k)) == pytest.approx(1.3, rel=1e-14)


def test_a_loss_is_odd_in_flow_and_nothing_at_rest():
    lost = fittings.minor_head_loss([-0.1, 0.0, 0.1], bore=0.3, k=2.0)

    assert lost[0] == -lost[2]
    assert lost[1] == 0.0


def test_equivalent_length_loses_what_the_fittings_lose():
    length = fittings.equivalent_length(2.5, bore=0.2, friction_factor=0.02)

    assert float(length) == pytest.approx(25.0)


def test_a_check_valve_is_fully_open_from_its_velocity_on():
    area = 0.25 * np.pi * 0.125**2
    flows = np.array([1.49, 1.51]) * area

    assert fittings.check_valve_fully_open(flows, bore=0.125).tolist() == [False, True]
    assert fittings.check_valve_fully_open(flows, bore=0.125, full_open_velocity=1.0).all()


@pytest.mark.parametrize("wrong", [0.0, -0.1, np.nan])
def test_a_bore_that_cannot_be_is_refused(wrong):
    with pytest.raises(ValueError, match="bore must be"):
        fittings.velocity(0.1, bore=wrong)


def test_a_negative_coefficient_is_refused():
    with pytest.raises(ValueError, match="k must not be below zero; got -1"):
        fittings.minor_head_loss(0.1, bore=0.1, k=-1.0)
