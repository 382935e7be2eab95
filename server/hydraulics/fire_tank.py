"""A tank that only feeds: it opens when the grade of the zone would fall below its level.

Complementarity: the tank's flow is zero or more, the grade at its node is at least its level
less the loss of its line, and one of the two holds with equality.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import BoolArray, FloatArray, StateArray, finite, not_negative
from server.hydraulics.case_system import HeadFunction, TabledSystem
from server.hydraulics.combinations import solve_combinations
from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.states import State

TANK_LOSS_EXPONENT = 1.852  # of the flow in the line from the tank [-]
_DOUBT = 1e-9  # grade by which a tank must stand higher to open [m]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class FireTank:
    """Tank open or shut; C cases, K combinations, N slots.

    Where the tank is shut the closed zone's own results hold and floats of this one repeat
    them. `draws_down` marks the case in which the set point is held and yet lies below the
    tank: the tank would feed before the station does, in normal service too; nothing is stated.
    """

    opens: BoolArray  # (C, K)
    draws_down: BoolArray  # (C, K)
    state: StateArray  # (C, K) of the station on the open tank; SOLVED where shut
    station_flow: FloatArray  # (C, K) [m3/s]
    tank_flow: FloatArray  # (C, K) out of the tank, zero where shut [m3/s]
    node_grade: FloatArray  # (C, K) where the tank joins [m]
    head: FloatArray  # (C, K) between the manifolds [m]
    leg_flow: FloatArray  # (C, K, N) nan where shut [m3/s]
    energy_residual: FloatArray  # (C, K) zero where shut [m]


def fire_tank(
    demand: ArrayLike,
    *,
    level: ArrayLike,
    tank_loss: ArrayLike,
    lift: HeadFunction,
    closed_head: ArrayLike,
    closed_held: ArrayLike,
    legs: Sequence[LegCurve],
    combinations: ArrayLike,
    speeds: ArrayLike,
) -> FireTank:
    """Return whether the tank feeds, and what station and tank then give.

    Parameters
    ----------
    demand : array_like, shape (C,)
        Flow asked at the tank's node, above zero. [m3/s]
    level : array_like, shape (C,)
        Water level of the tank. [m]
    tank_loss : array_like, shape (C,) or ()
        Loss from tank to node over flow^1.852, zero or more. [m/(m3/s)^1.852]
    lift : callable
        Head between the manifolds that brings the grade at the node to zero, for station flows
        [m3/s] and their cases: losses on the way less the suction grade; rising. [m]
    closed_head : array_like, shape (C, K)
        Head between the manifolds with the tank shut and the whole demand through the station;
        nan where the station cannot pass it. [m]
    closed_held : array_like of bool, shape (C, K)
        Whether that head is a set point held, below the highest speed.
    legs : sequence of LegCurve
        One for each of the N slots.
    combinations : array_like of bool, shape (K, N)
        Combinations of the slots that run.
    speeds : array_like, shape () or (N,) or (K, N) or (C, K, N)
        Speeds with the tank open: the highest, since the set point is then not held. [-]

    Returns
    -------
    FireTank
        Open where the closed grade would lie below the level.

    Raises
    ------
    ValueError
        If a demand is not above zero or a loss is below zero.

    Notes
    -----
    With the tank open the station meets level - loss(demand - Q) + lift(Q), which rises with Q:
    the operating point is unique for falling pumps, and lies below the demand just where the
    closed grade lies below the level, so that exactly one of the two states fits.
    """
    asked = np.atleast_1d(not_negative("demand", demand, "m3/s"))
    height = np.broadcast_to(finite("level", level, "m"), asked.shape)
    loss = np.broadcast_to(not_negative("tank_loss", tank_loss, ""), asked.shape)
    if not np.all(asked > 0):
        raise ValueError(f"demand must be above zero; got {float(asked.min()):g} m3/s")
    mask = np.atleast_2d(np.asarray(combinations, dtype=np.bool_))
    shape = (asked.size, mask.shape[0])
    every = np.arange(asked.size)

    def at_node(
        flow: FloatArray, case: np.ndarray[tuple[int, ...], np.dtype[np.intp]]
    ) -> FloatArray:
        lacking = asked[case] - flow
        lost = loss[case] * np.sign(lacking) * np.abs(lacking) ** TANK_LOSS_EXPONENT
        return np.asarray(height[case] - lost, dtype=np.float64)

    system = TabledSystem(
        function=lambda flow, case: at_node(flow, case) + lift(flow, case),
        case_count=asked.size,
        largest_flow=float(asked.max()),
    )
    fed = solve_combinations(legs, system=system, combinations=mask, speeds=speeds)
    closed = np.broadcast_to(np.asarray(closed_head, dtype=np.float64), shape)
    held = np.broadcast_to(np.asarray(closed_held, dtype=np.bool_), shape)
    lift_closed = lift(asked, every)[:, None]
    grade = closed - lift_closed
    known = np.isfinite(grade)
    low = np.where(known, grade < height[:, None] - _DOUBT, False)
    # a station that cannot pass the demand alone leaves it to the tank if it then passes less
    relieved = ~known & (np.nan_to_num(fed.flow, nan=np.inf) <= asked[:, None])
    draws_down = low & held
    opens = (low & ~held) | relieved
    every_row = np.broadcast_to(every[:, None], shape)
    station = np.where(opens, fed.flow, np.where(known, asked[:, None], np.nan))
    safe = np.where(np.isfinite(station), station, 0.0)
    node = np.where(opens, at_node(safe.ravel(), every_row.ravel()).reshape(shape), grade)
    silent = draws_down | ~np.isfinite(station)
    state = np.where(opens, fed.state, np.where(known, State.SOLVED, State.END_OF_CURVE))
    state[draws_down] = State.NOT_AVAILABLE

    def told(values: FloatArray) -> FloatArray:
        return np.where(silent, np.nan, values)

    return FireTank(
        opens=np.asarray(opens, dtype=np.bool_),
        draws_down=np.asarray(draws_down, dtype=np.bool_),
        state=state.astype(np.int8),
        station_flow=told(station),
        tank_flow=told(np.where(opens, asked[:, None] - station, 0.0)),
        node_grade=told(node),
        head=told(np.where(opens, fed.manifold_head, closed)),
        leg_flow=np.where(opens[..., None], fed.leg_flow, np.nan),
        energy_residual=told(np.where(opens, fed.energy_residual, 0.0)),
    )
