"""For every finding code: edits that make it appear, and the one field that mends it."""

from collections.abc import Callable
from dataclasses import dataclass

from server.station import paths
from server.station.station import Station
from server.studies.findings.profiles import RULES
from tests.studies.findings.demo import (
    DESIGN,
    GATE,
    HYDRANT,
    JOCKEY,
    JOCKEY_TABLE,
    LOW,
    MAIN,
    MAIN_TABLE,
    OPENING,
    SET,
    TEST_A,
    TEST_B,
    TOP,
    Step,
    demo,
    insert,
    put,
    q,
    remove,
    rows_of,
    table,
)

CONTROL, TRIPS, SLOTS = f"{SET}/control", f"{SET}/trips", f"{SET}/slots"
STANDBY = f"{SET}/standby_power"
FIRE = "/fires/fr-f6c1rs"
MAIN_LEG, JOCKEY_LEG = "/legs/lg-m2n6wd", "/legs/lg-j9c3ht"
SUCTION = "/suction_line/reaches/rc-s7n3de"
REACH = "/discharge_main/reaches/rc-d1f5my"
ZONE = "/supply/supplying_zone"
MAIN_CURVE = MAIN_TABLE.removesuffix("/table")
DUTY = tuple(f"{SLOTS}/{each}" for each in ("sl-p1d4fg", "sl-p2e5gh", "sl-p3f6hj"))
STANDBY_SLOT, JOCKEY_SLOT = f"{SLOTS}/sl-p4g7jk", f"{SLOTS}/sl-j5h8kq"
ORIGINAL = table(MAIN_TABLE)
MORE_HEAD = table(MAIN_TABLE, head=1.3)
EXTRA_SLOT = {"id": "sl-x9x9x9", "title": "P5", "role": "duty", "pump": "pu-m5x8qd",
              "curve": "cu-m1a2bc", "leg": "lg-m2n6wd", "drive": "variable"}  # fmt: skip


def limit(key: str, value: float, unit: str, reason: str = "") -> Step:
    """Return the edit that sets a criterion's limit."""

    def step(station: Station) -> Station:
        station = paths.put(station, f"/criteria/rows/{key}/limit", q(value, unit))  # type: ignore[arg-type]
        return paths.put(station, f"/criteria/rows/{key}/reason", reason) if reason else station

    assert key in RULES
    return step


def only(*scenarios: str) -> Step:
    """Return the edit that leaves only some scenarios in use."""

    def step(station: Station) -> Station:
        for scenario in station.scenarios:
            if scenario.id not in scenarios:
                station = paths.put(station, f"/scenarios/{scenario.id}/on", False)
        return station

    return step


def supplying_zone(without: str = "") -> Step:
    """Return the edit that states the supplying zone, all but one figure."""
    figures = {
        "loss": q(2, "m"), "at_flow": q(100, "L/s"), "source_grade": q(160, "m"),
        "lowest_customer_level": q(125, "m"), "maximum_day": q(30, "L/s"),
        "peak_hour": q(50, "L/s"), "fire_flow": q(25, "L/s"),
    }  # fmt: skip

    def step(station: Station) -> Station:
        for name, value in figures.items():
            if name != without:
                station = paths.put(station, f"{ZONE}/{name}", value)  # type: ignore[arg-type]
        return station

    return step


@dataclass(frozen=True)
class CodeCase:
    """How a code appears, what its first mend is, and the value there that makes it go."""

    code: str
    steps: tuple[Step, ...]
    mend: str
    value: object
    subject: str | None = None
    base: Callable[[], Station] = demo


def case(
    code: str, mend: str, value: object, *steps: Step, subject: str | None = None
) -> CodeCase:
    """Make a case."""
    return CodeCase(code, steps, mend, value, subject)


def _hump(rows: list[list[float | None]]) -> list[list[float | None]]:
    rows[0][1] = 83.0
    return rows


def _power(rows: list[list[float | None]]) -> list[list[float | None]]:
    rows[5][3] = 20.0
    return rows


