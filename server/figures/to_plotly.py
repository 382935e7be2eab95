"""Write a chart for the live figure on the screen: plain data, the page's script draws it.

Colours go as the page's own names ("var(--water)"); the script puts the values of the light or
the dark page in their place.
"""

from collections.abc import Mapping, Sequence
from html import escape

from server.figures.chart import Area, Chart, Marker, Series, axis_title, shown_points
from server.figures.layout import (
    MARGIN_BOTTOM,
    MARGIN_LEFT,
    MARGIN_RIGHT,
    MARGIN_TOP,
    Layout,
    lay_out,
)
from server.figures.look import LOOKS, SCREEN, Shape, dash_of
from server.figures.names import LETTERS, Name, names_of
from server.units import View, display_decimals, display_unit

Json = Mapping[str, "Json"] | Sequence["Json"] | str | float | bool | None
SYMBOLS: Mapping[Shape, str] = {
    "circle": "circle",
    "square": "square",
    "diamond": "diamond",
    "triangle": "triangle-up",
}
# a weight, not a tag: plotly turns <b> into a style attribute, which the content policy refuses
BOLD = 600
NARROWEST = (
    640.0  # the figure scrolls below this width, so names placed here stay apart above it
)


def to_plotly(chart: Chart, view: View, *, scale: float = 1.0) -> dict[str, Json]:
    """Return `data` and `layout` of a chart, and `height` in pixels.

    Parameters
    ----------
    chart : Chart
        What is drawn, in SI.
    view : {"si", "us"}
        Units that are read.
    scale : float
        Stretches the panels' height. [-]

    Returns
    -------
    dict
        Plain values only: numbers, texts, lists, dictionaries.
    """
    layout = lay_out(chart, view, width=NARROWEST, scale=scale)
    data: list[Json] = [_area(area, chart, view) for area in chart.areas]
    data.extend(_line(series, chart, view) for series in chart.series)
    for panel in range(len(chart.panels)):
        markers = [m for m in chart.markers if m.panel == panel]
        if markers:
            data.append(_markers(markers, chart, view))
    return {
        "data": data,
        "layout": _layout(chart, layout, names_of(chart, layout, view), view),
        "height": layout.height,
    }


def _axis_names(panel: int) -> tuple[str, str]:
    return "x", "y" if panel == 0 else f"y{panel + 1}"


def _hover(chart: Chart, panel: int, view: View) -> str:
    axis = chart.panels[panel].axis
    x_places = (
        display_decimals(chart.x.dimension, view)
        if chart.x.decimals is None
        else chart.x.decimals
    )
    y_places = (
        display_decimals(axis.dimension, view) if axis.decimals is None else axis.decimals
    )
    x_unit = display_unit(chart.x.dimension, view).printed
    y_unit = display_unit(axis.dimension, view).printed
    x, y = f"%{{x:.{x_places}f}} {x_unit}", f"%{{y:.{y_places}f}} {y_unit}"
    return f"%{{text}}<br>{x}, {y}<extra></extra>"


def _line(series: Series, chart: Chart, view: View) -> dict[str, Json]:
    look = LOOKS[series.role]
    x_axis, y_axis = _axis_names(series.panel)
    dash = dash_of(look, series.dash)
    return {
        "type": "scatter",
        "mode": "lines",
        "meta": series.key,
        "text": escape(series.name),
        "x": list(shown_points(series.x, chart.x, view)),
        "y": list(shown_points(series.y, chart.panels[series.panel].axis, view)),
        "xaxis": x_axis,
        "yaxis": y_axis,
        "line": {
            "color": SCREEN[look.colour],
            "width": look.width,
            "dash": ",".join(f"{d}px" for d in dash) if dash else "solid",
        },
        "hovertemplate": _hover(chart, series.panel, view),
        "showlegend": False,
    }


def _area(area: Area, chart: Chart, view: View) -> dict[str, Json]:
    look = LOOKS[area.role]
    x_axis, y_axis = _axis_names(area.panel)
    trace: dict[str, Json] = {
        "type": "scatter",
        "mode": "lines",
        "meta": area.key,
        "x": list(shown_points(area.x, chart.x, view)),
        "y": list(shown_points(area.y, chart.panels[area.panel].axis, view)),
        "xaxis": x_axis,
        "yaxis": y_axis,
        "fill": "toself",
        "line": {"width": 0},
        "hoverinfo": "skip",
        "showlegend": False,
        "opacity": look.opacity,
    }
    if look.hatched:
        trace["fillpattern"] = {
            "shape": "/",
            "fgcolor": SCREEN[look.colour],
            "bgcolor": "rgba(0,0,0,0)",
            "size": 7,
            "solidity": 0.12,
            "fgopacity": 0.5,
        }
        trace["fillcolor"] = "rgba(0,0,0,0)"
    else:
        trace["fillcolor"] = SCREEN[look.colour]
    return trace


def _markers(markers: Sequence[Marker], chart: Chart, view: View) -> dict[str, Json]:
    panel = markers[0].panel
    x_axis, y_axis = _axis_names(panel)
    x_unit = display_unit(chart.x.dimension, view)
    y_unit = display_unit(chart.panels[panel].axis.dimension, view)
    looks = [LOOKS[m.role] for m in markers]
    return {
        "type": "scatter",
        "mode": "markers",
        "meta": f"markers-{chart.panels[panel].key}",
        "customdata": [m.key for m in markers],
        "text": [escape(m.name) for m in markers],
        "x": [round(x_unit.from_si(m.x), 4) for m in markers],
        "y": [round(y_unit.from_si(m.y), 4) for m in markers],
        "xaxis": x_axis,
        "yaxis": y_axis,
        "marker": {
            "size": [13 if m.chosen else 9 for m in markers],
            "symbol": [SYMBOLS[k.marker] + ("-open" if k.hollow else "") for k in looks],
            "color": [SCREEN[k.colour] for k in looks],
            "line": {"color": SCREEN["paper"], "width": 1.4},
            "opacity": 1,
        },
        "cliponaxis": False,
        "hovertemplate": _hover(chart, panel, view),
        "showlegend": False,
    }


