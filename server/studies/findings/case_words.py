"""Cases in words: scenario, supply state, unit out; and where else a finding stands."""

from server.station.station import Station
from server.station.titles import item_title
from server.studies.findings.judged_set import MADE
from server.studies.shapes import Case, Finding

_MADE_TITLES = {
    "no-flow-held": "no flow with the set point held",
    "shut-off": "shut-off at top speed",
    "hand-over": "hand-over",
    "alone": "one pump alone at top speed",
    "firm-peak_hour": "firm capacity, peak hour",
    "firm-maximum_day_fire": "firm capacity, maximum day and fire",
    "firm-tank_refill": "firm capacity, refill of the tank",
}
_COMMON_STARTS = (
    "Minimum",
    "Average",
    "Maximum",
    "Peak",
    "Shut-off",
    "Easiest",
    "Fire",
    "Night",
)


def _within_sentence(title: str) -> str:
    """Return a scenario's title as inside a sentence; a proper name keeps its capital."""
    first = title.split(" ", 1)[0].rstrip(",")
    return title[:1].lower() + title[1:] if first in _COMMON_STARTS else title


def scenario_name(station: Station, case: Case) -> str:
    """Return the scenario of a case without its supply state."""
    made = case.scenario.removeprefix(MADE)
    if made != case.scenario:
        return _MADE_TITLES.get(made, made.replace("-", " ").replace("_", " "))
    for scenario in station.scenarios:
        if scenario.id == case.scenario:
            return (
                _within_sentence(scenario.title)
                if scenario.title
                else "a scenario without a name"
            )
    return case.scenario.replace("-", " ").replace("_", " ")


def slot_title(station: Station, case: Case) -> str:
    """Return the short name of the unit that is out in a case."""
    for each in station.sets:
        for slot in each.slots:
            if slot.id == case.out and (each.id == case.pump_set or not case.pump_set):
                return slot.title or "a unit"
    return "a unit"


def scenario_title(station: Station, case: Case) -> str:
    """Return a case in words: "maximum day and fire, design, low supply, P1 out"."""
    out = "" if case.out is None else f", {slot_title(station, case)} out"
    name = scenario_name(station, case)
    if case.scenario == f"{MADE}hand-over":
        return supply_words(case)
    units = "" if case.units is None else f", {case.units} running"
    return f"{name}, {supply_words(case)}{units}{out}"


def supply_words(case: Case) -> str:
    """Return the supply state of a case: "low supply"."""
    return "supply at its cut-out" if case.supply == "cut_out" else f"{case.supply} supply"


def horizon_title(station: Station, horizon_id: str) -> str:
    """Return a horizon in words: "Opening, 2027"."""
    for horizon in station.horizons:
        if horizon.id == horizon_id:
            year = "" if horizon.year is None else str(horizon.year)
            named = ", ".join(part for part in (horizon.title, year) if part)
            return named or item_title(station, f"/horizons/{horizon_id}")
    return ""


def also_words(station: Station, finding: Finding) -> str:
    """Return where else a finding stands: "; also in normal supply and 2 more scenarios"."""
    first = finding.governing
    if first is None or len(finding.cases) < 2:
        return ""
    others = [case for case in finding.cases if case != first]
    states = [case.supply for case in others if case.scenario == first.scenario]
    scenarios = list(dict.fromkeys(c.scenario for c in others if c.scenario != first.scenario))
    parts = []
    if states:
        parts.append(f"{' and '.join(dict.fromkeys(states))} supply")
    if len(scenarios) == 1:
        parts.append(
            scenario_name(station, next(c for c in others if c.scenario == scenarios[0]))
        )
    elif scenarios:
        parts.append(f"{len(scenarios)} more scenarios")
    return f"; also in {' and in '.join(parts)}" if parts else ""
