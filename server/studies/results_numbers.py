"""Numbers and cases of a result as JSON data."""

import math
from collections.abc import Iterable, Mapping

from server.studies.duty_result import DutyResult
from server.studies.results_shape import CaseKeyJson
from server.studies.shapes import Case

MISSING = "input_missing"  # why a number is null, where no state says it
NO_WATER = "no_water"
NOT_APPLICABLE = "not_applicable"  # this kind of station or state has no such number


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
        "units": case.units,
    }


def by_point(result: DutyResult, values: Iterable[float]) -> dict[str, float | None]:
    """Return one number for each named point, by the point's id."""
    return {
        point.id: or_null(value) for point, value in zip(result.points, values, strict=True)
    }


def null_or_why(
    values: Mapping[str, float], because: str, of: Mapping[str, str] | None = None
) -> dict[str, object]:
    """Return the numbers under their keys, null where one has no meaning, and then why.

    Parameters
    ----------
    values : mapping
        Numbers by key.
    because : str
        Why one of them has no meaning.
    of : mapping, optional
        Another reason, by key.
    """
    found: dict[str, object] = {name: or_null(value) for name, value in values.items()}
    absent = [name for name, value in values.items() if not math.isfinite(value)]
    if absent:
        found["null_because"] = {name: (of or {}).get(name, because) for name in absent}
    return found
