"""The station as the studies see it: SI floats, arrays and hydraulics objects, no document."""

from dataclasses import dataclass, replace
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.hydraulics.conduit import Conduit
from server.hydraulics.leg_curve import LegCurve
from server.hydraulics.pump_curve import PumpCurve
from server.hydraulics.suction import npsh_available
from server.hydraulics.supply import FixedGradeSupply, FlowTestSupply
from server.hydraulics.water import GRAVITY, LOWEST_ALTITUDE, atmospheric_pressure
from server.studies.duty_result import PointFacts, SlotFacts
from server.studies.shapes import PipeAge, SupplyState

Floats = NDArray[np.float64]
Flags = NDArray[np.bool_]
Indices = NDArray[np.intp]
SupplyKind = Literal["main", "tank", "grade_line"]
ControlKind = Literal[
    "zone_point_pressure",
    "discharge_pressure",
    "flow_compensated",
    "fixed_speed",
    "reducing_valve",
    "levels",
    "held_flow",
]
ZONE_EXPONENT = 1.852  # of the flow in zone losses [-]
HEAVIEST_AIR = float(atmospheric_pressure(LOWEST_ALTITUDE))  # absolute [Pa]


@dataclass(frozen=True, slots=True, kw_only=True)
class Water:
    """Density and viscosity for friction, vapour pressure at the highest temperature."""

    density: float  # [kg/m3]
    kinematic_viscosity: float  # [m2/s]
    vapour_pressure: float  # absolute [Pa]
    atmosphere: float  # absolute, weather allowance taken off; nan without an altitude [Pa]

    @property
    def weight(self) -> float:
        """Pressure of a metre of water [Pa/m]."""
        return self.density * GRAVITY

    @property
    def lowest_pressure(self) -> float:
        """Gauge pressure below which there is no water [Pa].

        Without an altitude by the air of the lowest ground there is, the heaviest: then too no
        pressure is stated that could not be anywhere.
        """
        return self.vapour_pressure - (
            HEAVIEST_AIR if self.atmosphere != self.atmosphere else self.atmosphere
        )


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Supply:
    """The supply with its three states as shifts of one curve; nan for a state not stated."""

    kind: SupplyKind
    source: FlowTestSupply | FixedGradeSupply
    draw_in_test: float  # of the station itself on the test day [m3/s]
    shift: Floats  # (3,) low, normal, high [Pa]
    water: Water
    connection_level: float  # nan when absent [m]
    suction_gauge_level: float  # nan when absent [m]
    cut_out: float = float("nan")  # shift of a tank's fourth state, where the pumps stop [Pa]
    outlet_level: float = float("nan")  # of a tank's outlet lip [m]
    outlet_bore: float = float("nan")  # [m]

    def grade(self, draw: ArrayLike, shift: ArrayLike) -> Floats:
        """Return the grade at the connection for a draw and a state's shift."""
        moved = np.asarray(shift, dtype=np.float64)
        known = np.isfinite(moved)
        grade = self.source.grade(
            np.asarray(draw) - self.draw_in_test,
            density=self.water.density,
            shift_pressure=np.where(known, moved, 0.0),
        )
        return np.where(known, grade, np.nan)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Line:
    """Reaches in series at both ages; neighbours of one friction law lie in one conduit."""

    new: tuple[Conduit, ...]  # empty when that age is not known
    aged: tuple[Conduit, ...]

    def reach_losses(self, flow: ArrayLike, aged: ArrayLike, viscosity: float) -> Floats:
        """Return the head lost in each reach at the age that each flow asks for, (..., R)."""
        old = np.asarray(aged, dtype=np.bool_)
        at = np.asarray(flow, dtype=np.float64)
        # with one age only, the caller has asked `knows`, or nothing flows and nothing is lost
        if not self.new or (self.aged and bool(old.all())):
            return _lost(self.aged, at, viscosity)
        if not self.aged or not bool(old.any()):
            return _lost(self.new, at, viscosity)
        worn = np.broadcast_to(old, at.shape)[..., None]
        return np.where(worn, _lost(self.aged, at, viscosity), _lost(self.new, at, viscosity))

    def velocities(self, flow: ArrayLike) -> Floats:
        """Return the velocity in each reach, shape (..., R)."""
        return np.concatenate([c.velocities(flow) for c in self.aged or self.new], axis=-1)

    def with_barrel_out(self, reach: int) -> "Line":
        """Return the line with one barrel of a reach shut; the reach must have two or more."""
        return replace(
            self, new=_less_one_barrel(self.new, reach), aged=_less_one_barrel(self.aged, reach)
        )

    def knows(self, age: PipeAge) -> bool:
        """Return whether every reach has a wall at that age."""
        return bool(self.aged if age == "aged" else self.new)


def _less_one_barrel(conduits: tuple[Conduit, ...], reach: int) -> tuple[Conduit, ...]:
    """Return conduits with one barrel of a reach shut, reaches counted through all of them."""
    changed = []
    for one in conduits:
        inside = 0 <= reach < one.reaches
        changed.append(one.with_barrel_out(reach) if inside else one)
        reach -= one.reaches
    return tuple(changed)