def _without_npsh(of: str) -> dict[str, object]:
    given = rows_of(of, lambda rows: [row[:4] for row in rows])
    units = {name: unit for name, unit in given["units"].items() if name != "npsh_required"}  # type: ignore[attr-defined]
    return {**given, "units": units}


RESULT_CASES = (
    case("end_of_curve", MAIN_TABLE, table(MAIN_TABLE, flow=2),
         put(f"{FIRE}/flow", q(80, "L/s"))),
    case("held_shut", f"{MAIN_LEG}/discharge_branch/cracking_head", q(0, "m"),
         remove(JOCKEY_SLOT),
         put(f"{MAIN_LEG}/discharge_branch/cracking_head", q(20, "m"))),
    case("no_unit", f"{DUTY[0]}/from_horizon", None,
         *(put(f"{slot}/from_horizon", "hz-d8gn4k") for slot in (*DUTY, JOCKEY_SLOT))),
    case("no_water_at_point", MAIN_TABLE, table(MAIN_TABLE, head=5),
         put(f"{TOP}/elevation", q(330, "m"))),
    case("no_water_at_suction", LOW, q(0, "kPa"), put("/site/eye_level", q(135, "m"))),
    case("below_atmosphere", LOW, q(-40, "kPa"), put(LOW, q(-170, "kPa")), subject="/supply"),
    case("npsh_broken", LOW, q(0, "kPa"), put("/site/eye_level", q(131, "m"))),
    case("trip_reached", f"{TRIPS}/low_suction_trip", q(70, "kPa"),
         put(f"{TRIPS}/low_suction_trip", q(130, "kPa"))),
    case("rating_exceeded", f"{MAIN}/rating", q(1600, "kPa"),
         put(f"{MAIN}/rating", q(1000, "kPa")),
         put(f"{TRIPS}/high_discharge_trip", q(1100, "kPa"))),
    case("station_off", f"{STANDBY}/kind", "automatic", put(f"{STANDBY}/kind", "none")),
    case("suction_main_low", LOW, q(0, "kPa")),
    case("suction_gauge_low", LOW, q(0, "kPa"), limit("suction-main-minimum", 100, "kPa")),
    case("supplying_zone_low", f"{ZONE}/loss", q(2, "m"), supplying_zone(),
         put(f"{ZONE}/loss", q(30, "m"))),
    case("pressure_low", f"{CONTROL}/pressure", q(250, "kPa"),
         put(f"{CONTROL}/pressure", q(220, "kPa"))),
    case("fire_pressure_low", MAIN_TABLE, MORE_HEAD,
         put(f"{TOP}/fire_pressure", q(200, "kPa"))),
    case("hydrant_residual_low", MAIN_TABLE, MORE_HEAD,
         put(f"{HYDRANT}/residual_pressure", q(260, "kPa"))),
    case("pressure_high", f"{CONTROL}/pressure", q(200, "kPa"),
         put(f"{GATE}/highest_pressure", q(500, "kPa"))),
    case("pressure_high_in_fire", f"{CONTROL}/pressure", q(150, "kPa"),
         put(f"{GATE}/highest_pressure_abnormal", q(540, "kPa"))),
    case("shutoff_pressure_high", f"{CONTROL}/highest_speed", q(90, "%")),
    case("firm_peak_hour_short", MAIN_TABLE, MORE_HEAD,
         put(f"{DESIGN}/demand/peak_hour", q(56.2, "L/s"))),
    case("firm_fire_short", MAIN_TABLE, MORE_HEAD,
         put(f"{HYDRANT}/residual_pressure", q(310, "kPa")),
         put(f"{CONTROL}/pressure", q(400, "kPa"))),
    case("units_few", SLOTS, EXTRA_SLOT, remove(*DUTY[1:], STANDBY_SLOT, JOCKEY_SLOT)),
    case("npsh_short", LOW, q(0, "kPa"), put("/site/eye_level", q(129.2, "m"))),
    case("suction_lift_long", "/site/eye_level", q(110.6, "m"),
         put("/site/eye_level", q(129, "m"))),
    case("allowable_region_outside", f"{JOCKEY}/allowable_region/low", q(30, "%"),
         put(f"{JOCKEY}/allowable_region/low", q(40, "%"))),
    case("minimum_flow_broken", f"{JOCKEY}/minimum_flow", q(25, "%"),
         put(f"{JOCKEY}/minimum_flow", q(40, "%"))),
    case("region_outside", JOCKEY_TABLE, table(JOCKEY_TABLE, flow=0.4)),
    case("motor_overloaded", f"{MAIN}/motor_power", q(22, "kW"),
         put(f"{MAIN}/motor_power", q(18.5, "kW"))),
    case("handover_gap", MAIN_TABLE, ORIGINAL, put(MAIN_TABLE, table(MAIN_TABLE, steep=0.3)),
         subject=DUTY[1]),
    case("fire_duration_short", f"{FIRE}/duration", q(2, "h"),
         put(f"{FIRE}/duration", q(1, "h"))),
    case("region_outside_in_fire", MAIN_TABLE, table(MAIN_TABLE, flow=1.3),
         put(f"{FIRE}/flow", q(47, "L/s"))),
    case("region_edge", MAIN_TABLE, table(MAIN_TABLE, flow=0.9),
         put(f"{OPENING}/demand/maximum_day", q(8.95, "L/s")), subject=DUTY[0]),
    case("set_point_not_held", f"{CONTROL}/pressure", q(250, "kPa"),
         put(f"{CONTROL}/pressure", q(600, "kPa"))),
    case("low_speed_limit", f"{CONTROL}/lowest_speed", q(55, "%"),
         put(f"{CONTROL}/lowest_speed", q(90, "%"))),
    case("lowest_speed_low", f"{CONTROL}/lowest_speed", q(55, "%"),
         put(f"{CONTROL}/lowest_speed", q(45, "%"))),
    case("highest_speed_high", f"{CONTROL}/highest_speed", q(100, "%"),
         put(f"{CONTROL}/highest_speed", q(105, "%"))),
    case("speed_cannot_tell_night", f"{OPENING}/demand/minimum_night", q(5.2, "L/s")),
    case("pressure_steep_in_speed", f"{CONTROL}/pressure", q(100, "kPa"),
         limit("pressure-per-speed-max", 15.5, "kPa")),
    case("station_off_relies_on_standby", LOW, q(300, "kPa"),
         only("sc-n1gh7a", "sc-a1vg5c", "sc-p1kh2e"),
         put("/supply/states/normal", q(300, "kPa")),
         put("/supply/states/high", q(340, "kPa"))),
    case("after_trip_end_of_curve", MAIN_TABLE, table(MAIN_TABLE, flow=1.25),
         only("sc-f2re9k")),
    case("after_trip_pressure_low", MAIN_TABLE, MORE_HEAD, only("sc-f1re9j"),
         put(f"{TOP}/fire_pressure", q(170, "kPa"))),
    case("after_trip_npsh_broken", LOW, q(0, "kPa"), only("sc-f1re9j"),
         put("/site/eye_level", q(135.1, "m"))),
    case("run_out_stopped_by_trip", LOW, q(0, "kPa"), put("/site/eye_level", q(145.1, "m")),
         put(f"{TRIPS}/low_suction_trip", q(300, "kPa")), subject=DUTY[0]),
    case("handover_by_share", JOCKEY_TABLE, table(JOCKEY_TABLE, flow=1.1)),
    case("suction_lift", "/site/eye_level", q(110.6, "m"), put("/site/eye_level", q(125, "m"))),
    case("suction_line_fast", f"{SUCTION}/bore", q(250, "mm"),
         put(f"{SUCTION}/bore", q(200, "mm"))),
    case("suction_branch_fast", f"{MAIN_LEG}/suction_branch/bore", q(150, "mm"),
         put(f"{MAIN_LEG}/suction_branch/bore", q(120, "mm"))),
    case("discharge_branch_fast", f"{MAIN_LEG}/discharge_branch/bore", q(125, "mm"),
         put(f"{MAIN_LEG}/discharge_branch/bore", q(90, "mm"))),
    case("main_fast", f"{REACH}/bore", q(300, "mm"), put(f"{REACH}/bore", q(160, "mm")),
         subject=REACH),
    case("main_fast_in_fire", f"{REACH}/bore", q(300, "mm"),
         put(f"{REACH}/bore", q(155, "mm")), subject=REACH),
    case("friction_law_out_of_range", f"{REACH}/roughness/law", "colebrook",
         put(f"{REACH}/roughness/law", "hazen_williams"),
         put(f"{REACH}/roughness/coefficient_new", 130),
         put(f"{REACH}/roughness/coefficient_aged", 90)),
    case("shutoff_rise_small", MAIN_TABLE, ORIGINAL,
         put(MAIN_TABLE, table(MAIN_TABLE, steep=0.3))),
    case("shutoff_rise_large", MAIN_TABLE, ORIGINAL,
         put(MAIN_TABLE, table(MAIN_TABLE, steep=2))),
    case("head_not_falling", MAIN_TABLE, ORIGINAL, put(MAIN_TABLE, rows_of(MAIN_TABLE, _hump))),
    case("curve_rows_few", MAIN_TABLE, ORIGINAL,
         put(MAIN_TABLE, rows_of(MAIN_TABLE, lambda rows: [rows[i] for i in (0, 3, 5, 8)]))),
    case("last_row_short", MAIN_TABLE, ORIGINAL,
         put(MAIN_TABLE, rows_of(MAIN_TABLE,
                                 lambda rows: [*rows[:6], [20.0, 64.0, 71.0, None, 3.7]]))),
    case("best_efficiency_disagrees", f"{MAIN_CURVE}/best_efficiency_flow", q(17.8, "L/s"),
         put(f"{MAIN_CURVE}/best_efficiency_flow", q(20, "L/s"))),
    case("rating_level_not_given", f"{REACH}/end_level", q(105, "m"), subject=REACH),
    case("power_disagrees", MAIN_TABLE, ORIGINAL, put(MAIN_TABLE, rows_of(MAIN_TABLE, _power))),
    case("handover_gap_narrow", MAIN_TABLE, table(MAIN_TABLE, steep=1.8), subject=DUTY[1]),
    case("set_point_not_held_in_fire", f"{CONTROL}/pressure", q(170, "kPa")),
    case("pressure_by_speed", f"{CONTROL}/pressure", q(150, "kPa")),
    case("main_slow", f"{REACH}/bore", q(250, "mm"), subject=REACH),
    case("check_valve_not_fully_open", f"{JOCKEY_LEG}/discharge_branch/full_open_velocity",
         q(0.3, "m/s"),
         subject=JOCKEY_LEG),
)  # fmt: skip

