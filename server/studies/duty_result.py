"""The duty study's result: every case, every running combination, every slot.

Axes: C cases, K running combinations, N slots, P named points. Arrays are read-only SI floats;
a number without meaning is NaN and masked by `state` (never shown; null with a reason at every
edge).
"""

from dataclasses import dataclass, field
from enum import IntEnum
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from server.studies.shapes import Case, PipeAge, Stamp

Floats = NDArray[np.float64]
Places = NDArray[np.int8]


class Place(IntEnum):
    """Where the water column breaks on the suction side; the nearest to the supply is told."""

    NOWHERE = 0
    CONNECTION = 1
    SUCTION_GAUGE = 2
    PUMP_EYE = 3


class Binding(IntEnum):
    """What stands in the way where a control is not held or a state is not solved."""

    NOTHING = 0
    HEAD = 1
    """At the highest speed the pumps give less head than is asked."""
    LOWEST_SPEED = 2
    """At the lowest speed they give more."""
    CURVE_END = 3
    """The first pump is past its last row."""
    STATIC_HEAD = 4
    """No pump reaches the head asked at no flow."""
    CHECK_VALVE = 5
    """A unit is held shut by the others, or could not be started."""
    NO_WATER = 6
    """The suction side breaks."""
    FIXED_UNIT = 7
    """The units without a drive pass more than is asked, alone."""
    NOT_KNOWN = 8
    """A row or an input is missing."""


ZoneKind = Literal["closed", "floating_tank", "fire_tank"]


@dataclass(frozen=True, slots=True)
class Missing:
    """A field that is absent, or holds a kind that is not computed, and why it counts."""

    path: str
    reason: str  # code, "absent", "not_in_this_version", a refusal of the physics


@dataclass(frozen=True, slots=True)
class NotSolved:
    """The answer where a set cannot be solved at all: every field that stands in the way."""

    pump_set: str
    missing: tuple[Missing, ...]


@dataclass(frozen=True, slots=True, eq=False)
class SlotFacts:
    """What a slot is, as lowered: N entries in slot order."""

    id: str
    title: str
    role: str
    pump: str | None
    curve: str | None
    fixed: bool  # without a drive: at its tested speed
    diameter: float | None  # of the impeller, where one is stated [m]
    trim_ratio: float | None  # trimmed over tested diameter; None: not trimmed
    smoothing_residual: float | None  # [m] of the row furthest from a smoothed curve
    best_efficiency_flow: float | None  # [m3/s] at tested speed; None when unknown
    best_efficiency_flow_by_rows: float | None  # [m3/s] top of the rows, beside a stated one
    best_efficiency: float | None
    shutoff_head: float | None  # [m] at tested speed
    last_flow: float  # [m3/s] last row
    preferred_low: float  # ratio of best-efficiency flow, by the criteria
    preferred_high: float
    allowable_low: float | None  # ratio of best-efficiency flow
    allowable_high: float | None
    minimum_flow: float  # ratio of best-efficiency flow
    minimum_flow_assumed: bool
    motor_power: float | None  # [W]
    largest_shaft_power: float | None  # [W] to the last row at top speed
    motor_efficiency: float | None
    drive_efficiency: float | None
    specific_speed: float | None  # metric ns (rev/min, m3/s, m)
    rise_to_shutoff: float | None  # ratio (shut-off head - BEP head) / BEP head
    suction_bore: float | None  # [m]
    discharge_bore: float | None  # [m]


@dataclass(frozen=True, slots=True, eq=False)
class PointFacts:
    """What a named point is: P entries in document order."""

    id: str
    title: str
    role: str
    elevation: float
    required_pressure: float | None  # [Pa] gauge, as typed at the point
    fire_pressure: float | None
    residual_pressure: float | None
    highest_pressure: float | None
    highest_pressure_abnormal: float | None


