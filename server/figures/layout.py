"""The sizes of a chart on a surface: margins, heights of its panels, pixels of a value."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from server.figures.chart import Axis, Chart
from server.figures.placement import Box
from server.units import View, display_unit

MARGIN_LEFT = 54.0
MARGIN_RIGHT = 14.0
MARGIN_TOP = 26.0
MARGIN_BOTTOM = 42.0
PANEL_GAP = 32.0
PANEL_HEIGHT = 340.0  # of a panel whose share is 1


@dataclass(frozen=True, slots=True)
class PanelPlace:
    """Where a panel lies, and how a value becomes a pixel."""

    box: Box
    x_low: float
    x_high: float
    y_low: float
    y_high: float

    def x(self, value: float) -> float:
        """Return the pixel of a flow, both in the unit that is read."""
        span = self.box.right - self.box.left
        return self.box.left + span * (value - self.x_low) / (self.x_high - self.x_low)

    def y(self, value: float) -> float:
        """Return the pixel of a value of the panel's own axis."""
        span = self.box.bottom - self.box.top
        return self.box.bottom - span * (value - self.y_low) / (self.y_high - self.y_low)


@dataclass(frozen=True, slots=True)
class Layout:
    """The whole chart on its surface."""

    width: float
    height: float
    panels: tuple[PanelPlace, ...]


def ends(axis: Axis, view: View) -> tuple[float, float]:
    """Return both ends of an axis in the unit that is read."""
    unit = display_unit(axis.dimension, view)
    return unit.from_si(axis.low), unit.from_si(axis.high)


def lay_out(chart: Chart, view: View, *, width: float, scale: float = 1.0) -> Layout:
    """Return the layout of a chart `width` pixels wide; `scale` stretches its height."""
    x_low, x_high = ends(chart.x, view)
    top = MARGIN_TOP
    places: list[PanelPlace] = []
    for panel in chart.panels:
        high = PANEL_HEIGHT * panel.share * scale
        y_low, y_high = ends(panel.axis, view)
        box = Box(MARGIN_LEFT, top, width - MARGIN_RIGHT, top + high)
        places.append(PanelPlace(box, x_low, x_high, y_low, y_high))
        top += high + PANEL_GAP
    return Layout(width, top - PANEL_GAP + MARGIN_BOTTOM, tuple(places))


def line_points(
    xs: Sequence[float | None],
    ys: Sequence[float | None],
    place: PanelPlace,
    every: float = 5.0,
) -> list[tuple[float, float]]:
    """Return points along a line, about `every` pixels, for keeping names off it."""
    pixels = [
        (place.x(x), place.y(y))
        for x, y in zip(xs, ys, strict=True)
        if x is not None and y is not None
    ]
    points: list[tuple[float, float]] = []
    for (x0, y0), (x1, y1) in zip(pixels, pixels[1:], strict=False):
        steps = max(1, int(np.hypot(x1 - x0, y1 - y0) / every))
        points.extend(
            (x0 + (x1 - x0) * i / steps, y0 + (y1 - y0) * i / steps) for i in range(steps)
        )
    return points
