"""Draw the grade-line strip as SVG."""

from collections.abc import Callable, Mapping
from html import escape
from itertools import pairwise

from server.figures.look import PAPER
from server.figures.strip import GradeStrip, StripStop
from server.units import Dimension, View, shown_with_unit

WIDTH, TOP, BASE, GROUND = 880.0, 16.0, 128.0, 134.0
LEFT, RIGHT = 46.0, 46.0
LETTERS = 12.0
LINE = 15  # letters of a name on one line
PUMPS_TAKE = 1.75  # columns between the two manifolds: the lift and its words stand there


def strip_svg(strip: GradeStrip, view: View, title: str, *, palette: Mapping[str, str] = PAPER) -> str:
    """Return the strip as one SVG element.

    Parameters
    ----------
    strip : GradeStrip
        What is drawn, in SI.
    view : {"si", "us"}
        Units that are read.
    title : str
        Which case it is, for the alternative text.
    palette : mapping of str to str
        Colour of each name of `look`.
    """
    columns = _columns(strip.stops)
    names = [_two_lines(stop.name) for stop in strip.stops]
    height = 178 if all(len(n) == 1 for n in names) else 192
    scale = _scale(strip)
    parts = [
        f'<svg class="drawn" xmlns="http://www.w3.org/2000/svg" viewBox="0 0 {WIDTH:.0f} {height}" role="img"'
        f' aria-label="{escape(_alt(strip, view, title))}">'
    ]
    if scale is not None:
        parts.append(_drawing(strip, columns, scale, view, palette))
    for index, (stop, x, lines) in enumerate(zip(strip.stops, columns, names, strict=True)):
        if not stop.name:  # a bend of the grade line at a level that nobody gave
            continue
        anchor = "start" if index == 0 else "end" if index == len(columns) - 1 else "middle"
        at = x - 6 if index == 0 else x + 6 if anchor == "end" else x
        weight = ' font-weight="650"'
        shown = shown_with_unit(stop.pressure, Dimension.PRESSURE, view)
        colour = palette["water"] if stop.concerns else palette["ink"]
        parts.append(
            f'<text x="{at:.1f}" y="152" text-anchor="{anchor}" font-size="{LETTERS}"{weight}'
            f' fill="{colour}">{escape(shown)}</text>'
        )
        for row, line in enumerate(lines):
            parts.append(
                f'<text x="{at:.1f}" y="{167 + 14 * row}" text-anchor="{anchor}" font-size="{LETTERS - 0.5}"'
                f' fill="{palette["soft"]}">{escape(line)}</text>'
            )
    parts.append("</svg>")
    return "".join(parts)


def _columns(stops: tuple[StripStop, ...]) -> list[float]:
    """Return where each stop stands; the manifolds stand farther apart for the lift between."""
    steps = [0.0]
    for before, after in pairwise(stops):
        wide = PUMPS_TAKE if after.after_pumps and not before.after_pumps else 1.0
        steps.append(steps[-1] + wide)
    unit = (WIDTH - LEFT - RIGHT) / max(steps[-1], 1.0)
    return [LEFT + step * unit for step in steps]


def _scale(strip: GradeStrip) -> tuple[float, float] | None:
    """Return the lowest level drawn and pixels per metre; None when nothing is known."""
    levels = [v for s in strip.stops for v in (s.elevation, s.grade) if v is not None]
    if len(levels) < 2:
        return None
    low, high = min(levels), max(levels)
    return low, (BASE - 10 - TOP) / max(high - low, 1.0)


