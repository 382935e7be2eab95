"""Water and atmosphere against libraries that share no code with ours.

Sources
    CoolProp  CoolProp 8, IAPWS-95 and IAPWS 2008 viscosity at 101.325 kPa.
    iapws     iapws 1.5, IAPWS SR6-08 and IF97 region 4.
    fluids    fluids 1.3, US Standard Atmosphere 1976.
"""

import iapws.iapws97
import numpy as np
import pytest
from CoolProp.CoolProp import PropsSI
from fluids.atmosphere import ATMOSPHERE_1976
from hypothesis import given
from hypothesis import strategies as st

from server.hydraulics import water

TEMPERATURES = [1.0, 6.0, 14.0, 20.0, 37.0, 60.0]


@pytest.mark.parametrize("celsius", TEMPERATURES)
def test_density_is_that_of_the_general_formulation(celsius):
    expected = PropsSI("D", "T", celsius + 273.15, "P", 101325, "Water")

    assert float(water.density(celsius)) == pytest.approx(expected, rel=1e-5)


@pytest.mark.parametrize("celsius", TEMPERATURES)
def test_viscosity_is_that_of_the_general_formulation(celsius):
    expected = PropsSI("V", "T", celsius + 273.15, "P", 101325, "Water")

    assert float(water.dynamic_viscosity(celsius)) == pytest.approx(expected, rel=5e-4)


@pytest.mark.parametrize("celsius", TEMPERATURES)
def test_vapour_pressure_is_that_of_the_industrial_formulation(celsius):
    expected = iapws.iapws97._PSat_T(celsius + 273.15) * 1e6

    assert float(water.vapour_pressure(celsius)) == pytest.approx(expected, rel=1e-9)


@pytest.mark.parametrize("altitude", [-400.0, 0.0, 110.0, 1500.0, 5000.0])
def test_atmosphere_is_the_standard_one(altitude):
    expected = ATMOSPHERE_1976(altitude).P

    assert float(water.atmospheric_pressure(altitude)) == pytest.approx(expected, rel=2e-5)


@given(st.floats(4.0, 59.0))
def test_warmer_water_is_lighter_thinner_and_nearer_to_boiling(celsius):
    pair = np.array([celsius, celsius + 1.0])

    assert np.diff(water.density(pair)) < 0
    assert np.diff(water.kinematic_viscosity(pair)) < 0
    assert np.diff(water.vapour_pressure(pair)) > 0


@pytest.mark.parametrize("wrong", [-0.1, 60.1, np.nan, np.inf])
def test_water_outside_its_range_is_refused_with_the_range(wrong):
    with pytest.raises(ValueError, match="temperature must be"):
        water.density([10.0, wrong])


@pytest.mark.parametrize("wrong", [-401.0, 5001.0])
def test_an_altitude_outside_the_range_is_refused_with_the_value(wrong):
    with pytest.raises(ValueError, match=r"altitude must be between -400 and 5000 m; got "):
        water.atmospheric_pressure(wrong)
