"""Draw a chart as SVG: on paper, and on the screen before the live figure stands.

Text stays text, lines stay lines. Each panel says its scale in `data-scale`, so that a reader (or a
test) gets the numbers back from the drawing.
"""

from collections.abc import Mapping
from html import escape

from server.figures.chart import (
    Area,
    Axis,
    Chart,
    Marker,
    Panel,
    Series,
    axis_title,
    round_ticks,
    shown_points,
)
from server.figures.layout import Layout, PanelPlace, lay_out
from server.figures.look import LOOKS, PAPER, Look, Shape, dash_of
from server.figures.names import LETTERS, Name, leader_end, names_of
from server.units import View, display_unit

Palette = Mapping[str, str]


def to_svg(
    chart: Chart, view: View, *, width: float = 680.0, scale: float = 1.0, palette: Palette = PAPER
) -> str:
    """Return a chart as one SVG element.

    Parameters
    ----------
    chart : Chart
        What is drawn, in SI.
    view : {"si", "us"}
        Units that are read.
    width : float
        Width of the drawing. [px]
    scale : float
        Stretches the panels' height. [-]
    palette : mapping of str to str
        Colour of each name of `look`.

    Returns
    -------
    str
        The element, without a header: it stands in a page or, with one, in a file.
    """
    layout = lay_out(chart, view, width=width, scale=scale)
    parts = [
        f'<svg class="drawn" xmlns="http://www.w3.org/2000/svg" viewBox="0 0 {width:.0f} {layout.height:.0f}"'
        f' role="img" aria-label="{escape(chart.alt)}" data-chart="{escape(chart.key)}">',
        _definitions(chart, layout, palette),
    ]
    for index, (panel, place) in enumerate(zip(chart.panels, layout.panels, strict=True)):
        parts.append(_panel(chart, panel, index, place, view, palette))
    parts.append(_flow_axis(chart, layout, view, palette))
    for name in names_of(chart, layout, view):
        parts.append(_name(name, palette))
    parts.append("</svg>")
    return "".join(parts)


def _definitions(chart: Chart, layout: Layout, palette: Palette) -> str:
    clips = "".join(
        f'<clipPath id="clip-{chart.key}-{i}"><rect x="{_n(p.box.left)}" y="{_n(p.box.top)}"'
        f' width="{_n(p.box.right - p.box.left)}" height="{_n(p.box.bottom - p.box.top)}"/></clipPath>'
        for i, p in enumerate(layout.panels)
    )
    hatch = (
        f'<pattern id="hatch-{chart.key}" width="7" height="7" patternUnits="userSpaceOnUse"'
        f' patternTransform="rotate(45)"><path d="M0 0V7" stroke="{palette["water"]}"'
        ' stroke-width="1" opacity=".4"/></pattern>'
    )
    return f"<defs>{clips}{hatch}</defs>"


def _panel(
    chart: Chart, panel: Panel, index: int, place: PanelPlace, view: View, palette: Palette
) -> str:
    box = place.box
    parts = [_grid(chart, panel, place, view, palette)]
    clip = f"clip-{chart.key}-{index}"
    parts.append(
        f'<g clip-path="url(#{clip})" data-scale="{place.x_low!r} {place.x_high!r} {place.y_low!r}'
        f' {place.y_high!r} {box.left!r} {box.top!r} {box.right!r} {box.bottom!r}">'
    )
    for area in chart.areas:
        if area.panel == index:
            parts.append(_area(area, chart, panel.axis, place, view, palette))
    for series in chart.series:
        if series.panel == index:
            parts.append(_line(series, chart, panel.axis, place, view, palette))
    parts.append("</g>")
    for words in chart.words:
        if words.panel == index:
            x = place.x(display_unit(chart.x.dimension, view).from_si(words.x))
            y = place.y(display_unit(panel.axis.dimension, view).from_si(words.y))
            parts.append(
                f'<text x="{_n(x)}" y="{_n(y)}" text-anchor="{words.anchor}" font-size="{LETTERS}"'
                f' fill="{palette[LOOKS[words.role].colour]}"{_halo(palette)}>{escape(words.text)}</text>'
            )
    for marker in chart.markers:
        if marker.panel == index:
            parts.append(_marker(marker, chart, panel.axis, place, view, palette))
    return "".join(parts)


def _grid(chart: Chart, panel: Panel, place: PanelPlace, view: View, palette: Palette) -> str:
    box = place.box
    parts: list[str] = []
    high = box.bottom - box.top
    for tick in round_ticks(place.y_low, place.y_high, max(3, int(high / 38))):
        y = place.y(tick)
        parts.append(f'<path d="M{_n(box.left)} {_n(y)}H{_n(box.right)}" stroke="{palette["hair"]}"/>')
        parts.append(
            f'<text x="{_n(box.left - 7)}" y="{_n(y + 4)}" text-anchor="end" font-size="{LETTERS}"'
            f' fill="{palette["soft"]}">{tick:g}</text>'
        )
    for tick in round_ticks(place.x_low, place.x_high):
        x = place.x(tick)
        parts.append(f'<path d="M{_n(x)} {_n(box.top)}V{_n(box.bottom)}" stroke="{palette["hair"]}"/>')
    parts.append(
        f'<path d="M{_n(box.left)} {_n(box.top)}V{_n(box.bottom)}H{_n(box.right)}" fill="none"'
        f' stroke="{palette["ink"]}" stroke-width="1.3"/>'
    )
    parts.append(
        f'<text x="{_n(box.left - 46)}" y="{_n(box.top - 12)}" font-size="{LETTERS}" font-weight="650"'
        f' fill="{palette["ink"]}">{escape(axis_title(panel.axis, view))}</text>'
    )
    return "".join(parts)


