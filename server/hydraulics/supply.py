"""What the station draws from: a main known by a flow test, a fixed grade line, a tank."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.hydraulics.arrays import FloatArray, finite, read_only
from server.hydraulics.errors import SupplyRefused
from server.hydraulics.water import GRAVITY

FLOW_TEST_EXPONENT = 1.0 / 0.54  # of the flow, the inverse of the Hazen-Williams 0.54 [-]


@dataclass(frozen=True, slots=True, kw_only=True)
class FlowTestSupply:
    """A street main known by one hydrant flow test.

    The pressure falls from static with (draw / test flow) to the power 1/0.54, where the draw
    is taken in addition to what the main carried on the day of the test.

    Attributes
    ----------
    gauge_level : float
        Elevation of the gauge at the residual hydrant. [m]
    static_pressure, residual_pressure : float
        Gauge pressures before and during the test; residual below static. [Pa]
    test_flow : float
        Flow drawn during the test, above zero. [m3/s]
    exponent : float
        Of the flow. [-]

    References
    ----------
    .. [1] NFPA 291, Recommended Practice for Water Flow Testing and Marking of Hydrants, 4.10.
    """

    gauge_level: float
    static_pressure: float
    residual_pressure: float
    test_flow: float
    exponent: float = FLOW_TEST_EXPONENT

    def __post_init__(self) -> None:
        """Refuse a test that cannot give a falling curve."""
        for name, unit in (
            ("gauge_level", "m"),
            ("static_pressure", "Pa"),
            ("residual_pressure", "Pa"),
            ("test_flow", "m3/s"),
            ("exponent", "(no unit)"),
        ):
            finite(name, getattr(self, name), unit)
        if self.test_flow <= 0:
            raise SupplyRefused(
                "test_flow_not_positive",
                f"test_flow must be above zero; got {self.test_flow:g} m3/s",
            )
        if self.residual_pressure >= self.static_pressure:
            raise SupplyRefused(
                "residual_not_below_static",
                "residual_pressure must be below static_pressure;"
                f" got {self.residual_pressure:g} Pa against {self.static_pressure:g} Pa",
            )
        if self.exponent < 1:
            raise SupplyRefused(
                "exponent_below_one", f"exponent must be 1 or more; got {self.exponent:g}"
            )

    @property
    def drop(self) -> float:
        """Pressure drop of the test [Pa]."""
        return self.static_pressure - self.residual_pressure

    @property
    def drop_ratio(self) -> float:
        """Pressure drop over static pressure of the test; inf when static is not above zero."""
        return self.drop / self.static_pressure if self.static_pressure > 0 else float("inf")

    def extrapolation_ratio(self, draw: ArrayLike) -> FloatArray:
        """Return draw over test flow: above 1 the curve is read past what was tested."""
        return np.asarray(finite("draw", draw, "m3/s") / self.test_flow, dtype=np.float64)

    def pressure(self, draw: ArrayLike, *, shift_pressure: ArrayLike = 0.0) -> FloatArray:
        """Return the gauge pressure at the gauge level.

        Parameters
        ----------
        draw : array_like, shape (...)
            Flow drawn by the station; negative when it feeds the main. [m3/s]
        shift_pressure : array_like, shape (...)
            Shift of the whole curve: negative for the low state. [Pa]

        Returns
        -------
        ndarray, broadcast shape
            Gauge pressure. [Pa]
        """
        relative = finite("draw", draw, "m3/s") / self.test_flow
        lost = self.drop * np.sign(relative) * np.abs(relative) ** self.exponent
        shift = finite("shift_pressure", shift_pressure, "Pa")
        return np.asarray(self.static_pressure + shift - lost, dtype=np.float64)

    def grade(
        self, draw: ArrayLike, *, density: ArrayLike, shift_pressure: ArrayLike = 0.0
    ) -> FloatArray:
        """Return the grade line in the main.

        Parameters
        ----------
        draw : array_like, shape (...)
            Flow drawn by the station. [m3/s]
        density : array_like, shape (...)
            Density of the water. [kg/m3]
        shift_pressure : array_like, shape (...)
            Shift of the whole curve: negative for the low state. [Pa]

        Returns
        -------
        ndarray, broadcast shape
            Grade: elevation of the gauge plus pressure head. [m]

        Notes
        -----
        The velocity head in the main is left out, as the test leaves it out: on the safe side.
        """
        head = self.pressure(draw, shift_pressure=shift_pressure) / (
            np.asarray(density) * GRAVITY
        )
        return np.asarray(self.gauge_level + head, dtype=np.float64)

    def flow_at(self, pressure: ArrayLike, *, shift_pressure: ArrayLike = 0.0) -> FloatArray:
        """Return the draw at which the pressure falls to a value: the inverse of `pressure`.

        Parameters
        ----------
        pressure : array_like, shape (...)
            Gauge pressure at the gauge level. [Pa]
        shift_pressure : array_like, shape (...)
            Shift of the whole curve. [Pa]

        Returns
        -------
        ndarray, broadcast shape
            Draw; negative where the pressure is above the shifted static. [m3/s]

        Notes
        -----
        With a pressure of 140 kPa (20 psi) this is the available flow of NFPA 291.
        """
        shift = finite("shift_pressure", shift_pressure, "Pa")
        relative = (
            self.static_pressure + shift - finite("pressure", pressure, "Pa")
        ) / self.drop
        inverse = np.sign(relative) * np.abs(relative) ** (1.0 / self.exponent)
        return np.asarray(self.test_flow * inverse, dtype=np.float64)


@dataclass(frozen=True, slots=True, kw_only=True)
class FixedGradeSupply:
    """A main whose grade does not depend on what the station draws."""

    grade_level: float  # [m]

    def __post_init__(self) -> None:
        """Refuse a level that is no number."""
        finite("grade_level", self.grade_level, "m")

    def grade(
        self, draw: ArrayLike, *, density: ArrayLike, shift_pressure: ArrayLike = 0.0
    ) -> FloatArray:
        """Return the grade for each draw, shifted by a pressure [m]."""
        shift = np.asarray(shift_pressure, dtype=np.float64) / (np.asarray(density) * GRAVITY)
        flow = finite("draw", draw, "m3/s")
        return np.asarray(self.grade_level + shift + np.zeros_like(flow), dtype=np.float64)


@dataclass(frozen=True, slots=True, kw_only=True)
class TankSupply:
    """A tank whose water level is the grade; the outlet gives the submergence."""

    water_level: float  # [m]
    outlet_level: float  # [m]

    def __post_init__(self) -> None:
        """Refuse a tank that stands empty at its outlet."""
        finite("water_level", self.water_level, "m")
        finite("outlet_level", self.outlet_level, "m")
        if self.water_level <= self.outlet_level:
            raise SupplyRefused(
                "tank_level_not_above_outlet",
                f"water_level must be above outlet_level; got {self.water_level:g} m"
                f" against {self.outlet_level:g} m",
            )

    @property
    def depth_over_outlet(self) -> float:
        """Water over the outlet [m]."""
        return self.water_level - self.outlet_level

    def grade(
        self, draw: ArrayLike, *, density: ArrayLike, shift_pressure: ArrayLike = 0.0
    ) -> FloatArray:
        """Return the water level for each draw; a pressure shift is added as head [m]."""
        fixed = FixedGradeSupply(grade_level=self.water_level)
        return fixed.grade(draw, density=density, shift_pressure=shift_pressure)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class FlowTestComparison:
    """Other flow tests held against the one that is the basis; arrays have shape (T,)."""

    expected_pressure: FloatArray  # of the basis at the other test's flow [Pa]
    shifted_pressure: FloatArray  # residual of the other test moved to the basis' static [Pa]
    difference: FloatArray  # shifted less expected: positive is a better main [Pa]
    drop_ratio: FloatArray  # of the other tests [-]


def compare_flow_tests(
    basis: FlowTestSupply, *, others: Sequence[FlowTestSupply]
) -> FlowTestComparison:
    """Compare flow tests of one main with the test that is the basis.

    Parameters
    ----------
    basis : FlowTestSupply
        The test that the design rests on.
    others : sequence of FlowTestSupply, length T
        Other tests of the same hydrants; each is shifted to the static pressure of the basis,
        so that only the fall with flow is compared.

    Returns
    -------
    FlowTestComparison
        Expected and shifted pressures at each other test's flow.
    """
    flows = np.array([test.test_flow for test in others], dtype=np.float64)
    drops = np.array([test.drop for test in others], dtype=np.float64)
    expected = basis.pressure(flows)
    shifted = basis.static_pressure - drops
    return FlowTestComparison(
        expected_pressure=read_only(expected),
        shifted_pressure=read_only(shifted),
        difference=read_only(shifted - expected),
        drop_ratio=read_only(np.array([test.drop_ratio for test in others], dtype=np.float64)),
    )


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class FlowTestFit:
    """One curve through several flow tests of a main, and how far they lie from it."""

    supply: FlowTestSupply
    residual: FloatArray  # measured less fitted residual pressure, shape (T,) [Pa]
    scatter: float  # largest of them without sign [Pa]


def fit_flow_tests(tests: Sequence[FlowTestSupply]) -> FlowTestFit:
    """Fit one fall with flow to several tests by least squares on the pressure drops.

    Parameters
    ----------
    tests : sequence of FlowTestSupply, length T of 1 or more
        Tests of one main. Gauge level and static pressure of the fit are those of the first:
        the statics differ by the hour and belong to the supply state, not to the fit.

    Returns
    -------
    FlowTestFit
        The fitted supply, stated at the largest test flow.

    Raises
    ------
    SupplyRefused
        If there is no test.
    """
    if not tests:
        raise SupplyRefused("no_flow_test", "tests must hold at least one flow test; got none")
    first = tests[0]
    flows = np.array([test.test_flow for test in tests], dtype=np.float64)
    drops = np.array([test.drop for test in tests], dtype=np.float64)
    power = flows**first.exponent
    coefficient = float(np.sum(drops * power) / np.sum(power**2))
    largest = float(flows.max())
    fitted = FlowTestSupply(
        gauge_level=first.gauge_level,
        static_pressure=first.static_pressure,
        residual_pressure=first.static_pressure - coefficient * largest**first.exponent,
        test_flow=largest,
        exponent=first.exponent,
    )
    residual = coefficient * power - drops
    return FlowTestFit(
        supply=fitted, residual=read_only(residual), scatter=float(np.abs(residual).max())
    )
