"""What came of a solve, as one small integer for each case, combination or leg."""

from enum import IntEnum


class State(IntEnum):
    """Outcome of a solve; every float of a result is read together with it."""

    SOLVED = 0
    """The control is held, or the operating point is found."""
    TOP_SPEED = 1
    """Speed at its highest: the control is not held, the state at that speed is given."""
    LOW_SPEED = 2
    """Speed at its lowest: more head than asked, the state at that speed is given."""
    HELD_SHUT = 3
    """A leg is held shut by the others: it passes nothing."""
    END_OF_CURVE = 4
    """Past the last row of a pump curve: no duty is stated."""
    BELOW_STATIC = 5
    """No leg reaches the head asked at zero flow: nothing flows."""
    NOT_AVAILABLE = 6
    """No result can be had: the slot is absent, or the curve has no row there."""
    NO_WATER = 7
    """The water column breaks before the pump: there is nothing to pump."""
