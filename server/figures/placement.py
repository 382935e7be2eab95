"""Where the names on a chart stand, so that none lies on another or on a point.

Greedy: each name tries places round its point, near ones first, and takes the first that is
free,
or the one that lies on the fewest line points when it cannot be free of lines.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

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


@dataclass(frozen=True, slots=True)
class Wanted:
    """A name that wants a place: at its point, or at any of several points of its line."""

    text: str
    points: tuple[tuple[float, float], ...]  # [px]
    farthest: int = 15  # steps away from the point at most
    line: int = -1  # number of the line that it names: no other line may be nearer


@dataclass(frozen=True, slots=True)
class Placed:
    """A name at its place: middle of its box, and which of its points it stands at."""

    x: float
    y: float
    which: int
    box: Box


def text_width(text: str, size: float, bold: bool = False) -> float:
    """Return about how wide a line of text is, in pixels."""
    return len(text) * size * (LETTER + (0.04 if bold else 0.0))


def place_names(
    names: Sequence[Wanted],
    *,
    size: float,
    bounds: Box,
    lines: NDArray[np.float64],
    taken: Sequence[Box] = (),
    marker: float = 6.0,
) -> tuple[Placed, ...]:
    """Return a place for each name.

    Parameters
    ----------
    names : sequence of Wanted
        Names with their points, one line of text each; points before lines, so that the
        names that
        cannot move come first.
    size : float
        Size of the letters. [px]
    bounds : Box
        No name reaches out of it. [px]
    lines : ndarray, shape (n, 3)
        Points of the lines of the chart, x and y [px], and the number of the line: a place
        on fewer
        points is better, and a line's name is not nearer to another line.
    taken : sequence of Box
        Boxes of texts and points that already stand. [px]
    marker : float
        Half of a marker's width, kept free round every point. [px]

    Returns
    -------
    tuple of Placed
        In the order of the names.
    """
    single = [name.points[0] for name in names if len(name.points) == 1]
    markers = [Box(x - marker, y - marker, x + marker, y + marker) for x, y in single]
    standing = [*taken, *markers]
    placed: dict[int, Placed] = {}
    order = sorted(
        range(len(names)), key=lambda i: (len(names[i].points) > 1, names[i].points[0][0])
    )
    for index in order:
        place = _place(names[index], size, bounds, lines, standing, marker)
        standing.append(place.box)
        placed[index] = place
    return tuple(placed[index] for index in range(len(names)))


def _place(
    name: Wanted,
    size: float,
    bounds: Box,
    lines: NDArray[np.float64],
    standing: Sequence[Box],
    marker: float,
) -> Placed:
    wide, high = text_width(name.text, size, bold=True) + 4, size * 1.25
    best: tuple[float, Placed] | None = None
    for cost, which, step, side, shift in _tries(len(name.points), name.farthest):
        if best is not None and cost >= best[0]:
            break  # what follows is farther still
        x, y = name.points[which]
        away = high * (0.4 + 0.22 * step)
        if name.line < 0:
            away = marker + high * (0.2 + 0.75 * step)
        middle_x = min(max(x + shift * wide, bounds.left + wide / 2), bounds.right - wide / 2)
        middle_y = y + side * away
        half_wide, half_high = wide / 2, high / 2
        box = Box(
            middle_x - half_wide,
            middle_y - half_high,
            middle_x + half_wide,
            middle_y + half_high,
        )
        if box.top < bounds.top or box.bottom > bounds.bottom:
            continue
        if any(box.meets(other, 1.0) for other in standing):
            continue
        whole = cost + _crowding(box, lines, name.line)
        if best is None or whole < best[0]:
            best = whole, Placed(middle_x, middle_y, which, box)
    if best is None:  # no room at all: under the point, so that no name is lost
        x, y = name.points[0]
        box = Box(x - wide / 2, y, x + wide / 2, y + high)
        return Placed(x, y + marker + high, 0, box)
    return best[1]


@lru_cache(maxsize=64)
def _tries(points: int, farthest: int) -> tuple[tuple[float, int, int, int, float], ...]:
    """Return places to try, the nearest first: cost, point, step, side and shift."""
    return tuple(
        sorted(
            (
                step + (0.3 if side < 0 else 0.0) + 1.6 * abs(shift) + 0.15 * which,
                which,
                step,
                side,
                shift,
            )
            for which in range(points)
            for step in range(1, farthest + 1)
            for side in (1, -1)
            for shift in (0.0, 0.5, -0.5, 0.9, -0.9)
        )
    )


def _crowding(box: Box, lines: NDArray[np.float64], own: int) -> float:
    """Return how much a box lies on lines, and whether a line's name would seem another's."""
    if not lines.size:
        return 0.0
    x, y, line = lines.T
    aside = np.maximum(np.maximum(box.left - x, x - box.right), 0.0)
    above = np.maximum(np.maximum(box.top - y, y - box.bottom), 0.0)
    away = np.hypot(aside, above)
    cost = 1.5 * float(np.count_nonzero(away == 0))
    if own >= 0 and int(line[np.argmin(away)]) != own:
        cost += 12.0
    return cost
