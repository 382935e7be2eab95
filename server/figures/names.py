"""The names on a chart with their places, the same for screen and paper."""

from dataclasses import dataclass

import numpy as np

from server.figures.chart import Chart, Role, shown_points
from server.figures.layout import Layout, PanelPlace, line_points
from server.figures.placement import Box, Placed, Wanted, place_names, text_width
from server.units import View, display_unit

LETTERS = 11.5  # [px]
NAMED_AT = (0.8, 0.7, 0.9, 0.6, 0.97, 0.5, 0.4, 0.3, 0.22, 0.15)  # along a line, the best first


@dataclass(frozen=True, slots=True)
class Name:
    """A name: the point that it belongs to, where it stands, and whether a line leads to it."""

    text: str
    role: Role
    panel: int
    point: tuple[float, float]  # in the unit that is read
    at: tuple[float, float]  # middle of the text [px]
    pixel: tuple[float, float]  # of the point [px]
    leader: bool
    bold: bool
    key: str


def names_of(chart: Chart, layout: Layout, view: View) -> tuple[Name, ...]:
    """Return every name of a chart, each at a free place inside its panel."""
    names: list[Name] = []
    for index in range(len(chart.panels)):
        names.extend(_names_of_panel(chart, layout, view, index))
    return tuple(names)


@dataclass(frozen=True, slots=True)
class _Asked:
    """A name before it is placed: its points in the unit that is read."""

    text: str
    role: Role
    key: str
    points: tuple[tuple[float, float], ...]
    line: int  # number of the series, -1 for a point

    @property
    def bold(self) -> bool:
        """Points are named in bold, lines are not."""
        return self.line < 0


def _names_of_panel(chart: Chart, layout: Layout, view: View, index: int) -> list[Name]:
    place = layout.panels[index]
    lines: list[tuple[float, float, float]] = []
    asked: list[_Asked] = []
    taken = [
        _words_box(words.text, words.x, words.y, words.anchor, chart, layout, index, view)
        for words in chart.words
        if words.panel == index
    ]
    for marker in chart.markers:
        if marker.panel != index:
            continue
        x, y = _one(marker.x, marker.y, chart, index, view)
        if marker.named:
            asked.append(_Asked(marker.name, marker.role, marker.key, ((x, y),), -1))
        px, py = place.x(x), place.y(y)
        taken.append(Box(px - 6, py - 6, px + 6, py + 6))
    for number, series in enumerate(chart.series):
        if series.panel != index:
            continue
        xs = shown_points(series.x, chart.x, view)
        ys = shown_points(series.y, chart.panels[index].axis, view)
        lines.extend((px, py, float(number)) for px, py in line_points(xs, ys, place))
        points = _along(xs, ys, place) if series.named else ()
        if points:
            asked.append(_Asked(series.name, series.role, series.key, points, number))
    bounds = Box(place.box.left + 3, place.box.top + 2, place.box.right, place.box.bottom - 2)
    wanted = [
        Wanted(
            a.text,
            tuple((place.x(x), place.y(y)) for x, y in a.points),
            15 if a.bold else 4,
            a.line,
        )
        for a in asked
    ]
    placed = place_names(
        wanted, size=LETTERS, bounds=bounds, lines=np.array(lines).reshape(-1, 3), taken=taken
    )
    return [_name(a, w, spot, index) for a, w, spot in zip(asked, wanted, placed, strict=True)]


def _name(asked: _Asked, wanted: Wanted, spot: Placed, panel: int) -> Name:
    pixel = wanted.points[spot.which]
    away = (
        abs(spot.y - pixel[1]) > LETTERS * 1.8
        or not spot.box.left <= pixel[0] <= spot.box.right
    )
    return Name(
        asked.text,
        asked.role,
        panel,
        asked.points[spot.which],
        (spot.x, spot.y),
        pixel,
        away and asked.bold,
        asked.bold,
        asked.key,
    )


def _along(
    xs: tuple[float | None, ...], ys: tuple[float | None, ...], place: PanelPlace
) -> tuple[tuple[float, float], ...]:
    """Return points of a line, inside the panel, at which its name may stand."""
    inside = [
        (x, y)
        for x, y in zip(xs, ys, strict=True)
        if x is not None
        and y is not None
        and place.box.left <= place.x(x) <= place.box.right
        and place.box.top <= place.y(y) <= place.box.bottom
    ]
    if len(inside) == 2:  # a level: anywhere along it
        (x0, y0), (x1, y1) = inside
        return tuple((x0 + (x1 - x0) * t, y0 + (y1 - y0) * t) for t in NAMED_AT)
    return (
        tuple(dict.fromkeys(inside[int((len(inside) - 1) * t)] for t in NAMED_AT))
        if inside
        else ()
    )


def leader_end(name: Name) -> tuple[float, float]:
    """Return the pixel at which the line from a point to its name ends."""
    half = text_width(name.text, LETTERS, name.bold) / 2
    x = min(max(name.pixel[0], name.at[0] - half), name.at[0] + half)
    return x, name.at[1] + (LETTERS * 0.6 if name.at[1] < name.pixel[1] else -LETTERS * 0.6)


def _one(x: float, y: float, chart: Chart, panel: int, view: View) -> tuple[float, float]:
    axis = chart.panels[panel].axis
    return (
        display_unit(chart.x.dimension, view).from_si(x),
        display_unit(axis.dimension, view).from_si(y),
    )


def _words_box(
    text: str,
    x: float,
    y: float,
    anchor: str,
    chart: Chart,
    layout: Layout,
    panel: int,
    view: View,
) -> Box:
    shown_x, shown_y = _one(x, y, chart, panel, view)
    px, py = layout.panels[panel].x(shown_x), layout.panels[panel].y(shown_y)
    wide = text_width(text, LETTERS)
    left = px - {"start": 0.0, "middle": 0.5, "end": 1.0}[anchor] * wide
    return Box(left, py - LETTERS, left + wide, py + 3)
