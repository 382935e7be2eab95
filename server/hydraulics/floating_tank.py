"""A zone with a floating tank at the end of the main: what it asks of the station."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import FloatArray, IndexArray, finite, not_negative, read_only
from server.hydraulics.case_system import HeadFunction, TabledSystem
from server.hydraulics.conduit import Conduit, conduit


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class FloatingTank:
    """The way from the suction manifold to the tank, for C cases. Made by `floating_tank`.

    Attributes
    ----------
    level : ndarray, shape (C,)
        Water level of the tank. [m]
    draw : ndarray, shape (C,)
        Demand taken at the draw, zero or more. [m3/s]
    before, after : callable
        Head lost from the station to the draw and from there to the tank [m] for flows and
        their cases; the second flow is negative when the tank feeds.
    suction_grade : callable
        Grade at the suction manifold [m] for station flows and their cases.
    system : TabledSystem
        Head asked between the manifolds, a system curve for the solvers.
    """

    level: FloatArray
    draw: FloatArray
    before: HeadFunction
    after: HeadFunction
    suction_grade: HeadFunction
    system: TabledSystem

    def tank_flow(self, flow: FloatArray, *, case: IndexArray) -> FloatArray:
        """Return the flow into the tank, negative when the tank feeds [m3/s]."""
        return np.asarray(flow - self.draw[case], dtype=np.float64)

    def draw_grade(self, flow: FloatArray, *, case: IndexArray) -> FloatArray:
        """Return the grade where the demand is drawn [m]."""
        lost = self.after(self.tank_flow(flow, case=case), case)
        return np.asarray(self.level[case] + lost, dtype=np.float64)

    def main_loss(self, flow: FloatArray, *, case: IndexArray) -> FloatArray:
        """Return the head from the station to the tank, lost less gained [m]."""
        lost = self.before(flow, case) + self.after(self.tank_flow(flow, case=case), case)
        return np.asarray(lost, dtype=np.float64)


def floating_tank(
    *,
    level: ArrayLike,
    draw: ArrayLike,
    before: HeadFunction,
    after: HeadFunction,
    suction_grade: HeadFunction,
    largest_flow: float,
) -> FloatingTank:
    """Return the way to a floating tank as a system curve for C cases.

    Parameters
    ----------
    level : array_like, shape (C,)
        Water level of the tank. [m]
    draw : array_like, shape (C,) or ()
        Demand taken at the draw, zero or more. Drawn at the tank itself it does not change the
        head; give `after` no loss then. [m3/s]
    before, after : callable
        Head lost before and after the draw; see `FloatingTank` and `case_system.loss_by_case`.
    suction_grade : callable
        Grade at the suction manifold for a station flow, falling or level.
    largest_flow : float
        Flow up to which the solvers are likely to ask, above zero. [m3/s]

    Raises
    ------
    ValueError
        If a level is no number, a draw is below zero or the largest flow is not above zero.

    Notes
    -----
    Head asked = level + loss after (flow - draw) + loss before (flow) - suction grade (flow).
    The loss after the draw is odd in its flow, so the head rises with flow throughout and the
    operating point is unique for falling pumps, also while the tank feeds.
    """
    tank_level = np.atleast_1d(finite("level", level, "m"))
    drawn = np.broadcast_to(not_negative("draw", draw, "m3/s"), tank_level.shape)

    def asked(flow: FloatArray, case: IndexArray) -> FloatArray:
        to_tank = flow - drawn[case]
        lost = before(flow, case) + after(to_tank, case)
        return np.asarray(tank_level[case] + lost - suction_grade(flow, case), dtype=np.float64)

    return FloatingTank(
        level=read_only(tank_level),
        draw=read_only(drawn),
        before=before,
        after=after,
        suction_grade=suction_grade,
        system=TabledSystem(
            function=asked, case_count=tank_level.size, largest_flow=largest_flow
        ),
    )


def parted_at(line: Conduit, *, chainage: float) -> tuple[Conduit, Conduit]:
    """Return a line in two parts at a distance from its start.

    Parameters
    ----------
    line : Conduit
        The line.
    chainage : float
        Distance along it, 0 to its whole length. [m]

    Returns
    -------
    tuple of two Conduit
        The parts before and after; either may have no reach. A reach that is cut shares its
        fittings by length.

    Raises
    ------
    ValueError
        If the chainage is not on the line.
    """
    ends = np.cumsum(line.length)
    whole = float(ends[-1]) if ends.size else 0.0
    if not 0 <= chainage <= whole * (1.0 + 1e-12):
        raise ValueError(f"chainage must be between 0 and {whole:g} m; got {chainage:g} m")
    starts = ends - line.length
    share = np.clip((chainage - starts) / np.where(line.length > 0, line.length, 1.0), 0.0, 1.0)
    # a reach of no length (fittings only) lies before the cut where it ends there
    share = np.where(line.length > 0, share, ends <= chainage)
    return _part(line, share), _part(line, 1.0 - share)


def _part(line: Conduit, share: FloatArray) -> Conduit:
    """Return the shares of the reaches that are not nothing."""
    kept = share > 0
    return conduit(
        line.law,
        length=(share * line.length)[kept],
        bore=line.bore[kept],
        resistance=line.resistance[kept],
        k=(share * line.k)[kept],
        barrels=line.barrels[kept],
    )
