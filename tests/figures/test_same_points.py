"""The live figure and the printed one are drawn from the same points, in either unit view."""

import re
from xml.etree import ElementTree

import numpy as np
import plotly.graph_objects as go
import pytest

from server.figures.to_plotly import to_plotly
from server.figures.to_svg import to_svg

SVG = "{http://www.w3.org/2000/svg}"
PIXEL = 0.011  # coordinates are printed with two decimals


class Drawing:
    """An SVG chart read back into the numbers that it was drawn from."""

    def __init__(self, text: str) -> None:
        self.root = ElementTree.fromstring(text)
        self.lines: dict[str, list[tuple[np.ndarray, np.ndarray, float, float]]] = {}
        for group in self.root.iter(f"{SVG}g"):
            scale = group.get("data-scale")
            if scale is None:
                continue
            numbers = [float(part) for part in scale.split()]
            for shape in group:
                key = shape.get("data-series") or shape.get("data-area")
                if key is not None:
                    self.lines.setdefault(key, []).append(
                        self._read(shape.get("points"), *numbers)
                    )

    @staticmethod
    def _read(points, x_low, x_high, y_low, y_high, left, top, right, bottom):
        pairs = np.array([[float(n) for n in pair.split(",")] for pair in points.split()])
        x = x_low + (pairs[:, 0] - left) / (right - left) * (x_high - x_low)
        y = y_low + (bottom - pairs[:, 1]) / (bottom - top) * (y_high - y_low)
        return (
            x,
            y,
            PIXEL * (x_high - x_low) / (right - left),
            PIXEL * (y_high - y_low) / (bottom - top),
        )


@pytest.fixture(params=["duty", "supply"])
def chart(request):
    return request.getfixturevalue(request.param)


@pytest.mark.parametrize("view", ["si", "us"])
def test_every_line_and_area_has_the_same_points_on_screen_and_paper(chart, view):
    drawing = Drawing(to_svg(chart, view))
    compared = 0
    for trace in to_plotly(chart, view)["data"]:
        if trace["mode"] != "lines":
            continue
        printed = drawing.lines[trace["meta"]]
        known = [
            (x, y) for x, y in zip(trace["x"], trace["y"], strict=True) if None not in (x, y)
        ]
        assert sum(len(run[0]) for run in printed) == len(known)

        xs = np.concatenate([run[0] for run in printed])
        ys = np.concatenate([run[1] for run in printed])
        np.testing.assert_allclose(xs, [p[0] for p in known], atol=printed[0][2], rtol=0)
        np.testing.assert_allclose(ys, [p[1] for p in known], atol=printed[0][3], rtol=0)
        compared += 1

    assert compared == len(chart.series) + len(chart.areas)


@pytest.mark.parametrize("view", ["si", "us"])
def test_every_marker_stands_on_screen_and_on_paper(chart, view):
    printed = [g.get("data-marker") for g in Drawing(to_svg(chart, view)).root.iter(f"{SVG}g")]
    live = [
        key
        for trace in to_plotly(chart, view)["data"]
        if trace["mode"] == "markers"
        for key in trace["customdata"]
    ]

    assert (
        sorted(key for key in printed if key)
        == sorted(live)
        == sorted(m.key for m in chart.markers)
    )


@pytest.mark.parametrize("view", ["si", "us"])
def test_every_name_stands_on_screen_and_on_paper(chart, view):
    printed = {
        t.text
        for t in Drawing(to_svg(chart, view)).root.iter(f"{SVG}text")
        if t.get("data-name")
    }
    live = {a["text"] for a in to_plotly(chart, view)["layout"]["annotations"] if a.get("name")}

    assert printed == live != set()


def test_plotly_takes_the_live_figure(chart):
    figure = to_plotly(chart, "si")

    assert go.Figure({"data": figure["data"], "layout": figure["layout"]}).data


def test_no_name_of_a_station_becomes_markup(demo, judged, curves):
    from server.figures.duty_charts import duty_chart

    pump = demo.pumps[0].model_copy(update={"title": "<b>M</b> & <script>"})
    station = demo.model_copy(update={"pumps": (pump, *demo.pumps[1:])})
    evil = type(judged)(station, judged.criteria, judged.entered, judged.result)
    chart = duty_chart(curves, evil)

    assert "<script>" not in to_svg(chart, "si")
    assert "<script>" not in str(to_plotly(chart, "si"))
    assert re.search("&lt;b&gt;M&lt;/b&gt;", to_svg(chart, "si"))