def _flow_axis(chart: Chart, layout: Layout, view: View, palette: Palette) -> str:
    place = layout.panels[-1]
    parts = [
        f'<text x="{_n(place.x(tick))}" y="{_n(place.box.bottom + 16)}" text-anchor="middle"'
        f' font-size="{LETTERS}" fill="{palette["soft"]}">{tick:g}</text>'
        for tick in round_ticks(place.x_low, place.x_high)
    ]
    parts.append(
        f'<text x="{_n(place.box.right)}" y="{_n(place.box.bottom + 33)}" text-anchor="end"'
        f' font-size="{LETTERS}" font-weight="650" fill="{palette["ink"]}">'
        f"{escape(axis_title(chart.x, view))}</text>"
    )
    return "".join(parts)


def _runs(
    xs: tuple[float | None, ...], ys: tuple[float | None, ...], place: PanelPlace
) -> list[list[tuple[float, float]]]:
    """Return the unbroken stretches of a line in pixels."""
    runs: list[list[tuple[float, float]]] = [[]]
    for x, y in zip(xs, ys, strict=True):
        if x is None or y is None:
            if runs[-1]:
                runs.append([])
        else:
            runs[-1].append((place.x(x), place.y(y)))
    return [run for run in runs if run]


def _line(
    series: Series, chart: Chart, axis: Axis, place: PanelPlace, view: View, palette: Palette
) -> str:
    look = LOOKS[series.role]
    dash = dash_of(look, series.dash)
    dashes = f' stroke-dasharray="{" ".join(map(str, dash))}"' if dash else ""
    xs, ys = shown_points(series.x, chart.x, view), shown_points(series.y, axis, view)
    return "".join(
        f'<polyline data-series="{escape(series.key)}" points="{_points(run)}" fill="none"'
        f' stroke="{palette[look.colour]}" stroke-width="{look.width:g}"{dashes}/>'
        for run in _runs(xs, ys, place)
    )


def _area(
    area: Area, chart: Chart, axis: Axis, place: PanelPlace, view: View, palette: Palette
) -> str:
    look = LOOKS[area.role]
    fill = f"url(#hatch-{chart.key})" if look.hatched else palette[look.colour]
    xs, ys = shown_points(area.x, chart.x, view), shown_points(area.y, axis, view)
    return "".join(
        f'<polygon data-area="{escape(area.key)}" points="{_points(run)}" fill="{fill}"'
        f' stroke="none" opacity="{look.opacity:g}"/>'
        for run in _runs(xs, ys, place)
    )


def _marker(
    marker: Marker, chart: Chart, axis: Axis, place: PanelPlace, view: View, palette: Palette
) -> str:
    look = LOOKS[marker.role]
    x = place.x(display_unit(chart.x.dimension, view).from_si(marker.x))
    y = place.y(display_unit(axis.dimension, view).from_si(marker.y))
    size = 6.2 if marker.chosen else 4.6
    colour = palette[look.colour]
    fill, stroke = (palette["paper"], colour) if look.hollow else (colour, palette["paper"])
    shape = _shape(look.marker, x, y, size)
    return (
        f'<g data-marker="{escape(marker.key)}" data-at="{_n(x)} {_n(y)}">'
        f'<path d="{shape}" fill="{fill}" stroke="{stroke}" stroke-width="1.4"/>'
        f"<title>{escape(marker.name)}</title></g>"
    )


def _shape(shape: Shape, x: float, y: float, r: float) -> str:
    if shape == "circle":
        return f"M{_n(x - r)} {_n(y)}a{r:g} {r:g} 0 1 0 {2 * r:g} 0a{r:g} {r:g} 0 1 0 {-2 * r:g} 0Z"
    if shape == "square":
        s = r * 0.9
        return f"M{_n(x - s)} {_n(y - s)}H{_n(x + s)}V{_n(y + s)}H{_n(x - s)}Z"
    if shape == "diamond":
        s = r * 1.25
        return f"M{_n(x)} {_n(y - s)}L{_n(x + s)} {_n(y)}L{_n(x)} {_n(y + s)}L{_n(x - s)} {_n(y)}Z"
    s = r * 1.2
    return f"M{_n(x)} {_n(y - s)}L{_n(x + s)} {_n(y + s * 0.8)}H{_n(x - s)}Z"


def _name(name: Name, palette: Palette) -> str:
    colour = palette[_readable(LOOKS[name.role])]
    parts: list[str] = []
    if name.leader:
        end_x, end_y = leader_end(name)
        parts.append(
            f'<path d="M{_n(name.pixel[0])} {_n(name.pixel[1])}L{_n(end_x)} {_n(end_y)}"'
            f' stroke="{colour}" stroke-width=".8" opacity=".8"/>'
        )
    weight = ' font-weight="650"' if name.bold else ""
    parts.append(
        f'<text x="{_n(name.at[0])}" y="{_n(name.at[1] + LETTERS * 0.35)}" text-anchor="middle"'
        f' font-size="{LETTERS}"{weight} fill="{colour}"{_halo(palette)} data-name="{escape(name.key)}">'
        f"{escape(name.text)}</text>"
    )
    return "".join(parts)


def _readable(look: Look) -> str:
    """Return the colour of words about a role: tints are no colour for letters."""
    return "water" if look.colour == "water-tint" else look.colour


def _halo(palette: Palette) -> str:
    return f' stroke="{palette["paper"]}" stroke-width="3" stroke-linejoin="round" paint-order="stroke"'


def _points(run: list[tuple[float, float]]) -> str:
    return " ".join(f"{_n(x)},{_n(y)}" for x, y in run)


def _n(value: float) -> str:
    return f"{value:.2f}".rstrip("0").rstrip(".")
