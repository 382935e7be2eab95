"""Numbers and cases of a result as JSON data."""

import math
from collections.abc import Iterable

from server.studies.duty_result import DutyResult
from server.studies.results_shape import CaseKeyJson
from server.studies.shapes import Case


def or_null(value: float) -> float | None:
    """Return a float that JSON can hold, None for one without meaning."""
    return float(value) if math.isfinite(value) else None


def case_key(case: Case) -> CaseKeyJson:
    """Return a case as its ids and states."""
    return {
        "scenario": case.scenario,
        "pump_set": case.pump_set,
        "horizon": case.horizon,
        "supply": case.supply,
        "pipes": case.pipes,
        "out": case.out,
    }


def by_point(result: DutyResult, values: Iterable[float]) -> dict[str, float | None]:
    """Return one number for each named point, by the point's id."""
    return {
        point.id: or_null(value) for point, value in zip(result.points, values, strict=True)
    }
