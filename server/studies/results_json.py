"""The results of a station as JSON: the same bytes from the command and from the API.

Every number is SI, its unit in its key. A float without meaning becomes null, and the object
that holds it says why: the combination's state, "held_shut" for a unit that passes nothing,
"no_water" where the computed pressure lies below a vacuum, "not_applicable" where this kind of
station or state has no such number, or "input_missing", with the missing paths under the set's
`inputs_missing`.
"""

import json
from typing import cast

from server import __version__
from server.hydraulics.states import State
from server.station.station import Station
from server.studies.assess import Assessment
from server.studies.duty_result import Binding, DutyResult, NotSolved, Place
from server.studies.findings import words
from server.studies.findings.criteria import Criterion
from server.studies.results_made import (
    after_trip_json,
    cut_out_json,
    firm_capacity_json,
    handover_json,
    one_pump_alone_json,
    station_off_json,
    zero_flow_json,
)
from server.studies.results_numbers import (
    MISSING,
    NO_WATER,
    NOT_APPLICABLE,
    case_key,
    null_or_why,
    or_null,
)
from server.studies.results_shape import (
    AmountJson,
    CaseJson,
    CombinationJson,
    CriterionJson,
    FindingJson,
    MissingJson,
    PointJson,
    ResultsJson,
    SolvedSetJson,
    UnitJson,
    UnsolvedSetJson,
)
from server.studies.shapes import Amount, Finding
from server.units import Dimension

SI_UNITS: dict[Dimension, str] = {
    Dimension.FLOW: "m3/s",
    Dimension.LENGTH: "m",
    Dimension.LEVEL: "m",
    Dimension.HEAD: "m",
    Dimension.BORE: "m",
    Dimension.ROUGHNESS: "m",
    Dimension.PRESSURE: "Pa",
    Dimension.TEMPERATURE: "degC",
    Dimension.POWER: "W",
    Dimension.ROTATION: "1/s",
    Dimension.SPEED: "m/s",
    Dimension.TIME: "s",
    Dimension.VOLUME: "m3",
    Dimension.RATIO: "1",
    Dimension.NUMBER: "1",
    Dimension.SPECIFIC_ENERGY: "J/m3",
    Dimension.DENSITY: "kg/m3",
    Dimension.VISCOSITY: "m2/s",
    Dimension.AREA: "m2",
}
# states in which the hydraulics give no numbers at all
_WITHOUT_NUMBERS = (
    State.END_OF_CURVE,
    State.BELOW_STATIC,
    State.NOT_AVAILABLE,
    State.NO_WATER,
)


def results_bytes(assessment: Assessment) -> bytes:
    """Return the results as `firmhead solve -o` writes and POST /api/solve answers them."""
    text = json.dumps(results_json(assessment), indent=1, ensure_ascii=False, allow_nan=False)
    return (text + "\n").encode("utf-8")


def results_json(assessment: Assessment) -> ResultsJson:
    """Return everything that is computed for a station, as JSON data."""
    station = assessment.station
    return {
        "format": "firmhead-results",
        "version": 1,
        "program": __version__,
        "document": assessment.document_hash,
        "title": station.identity.title,
        "proposed_set": assessment.proposed,
        "holds": assessment.holds,
        "sentence": assessment.lead(station.display.units),
        "findings": findings_json(assessment),
        "sets": [
            _unsolved(result) if isinstance(result, NotSolved) else _solved(result)
            for result in assessment.results.values()
        ],
        "criteria": [_criterion(each) for each in assessment.criteria.values()],
    }


def findings_json(assessment: Assessment) -> list[FindingJson]:
    """Return the findings, worst first, each with its sentence in the station's own units."""
    return [_finding(each, assessment.station) for each in assessment.findings]


def _finding(finding: Finding, station: Station) -> FindingJson:
    return {
        "code": finding.code,
        "severity": finding.severity.value,
        "sentence": words.sentence(finding, station, station.display.units),
        "subject": finding.subject,
        "pump_set": finding.pump_set,
        "criterion": finding.criterion,
        "governing": None if finding.governing is None else case_key(finding.governing),
        "cases": [case_key(case) for case in finding.cases],
        "provided": None if finding.provided is None else _amount(finding.provided),
        "required": None if finding.required is None else _amount(finding.required),
        "others": [_amount(each) for each in finding.others],
        "names": dict(finding.names),
        "basis": finding.basis,
        "mend": list(finding.mend),
        "because": finding.because,
    }


