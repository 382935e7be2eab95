"""Conduits: sums of reaches against an independent library, barrels, limits, wrong input.

Sources
    fluids   fluids 1.3, ``friction_factor`` and ``K_from_f``.
"""

import fluids
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.hydraulics.conduit import (
    FrictionLaw,
    HazenWilliamsRange,
    conduit,
    hazen_williams_range,
)

NU = 1.1697e-6
MAIN = {"length": [820, 330], "bore": [0.3, 0.246], "resistance": [6e-4, 1e-4], "k": [6, 4]}


def test_two_reaches_lose_what_an_independent_library_says():
    expected = 0.0
    for length, bore, rough, k in zip(*MAIN.values(), strict=True):
        v = 0.060 / (0.25 * np.pi * bore**2)
        f = fluids.friction.Colebrook(v * bore / NU, rough / bore)
        expected += (fluids.K_from_f(f, length, bore) + k) * v**2 / (2 * 9.80665)
    main = conduit(FrictionLaw.DARCY_WEISBACH, **MAIN)

    assert float(main.head_loss(0.060, kinematic_viscosity=NU)) == pytest.approx(
        expected, rel=1e-12
    )


@given(st.floats(-0.3, 0.3))
def test_two_barrels_at_a_flow_are_one_barrel_at_half_of_it(flow):
    two = conduit(FrictionLaw.DARCY_WEISBACH, **MAIN, barrels=2)
    one = conduit(FrictionLaw.DARCY_WEISBACH, **MAIN)

    assert two.head_loss(flow, kinematic_viscosity=NU) == one.head_loss(
        flow / 2, kinematic_viscosity=NU
    )
    assert np.all(two.velocities(flow) == one.velocities(flow / 2))


def test_taking_one_of_two_barrels_out_leaves_the_single_line():
    two = conduit(FrictionLaw.DARCY_WEISBACH, **MAIN, barrels=[2, 1])

    assert two.with_barrel_out(0).barrels.tolist() == [1, 1]
    with pytest.raises(ValueError, match="barrels of reach 2 must be 2 or more"):
        two.with_barrel_out(1)


def test_losses_keep_the_shape_of_the_flows():
    main = conduit(FrictionLaw.HAZEN_WILLIAMS, length=100, bore=[0.2, 0.3], resistance=130)
    flows = np.zeros((4, 1, 3))

    assert main.head_loss(flows, kinematic_viscosity=NU).shape == (4, 1, 3)
    assert main.reach_head_loss(flows, kinematic_viscosity=NU).shape == (4, 1, 3, 2)
    assert main.velocities(flows).shape == (4, 1, 3, 2)


def test_a_line_without_reaches_loses_nothing():
    none = conduit(
        FrictionLaw.DARCY_WEISBACH, length=[], bore=[], resistance=[], k=[], barrels=[]
    )

    assert none.head_loss([0.1, 0.2], kinematic_viscosity=NU).tolist() == [0.0, 0.0]


def test_hazen_williams_outside_its_range_is_marked_reach_by_reach():
    main = conduit(
        FrictionLaw.HAZEN_WILLIAMS, length=10, bore=[0.04, 0.2, 0.2], resistance=[130, 90, 130]
    )
    area = 0.25 * np.pi * 0.2**2

    assert main.outside_law([1e-4, 3.1 * area]).tolist() == [
        [True, True, False],
        [True, True, True],
    ]


def test_colebrook_has_no_range_to_leave():
    main = conduit(FrictionLaw.DARCY_WEISBACH, **MAIN)

    assert not main.outside_law(5.0).any()


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        ({"bore": [0.3, -0.2]}, "bore must be above zero; got -0.2 m"),
        ({"barrels": 0}, "barrels must be whole numbers of 1 or more"),
        ({"barrels": 1.5}, "barrels must be whole numbers of 1 or more"),
        ({"resistance": [0.02, 0.02]}, "roughness over bore"),
        ({"k": [-1, 0]}, "k must not be below zero"),
    ],
)
def test_reaches_that_cannot_be_are_refused_when_made(change, sentence):
    with pytest.raises(ValueError, match=sentence):
        conduit(FrictionLaw.DARCY_WEISBACH, **(MAIN | change))


@pytest.mark.parametrize(
    ("velocity", "bore", "coefficient", "outside"),
    [
        (1.0, 0.2, 130.0, HazenWilliamsRange.INSIDE),
        (-3.0, 0.050, 100.0, HazenWilliamsRange.INSIDE),
        (1.0, 0.049, 90.0, HazenWilliamsRange.BORE),
        (1.0, 1.851, 130.0, HazenWilliamsRange.BORE),
        (-3.01, 0.2, 90.0, HazenWilliamsRange.VELOCITY),
        (1.0, 0.2, 99.9, HazenWilliamsRange.COEFFICIENT),
        (1.0, np.nan, np.nan, HazenWilliamsRange.INSIDE),
    ],
)
def test_range_of_hazen_williams_says_what_lies_outside(velocity, bore, coefficient, outside):
    assert hazen_williams_range(velocity, bore=bore, coefficient=coefficient) == outside
