"""A pump's curve at its tested speed, read between its rows and never outside them."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import FloatArray, read_only
from server.hydraulics.best_efficiency import BestEfficiencyPoint, efficiency_curve
from server.hydraulics.errors import CurveRefused
from server.hydraulics.piecewise_cubic import PiecewiseCubic, shape_preserving
from server.hydraulics.pump_rows import Column, PumpRows, pump_rows
from server.hydraulics.smoothed_head import Smoothing
from server.hydraulics.specific_speed import specific_speed
from server.hydraulics.water import GRAVITY

COLD_WATER_DENSITY = 998.2  # of test water at 20 degC, where a row gives power only [kg/m3]
DISAGREEMENT_LIMIT = 0.03  # between power typed and power from efficiency, method section 7 [-]
FEWEST_POWER_ROWS = 3  # from which the power column is used as the table [-]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class PumpCurve:
    """Head, efficiency, shaft power and NPSH required against flow at the tested speed.

    Made by `pump_curve`. Every reading is nan outside the rows that hold it.

    Attributes
    ----------
    rows : PumpRows
        Rows as typed.
    tested_speed : float
        Speed of the test. [rev/min]
    stages, eyes : int
        Stages in series, suction eyes of the first impeller. [-]
    head_curve : PiecewiseCubic
        Head [m] against flow [m3/s].
    efficiency_curve, power_curve, npsh_curve : PiecewiseCubic or None
        None where too few rows hold the quantity.
    shutoff_power : float or None
        Shaft power at zero flow, where a row states it. [W]
    best : BestEfficiencyPoint or None
        Stated by the maker, else fitted; None: unknown.
    fitted_best : BestEfficiencyPoint or None
        Top of the efficiency curve, kept for comparison.
    smoothing : Smoothing or None
        How the head is drawn where it is smoothed; None: through the rows.
    """

    rows: PumpRows
    tested_speed: float
    stages: int
    eyes: int
    head_curve: PiecewiseCubic
    efficiency_curve: PiecewiseCubic | None
    power_curve: PiecewiseCubic | None
    npsh_curve: PiecewiseCubic | None
    shutoff_power: float | None
    best: BestEfficiencyPoint | None
    fitted_best: BestEfficiencyPoint | None
    smoothing: Smoothing | None = None

    @property
    def heads(self) -> FloatArray:
        """Heads of the curve at the flows of the rows [m]."""
        return self.rows.head if self.smoothing is None else self.smoothing.fitted

    @property
    def first_flow(self) -> float:
        """Flow of the first row [m3/s]."""
        return self.head_curve.first

    @property
    def last_flow(self) -> float:
        """Flow of the last row [m3/s]."""
        return self.head_curve.last

    @property
    def last_head(self) -> float:
        """Head of the last row [m]."""
        return float(self.heads[-1])

    @property
    def shutoff_head(self) -> float | None:
        """Head at zero flow; None when the first row is above zero flow [m]."""
        return float(self.heads[0]) if self.rows.flow[0] == 0 else None

    @property
    def peak_head(self) -> float:
        """Highest head of the curve [m]."""
        return (
            float(self.rows.head.max()) if self.smoothing is None else self.smoothing.peak_head
        )

    @property
    def falls_throughout(self) -> bool:
        """Whether head falls from every row to the next: asked of pumps in parallel."""
        return bool(np.all(np.diff(self.heads) < 0))

    @property
    def hump(self) -> float:
        """Height of the peak over the first row, zero when the first row is the highest [m]."""
        return self.peak_head - float(self.heads[0])

    @property
    def rise_to_shutoff(self) -> float | None:
        """Shut-off head over head at best efficiency, less 1; None if either is unknown [-]."""
        if self.best is None or self.shutoff_head is None:
            return None
        return self.shutoff_head / float(self.head(self.best.flow)) - 1.0

    @property
    def steepness(self) -> float | None:
        """Per cent of head lost for one per cent of flow at best efficiency [-]."""
        if self.best is None:
            return None
        slope = float(self.head_curve.slope(self.best.flow))
        return -slope * self.best.flow / float(self.head(self.best.flow))

    @property
    def specific_speed(self) -> float | None:
        """Specific speed per stage and per eye; None if best efficiency is unknown [SI]."""
        if self.best is None:
            return None
        return float(
            specific_speed(
                self.tested_speed,
                flow=self.best.flow,
                head=self.head(self.best.flow),
                stages=self.stages,
                eyes=self.eyes,
            )
        )

    @property
    def bep_disagreement(self) -> float | None:
        """Maker's best efficiency flow over the fitted one, less 1; None if one is missing."""
        if self.best is None or self.fitted_best is None:
            return None
        return self.best.flow / self.fitted_best.flow - 1.0

    def head(self, flow: ArrayLike) -> FloatArray:
        """Return the head, nan outside the rows [m]."""
        return self.head_curve(flow)

    def efficiency(self, flow: ArrayLike) -> FloatArray:
        """Return the efficiency ratio, nan where it is not known [-]."""
        return _read(self.efficiency_curve, flow)

    def npsh_required(self, flow: ArrayLike) -> FloatArray:
        """Return the NPSH required, nan where it is not known [m]."""
        return _read(self.npsh_curve, flow)

    def shaft_power(self, flow: ArrayLike, *, density: ArrayLike) -> FloatArray:
        """Return the shaft power, nan where it is not known.

        Parameters
        ----------
        flow : array_like, shape (...)
            Flow at tested speed. [m3/s]
        density : array_like, shape (...)
            Density of the water; the power column is taken as typed. [kg/m3]

        Returns
        -------
        ndarray, broadcast shape
            Shaft power: the power column where three rows or more hold it, else density x g x
            flow x head / efficiency; at zero flow only what a row states. [W]
        """
        q, rho = np.broadcast_arrays(np.asarray(flow, dtype=np.float64), np.asarray(density))
        if self.power_curve is not None:
            return self.power_curve(q)
        efficiency = self._rising_efficiency(q)
        known = (q > 0) & (efficiency > 0)
        water = rho * GRAVITY * q * self.head(q)
        power = np.where(known, water / np.where(known, efficiency, 1.0), np.nan)
        shut = np.nan if self.shutoff_power is None else self.shutoff_power
        return np.where(q == 0, shut, power)

    def _rising_efficiency(self, flow: FloatArray) -> FloatArray:
        """Return the efficiency, before its first row above zero no lower than a straight line.

        A column that starts flat gives next to no efficiency there, and a power without end
        that the rows do not show. One that starts steep, as it should, stays as it is.
        """
        given = self.rows.flow[np.isfinite(self.rows.efficiency) & (self.rows.efficiency > 0)]
        efficiency = self.efficiency(flow)
        if not given.size or given[0] <= 0:
            return efficiency
        line = float(self.efficiency(given[0])) * flow / given[0]
        return np.where(flow < given[0], np.maximum(efficiency, line), efficiency)

    def power_disagreement(self, *, density: float = COLD_WATER_DENSITY) -> FloatArray:
        """Return power typed over power from the typed efficiency, less 1, for each row.

        Notes
        -----
        nan where a row lacks one of them or stands at zero flow. Above `DISAGREEMENT_LIMIT`
        without sign the two columns cannot both be right.
        """
        rows = self.rows
        both = (rows.flow > 0) & (rows.efficiency > 0) & np.isfinite(rows.shaft_power)
        water = density * GRAVITY * rows.flow * rows.head
        from_efficiency = water / np.where(both, rows.efficiency, 1.0)
        ratio = rows.shaft_power / np.where(both & (water > 0), from_efficiency, 1.0)
        return np.where(both & (water > 0), ratio - 1.0, np.nan)


