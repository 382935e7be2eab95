"""A bypass with a check valve: it carries flow when the supply stands above the zone."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import BoolArray, FloatArray, not_negative, positive
from server.hydraulics.falling_root import falling_root
from server.hydraulics.system_curve import SystemCurve

_DOUBLINGS = 60
_FIRST_FLOW = 1e-3  # upper end of the first bracket [m3/s]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class BypassFlow:
    """Flow through a bypass with all pumps off; arrays of shape (C,)."""

    flow: FloatArray  # zero where the check valve stays shut [m3/s]
    head: FloatArray  # between the manifolds: zero or below while it flows, else static [m]
    opens: BoolArray
    energy_residual: FloatArray  # [m]


def bypass_flow_at(manifold_head: ArrayLike, *, coefficient: ArrayLike) -> FloatArray:
    """Return the flow through a bypass at a head between the manifolds.

    Parameters
    ----------
    manifold_head : array_like, shape (...)
        Head from suction manifold to discharge manifold; nan passes through. [m]
    coefficient : array_like, shape (...)
        Loss of the bypass over flow squared, check valve included, above zero. [m/(m3/s)2]

    Returns
    -------
    ndarray, broadcast shape
        Zero where the discharge stands as high or higher; else the square root of the head
        over the coefficient. With pumps running at a head above zero it is always zero. [m3/s]

    Raises
    ------
    ValueError
        If a coefficient is not above zero.
    """
    loss = positive("coefficient", coefficient, "m/(m3/s)2")
    below = np.maximum(-np.asarray(manifold_head, dtype=np.float64), 0.0)
    return np.asarray(np.sqrt(below / loss), dtype=np.float64)


def bypass_head(flow: ArrayLike, *, coefficient: ArrayLike) -> FloatArray:
    """Return the head between the manifolds while a flow is imposed on the bypass alone.

    Parameters
    ----------
    flow : array_like, shape (...)
        Flow, zero or more; nan passes through. [m3/s]
    coefficient : array_like, shape (...)
        Loss of the bypass over flow squared, zero or more. [m/(m3/s)2]

    Returns
    -------
    ndarray, broadcast shape
        Minus the loss: discharge grade less suction grade. [m]

    Raises
    ------
    ValueError
        If a flow or a coefficient is below zero.
    """
    q = np.asarray(flow, dtype=np.float64)
    not_negative("flow", np.where(np.isnan(q), 0.0, q), "m3/s")
    loss = not_negative("coefficient", coefficient, "m/(m3/s)2")
    return np.asarray(-loss * q * q, dtype=np.float64)


def bypass_share(
    flow: ArrayLike, *, manifold_head: ArrayLike, coefficient: ArrayLike
) -> FloatArray:
    """Return the share of the station's flow that goes through the bypass.

    Parameters
    ----------
    flow : array_like, shape (...)
        Flow of the station, zero or more. [m3/s]
    manifold_head : array_like, shape (...)
        Head between the manifolds. [m]
    coefficient : array_like, shape (...)
        Loss of the bypass over flow squared, above zero. [m/(m3/s)2]

    Returns
    -------
    ndarray, broadcast shape
        0 to 1; zero at no flow. [-]
    """
    through = bypass_flow_at(manifold_head, coefficient=coefficient)
    total = np.asarray(flow, dtype=np.float64)
    some = total > 0
    return np.where(some, np.minimum(through / np.where(some, total, 1.0), 1.0), 0.0)


def bypass_on_system(system: SystemCurve, *, coefficient: ArrayLike) -> BypassFlow:
    """Return what flows through the bypass with all pumps off, on each system.

    Parameters
    ----------
    system : SystemCurve
        Head asked between the manifolds for a flow, rising, for C cases: below zero at no flow
        where the supply stands above the zone.
    coefficient : array_like, shape () or (C,)
        Loss of the bypass over flow squared, above zero. [m/(m3/s)2]

    Returns
    -------
    BypassFlow
        Flow and head; the check valve stays shut where the system asks for head at no flow.

    Raises
    ------
    ValueError
        If a coefficient is not above zero.
    """
    count = system.cases
    every = np.arange(count)
    loss = np.broadcast_to(positive("coefficient", coefficient, "m/(m3/s)2"), (count,))
    static = system.head(np.zeros(count), case=every)
    opens = static < 0

    def falls_short(flow: FloatArray) -> FloatArray:
        """Return the head that is left over: positive means that more can flow."""
        return np.asarray(-loss * flow**2 - system.head(flow, case=every), dtype=np.float64)

    high = np.full(count, _FIRST_FLOW)
    for _ in range(_DOUBLINGS):
        more = opens & (falls_short(high) > 0)
        if not more.any():
            break
        high = np.where(more, 2.0 * high, high)
    root = falling_root(falls_short, np.zeros(count), high).root
    flow = np.where(opens, root, 0.0)
    asked = system.head(flow, case=every)
    return BypassFlow(
        flow=flow,
        head=asked,
        opens=np.asarray(opens, dtype=np.bool_),
        energy_residual=np.where(opens, np.abs(asked + loss * flow**2), 0.0),
    )
