"""Names on a chart: none on another, none on a point, none outside."""

import itertools

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.figures.layout import lay_out
from server.figures.names import LETTERS, names_of
from server.figures.placement import Box, Wanted, place_names, text_width

NO_LINES = np.empty((0, 3))


def box_of(name):
    half = text_width(name.text, LETTERS, name.bold) / 2
    return Box(name.at[0] - half, name.at[1] - 6, name.at[0] + half, name.at[1] + 6)


@pytest.mark.parametrize("view", ["si", "us"])
@pytest.mark.parametrize("width", [640.0, 672.0, 900.0])
def test_no_two_names_of_the_duty_figure_overlap(duty, view, width):
    layout = lay_out(duty, view, width=width)
    boxes = [(n.panel, box_of(n)) for n in names_of(duty, layout, view)]

    for (panel, one), (other_panel, other) in itertools.combinations(boxes, 2):
        assert panel != other_panel or not one.meets(other)


@pytest.mark.parametrize("view", ["si", "us"])
def test_every_name_stays_inside_its_panel(duty, view):
    layout = lay_out(duty, view, width=672.0)
    for name in names_of(duty, layout, view):
        place, box = layout.panels[name.panel].box, box_of(name)

        assert place.left <= box.left
        assert box.right <= place.right + 2
        assert place.top <= box.top
        assert box.bottom <= place.bottom


def test_every_duty_is_named_once_and_points_on_one_another_share_a_name(duty):
    named = [m.name for m in duty.markers if m.named and m.panel == 0]

    assert "Peak hour, opening; maximum day, design" in named
    assert len(named) == 9  # ten scenarios, two of them at 20 L/s and the same head


def test_a_line_is_not_named_nearer_to_another_line():
    lines = np.array(
        [(x, 50.0, 0.0) for x in range(0, 200, 5)] + [(x, 80.0, 1.0) for x in range(0, 200, 5)]
    )
    wanted = [
        Wanted("upper", tuple((float(x), 50.0) for x in (40, 90)), 4, 0),
        Wanted("lower", tuple((float(x), 80.0) for x in (40, 90)), 4, 1),
    ]
    upper, lower = place_names(wanted, size=11, bounds=Box(0, 0, 200, 130), lines=lines)

    assert abs(upper.y - 50) < abs(upper.y - 80)
    assert abs(lower.y - 80) < abs(lower.y - 50)


points = st.lists(st.tuples(st.floats(20, 580), st.floats(60, 240)), min_size=1, max_size=8)


@settings(max_examples=40, deadline=None)
@given(points)
def test_placed_names_never_overlap_while_there_is_room(where):
    wanted = [Wanted(f"point {i}", (p,)) for i, p in enumerate(where)]
    placed = place_names(wanted, size=11, bounds=Box(0, 0, 600, 300), lines=NO_LINES)

    for one, other in itertools.combinations(placed, 2):
        assert not one.box.meets(other.box)


def test_a_name_without_room_is_kept():
    wanted = [Wanted("a name that is far too long for so small a place", ((5.0, 5.0),))]

    (placed,) = place_names(wanted, size=11, bounds=Box(0, 0, 10, 10), lines=NO_LINES)
    assert placed.y > 5
