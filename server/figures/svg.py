"""SVG elements as text: numbers short, texts escaped, attributes with a value only."""

from collections.abc import Iterable, Mapping
from html import escape

Palette = Mapping[str, str]
Value = str | float | int | None


def element(tag: str, *inside: str, **attributes: Value) -> str:
    """Return an element; `inside` stands as it is, `font_size` becomes `font-size`."""
    written = "".join(
        f' {name.rstrip("_").replace("_", "-")}="{value(given)}"'
        for name, given in attributes.items()
        if given is not None
    )
    return f"<{tag}{written}>{''.join(inside)}</{tag}>" if inside else f"<{tag}{written}/>"


def value(given: Value) -> str:
    """Return an attribute's value: two decimals at most, no zeros behind them."""
    if isinstance(given, str):
        return escape(given)
    return short(float(given or 0.0))


def short(number: float) -> str:
    """Return a coordinate with at most two decimals."""
    return f"{number:.2f}".rstrip("0").rstrip(".")


def points(pairs: Iterable[tuple[float, float]]) -> str:
    """Return the points of a polyline."""
    return " ".join(f"{short(x)},{short(y)}" for x, y in pairs)


def words(text: str, x: float, y: float, **attributes: Value) -> str:
    """Return a line of text."""
    return element("text", escape(text), x=x, y=y, **attributes)
