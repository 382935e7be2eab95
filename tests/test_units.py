"""Units: factors against an independent table, round trips, the two views.

Sources
    scipy     ``scipy.constants``, CODATA and the exact definitions of foot, gallon,
              pound-force and psi; a table that shares no code with ours.
    memory    Degrees Fahrenheit by 32 (ice), 212 (steam) and the meeting of both scales at -40.
"""

import pytest
import scipy.constants as independent
from hypothesis import given
from hypothesis import strategies as st

from server.units import (
    UNITS,
    Dimension,
    dimensions_of,
    display_unit,
    from_si,
    shown,
    shown_with_unit,
    symbols,
    to_si,
)


@pytest.mark.parametrize(
    ("symbol", "expected"),
    [
        ("ft", independent.foot),
        ("in", independent.inch),
        ("psi", independent.psi),
        ("bar", independent.bar),
        ("hp", independent.hp),
        ("gal_us", independent.gallon_US),
        ("gpm_us", independent.gallon_US / independent.minute),
        ("gpm_imp", independent.gallon_imp / independent.minute),
        ("mgd_us", 1e6 * independent.gallon_US / independent.day),
        ("ft3/s", independent.foot**3),
        ("ft2", independent.foot**2),
        ("ML/d", 1000 / independent.day),
        ("m3/d", 1 / independent.day),
        ("m3/h", 1 / independent.hour),
        ("L/s", independent.liter),
        ("kWh/m3", 1000 * independent.hour),
        ("h", independent.hour),
    ],
)
def test_one_of_a_unit_is_what_an_independent_table_says(symbol, expected):
    assert to_si(1.0, symbol) == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize(
    ("fahrenheit", "celsius"), [(32.0, 0.0), (212.0, 100.0), (-40.0, -40.0)]
)
def test_degrees_fahrenheit_have_an_offset(fahrenheit, celsius):
    assert to_si(fahrenheit, "degF") == pytest.approx(celsius, abs=1e-12)
    assert from_si(celsius, "degF") == pytest.approx(fahrenheit, abs=1e-12)


@given(st.sampled_from(sorted(UNITS)), st.floats(-1e9, 1e9))
def test_a_value_comes_back_from_si_as_it_was(symbol, value):
    assert from_si(to_si(value, symbol), symbol) == pytest.approx(value, rel=1e-12, abs=1e-9)


@given(st.sampled_from(sorted(UNITS)), st.floats(-1e6, 1e6), st.floats(1e-3, 1e6))
def test_more_of_a_unit_is_more_in_si(symbol, value, more):
    assert to_si(value + more, symbol) > to_si(value, symbol)


def test_every_unit_belongs_to_a_dimension_and_every_dimension_has_both_views():
    assert [symbol for symbol in UNITS if not dimensions_of(symbol)] == []
    for dimension in Dimension:
        assert display_unit(dimension, "si").symbol in symbols(dimension)
        assert display_unit(dimension, "us").symbol in symbols(dimension)


def test_the_symbols_of_files_are_ascii_and_unique_in_any_case():
    assert all(symbol.isascii() for symbol in UNITS)
    assert len({symbol.lower() for symbol in UNITS}) == len(UNITS)


def test_no_symbol_measures_both_a_head_and_a_pressure():
    assert not set(symbols(Dimension.HEAD)) & set(symbols(Dimension.PRESSURE))


def test_a_result_is_rounded_once_and_carries_its_unit():
    assert shown(0.0564, Dimension.FLOW, "si") == "56.4"
    assert shown_with_unit(206842.7, Dimension.PRESSURE, "us") == "30.0\u00a0psi"
    assert shown(-0.00001, Dimension.HEAD, "si") == "0.0"
    assert shown(None, Dimension.HEAD, "si") == "–"
    assert shown(float("nan"), Dimension.HEAD, "si") == "–"


def test_an_unknown_symbol_is_a_key_error():
    with pytest.raises(KeyError):
        to_si(1.0, "furlong")
