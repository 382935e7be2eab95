"""Where the names on a chart stand, so that none lies on another or on a point.

Greedy: each name tries places round its point, near ones first, and takes the first that is
free, or the one that lies on the fewest line points when it cannot be free of lines.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

# mean advance of the page's sans-serif, of its size; bold is a little wider
LETTER = 0.56
GAP = 1.0  # least room between two names [px]
TOGETHER = 16  # places weighed at a time: the near ones mostly win


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
    cost, which, step, side, shift = _tries(len(name.points), name.farthest)
    x, y = np.asarray(name.points, dtype=np.float64)[which.astype(np.intp)].T
    away = high * (0.4 + 0.22 * step)
    if name.line < 0:
        away = marker + high * (0.2 + 0.75 * step)
    middle_x = np.clip(x + shift * wide, bounds.left + wide / 2, bounds.right - wide / 2)
    middle_y = y + side * away
    left, right = middle_x - wide / 2, middle_x + wide / 2
    top, bottom = middle_y - high / 2, middle_y + high / 2
    free = (top >= bounds.top) & (bottom <= bounds.bottom)
    if standing:
        other = np.array([(box.left, box.top, box.right, box.bottom) for box in standing]).T
        free &= ~np.any(
            (left[:, None] < other[2] + GAP)
            & (other[0] < right[:, None] + GAP)
            & (top[:, None] < other[3] + GAP)
            & (other[1] < bottom[:, None] + GAP),
            axis=1,
        )
    tries = np.flatnonzero(free)
    if not tries.size:  # no room at all: under the point, so that no name is lost
        x0, y0 = name.points[0]
        under = Box(x0 - wide / 2, y0, x0 + wide / 2, y0 + high)
        return Placed(x0, y0 + marker + high, 0, under)
    best, least = int(tries[0]), np.inf
    for start in range(0, tries.size, TOGETHER):
        some = tries[start : start + TOGETHER]
        if cost[some[0]] >= least:
            break  # what follows is farther still
        edges = np.stack([left[some], top[some], right[some], bottom[some]])
        whole = cost[some] + _crowding(edges, lines, name.line)
        nearest = int(np.argmin(whole))
        if whole[nearest] < least:
            best, least = int(some[nearest]), float(whole[nearest])
    return Placed(
        float(middle_x[best]),
        float(middle_y[best]),
        int(which[best]),
        Box(float(left[best]), float(top[best]), float(right[best]), float(bottom[best])),
    )


@lru_cache(maxsize=64)
def _tries(points: int, farthest: int) -> NDArray[np.float64]:
    """Return places to try, the nearest first: rows cost, point, step, side and shift."""
    return np.array(
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
        ),
        dtype=np.float64,
    ).T


def _crowding(
    edges: NDArray[np.float64], lines: NDArray[np.float64], own: int
) -> NDArray[np.float64]:
    """Return how much boxes lie on lines, and whether a line's name would seem another's.

    `edges` has rows left, top, right and bottom, a column a box.
    """
    if not lines.size:
        return np.zeros(edges.shape[1])
    x, y, line = lines.T
    left, top, right, bottom = edges[:, :, None]
    aside = np.maximum(np.maximum(left - x, x - right), 0.0)
    above = np.maximum(np.maximum(top - y, y - bottom), 0.0)
    away = np.hypot(aside, above)
    on_line = np.count_nonzero(away == 0, axis=1)
    cost = np.asarray(1.5 * on_line, dtype=np.float64)
    if own >= 0:
        cost += np.where(line[np.argmin(away, axis=1)] != own, 12.0, 0.0)
    return cost
