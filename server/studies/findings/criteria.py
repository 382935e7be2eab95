"""The criteria of a station: the profile's limits, with the rows that depart from it."""

import math
from dataclasses import dataclass

from server.station.entry import Quantity
from server.station.station import Station
from server.studies.findings.profiles import RULES, limit_in
from server.studies.findings.rule import Rule, Sense
from server.units import Dimension

ROWS = "/criteria/rows"


@dataclass(frozen=True, slots=True)
class Criterion:
    """One limit as it stands in this station."""

    key: str
    path: str  # the row's path; its limit is at path + "/limit"
    title: str
    dimension: Dimension
    quantity: Quantity | None
    si: float | None
    source: str
    departs: bool
    reason: str
    sense: Sense
    rule: Rule
    profile: Quantity | None


def path_of(key: str) -> str:
    """Return the path of the row of the rule `key`."""
    return f"{ROWS}/{key}"


def _source(rule: Rule, typed: str, departs: bool) -> str:
    if not departs:
        return rule.source_words
    return (
        f"Typed for this station: {typed}"
        if typed
        else "Typed for this station, no source named"
    )


def criteria_of(station: Station) -> dict[str, Criterion]:
    """Return every criterion by its key, in the order of the sheet."""
    rows = {row.id: row for row in station.criteria.rows}
    criteria: dict[str, Criterion] = {}
    for key, rule in RULES.items():
        profile = limit_in(rule, station.criteria.profile)
        row = rows.get(key)
        typed = row.limit if row is not None and rule.sense != "stated" else None
        quantity = typed if typed is not None else profile
        departs = typed is not None and (
            profile is None
            or not math.isclose(typed.si, profile.si, rel_tol=1e-9, abs_tol=1e-12)
        )
        said = row.source.text if row is not None and row.source is not None else ""
        if not said and typed is not None and typed.source is not None:
            said = typed.source.text
        criteria[key] = Criterion(
            key, path_of(key), rule.title, rule.dimension, quantity,
            None if quantity is None else quantity.si, _source(rule, said, departs), departs,
            row.reason.strip() if row is not None else "", rule.sense, rule, profile,
        )  # fmt: skip
    return criteria