@dataclass(frozen=True, slots=True, eq=False)
class GradeLine:
    """Grade line at stations along the way of one (case, combination)."""

    label: tuple[str, ...]
    elevation: tuple[float | None, ...]
    grade: tuple[float | None, ...]
    pressure: tuple[float | None, ...]


@dataclass(frozen=True, slots=True, eq=False)
class DutyResult:
    """Duty of one set in all its cases: three supply states of each scenario."""

    stamp: Stamp
    pump_set: str
    control: str  # kind of control, as entered
    zone_kind: ZoneKind
    supply_kind: str  # "main", "tank" or "grade_line"
    slots: tuple[SlotFacts, ...]
    points: tuple[PointFacts, ...]
    held_point: str | None  # id of the point whose pressure is held, None: discharge gauge
    set_point: float | None  # [Pa] at full flow; None where no pressure is held
    lowest_speed: float
    highest_speed: float
    density: float
    # [Pa] gauge, -(p_atm - p_v), below which there is no water; without an altitude by the
    # heaviest air there is
    lowest_pressure: float
    cases: tuple[Case, ...]  # C
    shown: NDArray[np.bool_]  # (C,) the scenario's own supply state
    is_fire: NDArray[np.bool_]  # (C,) judged by the fire requirements
    demand: Floats  # (C,) station flow asked for, fire included [m3/s]
    fire_flow: Floats  # (C,) part of it [m3/s]
    fire_point: NDArray[np.intp]  # (C,) index into points of the flowing hydrant, -1 none
    set_pressure: Floats  # (C,) set point at the demand; nan where no pressure is held [Pa]
    combinations: NDArray[np.bool_]  # (K, N)
    available: NDArray[np.bool_]  # (C, K) installed by the horizon, not out, allowed by role
    chosen: NDArray[np.intp]  # (C,) index into K, -1 none
    choice_class: NDArray[np.int8]  # (C,) 0 inside POR, 1 AOR, 2 holds, 3 at limit, 4 none
    state: NDArray[np.int8]  # (C, K) server.hydraulics.states.State
    flow: Floats  # (C, K) [m3/s]
    station_head: Floats  # (C, K) manifold to manifold, behind a reducing valve [m]
    valve_loss: Floats  # (C, K) taken away by a reducing valve, zero without one [m]
    required_head: Floats  # (C,) manifold to manifold, to hold the set point [m]
    set_point_held: NDArray[np.bool_]  # (C, K)
    fixed_exceeds: NDArray[np.bool_]  # (C, K) units without a drive pass more than is asked
    binding: NDArray[np.int8]  # (C, K) Binding
    # (C, K) nearest attainable flow where something binds: that holds the head asked at full
    # speed (of what runs only), that of the last row, or none [m3/s]
    nearest_flow: Floats
    lack: Floats  # (C, K) head missing, below zero in excess, where something binds [m]
    held_pressure: Floats  # (C, K) at the held point or gauge [Pa]
    speed: Floats  # (C, K, N) ratio
    leg_flow: Floats  # (C, K, N) [m3/s]
    best_efficiency_share: Floats  # (C, K, N) of best-efficiency flow at the running speed
    efficiency: Floats  # (C, K, N) ratio
    npsh_available: Floats  # (C, K, N) [m]
    npsh_required: Floats  # (C, K, N) [m]
    shaft_power: Floats  # (C, K, N) [W]
    wire_power: Floats  # (C, K, N) [W]
    point_pressure: Floats  # (C, K, P) gauge [Pa]
    point_grade: Floats  # (C, K, P) [m]
    # (C, K, P) below a vacuum: no water there, and no pressure or grade stated
    point_without_water: NDArray[np.bool_]
    suction_breaks_at: Places  # (C,) Place without water on the suction side
    supply_grade: Floats  # (C,) grade of the supply at the demanded flow [m]
    connection_pressure: Floats  # (C,) gauge, at ground level at the connection [Pa]
    suction_pressure: Floats  # (C,) at the suction gauge [Pa]
    suction_grade: Floats  # (C,) at the suction manifold [m]
    discharge_without_water: NDArray[np.bool_]  # (C, K) below a vacuum at the discharge gauge
    discharge_grade: Floats  # (C, K) at the discharge manifold [m]
    discharge_pressure: Floats  # (C, K) at the discharge gauge [Pa]
    zone_entry_grade: Floats  # (C, K) at the end of the main [m]
    tank_level: Floats  # (C,) of the tank on the zone; nan without one [m]
    tank_flow: Floats  # (C, K) into it, negative when it feeds; nan in a closed zone [m3/s]
    tank_draws_down: NDArray[np.bool_]  # (C, K) a fire tank would feed in normal service too
    closed_grade: Floats  # (C, K) at a fire tank's node with the tank shut; nan without one [m]
    suction_line_velocity: Floats  # (C, R_suction) [m/s]
    main_velocity: Floats  # (C, R_main) [m/s]
    suction_branch_velocity: Floats  # (C, K, N) [m/s]
    discharge_branch_velocity: Floats  # (C, K, N) [m/s]
    pressure_per_speed: Floats  # (C, K) change of the held pressure for 1 % of speed [Pa]
    zero_flow_speed: Floats  # (C, K) speed that holds the set point at no flow, ratio
    # (C, K) first pump at its last row, at the speed that holds the head asked or the limit of
    # speed before it [m3/s]
    flow_at_end: Floats
    speed_at_end: Floats  # (C, K) that speed, ratio
    energy_residual: Floats  # (C, K) [m]
    mass_residual: Floats  # (C, K) [m3/s]
    made: "MadeCases"
    needs_missing: tuple[tuple[str, str], ...] = ()  # (path of the absent field, reason code)