def pump_curve(
    flow: Column,
    *,
    head: Column,
    tested_speed: float,
    efficiency: Column = None,
    shaft_power: Column = None,
    npsh_required: Column = None,
    bep_flow: float | None = None,
    bep_efficiency: float | None = None,
    stages: int = 1,
    eyes: int = 1,
) -> PumpCurve:
    """Return the curve through the rows of a pump test.

    Parameters
    ----------
    flow : sequence of float, length R of 3 or more
        Flow, zero or more, rising. [m3/s]
    head : sequence of float, length R
        Head of the pump at tested speed, falling toward the last row. [m]
    tested_speed : float
        Speed of the test, above zero. [rev/min]
    efficiency, shaft_power, npsh_required : sequence of float or None, length R, or None
        Efficiency as a ratio [-], shaft power [W], NPSH required [m]; cells may be empty. A row
        with power and no efficiency gives its efficiency for cold water.
    bep_flow : float, optional
        Best efficiency flow stated by the maker, inside the rows; overrides the fitted one.
        [m3/s]
    bep_efficiency : float, optional
        Efficiency stated with it, 0 to 1. [-]
    stages, eyes : int
        Stages in series, suction eyes of the first impeller. [-]

    Raises
    ------
    CurveRefused
        With a reason code and the row, where one row is at fault.

    References
    ----------
    .. [1] Head: monotone cubic of Fritsch and Butland (1984); efficiency: see
       `best_efficiency.efficiency_curve`.
    """
    rows = pump_rows(
        flow,
        head=head,
        efficiency=efficiency,
        shaft_power=shaft_power,
        npsh_required=npsh_required,
    )
    if not (np.isfinite(tested_speed) and tested_speed > 0):
        raise CurveRefused(
            "tested_speed_not_above_zero",
            f"tested_speed must be above zero; got {tested_speed:g} rev/min",
        )
    q = rows.flow
    known = _efficiency_of_rows(rows)
    given = np.isfinite(known)
    fitted = efficiency_curve(q[given], known[given]) if np.count_nonzero(given) > 1 else None
    if fitted is not None and fitted.best is not None and (fitted.best.efficiency or 0.0) > 1:
        raise CurveRefused(
            "efficiency_above_one", "efficiency must not be above 1 between its rows"
        )
    fitted_best = None if fitted is None else fitted.best
    best = fitted_best
    if bep_flow is not None:
        best = _stated_best(rows, bep_flow, bep_efficiency)

    has_power = np.isfinite(rows.shaft_power)
    return PumpCurve(
        rows=rows,
        tested_speed=float(tested_speed),
        stages=stages,
        eyes=eyes,
        head_curve=shape_preserving(q, rows.head),
        efficiency_curve=None if fitted is None else fitted.curve,
        power_curve=_through(q, rows.shaft_power, FEWEST_POWER_ROWS),
        npsh_curve=_through(q, rows.npsh_required, 2),
        shutoff_power=float(rows.shaft_power[0]) if q[0] == 0 and has_power[0] else None,
        best=best,
        fitted_best=fitted_best,
    )


