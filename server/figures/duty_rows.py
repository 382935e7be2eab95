"""The duty of each case as one row of SI numbers, for every duty table."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from server.figures.band import BandMark, worst_mark
from server.figures.case_words import (
    no_duty_words,
    running_words,
    scenario_title,
    scenarios_of,
    stage_cases,
    state_words,
    three_cases,
)
from server.studies.duty_result import Place
from server.studies.findings.judged_set import JudgedSet
from server.studies.shapes import Case


@dataclass(frozen=True, slots=True)
class DutyRow:
    """One case; a number not to be had is None, `reason` says why there is no duty.

    `dry` names the numbers that are none because there is no water: "connection", "suction",
    "npsh", "discharge", "point-0" and so on.
    """

    case: int
    of: Case
    title: str
    state: str
    own: bool  # the state that the scenario itself shows
    reason: str  # empty when there is a duty
    flow: float | None  # [m3/s]
    required_head: float | None  # [m]
    head: float | None  # [m]
    running: str
    units: int
    speed: float | None  # ratio
    held: bool | None
    mark: BandMark | None
    npsh_available: float | None  # of the pump with the least margin [m]
    npsh_required: float | None  # [m]
    npsh_margin: float | None  # [m]
    connection_pressure: float | None  # [Pa]
    suction_pressure: float | None  # [Pa]
    discharge_pressure: float | None  # [Pa]
    point_pressures: tuple[float | None, ...]  # [Pa]
    efficiency: float | None  # of the running pumps together, ratio
    shaft_power: float | None  # [W]
    wire_power: float | None  # [W]
    energy: float | None  # [J/m3]
    dry: frozenset[str] = frozenset()


@dataclass(frozen=True, slots=True)
class ScenarioDuty:
    """A scenario: its own row, the three supply states, and the further stages of a tank."""

    scenario: str
    own: DutyRow
    states: tuple[DutyRow, ...]
    stages: tuple[DutyRow, ...] = ()

    @property
    def all_rows(self) -> tuple[DutyRow, ...]:
        """Every row: the supply states, then the stages."""
        return (*self.states, *self.stages)


def scenario_duties(judged: JudgedSet) -> tuple[ScenarioDuty, ...]:
    """Return every scenario of a solved set with its three states, in the document's order."""
    duties: list[ScenarioDuty] = []
    for scenario in scenarios_of(judged.result):
        rows = tuple(duty_row(judged, case) for case in three_cases(judged.result, scenario))
        own = next((row for row in rows if row.own), rows[0] if rows else None)
        stages = tuple(duty_row(judged, case) for case in stage_cases(judged.result, scenario))
        if own is not None:
            duties.append(ScenarioDuty(scenario, own, rows, stages))
    return tuple(duties)


def duty_row(judged: JudgedSet, case: int) -> DutyRow:
    """Return one case as a row."""
    result = judged.result
    of = result.cases[case]
    combination = int(result.chosen[case])
    solved = (case, combination) in set(judged.stated)
    k = max(combination, 0)
    running = list(judged.running(case, k)) if solved else []
    flow = _number(result.flow[case, k]) if solved else _number(result.demand[case])
    available, required = _npsh(judged, case, k, running)
    shaft, wire = (
        _sum(result.shaft_power[case, k], running),
        _sum(result.wire_power[case, k], running),
    )
    useful = _sum(result.shaft_power[case, k] * result.efficiency[case, k], running)
    return DutyRow(
        case=case,
        of=of,
        title=scenario_title(judged, of.scenario),
        state=state_words(judged, case),
        own=bool(result.shown[case]),
        reason="" if solved else no_duty_words(judged, case),
        flow=flow,
        required_head=_number(result.required_head[case]),
        head=_number(result.station_head[case, k]) if solved else None,
        running=running_words(judged, case) if solved else "none",
        units=len(running),
        speed=_number(result.speed[case, k, running[0]]) if running else None,
        held=bool(result.set_point_held[case, k]) if solved else None,
        mark=worst_mark(judged, case, k) if solved else None,
        npsh_available=available,
        npsh_required=required,
        npsh_margin=None if available is None or required is None else available - required,
        connection_pressure=_number(result.connection_pressure[case]),
        suction_pressure=_number(result.suction_pressure[case]),
        discharge_pressure=_number(result.discharge_pressure[case, k]) if solved else None,
        point_pressures=tuple(
            _number(result.point_pressure[case, k, p]) if solved else None
            for p in range(len(result.points))
        ),
        efficiency=None if not shaft or useful is None else useful / shaft,
        shaft_power=shaft,
        wire_power=wire,
        energy=None if wire is None or not flow else wire / flow,
        dry=_dry(judged, case, k),
    )


def _dry(judged: JudgedSet, case: int, k: int) -> frozenset[str]:
    """Return the places without water in a case."""
    result = judged.result
    place = judged.dry.get(case, Place.NOWHERE)
    found = {"suction", "npsh"} if place is not Place.NOWHERE else set()
    if place is Place.CONNECTION:
        found.add("connection")
    if bool(result.discharge_without_water[case, k]):
        found.add("discharge")
    found.update(f"point-{p}" for p in np.flatnonzero(result.point_without_water[case, k]))
    return frozenset(found)


def worst(
    rows: Sequence[DutyRow],
    value: Callable[[DutyRow], float | None],
    *,
    highest: bool = False,
    dry: str = "",
) -> DutyRow | None:
    """Return the row with the least (or highest) value; None when no row has one.

    A row in which the place named `dry` has no water is worse than any number.
    """
    without = next((row for row in rows if dry in row.dry), None)
    if without is not None:
        return without
    known = [(number, row) for row in rows if (number := value(row)) is not None]
    if not known:
        return None
    pick = max if highest else min
    return pick(known, key=lambda pair: pair[0])[1]


def wet(row: DutyRow, place: str, value: float | None) -> float | str | None:
    """Return a number where there is water to have one, else that there is none."""
    return "no water" if place in row.dry else value


def _npsh(
    judged: JudgedSet, case: int, k: int, running: Sequence[int]
) -> tuple[float | None, float | None]:
    """Return NPSH available and required of the running pump with the least margin."""
    result = judged.result
    pairs = [
        (float(result.npsh_available[case, k, n]), float(result.npsh_required[case, k, n]))
        for n in running
    ]
    full = [p for p in pairs if np.isfinite(p[0]) and np.isfinite(p[1])]
    if full:
        return min(full, key=lambda p: p[0] - p[1])
    only = [p[0] for p in pairs if np.isfinite(p[0])]
    return (min(only), None) if only else (None, None)


def _sum(
    values: np.ndarray[tuple[int, ...], np.dtype[np.float64]], running: Sequence[int]
) -> float | None:
    total = float(np.sum(values[list(running)])) if running else float("nan")
    return total if np.isfinite(total) else None


def _number(value: float) -> float | None:
    return float(value) if np.isfinite(value) else None