@dataclass(frozen=True, slots=True, eq=False)
class ZeroFlow:
    """The set against a shut zone, per supply state (3: low, normal, high)."""

    point_pressure_held: Floats  # (3, P) set point held, no flow [Pa]
    speed_held: Floats  # (3,) of the unit that holds it, ratio
    discharge_pressure_largest: Floats  # (3,) largest pump at top speed [Pa]
    point_pressure_largest: Floats  # (3, P)
    discharge_pressure_all: Floats  # (3,) all at top speed, sensor lost [Pa]
    point_pressure_all: Floats  # (3, P)


@dataclass(frozen=True, slots=True, eq=False)
class StationOff:
    """No pump running: the supply alone, per scenario and supply state."""

    cases: tuple[Case, ...]
    arithmetic_pressure: Floats  # (C, P) [Pa] below a vacuum never shown as a pressure
    drains: NDArray[np.bool_]  # (C, P) below -(p_atm - p_v): no water
    # "bypass", "tank", or "through_pumps": none is entered, the figure is an upper bound
    path: str


@dataclass(frozen=True, slots=True, eq=False)
class AfterTrip:
    """One running unit lost before the standby has started.

    The rest stand as the control drives them: at top speed wherever the set point cannot be
    held without the lost unit.
    """

    cases: tuple[Case, ...]
    running: NDArray[np.intp]  # (C,) units left; 0 when the only one tripped
    lost: tuple[str | None, ...]  # slot id that tripped
    state: NDArray[np.int8]  # (C,)
    best_efficiency_share: Floats  # (C,) largest among the units left
    region_end: Floats  # (C,) upper end of the preferred region of that unit, same ratio
    npsh_available: Floats  # (C,) of the unit left with the least margin [m]
    npsh_required: Floats  # (C,) [m]
    point_pressure: Floats  # (C, P)
    point_without_water: NDArray[np.bool_]  # (C, P)
    flow_at_end: Floats  # (C,) [m3/s]


