"""A reducing valve on the discharge of the set: the head that it takes away."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import BoolArray, FloatArray, finite, not_negative, positive
from server.hydraulics.water import GRAVITY


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class ReducedHead:
    """What a reducing valve leaves; arrays of one shape, nan where the pumps' head is."""

    head: FloatArray  # behind the valve, from the suction manifold [m]
    lost: FloatArray  # across the valve, all of it [m]
    throttled: FloatArray  # of that, more than the open valve loses: wasted [m]
    shortfall: FloatArray  # set head less head behind the valve; zero where held [m]
    throttles: BoolArray  # False: wide open, the set head is not held or just met


def reduced_head(
    pump_head: ArrayLike, *, set_head: ArrayLike, open_loss: ArrayLike
) -> ReducedHead:
    """Return the head behind a reducing valve.

    Parameters
    ----------
    pump_head : array_like, shape (...)
        Head of the set between the manifolds at the flow; nan passes through. [m]
    set_head : array_like, shape (...)
        Head that the valve is set to leave behind it, as head from the suction manifold. [m]
    open_loss : array_like, shape (...)
        Head lost in the valve fully open at the flow, zero or more. [m]

    Returns
    -------
    ReducedHead
        Set head where there is enough before the valve, else what the open valve lets through.

    Raises
    ------
    ValueError
        If a set head is no number or an open loss is below zero.

    References
    ----------
    .. [1] Valve fully open: loss of its flow coefficient, IEC 60534-2-1 (`fittings.k_from_kv`).
    """
    before = np.asarray(pump_head, dtype=np.float64)
    wanted = finite("set_head", set_head, "m")
    loss = not_negative("open_loss", open_loss, "m")
    before, wanted, loss = np.broadcast_arrays(before, wanted, loss)
    left = np.minimum(wanted, before - loss)
    lost = before - left
    return ReducedHead(
        head=left,
        lost=lost,
        throttled=lost - loss,
        shortfall=wanted - left,
        throttles=np.asarray(before - loss > wanted, dtype=np.bool_),
    )


def wasted_power(flow: ArrayLike, *, head: ArrayLike, density: ArrayLike) -> FloatArray:
    """Return the power that water gives up over a loss of head.

    Parameters
    ----------
    flow : array_like, shape (...)
        Flow, zero or more. [m3/s]
    head : array_like, shape (...)
        Head lost, zero or more. [m]
    density : array_like, shape (...)
        Density of the water, above zero. [kg/m3]

    Returns
    -------
    ndarray, broadcast shape
        density x g x flow x head: at the water, before pump, motor and drive. [W]

    Raises
    ------
    ValueError
        If an argument is outside its range.

    Examples
    --------
    >>> float(wasted_power(0.060, head=150e3 / (1000 * GRAVITY), density=1000).round(6))
    9000.0
    """
    weight = positive("density", density, "kg/m3") * GRAVITY
    q, lost = not_negative("flow", flow, "m3/s"), not_negative("head", head, "m")
    return np.asarray(weight * q * lost, dtype=np.float64)
