"""Where the names on a chart stand, so that none lies on another or on a point.

Greedy: each name tries places round its point, near ones first, and takes the first that is free,
or the one that lies on the fewest line points when it cannot be free of lines.
"""

from collections.abc import Sequence
from dataclasses import dataclass

# mean advance of the page's sans-serif, of its size; bold is a little wider
LETTER = 0.56


@dataclass(frozen=True, slots=True)
class Box:
    """A rectangle in pixels."""

    left: float
    top: float
    right: float
    bottom: float

    def meets(self, other: "Box", gap: float = 0.0) -> bool:
        """Return whether two boxes overlap or come nearer than `gap`."""
        return (
            self.left < other.right + gap
            and other.left < self.right + gap
            and self.top < other.bottom + gap
            and other.top < self.bottom + gap
        )

    def holds(self, x: float, y: float) -> bool:
        """Return whether a point lies inside."""
        return self.left <= x <= self.right and self.top <= y <= self.bottom


@dataclass(frozen=True, slots=True)
class Placed:
    """A name at its place: middle of its box against its point, in pixels."""

    x: float
    y: float
    box: Box


def text_width(text: str, size: float, bold: bool = False) -> float:
    """Return about how wide a line of text is. [px]"""
    return len(text) * size * (LETTER + (0.04 if bold else 0.0))


def place_names(
    points: Sequence[tuple[float, float]],
    names: Sequence[str],
    *,
    size: float,
    bounds: Box,
    lines: Sequence[tuple[float, float]] = (),
    taken: Sequence[Box] = (),
    marker: float = 6.0,
) -> tuple[Placed, ...]:
    """Return a place for each name.

    Parameters
    ----------
    points : sequence of (x, y)
        Points that are named. [px]
    names : sequence of str
        Their names, one line each.
    size : float
        Size of the letters. [px]
    bounds : Box
        No name reaches out of it. [px]
    lines : sequence of (x, y)
        Points of the lines of the chart: a place on fewer of them is better. [px]
    taken : sequence of Box
        Boxes of texts that already stand. [px]
    marker : float
        Half of a marker's width, kept free round every point. [px]

    Returns
    -------
    tuple of Placed
        In the order of the names.
    """
    markers = [Box(x - marker, y - marker, x + marker, y + marker) for x, y in points]
    standing = list(taken)
    placed: list[Placed | None] = [None] * len(names)
    order = sorted(range(len(names)), key=lambda i: points[i][0])
    for index in order:
        x, y = points[index]
        wide, high = text_width(names[index], size, bold=True) + 4, size * 1.25
        best: tuple[float, Placed] | None = None
        for step in range(1, 16):
            for side in (1, -1):
                for shift in (0.0, 0.5, -0.5, 0.9, -0.9):
                    middle_x = min(max(x + shift * wide, bounds.left + wide / 2), bounds.right - wide / 2)
                    middle_y = y + side * (marker + high * (0.2 + 0.75 * step))
                    box = Box(middle_x - wide / 2, middle_y - high / 2, middle_x + wide / 2, middle_y + high / 2)
                    if box.top < bounds.top or box.bottom > bounds.bottom:
                        continue
                    if any(box.meets(other, 1.0) for other in standing):
                        continue
                    if any(box.meets(other) for other in markers):
                        continue
                    crossed = sum(box.holds(px, py) for px, py in lines)
                    cost = crossed * 1.5 + step + (0.3 if side < 0 else 0.0) + abs(shift)
                    if best is None or cost < best[0]:
                        best = cost, Placed(middle_x, middle_y, box)
        if best is None:  # no room at all: under the point, so that no name is lost
            best = 0.0, Placed(x, y + marker + high, Box(x - wide / 2, y, x + wide / 2, y + high))
        standing.append(best[1].box)
        placed[index] = best[1]
    return tuple(place for place in placed if place is not None)