def _drawing(
    strip: GradeStrip, columns: list[float], scale: tuple[float, float], view: View, palette: Mapping[str, str]
) -> str:
    low, per_metre = scale

    def y(level: float) -> float:
        return BASE - 10 - (level - low) * per_metre

    parts: list[str] = []
    ground = [(x, y(s.elevation)) for s, x in zip(strip.stops, columns, strict=True) if s.elevation is not None]
    if len(ground) > 1:
        line = " ".join(f"{px:.1f},{py:.1f}" for px, py in ground)
        parts.append(
            f'<polygon points="{ground[0][0]:.1f},{GROUND} {line} {ground[-1][0]:.1f},{GROUND}" fill="{palette["hair"]}"/>'
            f'<polyline points="{line}" fill="none" stroke="{palette["soft"]}"/>'
        )
    for side in (False, True):
        way = [
            (x, y(s.grade))
            for s, x in zip(strip.stops, columns, strict=True)
            if s.after_pumps is side and s.grade is not None
        ]
        if way:
            lift_x = _lift_x(strip.stops, columns)
            # the manifolds' grades are carried level to the pumps
            run = [*way, (lift_x, way[-1][1])] if not side else [(lift_x, way[0][1]), *way]
            line = " ".join(f"{px:.1f},{py:.1f}" for px, py in run)
            parts.append(
                f'<polyline points="{line}" fill="none" stroke="{palette["water"]}" stroke-width="2.5"'
                ' stroke-linejoin="round"/>'
            )
    for stop, x in zip(strip.stops, columns, strict=True):
        if stop.grade is not None and stop.elevation is not None:
            parts.append(
                f'<path d="M{x:.1f} {y(stop.grade):.1f}V{y(stop.elevation):.1f}" stroke="{palette["rule"]}"/>'
                f'<circle cx="{x:.1f}" cy="{y(stop.elevation):.1f}" r="2" fill="{palette["soft"]}"/>'
            )
    parts.append(_lift(strip, columns, y, view, palette))
    return "".join(parts)


def _lift_x(stops: tuple[StripStop, ...], columns: list[float]) -> float:
    after = next((i for i, s in enumerate(stops) if s.after_pumps), len(stops) - 1)
    before = max(after - 1, 0)
    return columns[before] + (columns[after] - columns[before]) * 0.32


def _lift(
    strip: GradeStrip, columns: list[float], y: Callable[[float], float], view: View,
    palette: Mapping[str, str],
) -> str:  # fmt: skip
    before = [s.grade for s in strip.stops if not s.after_pumps and s.grade is not None]
    after = [s.grade for s in strip.stops if s.after_pumps and s.grade is not None]
    if not before or not after or strip.lift is None:
        return ""
    x, low, high = _lift_x(strip.stops, columns), y(before[-1]), y(after[0])
    middle = (low + high) / 2
    running = f"{len(strip.running)} running" if len(strip.running) > 1 else " ".join(strip.running)
    speed = shown_with_unit(strip.speed, Dimension.RATIO, view)
    return (
        f'<path d="M{x:.1f} {low:.1f}V{high:.1f}" stroke="{palette["water"]}" stroke-width="6" stroke-dasharray="2 2"/>'
        f'<text x="{x + 10:.1f}" y="{middle - 2:.1f}" font-size="{LETTERS}" font-weight="650"'
        f' fill="{palette["ink"]}">lift {escape(shown_with_unit(strip.lift, Dimension.HEAD, view))}</text>'
        f'<text x="{x + 10:.1f}" y="{middle + 13:.1f}" font-size="{LETTERS - 0.5}" fill="{palette["soft"]}">'
        f"{escape(running)}, {escape(speed)}</text>"
    )


def _two_lines(name: str) -> list[str]:
    """Return a name on one or two lines, shortened with an ellipsis when even two do not hold it."""
    if len(name) <= LINE:
        return [name]
    first = name[: LINE + 1].rsplit(" ", 1)[0] if " " in name[: LINE + 1] else name[:LINE]
    rest = name[len(first) :].strip()
    return [first, rest if len(rest) <= LINE else rest[: LINE - 1] + "…"]


def _alt(strip: GradeStrip, view: View, title: str) -> str:
    said = "; ".join(
        f"{s.name} {shown_with_unit(s.pressure, Dimension.PRESSURE, view)}"
        for s in strip.stops
        if s.pressure is not None
    )
    return f"Hydraulic grade line, {title}: {said or 'not solved'}."