@dataclass(frozen=True, slots=True, eq=False)
class OnePumpAlone:
    """Each of U kinds of pump alone at top speed and low supply, as far out as it can run."""

    slots: tuple[str, ...]  # first slot of each kind
    pipes: PipeAge
    flow: Floats  # (U,) nan where it gives nothing into the zone at all [m3/s]
    to_last_row: NDArray[np.bool_]  # (U,) else the zone, wide open, takes no more
    suction_breaks_at: Places  # (U,) Place without water
    suction_pressure: Floats  # (U,) at the suction gauge [Pa]
    best_efficiency_share: Floats  # (U,)
    npsh_available: Floats  # (U,) [m]
    npsh_required: Floats  # (U,) [m]
    shaft_power: Floats  # (U,) [W]


@dataclass(frozen=True, slots=True, eq=False)
class Handover:
    """Flows between one number of units and the next, per supply state, on aged pipes."""

    fewer: tuple[int, ...]  # combination index before
    more: tuple[int, ...]  # combination index after
    fewer_end: Floats  # (H, 3) flow at which the fewer leave their preferred region [m3/s]
    more_start: Floats  # (H, 3) flow at which the more enter theirs [m3/s]
    preferred_start: Floats  # (K, 3) all units of a combination inside theirs from [m3/s]
    preferred_end: Floats  # (K, 3) flow at which the first of them leaves it again [m3/s]


@dataclass(frozen=True, slots=True)
class SeveralStates:
    """A state of humped pumps against a tank that is not the only one."""

    case: Case
    combination: int
    flows: tuple[float, ...]  # largest first [m3/s]


@dataclass(frozen=True, slots=True, eq=False)
class CutOut:
    """A supply tank at its cut-out level, M states: where NPSH and submergence are least."""

    cases: tuple[Case, ...]  # supply is "cut_out"
    combination: NDArray[np.intp]  # (M,)
    state: NDArray[np.int8]  # (M,)
    flow: Floats  # (M,) nan where there is no state [m3/s]
    npsh_available: Floats  # (M, N) [m]
    npsh_required: Floats  # (M, N) [m]
    depth: float  # of water over the outlet; nan where it is not given [m]
    submergence: Floats  # (M,) needed over the outlet [m]


@dataclass(frozen=True, slots=True, eq=False)
class FirmCapacity:
    """Largest flow with each unit in turn out, low supply, aged pipes, for one requirement."""

    requirement: str  # "peak_hour", "maximum_day_fire" or "tank_refill"
    fire: str | None  # id of the fire that the second is for
    horizon: str
    required_flow: float  # [m3/s]
    by_head: float  # [m3/s] limited by head, curve end
    by_head_limit: str  # "point:<id>", "curve_end", "no_unit"
    by_all: float  # [m3/s] also by suction limits and NPSH margin
    by_all_limit: str  # as above, and "connection", "suction_gauge", "npsh"
    unit_out: str  # slot id
    all_running: float  # [m3/s] no unit out, limited by head
    best_efficiency_share: float  # largest of the units left, at by_head
    # year in which the demand, linear between horizons, passes by_all; None: not within them
    runs_out: int | None
    # by_all with every pump at the lower corner of its test grade, and that grade
    by_all_weak: float = float("nan")
    test_grade: str = ""
    hours: float | None = None  # in which the maximum day is to be pumped into the tank [s]
    not_counted: tuple[str, ...] = ()  # limits, named as above, for which a figure is absent


@dataclass(frozen=True, slots=True, eq=False)
class MadeCases:
    """The cases that are always made besides the scenarios; None where it could not be had."""

    zero_flow: ZeroFlow | None = None
    station_off: StationOff | None = None
    after_trip: AfterTrip | None = None
    one_pump_alone: OnePumpAlone | None = None
    handover: Handover | None = None
    firm_capacity: tuple[FirmCapacity, ...] = field(default=())
    cut_out: CutOut | None = None
    several: tuple[SeveralStates, ...] = ()
    # reaches with one barrel, and "unit" where one pump stands alone: nothing takes their place
    single_points: tuple[str, ...] = ()