INPUT_CASES = (
    case("supply_states_out_of_order", LOW, q(-40, "kPa"), put(LOW, q(10, "kPa"))),
    case("limiter_not_computed", f"{TRIPS}/low_suction_slow_down", q(100, "kPa"),
         put(f"{TRIPS}/low_suction_slow_down", q(140, "kPa"))),
    case("firm_not_checked", "/supply/connection_level", q(112, "m"),
         put("/supply/connection_level", None)),
    case("station_off_not_checked", f"{STANDBY}/kind", "automatic",
         put(f"{STANDBY}/kind", None)),
    case("input_missing", "/site/altitude", q(110, "m"), put("/site/altitude", None)),
    case("input_refused", f"{TEST_A}/residual_pressure", q(260, "kPa"),
         put(f"{TEST_A}/residual_pressure", q(360, "kPa"))),
    case("input_lacks", MAIN_TABLE, ORIGINAL, put(MAIN_TABLE, _without_npsh(MAIN_TABLE))),
    case("kind_not_computed", f"{CONTROL}/running_rule", "fewest_units",
         put(f"{CONTROL}/running_rule", "least_power")),
    case("supplying_zone_not_checked", f"{ZONE}/loss", q(2, "m"),
         supplying_zone(without="loss")),
    case("flow_test_draw_unknown", f"{TEST_A}/station_draw", q(0, "L/s"),
         put(f"{TEST_A}/station_draw", None)),
    case("flow_test_date_unknown", f"{TEST_A}/made_at", "2025-05-14 07:30",
         put(f"{TEST_A}/made_at", None)),
    case("horizon_without_year", f"{OPENING}/year", 2027, put(f"{OPENING}/year", None)),
    case("scenario_missing", "/scenarios/sc-n1gh7a/on", True,
         put("/scenarios/sc-n1gh7a/on", False)),
    case("fire_scenario_missing", "/scenarios/sc-f2re9k/on", True,
         put("/scenarios/sc-f2re9k/on", False)),
    case("proposed_set_missing", "/proposed_set", "st-v3a7pe", put("/proposed_set", None)),
    case("no_critical_point", f"{TOP}/role", "critical", put(f"{TOP}/role", "customer")),
    case("no_lowest_point", f"{GATE}/role", "lowest", put(f"{GATE}/role", "customer")),
    case("protection_missing", f"{TRIPS}/low_suction_trip", q(70, "kPa"),
         put(f"{TRIPS}/low_suction_trip", None)),
    case("rating_missing", f"{SET}/flange_rating", q(1600, "kPa"),
         put(f"{SET}/flange_rating", None)),
    case("flow_test_old", f"{TEST_A}/made_at", "2025-05-14 07:30",
         put(f"{TEST_A}/made_at", "2019-05-14 07:30")),
    case("flow_test_small_drop", f"{TEST_B}/residual_pressure", q(250, "kPa")),
    case("flow_test_extrapolated", f"{TEST_A}/test_flow", q(50, "L/s")),
    case("flow_tests_disagree", f"{TEST_B}/residual_pressure", q(301, "kPa"),
         put(f"{TEST_B}/residual_pressure", q(270, "kPa"))),
    case("minimum_night_zero", f"{OPENING}/demand/minimum_night", q(2.2, "L/s"),
         put(f"{OPENING}/demand/minimum_night", q(0, "L/s"))),
    case("demands_out_of_order", f"{OPENING}/demand/maximum_day", q(9.9, "L/s"),
         put(f"{OPENING}/demand/maximum_day", q(25, "L/s"))),
    case("point_asks_less", f"{TOP}/required_pressure", q(250, "kPa"),
         put(f"{TOP}/required_pressure", q(150, "kPa"))),
    case("departure_without_reason", "/criteria/rows/suction-main-minimum/reason",
         "agreed with the utility",
         limit("suction-main-minimum", 100, "kPa")),
    case("criterion_departs", "/criteria/rows/suction-main-minimum/limit", q(140, "kPa"),
         limit("suction-main-minimum", 100, "kPa", "agreed with the utility")),
    case("low_state_estimated", LOW, {**q(-40, "kPa"),
                                      "source": {"kind": "test", "text": "logger, July 2025"}}),
    case("default_used", f"{MAIN_LEG}/discharge_branch/full_open_velocity", q(1.5, "m/s"),
         subject=f"{MAIN_LEG}/discharge_branch/full_open_velocity"),
)  # fmt: skip
CASES = (*RESULT_CASES, *INPUT_CASES)


def started(given: CodeCase) -> Station:
    """Return the station in which the code appears."""
    station = given.base()
    for step in given.steps:
        station = step(station)
    return station


def mended(given: CodeCase, station: Station) -> Station:
    """Return the station after the one change that mends it."""
    if isinstance(given.value, dict) and "id" in given.value:
        return insert(given.mend, given.value)(station)
    return put(given.mend, given.value)(station)
