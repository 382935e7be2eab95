"""Friction factor and head loss: independent values, limits and properties.

Sources
    fluids   fluids 1.3, ``friction.Colebrook`` (exact solution), no code shared with ours.
    Clamond  D. Clamond, Ind. Eng. Chem. Res. 48 (2009) 3665-3671, eq. (1).
"""

import fluids
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.hydraulics.friction import (
    colebrook_head_loss,
    darcy_friction_factor,
    hazen_williams_head_loss,
)

turbulent = st.floats(4.0e3, 1.0e8)
roughness = st.floats(0.0, 0.05)
PIPE = {"length": 1000.0, "bore": 0.25, "roughness": 1e-4, "kinematic_viscosity": 1.2e-6}


@given(turbulent, roughness)
def test_matches_an_independent_colebrook_solution(reynolds, relative_roughness):
    expected = fluids.friction.Colebrook(reynolds, relative_roughness)

    assert float(darcy_friction_factor(reynolds, relative_roughness)) == pytest.approx(
        expected, rel=1e-12
    )


@given(turbulent, roughness)
def test_satisfies_the_colebrook_equation(reynolds, relative_roughness):
    x = 1.0 / np.sqrt(darcy_friction_factor(reynolds, relative_roughness))

    assert x + 2 * np.log10(relative_roughness / 3.7 + 2.51 * x / reynolds) == pytest.approx(
        0.0, abs=1e-10
    )


@given(turbulent, roughness)
def test_a_rougher_pipe_never_has_a_smaller_factor(reynolds, relative_roughness):
    smoother = darcy_friction_factor(reynolds, relative_roughness / 2)

    assert darcy_friction_factor(reynolds, relative_roughness) >= smoother * (1 - 1e-12)


def test_laminar_flow_ignores_roughness():
    assert darcy_friction_factor(1000.0, [0.0, 0.05]) == pytest.approx(0.064)


@pytest.mark.parametrize("limit", [2000.0, 4000.0])
def test_the_factor_is_continuous_at_both_limits(limit):
    below, above = darcy_friction_factor([limit * (1 - 1e-9), limit * (1 + 1e-9)], 0.01)

    assert below == pytest.approx(above, rel=1e-6)


@given(st.floats(1e-12, 1.0), st.floats(1.0001, 3.0), st.floats(0.0, 0.0125))
def test_more_flow_always_loses_more_head(flow, factor, rough):
    pipe = PIPE | {"roughness": rough}
    less, more = colebrook_head_loss([flow, flow * factor], **pipe)

    assert more > less > 0


@given(st.floats(-1.0, 1.0))
def test_head_loss_is_odd_in_flow(flow):
    assert colebrook_head_loss(-flow, **PIPE) == -colebrook_head_loss(flow, **PIPE)


def test_no_flow_loses_nothing():
    hazen = hazen_williams_head_loss(0.0, length=1.0, bore=0.1, coefficient=100.0)

    assert colebrook_head_loss(0.0, **PIPE) == 0.0
    assert hazen == 0.0


def test_laminar_head_loss_is_that_of_poiseuille():
    lost = colebrook_head_loss(
        2e-5, length=100.0, bore=0.05, roughness=0.0, kinematic_viscosity=1.0034e-6
    )

    assert lost == pytest.approx(
        128 * 1.0034e-6 * 2e-5 * 100 / (np.pi * 9.80665 * 0.05**4), rel=1e-12
    )


def test_many_flows_give_what_one_at_a_time_gives():
    flows = np.linspace(-0.2, 0.2, 41).reshape(41, 1)
    bores = np.array([0.2, 0.3])
    together = colebrook_head_loss(flows, **(PIPE | {"bore": bores}))
    alone = [
        [colebrook_head_loss(q, **(PIPE | {"bore": d})) for d in bores] for q in flows[:, 0]
    ]

    # Long arrays go through other code paths of the same library, so the last bit may differ.
    assert together == pytest.approx(np.array(alone), rel=1e-14)


@given(st.floats(-1.0, 1.0))
def test_hazen_williams_satisfies_its_definition_in_feet(flow):
    """V = 1.318 C R^0.63 S^0.54 with feet and seconds."""
    lost = float(hazen_williams_head_loss(flow, length=500.0, bore=0.3, coefficient=120.0))
    velocity = 1.318 * 120 * (0.3 / 0.3048 / 4) ** 0.63 * (abs(lost) / 500) ** 0.54

    assert np.sign(lost) * velocity * 0.3048 == pytest.approx(
        flow / (0.25 * np.pi * 0.09), rel=1e-12, abs=1e-15
    )


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        ({"bore": 0.0}, "bore must be above zero; got 0 m"),
        ({"length": -1.0}, "length must not be below zero; got -1 m"),
        ({"roughness": 0.02}, "roughness over bore must be between 0 and 0.05"),
        ({"kinematic_viscosity": 0.0}, "kinematic_viscosity must be above zero"),
    ],
)
def test_a_pipe_that_cannot_be_is_refused_with_the_value(change, sentence):
    with pytest.raises(ValueError, match=sentence):
        colebrook_head_loss(0.1, **(PIPE | change))
