"""The shape of a station's results as JSON; the schema that the API hands out is made from it.

Keys end in the SI unit of their number. A number that could not be had is null, and the object
it stands in says why under `null_because`.
"""

from typing import Literal, NotRequired

from pydantic import ConfigDict, with_config

# pydantic cannot read the TypedDict of typing before Python 3.12
from typing_extensions import TypedDict

from server.studies.shapes import SupplyState

CLOSED = ConfigDict(extra="forbid")


@with_config(CLOSED)
class AmountJson(TypedDict):
    """A number with its name and SI unit; null when it could not be had."""

    name: str
    value: float | None
    unit: str


@with_config(CLOSED)
class CaseKeyJson(TypedDict):
    """Which state: ids of scenario, set and horizon, and what was chosen in it."""

    scenario: str
    pump_set: str
    horizon: str
    supply: SupplyState
    pipes: Literal["new", "aged"]
    out: str | None
    units: int | None


@with_config(CLOSED)
class FindingJson(TypedDict):
    """One thing found, with its sentence in the station's own units."""

    code: str
    severity: Literal["stop", "fail", "not_checked", "caution", "note"]
    sentence: str
    subject: str
    pump_set: str | None
    criterion: str | None
    governing: CaseKeyJson | None
    cases: list[CaseKeyJson]
    provided: AmountJson | None
    required: AmountJson | None
    others: list[AmountJson]
    names: dict[str, str]
    basis: str
    mend: list[str]
    because: str | None


@with_config(CLOSED)
class MissingJson(TypedDict):
    """An input that is missing: its path and why it counts."""

    path: str
    reason: str


@with_config(CLOSED)
class UnitJson(TypedDict):
    """One running unit."""

    slot: str
    speed_ratio: float | None
    flow_m3_s: float | None
    best_efficiency_share_ratio: float | None
    efficiency_ratio: float | None
    npsh_available_m: float | None
    npsh_required_m: float | None
    shaft_power_w: float | None
    wire_power_w: float | None
    suction_branch_velocity_m_s: float | None
    discharge_branch_velocity_m_s: float | None
    null_because: NotRequired[dict[str, str]]


@with_config(CLOSED)
class PointJson(TypedDict):
    """One named point of the zone."""

    point: str
    pressure_pa: float | None
    grade_m: float | None
    null_because: NotRequired[dict[str, str]]


@with_config(CLOSED)
class CombinationJson(TypedDict):
    """What one combination of running units does in a case."""

    running: list[str]
    state: str
    set_point_held: bool
    binding: str
    fixed_units_exceed: bool
    fire_tank_draws_down: bool
    nearest_flow_m3_s: float | None
    head_lacking_m: float | None
    tank_flow_m3_s: float | None
    flow_m3_s: float | None
    station_head_m: float | None
    valve_loss_m: float | None
    held_pressure_pa: float | None
    discharge_pressure_pa: float | None
    discharge_grade_m: float | None
    zone_entry_grade_m: float | None
    pressure_per_one_per_cent_speed_pa: float | None
    zero_flow_speed_ratio: float | None
    flow_at_end_of_curve_m3_s: float | None
    speed_at_end_of_curve_ratio: float | None
    energy_residual_m: float | None
    mass_residual_m3_s: float | None
    units: list[UnitJson]
    points: list[PointJson]
    null_because: NotRequired[dict[str, str]]


@with_config(CLOSED)
class CaseJson(TypedDict):
    """One state of the station, and every combination of units that may run in it."""

    case: CaseKeyJson
    shown: bool
    judged_as_fire: bool
    demand_m3_s: float | None
    fire_flow_m3_s: float | None
    fire_point: str | None
    required_head_m: float | None
    set_pressure_pa: float | None
    tank_level_m: float | None
    supply_grade_m: float | None
    connection_pressure_pa: float | None
    suction_pressure_pa: float | None
    suction_grade_m: float | None
    suction_line_velocity_m_s: list[float | None]
    main_velocity_m_s: list[float | None]
    chosen: int | None
    combinations: list[CombinationJson]
    null_because: NotRequired[dict[str, str]]


@with_config(CLOSED)
class ZeroFlowJson(TypedDict):
    """The set against a shut zone, at one supply state."""

    supply: SupplyState
    speed_held_ratio: float | None
    point_pressure_held_pa: dict[str, float | None]
    discharge_pressure_largest_pa: float | None
    point_pressure_largest_pa: dict[str, float | None]
    discharge_pressure_all_pa: float | None
    point_pressure_all_pa: dict[str, float | None]


