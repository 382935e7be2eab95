"""The names on a chart with their places, the same for screen and paper."""

from dataclasses import dataclass

from server.figures.chart import Chart, Role, shown_points
from server.figures.layout import Layout, line_points
from server.figures.placement import Box, Placed, place_names, text_width
from server.units import View

LETTERS = 11.5  # [px]


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
    for index, (panel, place) in enumerate(zip(chart.panels, layout.panels, strict=True)):
        lines: list[tuple[float, float]] = []
        wanted: list[tuple[str, Role, float, float, bool, str]] = []
        for series in chart.series:
            if series.panel != index:
                continue
            xs, ys = shown_points(series.x, chart.x, view), shown_points(series.y, panel.axis, view)
            lines.extend(line_points(xs, ys, place))
            if series.named_at is not None and xs:
                x, y = xs[series.named_at], ys[series.named_at]
                if x is not None and y is not None:
                    wanted.append((series.name, series.role, x, y, False, series.key))
        taken: list[Box] = []
        for words in chart.words:
            if words.panel == index:
                taken.append(_words_box(words.text, words.x, words.y, words.anchor, chart, layout, index, view))
        for marker in chart.markers:
            if marker.panel != index:
                continue
            x, y = _one(marker.x, marker.y, chart, index, view)
            if marker.named:
                wanted.insert(0, (marker.name, marker.role, x, y, True, marker.key))
            else:
                px, py = place.x(x), place.y(y)
                taken.append(Box(px - 5, py - 5, px + 5, py + 5))
        pixels = [(place.x(x), place.y(y)) for _, _, x, y, _, _ in wanted]
        bounds = Box(place.box.left + 3, place.box.top + 2, place.box.right, place.box.bottom - 2)
        found = place_names(
            pixels, [w[0] for w in wanted], size=LETTERS, bounds=bounds, lines=lines, taken=taken
        )
        for (text, role, x, y, bold, key), pixel, spot in zip(wanted, pixels, found, strict=True):
            leader = abs(spot.y - pixel[1]) > LETTERS * 1.8 or not spot.box.left <= pixel[0] <= spot.box.right
            names.append(Name(text, role, index, (x, y), (spot.x, spot.y), pixel, leader and bold, bold, key))
    return tuple(names)


def leader_end(name: Name) -> tuple[float, float]:
    """Return where the line from a point to its name ends: at the near edge of the name. [px]"""
    half = text_width(name.text, LETTERS, name.bold) / 2
    x = min(max(name.pixel[0], name.at[0] - half), name.at[0] + half)
    return x, name.at[1] + (LETTERS * 0.6 if name.at[1] < name.pixel[1] else -LETTERS * 0.6)


def _one(x: float, y: float, chart: Chart, panel: int, view: View) -> tuple[float, float]:
    from server.units import display_unit

    axis = chart.panels[panel].axis
    return (
        display_unit(chart.x.dimension, view).from_si(x),
        display_unit(axis.dimension, view).from_si(y),
    )


def _words_box(
    text: str, x: float, y: float, anchor: str, chart: Chart, layout: Layout, panel: int, view: View
) -> Box:
    shown_x, shown_y = _one(x, y, chart, panel, view)
    px, py = layout.panels[panel].x(shown_x), layout.panels[panel].y(shown_y)
    wide = text_width(text, LETTERS)
    left = px - {"start": 0.0, "middle": 0.5, "end": 1.0}[anchor] * wide
    return Box(left, py - LETTERS, left + wide, py + 3)