def _amount(amount: Amount) -> AmountJson:
    value = None if amount.value is None else or_null(amount.value)
    return {"name": amount.name, "value": value, "unit": SI_UNITS[amount.dimension]}


def _criterion(criterion: Criterion) -> CriterionJson:
    limit = Amount(criterion.key, criterion.si, criterion.dimension)
    return {
        "key": criterion.key,
        "title": criterion.title,
        "limit": _amount(limit),
        "source": criterion.source,
        "departs": criterion.departs,
        "reason": criterion.reason,
    }


def _unsolved(answer: NotSolved) -> UnsolvedSetJson:
    missing: list[MissingJson] = [
        {"path": each.path, "reason": each.reason} for each in answer.missing
    ]
    return {"pump_set": answer.pump_set, "solved": False, "inputs_missing": missing}


def _solved(result: DutyResult) -> SolvedSetJson:
    return {
        "pump_set": result.pump_set,
        "solved": True,
        "study": result.stamp.study,
        "study_version": result.stamp.study_version,
        "control": result.control,
        "zone_kind": result.zone_kind,
        "supply_kind": result.supply_kind,
        "held_point": result.held_point,
        "set_point_pa": None if result.set_point is None else or_null(result.set_point),
        "lowest_speed_ratio": float(result.lowest_speed),
        "highest_speed_ratio": float(result.highest_speed),
        "density_kg_m3": float(result.density),
        "inputs_missing": [
            {"path": path, "reason": reason} for path, reason in result.needs_missing
        ],
        "cases": [_case(result, c) for c in range(len(result.cases))],
        "zero_flow": zero_flow_json(result),
        "station_off": station_off_json(result),
        "after_trip": after_trip_json(result),
        "one_pump_alone": one_pump_alone_json(result),
        "handover": handover_json(result),
        "firm_capacity": firm_capacity_json(result),
        "cut_out": cut_out_json(result),
        "single_points": list(result.made.single_points),
    }


def _case(result: DutyResult, c: int) -> CaseJson:
    chosen, fire_point = int(result.chosen[c]), int(result.fire_point[c])
    place = Place(int(result.suction_breaks_at[c]))
    main, suction = (
        NO_WATER if broken else MISSING
        for broken in (place is Place.CONNECTION, place is not Place.NOWHERE)
    )
    numbers = null_or_why(
        {
            "demand_m3_s": result.demand[c],
            "fire_flow_m3_s": result.fire_flow[c],
            "required_head_m": result.required_head[c],
            "set_pressure_pa": result.set_pressure[c],
            "tank_level_m": result.tank_level[c],
            "supply_grade_m": result.supply_grade[c],
            "connection_pressure_pa": result.connection_pressure[c],
            "suction_pressure_pa": result.suction_pressure[c],
            "suction_grade_m": result.suction_grade[c],
        },
        MISSING,
        {
            "set_pressure_pa": NOT_APPLICABLE if result.set_point is None else MISSING,
            "tank_level_m": NOT_APPLICABLE if result.zone_kind == "closed" else MISSING,
            "supply_grade_m": main, "connection_pressure_pa": main, "required_head_m": suction,
            "suction_pressure_pa": suction, "suction_grade_m": suction,
        },
    )  # fmt: skip
    case = {
        "case": case_key(result.cases[c]),
        "shown": bool(result.shown[c]),
        "judged_as_fire": bool(result.is_fire[c]),
        "fire_point": None if fire_point < 0 else result.points[fire_point].id,
        **numbers,
        "suction_line_velocity_m_s": [
            or_null(each) for each in result.suction_line_velocity[c]
        ],
        "main_velocity_m_s": [or_null(each) for each in result.main_velocity[c]],
        "chosen": None if chosen < 0 else chosen,
        "combinations": [_combination(result, c, k) for k in range(len(result.combinations))],
    }
    return cast(CaseJson, case)


