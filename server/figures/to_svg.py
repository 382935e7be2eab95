"""Draw a chart as SVG: on paper, and on the screen before the live figure stands.

Text stays text, lines stay lines. Each panel says its scale in `data-scale`, so that a reader
(or a test) gets the numbers back from the drawing.
"""

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
from server.figures.svg import Palette, Value, element, points, short, value, words
from server.units import View, display_unit

HATCH = 9.0  # between the lines of a hatched region, along the flow axis [px]


def to_svg(
    chart: Chart,
    view: View,
    *,
    width: float = 680.0,
    scale: float = 1.0,
    palette: Palette = PAPER,
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
    parts = [_definitions(chart, layout)]
    for index in range(len(chart.panels)):
        parts.append(_panel(chart, index, layout.panels[index], view, palette))
    parts.append(_flow_axis(chart, layout, view, palette))
    parts.extend(_name(name, palette) for name in names_of(chart, layout, view))
    return element(
        "svg",
        *parts,
        class_="drawn",
        xmlns="http://www.w3.org/2000/svg",
        viewBox=f"0 0 {width:.0f} {layout.height:.0f}",
        role="img",
        aria_label=chart.alt,
        data_chart=chart.key,
    )


def _definitions(chart: Chart, layout: Layout) -> str:
    clips = [
        element(
            "clipPath",
            element(
                "rect",
                x=place.box.left,
                y=place.box.top,
                width=place.box.right - place.box.left,
                height=place.box.bottom - place.box.top,
            ),
            id=f"clip-{chart.key}-{index}",
        )
        for index, place in enumerate(layout.panels)
    ]
    return element("defs", *clips)


def _panel(chart: Chart, index: int, place: PanelPlace, view: View, palette: Palette) -> str:
    panel, box = chart.panels[index], place.box
    drawn = [
        *(
            _area(a, chart, panel.axis, place, view, palette)
            for a in chart.areas
            if a.panel == index
        ),
        *(
            _line(s, chart, panel.axis, place, view, palette)
            for s in chart.series
            if s.panel == index
        ),
    ]
    ends = (place.x_low, place.x_high, place.y_low, place.y_high)
    sides = (box.left, box.top, box.right, box.bottom)
    parts = [
        _grid(panel, place, view, palette),
        element(
            "g",
            *(drawn or [""]),
            clip_path=f"url(#clip-{chart.key}-{index})",
            data_scale=" ".join(repr(float(number)) for number in (*ends, *sides)),
        ),
    ]
    for said in chart.words:
        if said.panel == index:
            x, y = _pixel(said.x, said.y, chart, panel.axis, place, view)
            colour = palette[LOOKS[said.role].colour]
            look: dict[str, Value] = {
                "text_anchor": said.anchor,
                "font_size": LETTERS,
                "fill": colour,
            }
            parts.append(words(said.text, x, y, **look, **_halo(palette)))
    parts.extend(
        _marker(m, chart, panel.axis, place, view, palette)
        for m in chart.markers
        if m.panel == index
    )
    return "".join(parts)


def _pixel(
    x: float, y: float, chart: Chart, axis: Axis, place: PanelPlace, view: View
) -> tuple[float, float]:
    return (
        place.x(display_unit(chart.x.dimension, view).from_si(x)),
        place.y(display_unit(axis.dimension, view).from_si(y)),
    )


def _grid(panel: Panel, place: PanelPlace, view: View, palette: Palette) -> str:
    box, hair = place.box, palette["hair"]
    parts: list[str] = []
    for tick in round_ticks(
        place.y_low, place.y_high, max(3, int((box.bottom - box.top) / 38))
    ):
        y = place.y(tick)
        parts.append(
            element("path", d=f"M{short(box.left)} {short(y)}H{short(box.right)}", stroke=hair)
        )
        parts.append(_tick(tick, box.left - 7, y + 4, "end", palette))
    for tick in round_ticks(place.x_low, place.x_high):
        x = short(place.x(tick))
        parts.append(
            element("path", d=f"M{x} {short(box.top)}V{short(box.bottom)}", stroke=hair)
        )
    corner = f"M{short(box.left)} {short(box.top)}V{short(box.bottom)}H{short(box.right)}"
    parts.append(
        element("path", d=corner, fill="none", stroke=palette["ink"], stroke_width=1.3)
    )
    parts.append(
        _title(axis_title(panel.axis, view), box.left - 46, box.top - 12, "start", palette)
    )
    return "".join(parts)


def _flow_axis(chart: Chart, layout: Layout, view: View, palette: Palette) -> str:
    place = layout.panels[-1]
    right, bottom = place.box.right, place.box.bottom
    ticks = [
        _tick(tick, place.x(tick), bottom + 16, "middle", palette)
        for tick in round_ticks(place.x_low, place.x_high)
    ]
    return "".join(
        [*ticks, _title(axis_title(chart.x, view), right, bottom + 33, "end", palette)]
    )


def _tick(number: float, x: float, y: float, anchor: str, palette: Palette) -> str:
    return words(
        f"{number:g}", x, y, text_anchor=anchor, font_size=LETTERS, fill=palette["soft"]
    )


def _title(text: str, x: float, y: float, anchor: str, palette: Palette) -> str:
    bold: dict[str, Value] = {"font_size": LETTERS, "font_weight": 650, "fill": palette["ink"]}
    return words(text, x, y, text_anchor=anchor, **bold)


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
    xs, ys = shown_points(series.x, chart.x, view), shown_points(series.y, axis, view)
    return "".join(
        element(
            "polyline",
            data_series=series.key,
            points=points(run),
            fill="none",
            stroke=palette[look.colour],
            stroke_width=look.width,
            stroke_dasharray=" ".join(map(str, dash)) or None,
        )
        for run in _runs(xs, ys, place)
    )


def _area(
    area: Area, chart: Chart, axis: Axis, place: PanelPlace, view: View, palette: Palette
) -> str:
    look = LOOKS[area.role]
    xs, ys = shown_points(area.x, chart.x, view), shown_points(area.y, axis, view)
    parts: list[str] = []
    for number, run in enumerate(_runs(xs, ys, place)):
        shape = points(run)
        if not look.hatched:
            colour = palette[look.colour]
            parts.append(
                element(
                    "polygon",
                    data_area=area.key,
                    points=shape,
                    fill=colour,
                    stroke="none",
                    opacity=look.opacity,
                )
            )
            continue
        # lines inside a clip, not a pattern: printing would turn a pattern into a picture
        clip = f"hatch-{chart.key}-{area.key}-{number}"
        parts.append(element("clipPath", element("polygon", points=shape), id=clip))
        parts.append(element("polygon", data_area=area.key, points=shape, fill="none"))
        parts.append(
            element(
                "path",
                d=_hatch(run),
                clip_path=f"url(#{clip})",
                stroke=palette[look.colour],
                stroke_width=0.8,
                opacity=0.45,
            )
        )
    return "".join(parts)


def _hatch(run: list[tuple[float, float]]) -> str:
    """Return lines rising to the right over the box round an outline."""
    xs, ys = [x for x, _ in run], [y for _, y in run]
    left, right, top, bottom = min(xs), max(xs), min(ys), max(ys)
    high = bottom - top
    # counted from a common origin, so that the lines of neighbouring regions meet
    first = int((left + top) // HATCH) + 1
    last = int((right + bottom) // HATCH)
    lines = []
    for number in range(first, last + 1):
        foot = number * HATCH - bottom
        lines.append(f"M{short(foot)} {short(bottom)}l{short(high)} {short(-high)}")
    return "".join(lines)


def _marker(
    marker: Marker, chart: Chart, axis: Axis, place: PanelPlace, view: View, palette: Palette
) -> str:
    look = LOOKS[marker.role]
    x, y = _pixel(marker.x, marker.y, chart, axis, place, view)
    size = 6.2 if marker.chosen else 4.6
    colour = palette[look.colour]
    fill, stroke = (palette["paper"], colour) if look.hollow else (colour, palette["paper"])
    shape = _shape(look.marker, x, y, size)
    return element(
        "g",
        element("path", d=shape, fill=fill, stroke=stroke, stroke_width=1.4),
        element("title", escape(marker.name)),
        data_marker=marker.key,
        data_at=f"{value(x)} {value(y)}",
    )


def _shape(shape: Shape, x: float, y: float, r: float) -> str:
    if shape == "circle":
        half = f"{r:g} {r:g} 0 1 0"
        return f"M{short(x - r)} {short(y)}a{half} {2 * r:g} 0a{half} {-2 * r:g} 0Z"
    corners = {
        "square": ((-0.9, -0.9), (0.9, -0.9), (0.9, 0.9), (-0.9, 0.9)),
        "diamond": ((0.0, -1.25), (1.25, 0.0), (0.0, 1.25), (-1.25, 0.0)),
        "triangle": ((0.0, -1.2), (1.2, 0.96), (-1.2, 0.96)),
    }[shape]
    return (
        "M" + "L".join(f"{short(x + r * dx)} {short(y + r * dy)}" for dx, dy in corners) + "Z"
    )


def _name(name: Name, palette: Palette) -> str:
    colour = palette[_readable(LOOKS[name.role])]
    leader = ""
    if name.leader:
        end_x, end_y = leader_end(name)
        way = f"M{short(name.pixel[0])} {short(name.pixel[1])}L{short(end_x)} {short(end_y)}"
        leader = element("path", d=way, stroke=colour, stroke_width=0.8, opacity=0.8)
    text = words(
        name.text,
        name.at[0],
        name.at[1] + LETTERS * 0.35,
        text_anchor="middle",
        font_size=LETTERS,
        font_weight=650 if name.bold else None,
        fill=colour,
        data_name=name.key,
        **_halo(palette),
    )
    return leader + text


def _readable(look: Look) -> str:
    """Return the colour of words about a role: tints are no colour for letters."""
    return "water" if look.colour == "water-tint" else look.colour


def _halo(palette: Palette) -> dict[str, Value]:
    """Return what keeps letters legible over lines: an edge in the paper's colour."""
    return {
        "stroke": palette["paper"],
        "stroke_width": 3,
        "stroke_linejoin": "round",
        "paint_order": "stroke",
    }
