"""Charts as data: ticks, points in a reader's unit, cells."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.figures.chart import Axis, Column, axis_title, cell_text, round_ticks, shown_points
from server.units import Dimension as D


@settings(deadline=None, max_examples=100)
@given(st.floats(-1e4, 1e4), st.floats(1e-3, 1e5))
def test_ticks_are_inside_evenly_spaced_and_few(low, span):
    ticks = round_ticks(low, low + span)

    assert len(ticks) <= 9
    assert all(low - 1e-6 * span <= t <= low + span * (1 + 1e-6) for t in ticks)
    steps = np.diff(ticks)
    assert steps.size == 0 or np.allclose(steps, steps[0], rtol=1e-6)


def test_ticks_of_a_point_are_the_point():
    assert round_ticks(3.0, 3.0) == (3.0,)


def test_points_come_in_the_unit_that_is_read():
    axis = Axis("Station flow", D.FLOW, 0, 0.1)

    assert shown_points(np.array([0.06, np.nan]), axis, "si") == (60.0, None)
    assert shown_points(np.array([0.06]), axis, "us")[0] == pytest.approx(951.02, abs=0.01)
    assert axis_title(axis, "us") == "Station flow, gpm"


def test_a_cell_never_shows_a_bare_float():
    assert cell_text(0.0564, Column("Flow", D.FLOW), "si") == "56.4"
    assert cell_text(None, Column("Flow", D.FLOW), "si") == "–"
    assert cell_text("P1", Column("Running"), "si") == "P1"
    with pytest.raises(TypeError, match="no dimension"):
        cell_text(1.0, Column("Running"), "si")