def _layout(chart: Chart, layout: Layout, names: Sequence[Name], view: View) -> dict[str, Json]:
    whole = layout.height - MARGIN_TOP - MARGIN_BOTTOM
    figure: dict[str, Json] = {
        "height": layout.height,
        "margin": {"l": MARGIN_LEFT, "r": MARGIN_RIGHT, "t": MARGIN_TOP, "b": MARGIN_BOTTOM},
        "paper_bgcolor": "rgba(0,0,0,0)",
        "plot_bgcolor": "rgba(0,0,0,0)",
        "font": {"family": "var(--text)", "size": LETTERS, "color": "var(--ink)"},
        "hovermode": "closest",
        "hoverlabel": {
            "bgcolor": "var(--paper)",
            "bordercolor": "var(--ink)",
            "font": {"color": "var(--ink)"},
        },
        "dragmode": "zoom",
        "showlegend": False,
        "xaxis": {
            "range": [layout.panels[0].x_low, layout.panels[0].x_high],
            "anchor": _axis_names(len(chart.panels) - 1)[1],
            **_axis_look(),
        },
        "annotations": [
            *_axis_titles(chart, layout, view),
            *(_annotation(n) for n in names),
            *_words(chart, view),
        ],
    }
    for index, place in enumerate(layout.panels):
        bottom = 1 - (place.box.bottom - MARGIN_TOP) / whole
        top = 1 - (place.box.top - MARGIN_TOP) / whole
        figure["yaxis" if index == 0 else f"yaxis{index + 1}"] = {
            "range": [place.y_low, place.y_high],
            "domain": [max(0.0, bottom), min(1.0, top)],
            "anchor": "x",
            "nticks": max(3, int((place.box.bottom - place.box.top) / 38)),
            **_axis_look(),
            # the base of each panel: the flow axis itself stands only under the last
            "zeroline": True,
            "zerolinecolor": "var(--ink)",
            "zerolinewidth": 1.3,
        }
    return figure


def _axis_look() -> dict[str, Json]:
    return {
        "gridcolor": "var(--hair)",
        "zeroline": False,
        "showline": True,
        "linecolor": "var(--ink)",
        "linewidth": 1.3,
        "tickfont": {"color": "var(--soft)"},
        "ticks": "",
    }


def _axis_titles(chart: Chart, layout: Layout, view: View) -> list[dict[str, Json]]:
    whole = layout.height - MARGIN_TOP - MARGIN_BOTTOM
    still: dict[str, Json] = {
        "showarrow": False,
        "xref": "paper",
        "yref": "paper",
        "font": {"weight": BOLD, "size": LETTERS},
    }
    titles: list[dict[str, Json]] = [
        {
            **still,
            "text": escape(axis_title(panel.axis, view)),
            "x": 0,
            "xshift": -MARGIN_LEFT + 8,
            "xanchor": "left",
            "y": 1 - (place.box.top - MARGIN_TOP) / whole,
            "yanchor": "bottom",
            "yshift": 5,
        }
        for panel, place in zip(chart.panels, layout.panels, strict=True)
    ]
    titles.append(
        {
            **still,
            "text": escape(axis_title(chart.x, view)),
            "x": 1,
            "xanchor": "right",
            "y": 0,
            "yshift": -20,
            "yanchor": "top",
        }
    )
    return titles


def _annotation(name: Name) -> dict[str, Json]:
    x_axis, y_axis = _axis_names(name.panel)
    colour = LOOKS[name.role].colour
    shown = SCREEN["water" if colour == "water-tint" else colour]
    return {
        "name": name.key,
        "text": escape(name.text),
        "x": name.point[0],
        "y": name.point[1],
        "xref": x_axis,
        "yref": y_axis,
        "ax": round(name.at[0] - name.pixel[0], 1),
        "ay": round(name.at[1] - name.pixel[1], 1),
        "showarrow": True,
        "arrowhead": 0,
        "arrowwidth": 0.8,
        # a name without a leader keeps its place by the same offset, with an arrow nobody sees
        "arrowcolor": shown if name.leader else "rgba(0,0,0,0)",
        "font": {"color": shown, "size": LETTERS, "weight": BOLD if name.bold else 400},
        "bgcolor": "rgba(0,0,0,0)",
        "borderpad": 0,
        "standoff": 0,
    }


def _words(chart: Chart, view: View) -> list[dict[str, Json]]:
    anchors = {"start": "left", "middle": "center", "end": "right"}
    written: list[dict[str, Json]] = []
    for words in chart.words:
        x_axis, y_axis = _axis_names(words.panel)
        written.append(
            {
                "text": escape(words.text),
                "x": display_unit(chart.x.dimension, view).from_si(words.x),
                "y": display_unit(chart.panels[words.panel].axis.dimension, view).from_si(
                    words.y
                ),
                "xref": x_axis,
                "yref": y_axis,
                "showarrow": False,
                "xanchor": anchors[words.anchor],
                "yanchor": "bottom",
                "font": {"color": SCREEN[LOOKS[words.role].colour], "size": LETTERS},
            }
        )
    return written
