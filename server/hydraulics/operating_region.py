"""Where a pump stands on its curve: per cent of best efficiency flow, and the regions by it."""

from collections.abc import Callable
from dataclasses import dataclass
from enum import IntEnum

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import BoolArray, FloatArray, StateArray, not_negative, positive
from server.hydraulics.falling_root import falling_root
from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.states import State

EDGE = 2.0  # points of best efficiency flow within which an end is near, common practice [%]
HIGH_SPECIFIC_SPEED = 87.0  # 4500 in US units [rev/min, m3/s, m]
PREFERRED = (70.0, 120.0)  # preferred region [% of best efficiency flow]
PREFERRED_HIGH = (80.0, 115.0)  # the same above the high specific speed [%]
ASSUMED_MINIMUM = 0.25  # of best efficiency flow, where the maker states no minimum [-]
LAST_DIGITS = 1e-9  # of an end: the last digits of a unit's factor put no flow outside [-]
HEAT_CAPACITY = 4186.0  # of water [J/(kg K)]


class Region(IntEnum):
    """Where a flow stands against the two ends of a region."""

    INSIDE = 0
    EDGE = 1
    """Inside, but within two points of an end."""
    OUTSIDE = 2
    UNKNOWN = 3
    """The flow or an end is not known."""


def per_cent_of_best(flow: ArrayLike, *, speed: ArrayLike, best_flow: ArrayLike) -> FloatArray:
    """Return a flow as per cent of best efficiency flow at the running speed.

    Parameters
    ----------
    flow : array_like, shape (...)
        Flow of one pump; nan passes through. [m3/s]
    speed : array_like, shape (...)
        Running over tested speed, above zero; nan passes through. [-]
    best_flow : array_like, shape (...)
        Best efficiency flow at tested speed; nan where unknown. [m3/s]

    Returns
    -------
    ndarray, broadcast shape
        100 q / (s q_best). [%]

    Raises
    ------
    ValueError
        If a speed or a best efficiency flow is zero or less.

    References
    ----------
    .. [1] Affinity law of flow; Hydraulic Institute, Engineering Data Library, section 1.
    """
    ratio, best = np.asarray(speed, dtype=np.float64), np.asarray(best_flow, dtype=np.float64)
    if np.any(ratio <= 0) or np.any(best <= 0):
        raise ValueError("speed and best_flow must be above zero")
    return np.asarray(100.0 * np.asarray(flow, dtype=np.float64) / (ratio * best), np.float64)


def preferred_ends(
    specific_speed: ArrayLike,
    *,
    ordinary: tuple[float, float] = PREFERRED,
    narrow: tuple[float, float] = PREFERRED_HIGH,
    narrow_above: float = HIGH_SPECIFIC_SPEED,
) -> tuple[FloatArray, FloatArray]:
    """Return the lower and the upper end of the preferred region by specific speed.

    Parameters
    ----------
    specific_speed : array_like, shape (...)
        Per stage and per eye; nan where unknown counts as ordinary. [rev/min, m3/s, m]
    ordinary, narrow : tuple of two float
        Lower and upper end, at ordinary and at high specific speed. [% or ratio]
    narrow_above : float
        Specific speed above which the narrow region holds. [rev/min, m3/s, m]

    Returns
    -------
    tuple of two ndarray, shape (...)
        Lower and upper end. [% of best efficiency flow, or ratio]

    References
    ----------
    .. [1] ANSI/HI 9.6.3 as quoted in trade articles; the ends above ns 87 differ between them.
    """
    high = np.asarray(specific_speed, dtype=np.float64) > narrow_above
    return np.where(high, narrow[0], ordinary[0]), np.where(high, narrow[1], ordinary[1])


def region(
    share: ArrayLike, *, lower: ArrayLike, upper: ArrayLike, edge: float = EDGE
) -> StateArray:
    """Return where a flow stands against a region, judged unrounded, ends inside.

    Parameters
    ----------
    share : array_like, shape (...)
        Share of best efficiency flow; nan where unknown. [% or ratio, as the ends are]
    lower, upper : array_like, shape (...)
        Ends of the region; nan where unknown. [% or ratio]
    edge : float
        Distance from an end, inside, that counts as the edge. [% or ratio]

    Returns
    -------
    ndarray of int8, broadcast shape
        Codes of `Region`.
    """
    at, low, high = np.broadcast_arrays(
        *(np.asarray(a, dtype=np.float64) for a in (share, lower, upper))
    )
    last_digits = LAST_DIGITS * np.abs(high)
    codes = np.full(at.shape, Region.INSIDE, dtype=np.int8)
    codes[(at < low + edge) | (at > high - edge)] = Region.EDGE
    codes[(at < low - last_digits) | (at > high + last_digits)] = Region.OUTSIDE
    codes[np.isnan(at) | np.isnan(low) | np.isnan(high)] = Region.UNKNOWN
    return codes


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class MinimumFlow:
    """Least flow that a pump may keep up."""

    flow: FloatArray  # at the running speed [m3/s]
    assumed: bool  # 25 % of best efficiency flow, for want of the maker's figure


