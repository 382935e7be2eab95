"""Draw the grade-line strip as SVG."""

from collections.abc import Callable
from itertools import pairwise

from server.figures.look import PAPER
from server.figures.strip import GradeStrip, StripStop
from server.figures.svg import Palette, Value, element, points, short, words
from server.units import Dimension, View, shown_with_unit

WIDTH, TOP, BASE, GROUND = 880.0, 16.0, 128.0, 134.0
LEFT, RIGHT = 46.0, 46.0
LETTERS = 12.0
LINE = 15  # letters of a name on one line
PUMPS_TAKE = 1.75  # columns between the two manifolds: the lift and its words stand there


def strip_svg(strip: GradeStrip, view: View, title: str, *, palette: Palette = PAPER) -> str:
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
    height = 178 if all(len(_two_lines(stop.name)) == 1 for stop in strip.stops) else 192
    scale = _scale(strip)
    parts = [] if scale is None else [_drawing(strip, columns, scale, view, palette)]
    last = len(columns) - 1
    for index, (stop, x) in enumerate(zip(strip.stops, columns, strict=True)):
        if stop.name:  # else a bend of the grade line at a level that nobody gave
            anchor = "start" if index == 0 else "end" if index == last else "middle"
            at = x - 6 if index == 0 else x + 6 if index == last else x
            parts.append(_label(stop, at, anchor, view, palette))
    return element(
        "svg",
        *parts,
        class_="drawn",
        xmlns="http://www.w3.org/2000/svg",
        viewBox=f"0 0 {WIDTH:.0f} {height}",
        role="img",
        aria_label=_alt(strip, view, title),
    )


def _label(stop: StripStop, x: float, anchor: str, view: View, palette: Palette) -> str:
    """Return the pressure of a stop over its name."""
    pressure = words(
        _pressure(stop, view),
        x,
        152,
        text_anchor=anchor,
        font_size=LETTERS,
        font_weight=650,
        fill=palette["water"] if stop.concerns else palette["ink"],
    )
    small: dict[str, Value] = {"font_size": LETTERS - 0.5, "fill": palette["soft"]}
    lines = (
        words(line, x, 167 + 14 * row, text_anchor=anchor, **small)
        for row, line in enumerate(_two_lines(stop.name))
    )
    return "".join([pressure, *lines])


def _pressure(stop: StripStop, view: View) -> str:
    if stop.dry:
        return "no water"
    return shown_with_unit(stop.pressure, Dimension.PRESSURE, view)


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
    strip: GradeStrip,
    columns: list[float],
    scale: tuple[float, float],
    view: View,
    palette: Palette,
) -> str:
    low, per_metre = scale

    def y(level: float) -> float:
        return BASE - 10 - (level - low) * per_metre

    stops = list(zip(strip.stops, columns, strict=True))
    parts = [
        _ground([(x, y(s.elevation)) for s, x in stops if s.elevation is not None], palette)
    ]
    lift_x = _lift_x(strip.stops, columns)
    for side in (False, True):
        way = [
            (x, y(s.grade)) for s, x in stops if s.after_pumps is side and s.grade is not None
        ]
        if way:
            # the manifolds' grades are carried level to the pumps
            at = (lift_x, way[0][1]) if side else (lift_x, way[-1][1])
            run = [at, *way] if side else [*way, at]
            parts.append(
                element(
                    "polyline",
                    points=points(run),
                    fill="none",
                    stroke=palette["water"],
                    stroke_width=2.5,
                    stroke_linejoin="round",
                )
            )
    for stop, x in stops:
        if stop.grade is not None and stop.elevation is not None:
            over = f"M{short(x)} {short(y(stop.grade))}V{short(y(stop.elevation))}"
            parts.append(element("path", d=over, stroke=palette["rule"]))
            parts.append(
                element("circle", cx=x, cy=y(stop.elevation), r=2, fill=palette["soft"])
            )
    parts.append(_lift(strip, lift_x, y, view, palette))
    return "".join(parts)


def _ground(line: list[tuple[float, float]], palette: Palette) -> str:
    if len(line) < 2:
        return ""
    below = [(line[0][0], GROUND), *line, (line[-1][0], GROUND)]
    return element("polygon", points=points(below), fill=palette["hair"]) + element(
        "polyline", points=points(line), fill="none", stroke=palette["soft"]
    )


def _lift_x(stops: tuple[StripStop, ...], columns: list[float]) -> float:
    after = next((i for i, s in enumerate(stops) if s.after_pumps), len(stops) - 1)
    before = max(after - 1, 0)
    return columns[before] + (columns[after] - columns[before]) * 0.32


def _lift(
    strip: GradeStrip, x: float, y: Callable[[float], float], view: View, palette: Palette
) -> str:
    before = [s.grade for s in strip.stops if not s.after_pumps and s.grade is not None]
    after = [s.grade for s in strip.stops if s.after_pumps and s.grade is not None]
    if not before or not after or strip.lift is None:
        return ""
    low, high = y(before[-1]), y(after[0])
    middle = (low + high) / 2
    many = len(strip.running) > 1
    running = f"{len(strip.running)} running" if many else " ".join(strip.running)
    speed = shown_with_unit(strip.speed, Dimension.RATIO, view)
    lift = f"lift {shown_with_unit(strip.lift, Dimension.HEAD, view)}"
    bar = element(
        "path",
        d=f"M{short(x)} {short(low)}V{short(high)}",
        stroke=palette["water"],
        stroke_width=6,
        stroke_dasharray="2 2",
    )
    bold: dict[str, Value] = {
        "font_size": LETTERS,
        "font_weight": 650,
        "fill": palette["ink"],
    }
    small: dict[str, Value] = {"font_size": LETTERS - 0.5, "fill": palette["soft"]}
    return (
        bar
        + words(lift, x + 10, middle - 2, **bold)
        + words(f"{running}, {speed}", x + 10, middle + 13, **small)
    )


def _two_lines(name: str) -> list[str]:
    """Return a name on one or two lines, shortened when even two do not hold it."""
    if len(name) <= LINE:
        return [name]
    first = name[: LINE + 1].rsplit(" ", 1)[0] if " " in name[: LINE + 1] else name[:LINE]
    rest = name[len(first) :].strip()
    return [first, rest if len(rest) <= LINE else rest[: LINE - 1] + "…"]


def _alt(strip: GradeStrip, view: View, title: str) -> str:
    said = "; ".join(
        f"{s.name} {_pressure(s, view)}" for s in strip.stops if s.pressure is not None or s.dry
    )
    return f"Hydraulic grade line, {title}: {said or 'not solved'}."
