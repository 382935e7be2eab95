"""How each role looks: colour, dash, width and marker, in one place.

The colours are the page's own (CSS names) and their paper values. They stay apart for the
common kinds of colour blindness, and nothing is told by colour alone: dash, marker and words
differ too.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

from server.figures.chart import Role

Colour = Literal[
    "ink", "soft", "rule", "hair", "water", "water-tint", "outside", "edge", "note", "paper"
]
Shape = Literal["circle", "square", "diamond", "triangle"]

SCREEN: Mapping[str, str] = {
    name: f"var(--{name})"
    for name in (
        "ink",
        "soft",
        "rule",
        "hair",
        "water",
        "water-tint",
        "outside",
        "edge",
        "note",
        "paper",
    )
}
# printed on white: the hair lines a little darker than on the screen, or they vanish
PAPER: Mapping[str, str] = {
    "ink": "#1b2430",
    "soft": "#4c555f",
    "rule": "#b9b2a2",
    "hair": "#dcd7ca",
    "water": "#0b5d73",
    "water-tint": "#dcebee",
    "outside": "#a8380f",
    "edge": "#7a5c00",
    "note": "#3d4a8a",
    "paper": "#ffffff",
}

# by number of pumps running: on, off, on, off ... in pixels
DASHES: tuple[tuple[int, ...], ...] = ((), (8, 3), (2, 3), (9, 3, 2, 3), (14, 4), (2, 3, 8, 3))


@dataclass(frozen=True, slots=True)
class Look:
    """The look of one role; `dash` of None follows the series' own dash number."""

    colour: Colour
    width: float = 1.6
    dash: int | None = None
    marker: Shape = "circle"
    hollow: bool = False
    hatched: bool = False
    opacity: float = 1.0


LOOKS: Mapping[Role, Look] = {
    Role.SET_CURVE: Look("ink", 1.8),
    Role.HELD_CURVE: Look("soft", 1.0),
    Role.SMALL_CURVE: Look("note", 1.8),
    Role.SYSTEM_LOW: Look("water", 2.4, 0),
    Role.SYSTEM_HIGH: Look("water", 1.1, 0),
    Role.SYSTEM_BAND: Look("water-tint", 0, 0, opacity=0.7),
    Role.PREFERRED: Look("water", 0, 0, hatched=True),
    Role.AVAILABLE: Look("water", 2.0, 0),
    Role.REQUIRED: Look("ink", 1.6),
    Role.LIMIT: Look("outside", 1.4, 4),
    Role.SUPPLY_LOW: Look("water", 2.4, 0),
    Role.SUPPLY_NORMAL: Look("water", 1.6, 1),
    Role.SUPPLY_HIGH: Look("water", 1.6, 2),
    Role.DUTY_INSIDE: Look("ink", marker="circle"),
    Role.DUTY_EDGE: Look("edge", marker="square"),
    Role.DUTY_OUTSIDE: Look("outside", marker="diamond"),
    Role.TEST: Look("ink", marker="square"),
    Role.TEST_COMPARED: Look("soft", marker="triangle", hollow=True),
    Role.WORDS: Look("soft"),
}


def dash_of(look: Look, series_dash: int) -> tuple[int, ...]:
    """Return the dash pattern of a series in a role."""
    return DASHES[(series_dash if look.dash is None else look.dash) % len(DASHES)]