def _combination(result: DutyResult, c: int, k: int) -> CombinationJson:
    state = State(int(result.state[c, k]))
    without = state.name.lower() if state in _WITHOUT_NUMBERS else MISSING
    held = NOT_APPLICABLE if result.set_point is None else without
    running = [n for n in range(len(result.slots)) if result.combinations[k, n]]
    combination = {
        "running": [result.slots[n].id for n in running],
        "state": state.name.lower(),
        "set_point_held": bool(result.set_point_held[c, k]),
        "binding": Binding(int(result.binding[c, k])).name.lower(),
        "fixed_units_exceed": bool(result.fixed_exceeds[c, k]),
        "fire_tank_draws_down": bool(result.tank_draws_down[c, k]),
        **null_or_why(
            {
                "nearest_flow_m3_s": result.nearest_flow[c, k],
                "head_lacking_m": result.lack[c, k],
                "tank_flow_m3_s": result.tank_flow[c, k],
                "flow_m3_s": result.flow[c, k],
                "station_head_m": result.station_head[c, k],
                "valve_loss_m": result.valve_loss[c, k],
                "held_pressure_pa": result.held_pressure[c, k],
                "discharge_pressure_pa": result.discharge_pressure[c, k],
                "discharge_grade_m": result.discharge_grade[c, k],
                "zone_entry_grade_m": result.zone_entry_grade[c, k],
                "pressure_per_one_per_cent_speed_pa": result.pressure_per_speed[c, k],
                "zero_flow_speed_ratio": result.zero_flow_speed[c, k],
                "flow_at_end_of_curve_m3_s": result.flow_at_end[c, k],
                "speed_at_end_of_curve_ratio": result.speed_at_end[c, k],
                "energy_residual_m": result.energy_residual[c, k],
                "mass_residual_m3_s": result.mass_residual[c, k],
            },
            without,
            {
                "nearest_flow_m3_s": NOT_APPLICABLE,
                "head_lacking_m": NOT_APPLICABLE,
                "tank_flow_m3_s": NOT_APPLICABLE if result.zone_kind == "closed" else without,
                "zero_flow_speed_ratio": held,
                "pressure_per_one_per_cent_speed_pa": held,
                "discharge_pressure_pa": NO_WATER
                if result.discharge_without_water[c, k]
                else without,
                "held_pressure_pa": NO_WATER if _held_is_dry(result, c, k) else without,
            },
        ),
        "units": [_unit(result, c, k, n, without) for n in running],
        "points": [_point(result, c, k, p, without) for p in range(len(result.points))],
    }
    return cast(CombinationJson, combination)


def _held_is_dry(result: DutyResult, c: int, k: int) -> bool:
    """Return whether the place whose pressure is held has no water."""
    ids = [point.id for point in result.points]
    if result.held_point in ids:
        return bool(result.point_without_water[c, k, ids.index(result.held_point)])
    return bool(result.discharge_without_water[c, k])


def _unit(result: DutyResult, c: int, k: int, n: int, without: str) -> UnitJson:
    # a leg held shut by the others passes exactly nothing, and its pump has no duty
    because = "held_shut" if result.leg_flow[c, k, n] == 0 else without
    unit = {
        "slot": result.slots[n].id,
        **null_or_why(
            {
                "speed_ratio": result.speed[c, k, n],
                "flow_m3_s": result.leg_flow[c, k, n],
                "best_efficiency_share_ratio": result.best_efficiency_share[c, k, n],
                "efficiency_ratio": result.efficiency[c, k, n],
                "npsh_available_m": result.npsh_available[c, k, n],
                "npsh_required_m": result.npsh_required[c, k, n],
                "shaft_power_w": result.shaft_power[c, k, n],
                "wire_power_w": result.wire_power[c, k, n],
                "suction_branch_velocity_m_s": result.suction_branch_velocity[c, k, n],
                "discharge_branch_velocity_m_s": result.discharge_branch_velocity[c, k, n],
            },
            because,
        ),
    }
    return cast(UnitJson, unit)


def _point(result: DutyResult, c: int, k: int, p: int, without: str) -> PointJson:
    because = NO_WATER if result.point_without_water[c, k, p] else without
    point = {
        "point": result.points[p].id,
        **null_or_why(
            {
                "pressure_pa": result.point_pressure[c, k, p],
                "grade_m": result.point_grade[c, k, p],
            },
            because,
        ),
    }
    return cast(PointJson, point)