@with_config(CLOSED)
class StationOffJson(TypedDict):
    """No pump running, one case: a point without water has no pressure."""

    case: CaseKeyJson
    path: str
    point_pressure_pa: dict[str, float | None]
    without_water: list[str]


@with_config(CLOSED)
class AfterTripJson(TypedDict):
    """One running unit lost before the standby has started, one case."""

    case: CaseKeyJson
    lost: str | None
    units_left: int
    state: str
    best_efficiency_share_ratio: float | None
    npsh_available_m: float | None
    npsh_required_m: float | None
    point_pressure_pa: dict[str, float | None]
    without_water: list[str]
    flow_at_end_of_curve_m3_s: float | None


@with_config(CLOSED)
class OnePumpAloneJson(TypedDict):
    """One kind of pump alone at top speed and low supply, run out as far as it goes."""

    slot: str
    pipes: Literal["new", "aged"]
    ends_at: Literal["last_row", "open_zone"]
    flow_m3_s: float | None
    suction_pressure_pa: float | None
    best_efficiency_share_ratio: float | None
    npsh_available_m: float | None
    npsh_required_m: float | None
    shaft_power_w: float | None
    null_because: NotRequired[dict[str, str]]


@with_config(CLOSED)
class HandoverJson(TypedDict):
    """Between one number of units and the next, at one supply state."""

    fewer: list[str]
    more: list[str]
    supply: SupplyState
    fewer_end_m3_s: float | None
    more_start_m3_s: float | None


@with_config(CLOSED)
class CutOutJson(TypedDict):
    """A supply tank at its cut-out level, one state."""

    case: CaseKeyJson
    running: list[str]
    state: str
    flow_m3_s: float | None
    depth_over_outlet_m: float | None
    submergence_needed_m: float | None
    npsh_available_m: dict[str, float | None]
    npsh_required_m: dict[str, float | None]


@with_config(CLOSED)
class FirmCapacityJson(TypedDict):
    """Largest flow with the largest unit out, for one requirement at one horizon."""

    requirement: str
    fire: str | None
    horizon: str
    required_flow_m3_s: float | None
    by_head_m3_s: float | None
    by_head_limit: str
    by_all_m3_s: float | None
    by_all_limit: str
    by_all_at_lower_corner_m3_s: float | None
    test_grade: str
    hours_s: float | None
    not_counted: list[str]
    unit_out: str
    all_running_m3_s: float | None
    runs_out_year: int | None


@with_config(CLOSED)
class SolvedSetJson(TypedDict):
    """The duty of one set."""

    pump_set: str
    solved: Literal[True]
    study: str
    study_version: int
    control: str
    zone_kind: Literal["closed", "floating_tank", "fire_tank"]
    supply_kind: str
    held_point: str | None
    set_point_pa: float | None
    lowest_speed_ratio: float
    highest_speed_ratio: float
    density_kg_m3: float
    inputs_missing: list[MissingJson]
    cases: list[CaseJson]
    zero_flow: list[ZeroFlowJson] | None
    station_off: list[StationOffJson] | None
    after_trip: list[AfterTripJson] | None
    one_pump_alone: list[OnePumpAloneJson] | None
    handover: list[HandoverJson] | None
    firm_capacity: list[FirmCapacityJson]
    cut_out: list[CutOutJson] | None
    single_points: list[str]


@with_config(CLOSED)
class UnsolvedSetJson(TypedDict):
    """A set that cannot be solved, and every input that stands in the way."""

    pump_set: str
    solved: Literal[False]
    inputs_missing: list[MissingJson]


@with_config(CLOSED)
class CriterionJson(TypedDict):
    """One limit as it stands in this station."""

    key: str
    title: str
    limit: AmountJson
    source: str
    departs: bool
    reason: str


@with_config(CLOSED)
class ResultsJson(TypedDict):
    """Everything computed for a station file."""

    format: Literal["firmhead-results"]
    version: Literal[1]
    program: str
    document: str
    title: str
    proposed_set: str | None
    holds: bool | None
    sentence: str
    findings: list[FindingJson]
    sets: list[SolvedSetJson | UnsolvedSetJson]
    criteria: list[CriterionJson]
