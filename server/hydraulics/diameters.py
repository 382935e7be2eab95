"""A curve for a diameter between two tested ones, along equal fractions of best efficiency."""

from collections.abc import Callable, Sequence

import numpy as np

from server.hydraulics.arrays import FloatArray
from server.hydraulics.errors import CurveRefused
from server.hydraulics.pump_curve import PumpCurve, pump_curve

_SAME = 1e-9  # fractions of best efficiency flow nearer than this are one row [-]
_Reading = Callable[[PumpCurve, FloatArray], FloatArray]


def curve_for_diameter(
    curves: Sequence[PumpCurve], *, diameters: Sequence[float], diameter: float
) -> PumpCurve:
    """Return the curve of a diameter among several tested ones.

    Parameters
    ----------
    curves : sequence of PumpCurve, length T of 1 or more
        One for each tested diameter, at one tested speed.
    diameters : sequence of float, length T
        Their impeller diameters, above zero, all different. [m]
    diameter : float
        Diameter wanted, between the smallest and the largest. [m]

    Returns
    -------
    PumpCurve
        A tested curve itself where its diameter is wanted; else rows between the neighbours at
        the fractions of best efficiency flow that both cover.

    Raises
    ------
    CurveRefused
        `diameters_uneven`, `tested_speeds_differ`, `diameter_outside_tested` or
        `best_efficiency_unknown_between_diameters`.

    Notes
    -----
    At one fraction of best efficiency flow, flow, efficiency and NPSH required run straight
    with the diameter, head with its square and shaft power with its cube: curves that obey the
    radial trim rule are met exactly, and tested ones are met at their own diameter.

    References
    ----------
    .. [1] Interpolation along similar points is common practice.
    """
    order = sorted(range(len(curves)), key=lambda i: diameters[i])
    sizes = [float(diameters[i]) for i in order]
    tested = [curves[i] for i in order]
    _check(tested, sizes, diameter)
    for curve, size in zip(tested, sizes, strict=True):
        if size == diameter:
            return curve
    above = int(np.searchsorted(sizes, diameter))
    return _between(
        (tested[above - 1], tested[above]), (sizes[above - 1], sizes[above]), diameter
    )


def _check(curves: Sequence[PumpCurve], sizes: Sequence[float], wanted: float) -> None:
    """Refuse what cannot be read between."""
    if not curves or min(sizes) <= 0 or len(set(sizes)) != len(sizes):
        raise CurveRefused(
            "diameters_uneven", "diameters must be above zero and each tested once"
        )
    if len({curve.tested_speed for curve in curves}) > 1:
        raise CurveRefused(
            "tested_speeds_differ", "curves of several diameters must be of one tested speed"
        )
    if not sizes[0] <= wanted <= sizes[-1]:
        raise CurveRefused(
            "diameter_outside_tested",
            f"diameter must lie between the tested {sizes[0]:g} and {sizes[-1]:g} m;"
            f" got {wanted:g} m",
        )


def _between(
    pair: tuple[PumpCurve, PumpCurve], sizes: tuple[float, float], wanted: float
) -> PumpCurve:
    """Return the curve between two neighbours."""
    small, large = pair
    if small.best is None or large.best is None:
        raise CurveRefused(
            "best_efficiency_unknown_between_diameters",
            "the best efficiency flow of both neighbours must be known to read between them",
        )
    ends = (small.best.flow, large.best.flow)

    def share(power: int) -> float:
        low, high = sizes[0] ** power, sizes[1] ** power
        return (wanted**power - low) / (high - low)

    best_flow = ends[0] + share(1) * (ends[1] - ends[0])
    fraction = _fractions(small.rows.flow / ends[0], large.rows.flow / ends[1])

    def mixed(reading: _Reading, power: int) -> FloatArray:
        low, high = (
            reading(c, np.clip(fraction * end, c.first_flow, c.last_flow))
            for c, end in zip(pair, ends, strict=True)
        )
        return np.asarray(low + share(power) * (high - low), dtype=np.float64)

    powers = np.full(fraction.shape, np.nan)
    if small.power_curve is not None and large.power_curve is not None:
        powers = mixed(lambda c, q: c.shaft_power(q, density=1.0), 3)
    elif (
        small.shutoff_power is not None and large.shutoff_power is not None and fraction[0] == 0
    ):
        powers[0] = small.shutoff_power + share(3) * (large.shutoff_power - small.shutoff_power)
    known = small.best.efficiency is not None and large.best.efficiency is not None
    best_efficiency = (
        (1 - share(1)) * (small.best.efficiency or 0) + share(1) * (large.best.efficiency or 0)
        if known
        else None
    )
    return pump_curve(
        fraction * best_flow,
        head=mixed(lambda c, q: c.head(q), 2),
        efficiency=_cells(mixed(lambda c, q: c.efficiency(q), 1)),
        shaft_power=_cells(powers),
        npsh_required=_cells(mixed(lambda c, q: c.npsh_required(q), 1)),
        bep_flow=best_flow,
        bep_efficiency=best_efficiency,
        tested_speed=small.tested_speed,
        stages=small.stages,
        eyes=small.eyes,
    )


def _fractions(one: FloatArray, other: FloatArray) -> FloatArray:
    """Return the rows of both as fractions of best efficiency flow, in the common range."""
    low, high = max(one[0], other[0]), min(one[-1], other[-1])
    every = np.unique(np.concatenate([one, other, [low, high]]))
    inside = every[(every >= low) & (every <= high)]
    apart = np.concatenate([[True], np.diff(inside) > _SAME])
    kept = inside[apart]
    kept[-1] = high
    return np.asarray(kept, dtype=np.float64)


def _cells(column: FloatArray) -> list[float | None]:
    """Return a column with its empty cells."""
    return [None if np.isnan(cell) else float(cell) for cell in column]