def minimum_continuous_flow(
    speed: ArrayLike, *, best_flow: float | None, stated_flow: float | None = None
) -> MinimumFlow | None:
    """Return the minimum continuous flow at the running speed.

    Parameters
    ----------
    speed : array_like, shape (...)
        Running over tested speed. [-]
    best_flow : float or None
        Best efficiency flow at tested speed. [m3/s]
    stated_flow : float or None
        The maker's minimum at tested speed; it falls with speed as best efficiency does. [m3/s]

    Returns
    -------
    MinimumFlow or None
        None when neither flow is known.

    References
    ----------
    .. [1] 25 % of best efficiency: US Army TM 5-813-9, on operating range.
    """
    ratio = np.asarray(speed, dtype=np.float64)
    if stated_flow is not None:
        stated = not_negative("stated_flow", stated_flow, "m3/s")
        return MinimumFlow(flow=np.asarray(ratio * stated, dtype=np.float64), assumed=False)
    if best_flow is None:
        return None
    assumed = ASSUMED_MINIMUM * positive("best_flow", best_flow, "m3/s")
    return MinimumFlow(flow=np.asarray(ratio * assumed, dtype=np.float64), assumed=True)


def thermal_minimum_flow(
    shaft_power: ArrayLike, *, density: ArrayLike, temperature_rise: ArrayLike
) -> FloatArray:
    """Return the flow that carries all shaft power away with a given rise of temperature.

    Parameters
    ----------
    shaft_power : array_like, shape (...)
        Shaft power near shut-off, zero or more. [W]
    density : array_like, shape (...)
        Density of the water, above zero. [kg/m3]
    temperature_rise : array_like, shape (...)
        Rise allowed, above zero. [K]

    Returns
    -------
    ndarray, broadcast shape
        q = P / (density x heat capacity x rise). [m3/s]

    Raises
    ------
    ValueError
        If an argument is outside its range.

    References
    ----------
    .. [1] Heat balance with all power into the water, the safe side.

    Examples
    --------
    >>> round(1000 * float(thermal_minimum_flow(9000, density=998, temperature_rise=8)), 3)
    0.269
    """
    heat = positive("density", density, "kg/m3") * HEAT_CAPACITY
    rise = positive("temperature_rise", temperature_rise, "K")
    return np.asarray(not_negative("shaft_power", shaft_power, "W") / (heat * rise), np.float64)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class ControlFlows:
    """Flows of the set at which each of its equal pumps stands at a place on its curve."""

    flow: FloatArray  # of the set [m3/s]
    speed: FloatArray  # [-]
    state: StateArray  # SOLVED on the control curve, TOP_SPEED or LOW_SPEED cut at a limit
    within: BoolArray  # the place is on the curve


def control_flows(
    leg: LegCurve,
    *,
    homologous_flow: ArrayLike,
    count: ArrayLike,
    required_head: Callable[[FloatArray], FloatArray],
    lowest_speed: float,
    highest_speed: float,
) -> ControlFlows:
    """Return the set flows at which equal pumps stand at a place on their curve.

    Parameters
    ----------
    leg : LegCurve
        One of the equal legs.
    homologous_flow : array_like, shape (...)
        Flow of one pump at tested speed: an end of a region times best efficiency flow. [m3/s]
    count : array_like, shape (...)
        Pumps running, 1 or more. [-]
    required_head : callable
        Head asked between the manifolds [m] for a set flow [m3/s], both of the broadcast
        shape; rising.
    lowest_speed, highest_speed : float
        Limits of the speed ratio. [-]

    Returns
    -------
    ControlFlows
        Where the control cannot be held at that place the speed stands at its limit.

    Notes
    -----
    At a place x on the curve the set gives s^2 G(x) at the flow n s x: one root in s.
    """
    x, n = np.broadcast_arrays(
        np.asarray(homologous_flow, dtype=np.float64), np.asarray(count, dtype=np.float64)
    )
    head = leg.head(x)
    within = np.isfinite(head)
    at, lift = np.where(within, n * x, 0.0), np.where(within, head, 0.0)

    def surplus(speed: FloatArray) -> FloatArray:
        return np.asarray(speed**2 * lift - required_head(speed * at), dtype=np.float64)

    low, high = np.full(x.shape, lowest_speed), np.full(x.shape, highest_speed)
    top, slow = surplus(high) < 0, surplus(low) > 0
    found = falling_root(lambda speed: -surplus(speed), low, high).root
    speed = np.where(top, highest_speed, np.where(slow, lowest_speed, found))
    state = np.where(top, State.TOP_SPEED, np.where(slow, State.LOW_SPEED, State.SOLVED))
    state = np.where(within, state, State.END_OF_CURVE)
    return ControlFlows(
        flow=np.where(within, speed * at, np.nan),
        speed=np.where(within, speed, np.nan),
        state=state.astype(np.int8),
        within=np.asarray(within, dtype=np.bool_),
    )