def _lost(conduits: tuple[Conduit, ...], flow: Floats, viscosity: float) -> Floats:
    parts = [c.reach_head_loss(flow, kinematic_viscosity=viscosity) for c in conduits]
    return parts[0] if len(parts) == 1 else np.concatenate(parts, axis=-1)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class ZonePoints:
    """The named points, P of them; nan where a figure is absent."""

    facts: tuple[PointFacts, ...]
    elevation: Floats  # (P,) [m]
    coefficient: Floats  # (P,) c in h = c (Q_domestic + a Q_fire)^1.852
    fire_share: Floats  # (P,) a
    branch_coefficient: Floats  # (P,) of the hydrant's own branch, 0 where there is none
    least_normal: Floats  # (P,) pressure asked without fire, -inf where none is [Pa]
    least_fire: Floats  # (P,) during a fire, at a point that is not the hydrant [Pa]
    least_residual: Floats  # (P,) at the operating hydrant [Pa]

    def loss(self, domestic: ArrayLike, fire: ArrayLike, fire_point: ArrayLike) -> Floats:
        """Return the loss from the end of the main to each point, shape (..., P)."""
        burning = np.asarray(fire, dtype=np.float64)[..., None]
        carried = np.asarray(domestic, dtype=np.float64)[..., None] + self.fire_share * burning
        flowing = np.asarray(fire_point)[..., None] == np.arange(len(self.facts))
        branch = np.where(flowing, self.branch_coefficient * burning**ZONE_EXPONENT, 0.0)
        return self.coefficient * np.maximum(carried, 0.0) ** ZONE_EXPONENT + branch


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Unit:
    """A pump in its leg; slots with the same pump, curve, diameter, leg and drive share one."""

    curve: PumpCurve
    leg: LegCurve  # the curve less the loss of both branches
    suction_coefficient: float  # c in h = c q^2 [m/(m3/s)2]
    discharge_coefficient: float  # check valve included
    suction_bore: float  # [m]
    discharge_bore: float  # [m]
    cracking_head: float  # of the check valve [m]
    full_open_velocity: float  # of the check valve [m/s]
    full_open_assumed: bool
    npsh_exponent: float
    fixed: bool  # without a drive: it runs at its tested speed
    motor_efficiency: float  # nan when absent
    drive_efficiency: float


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Slot:
    """A place in the set."""

    facts: SlotFacts
    unit: int  # index into units
    from_year: int  # order of the horizon from which it is installed, 0 the first

    @property
    def preferred(self) -> tuple[float, float]:
        """Preferred region, ratios of best-efficiency flow."""
        return self.facts.preferred_low, self.facts.preferred_high


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Control:
    """What is held, where and between which speeds."""

    kind: ControlKind
    point: int  # index into points, -1: the discharge gauge
    pressure: float  # nan where no pressure is held [Pa]
    discharge_gauge_level: float  # nan when absent [m]
    lowest_speed: float
    highest_speed: float
    flow: float = float("nan")  # held, or at which a rising set point is full [m3/s]
    pressure_at_no_flow: float = float("nan")  # of a rising set point [Pa]
    valve_loss: float = 0.0  # of a reducing valve wide open, over flow squared [m/(m3/s)2]
    stages: tuple[tuple[float, float], ...] = ()  # start and stop level of each, nan if absent


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class ZoneTank:
    """A tank at the end of the main."""

    levels: Floats  # (3,) low, normal, top; nan where absent [m]
    area: float  # nan when absent [m2]
    fire_only: bool  # shut off the zone by a check valve until the grade falls below it
    before_draw: Floats  # (R,) share of each reach of the main before the demand is drawn


@dataclass(frozen=True, slots=True, kw_only=True)
class Scenario:
    """A scenario with its flows."""

    id: str
    horizon: str
    horizon_order: int
    domestic: float  # [m3/s]
    fire: float  # [m3/s]
    fire_point: int  # -1 none
    is_fire: bool
    shown: SupplyState
    pipes: PipeAge
    largest_out: bool
    low_shift: float  # of the supply's low state in that year [Pa]
    tank_state: int = 1  # 0 low, 1 normal, 2 top
    way: int = 0  # which of the ways of the station: all barrels, or one out


@dataclass(frozen=True, slots=True, kw_only=True)
class Growth:
    """The demand of one horizon, for firm capacity; None where not entered."""

    id: str
    order: int
    year: int | None
    maximum_day: float | None
    peak_hour: float | None
    fires: tuple[
        tuple[str, float, float, int], ...
    ]  # (fire id, domestic beside, fire flow, point)
    low_shift: float


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Bypass:
    """A line round the pumps; its loss over flow squared."""

    coefficient: float


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class LoweredSet:
    """Everything the duty of one set needs."""

    pump_set: str
    water: Water
    supply: Supply
    route: Line  # suction line, then discharge main: one flow, so one reading gives both
    single_reaches: tuple[str, ...]  # ids of reaches with one barrel
    ways: tuple[Line, ...]  # the route, and the route with one barrel out, as scenarios ask
    suction_reaches: int  # how many of its reaches lie before the pumps
    points: ZonePoints
    units: tuple[Unit, ...]
    slots: tuple[Slot, ...]
    control: Control
    eye_level: float  # nan when absent [m]
    scenarios: tuple[Scenario, ...]
    growth: tuple[Growth, ...]
    bypass: Bypass | None
    tank: ZoneTank | None  # None in a closed zone
    needs_missing: tuple[tuple[str, str], ...]

    def npsh_available(self, suction_grade: Floats, branch_loss: ArrayLike) -> Floats:
        """Return the NPSH available at the pumps' eye [m]; nan where it is not known."""
        return npsh_available(
            suction_grade,
            eye_level=self.eye_level,
            branch_loss=branch_loss,
            atmospheric_pressure=self.water.atmosphere,
            vapour_pressure=self.water.vapour_pressure,
            density=self.water.density,
        )

    @property
    def floats(self) -> bool:
        """Whether a tank floats on the zone, so that the flow follows from the pumps."""
        return self.tank is not None and not self.tank.fire_only
