"""The cases that are always made, as JSON data."""

from collections.abc import Iterable
from typing import cast

import numpy as np
from numpy.typing import NDArray

from server.hydraulics.states import State
from server.studies.duty_result import DutyResult, Place
from server.studies.results_numbers import (
    MISSING,
    NO_WATER,
    by_point,
    case_key,
    null_or_why,
    or_null,
)
from server.studies.results_shape import (
    AfterTripJson,
    CutOutJson,
    FirmCapacityJson,
    HandoverJson,
    OnePumpAloneJson,
    StationOffJson,
    ZeroFlowJson,
)
from server.studies.shapes import SUPPLY_STATES

Flags = NDArray[np.bool_]


def zero_flow_json(result: DutyResult) -> list[ZeroFlowJson] | None:
    """Return the set against a shut zone at each supply state; None if it could not be had."""
    made = result.made.zero_flow
    if made is None:
        return None
    return [
        {
            "supply": supply,
            "speed_held_ratio": or_null(made.speed_held[s]),
            "point_pressure_held_pa": by_point(result, made.point_pressure_held[s]),
            "discharge_pressure_largest_pa": or_null(made.discharge_pressure_largest[s]),
            "point_pressure_largest_pa": by_point(result, made.point_pressure_largest[s]),
            "discharge_pressure_all_pa": or_null(made.discharge_pressure_all[s]),
            "point_pressure_all_pa": by_point(result, made.point_pressure_all[s]),
        }
        for s, supply in enumerate(SUPPLY_STATES)
    ]


def station_off_json(result: DutyResult) -> list[StationOffJson] | None:
    """Return what the zone has with no pump running; a point without water has no pressure."""
    made = result.made.station_off
    if made is None:
        return None
    found: list[StationOffJson] = []
    for c, case in enumerate(made.cases):
        dry = _dry(result, made.drains[c])
        pressures = by_point(result, made.arithmetic_pressure[c])
        found.append(
            {
                "case": case_key(case),
                "path": made.path,
                "point_pressure_pa": {**pressures, **dict.fromkeys(dry, None)},
                "without_water": dry,
            }
        )
    return found


def after_trip_json(result: DutyResult) -> list[AfterTripJson] | None:
    """Return what runs on when a unit trips, case by case."""
    made = result.made.after_trip
    if made is None:
        return None
    return [
        {
            "case": case_key(case),
            "lost": made.lost[c],
            "units_left": int(made.running[c]),
            "state": State(int(made.state[c])).name.lower(),
            "best_efficiency_share_ratio": or_null(made.best_efficiency_share[c]),
            "npsh_available_m": or_null(made.npsh_available[c]),
            "npsh_required_m": or_null(made.npsh_required[c]),
            "point_pressure_pa": by_point(result, made.point_pressure[c]),
            "without_water": _dry(result, made.point_without_water[c]),
            "flow_at_end_of_curve_m3_s": or_null(made.flow_at_end[c]),
        }
        for c, case in enumerate(made.cases)
    ]


def one_pump_alone_json(result: DutyResult) -> list[OnePumpAloneJson] | None:
    """Return each kind of pump alone, run out; None if low supply is not stated."""
    made = result.made.one_pump_alone
    if made is None:
        return None
    found = []
    for u, slot in enumerate(made.slots):
        dry = Place(int(made.suction_breaks_at[u])) is not Place.NOWHERE
        row = {
            "slot": slot,
            "pipes": made.pipes,
            "ends_at": "last_row" if made.to_last_row[u] else "open_zone",
            **null_or_why(
                {
                    "flow_m3_s": made.flow[u],
                    "suction_pressure_pa": made.suction_pressure[u],
                    "best_efficiency_share_ratio": made.best_efficiency_share[u],
                    "npsh_available_m": made.npsh_available[u],
                    "npsh_required_m": made.npsh_required[u],
                    "shaft_power_w": made.shaft_power[u],
                },
                MISSING,
                {"suction_pressure_pa": NO_WATER, "npsh_available_m": NO_WATER} if dry else {},
            ),
        }
        found.append(cast(OnePumpAloneJson, row))
    return found


def handover_json(result: DutyResult) -> list[HandoverJson] | None:
    """Return the flows between one number of units and the next, at each supply state."""
    made = result.made.handover
    if made is None:
        return None
    return [
        {
            "fewer": _slots(result, fewer),
            "more": _slots(result, more),
            "supply": supply,
            "fewer_end_m3_s": or_null(made.fewer_end[h, s]),
            "more_start_m3_s": or_null(made.more_start[h, s]),
        }
        for h, (fewer, more) in enumerate(zip(made.fewer, made.more, strict=True))
        for s, supply in enumerate(SUPPLY_STATES)
    ]


def firm_capacity_json(result: DutyResult) -> list[FirmCapacityJson]:
    """Return the firm capacity for each requirement and horizon."""
    return [
        {
            "requirement": each.requirement,
            "fire": each.fire,
            "horizon": each.horizon,
            "required_flow_m3_s": or_null(each.required_flow),
            "by_head_m3_s": or_null(each.by_head),
            "by_head_limit": each.by_head_limit,
            # with a limit that could not be counted it would only be a number too large
            "by_all_m3_s": None if each.not_counted else or_null(each.by_all),
            "by_all_limit": "not_checked" if each.not_counted else each.by_all_limit,
            "by_all_at_lower_corner_m3_s": or_null(each.by_all_weak),
            "test_grade": each.test_grade,
            "hours_s": each.hours,
            "not_counted": list(each.not_counted),
            "unit_out": each.unit_out,
            "all_running_m3_s": or_null(each.all_running),
            "runs_out_year": each.runs_out,
        }
        for each in result.made.firm_capacity
    ]


def _dry(result: DutyResult, without: Flags) -> list[str]:
    return [point.id for point, dry in zip(result.points, without, strict=True) if dry]


def _slots(result: DutyResult, combination: int) -> list[str]:
    flags = result.combinations[combination]
    return [slot.id for slot, runs in zip(result.slots, flags, strict=True) if runs]


def cut_out_json(result: DutyResult) -> list[CutOutJson] | None:
    """Return what runs with the supply tank at its cut-out; None without such a level."""
    made = result.made.cut_out
    if made is None:
        return None
    ids = [slot.id for slot in result.slots]
    return [
        {
            "case": case_key(case),
            "running": _slots(result, int(made.combination[m])),
            "state": State(int(made.state[m])).name.lower(),
            "flow_m3_s": or_null(made.flow[m]),
            "depth_over_outlet_m": or_null(made.depth),
            "submergence_needed_m": or_null(made.submergence[m]),
            "npsh_available_m": _by_slot(ids, made.npsh_available[m]),
            "npsh_required_m": _by_slot(ids, made.npsh_required[m]),
        }
        for m, case in enumerate(made.cases)
    ]


def _by_slot(ids: list[str], values: Iterable[float]) -> dict[str, float | None]:
    return {name: or_null(value) for name, value in zip(ids, values, strict=True)}