def _efficiency_of_rows(rows: PumpRows) -> FloatArray:
    """Return the efficiency of each row as typed, else from its power, else nan."""
    typed = np.isfinite(rows.efficiency)
    power = np.where(np.isfinite(rows.shaft_power), rows.shaft_power, 1.0)
    water = COLD_WATER_DENSITY * GRAVITY * rows.flow * np.maximum(rows.head, 0.0)
    derived = np.where(np.isfinite(rows.shaft_power), water / power, np.nan)
    # A single power at shut-off is a fact about shut-off, not an efficiency column.
    if np.count_nonzero(np.isfinite(rows.shaft_power) & (rows.flow > 0)) == 0:
        derived = np.full_like(derived, np.nan)
    if np.any(derived[~typed] > 1):
        row = int(np.flatnonzero(~typed & (derived > 1))[0])
        raise CurveRefused(
            "power_below_water_power",
            f"shaft_power must be above the power given to the water; see row {row + 1}",
            row=row,
        )
    return read_only(np.where(typed, rows.efficiency, derived))


def _stated_best(rows: PumpRows, flow: float, efficiency: float | None) -> BestEfficiencyPoint:
    """Check the maker's best efficiency point."""
    if not rows.flow[0] <= flow <= rows.flow[-1] or flow <= 0:
        raise CurveRefused(
            "bep_outside_rows",
            f"bep_flow must lie between the first and the last row; got {flow:g} m3/s",
        )
    if efficiency is not None and not 0 < efficiency <= 1:
        raise CurveRefused(
            "efficiency_above_one",
            f"bep_efficiency must be between 0 and 1; got {efficiency:g}",
        )
    return BestEfficiencyPoint(flow=float(flow), efficiency=efficiency)


def _through(flow: FloatArray, column: FloatArray, fewest: int) -> PiecewiseCubic | None:
    """Return a shape-preserving curve through the filled cells, None if they are too few."""
    filled = np.isfinite(column)
    if np.count_nonzero(filled) < fewest:
        return None
    return shape_preserving(flow[filled], column[filled])


def _read(curve: PiecewiseCubic | None, flow: ArrayLike) -> FloatArray:
    """Read a curve that may not be known."""
    at = np.asarray(flow, dtype=np.float64)
    return np.full(at.shape, np.nan) if curve is None else curve(at)
