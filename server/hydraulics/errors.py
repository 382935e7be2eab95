"""Errors of the physics.

HydraulicsError
    InputRefused (also a ValueError)   what was given cannot describe the thing
        CurveRefused                   rows of a pump curve
        SupplyRefused                  a flow test or another supply
    SolutionNotFound                   a root was bracketed but not reached
"""


class HydraulicsError(Exception):
    """Base of every error that the physics raises on purpose."""


class InputRefused(HydraulicsError, ValueError):
    """What was given cannot describe the thing; `reason` is a stable code for the pages."""

    def __init__(self, reason: str, message: str, *, row: int | None = None) -> None:
        super().__init__(message)
        self.reason = reason
        self.row = row


class CurveRefused(InputRefused):
    """The rows given cannot be a pump curve."""


class SupplyRefused(InputRefused):
    """The figures given cannot be a supply."""


class SolutionNotFound(HydraulicsError):
    """A solve did not reach its tolerance in the steps allowed."""

    def __init__(self, what: str, unsolved: int, worst_residual: float) -> None:
        super().__init__(
            f"{what}: {unsolved} point(s) not solved; worst residual {worst_residual:.3g}"
        )
        self.unsolved = unsolved
        self.worst_residual = worst_residual
