"""Roots of falling functions known by their values only.

Source of the method: N. Anderson, A. Bjorck, BIT, vol. 13, 1973; checked against closed forms.
"""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.hydraulics.falling_root import falling_root


@settings(max_examples=60, deadline=None)
@given(st.floats(0.01, 50), st.floats(0.3, 6), st.floats(1e-3, 1e3))
def test_roots_of_powers_are_met(root: float, power: float, scale: float) -> None:
    def function(x: np.ndarray) -> np.ndarray:
        return scale * (root**power - x**power)

    found = falling_root(function, np.array([0.0]), np.array([60.0]))
    assert found.root[0] == pytest.approx(root, abs=1e-9)


def test_roots_are_found_side_by_side_and_told_apart_from_none() -> None:
    level = np.array([0.0, 0.25, 1.0, -0.5, 1.5, np.nan])

    def function(x: np.ndarray) -> np.ndarray:
        return 1.0 - level - x

    found = falling_root(function, np.zeros(6), np.ones(6))
    assert found.root[:3] == pytest.approx([1.0, 0.75, 0.0])
    assert np.isnan(found.root[3:]).all()
    assert found.at_high[3] > 0
    assert found.at_low[4] < 0


def test_function_is_called_only_inside_the_brackets() -> None:
    seen: list[np.ndarray] = []

    def function(x: np.ndarray) -> np.ndarray:
        seen.append(x)
        return np.sqrt(2.0) - np.sqrt(x)

    falling_root(function, np.array([1.0, 3.0]), np.array([9.0, 9.0]))
    assert all(np.all((x >= [1.0, 3.0]) & (x <= 9.0)) for x in seen)


def test_smooth_functions_take_few_passes() -> None:
    calls = 0

    def function(x: np.ndarray) -> np.ndarray:
        nonlocal calls
        calls += 1
        return 60.0 - 36.0 - 2.0e4 * x**1.852 - 0.2 * x

    falling_root(function, np.zeros(50), np.linspace(0.2, 0.5, 50))
    assert calls <= 14


def test_steps_are_found_by_halving() -> None:
    def function(x: np.ndarray) -> np.ndarray:
        return np.where(x < 0.3, 1e6, -1e-6)

    found = falling_root(function, np.array([0.0]), np.array([1.0]))
    assert found.root[0] == pytest.approx(0.3, abs=1e-9)
