"""Requirement rows, compliance rows and the lead sentence in words."""

from collections.abc import Iterable

from server.station.station import Station
from server.studies.findings.case_words import scenario_title
from server.studies.findings.compliance import ComplianceRow
from server.studies.findings.requirements import RequirementCell, RequirementRow
from server.studies.findings.words import REGION_WORDS, VERDICT_WORDS, amount_words, sentence
from server.studies.shapes import Amount, Finding, Region, Severity, Verdict
from server.units import View, display_unit, shown

_TITLES = {
    "peak_hour": "Peak hour, {service} at {point}",
    "maximum_day": "Maximum day, {service} at {point}",
    "maximum_day_fire": "Maximum day and fire, {residual} at {point}, {fire} at every customer",
    "minimum_night": "Minimum night, every pump in its preferred region",
    "npsh": "NPSH, {ratio} times and {margin} above required",
    "suction_main": "{supply}, {limit} at the connection",
    "highest_pressure": "Highest pressure, {limit} at {point}",
    "supplying_zone": "Supplying zone, both ways",
    "tank_refill": "Maximum day into the full tank in {hours}",
    "region": "Every number running, every pump in its preferred region",
    "submergence": "Water over the outlet of the supply tank at its cut-out",
    "motor": "Motor not overloaded up to the last row",
    "fire_storage": "Fire from the tank",
}
_POINTS = {
    "peak_hour": "the critical customer", "maximum_day": "the critical customer",
    "maximum_day_fire": "the hydrant", "highest_pressure": "the lowest customer",
}  # fmt: skip
_LIMITS = {
    "connection": "supplying main", "suction_gauge": "suction gauge", "npsh": "NPSH margin",
    "curve_end": "end of the pump curve", "no_unit": "no unit left",
    "tank_level": "full tank", "held_flow": "held flow",
}  # fmt: skip
MOST_REASONS = 3


def requirement_title(row: RequirementRow, view: View) -> str:
    """Return the title of a row: "Peak hour, 250 kPa at Top Row 31"."""
    values = {each.name: amount_words(each, view) for each in row.limits}
    values.update({name: text or _POINTS.get(row.key, "") for name, text in row.names})
    return _TITLES[row.key].format_map(values)


def verdict_words(cell: RequirementCell) -> str:
    """Return the verdict of a cell; of the region its share and word: "33 %, outside"."""
    if (
        cell.region is not None
        and cell.region is not Region.NOT_CHECKED
        and cell.provided is not None
    ):
        return f"{amount_words(cell.provided, 'si')}, {REGION_WORDS[cell.region]}"
    return VERDICT_WORDS[cell.verdict]


def cell_words(cell: RequirementCell, view: View) -> str:
    """Return the numbers of a cell: "55.9 for 36.0 L/s", or why it is not checked."""
    if cell.because:
        return cell.because
    if cell.provided is None or cell.required is None:
        return ""
    if cell.region is not None:
        return f"region {'from' if _left(cell) else 'to'} {amount_words(cell.required, view)}"
    return pair_words(cell.provided, cell.required, view)


def _left(cell: RequirementCell) -> bool:
    return (cell.required is not None and cell.required.value or 0.0) < 1.0


def pair_words(provided: Amount, required: Amount, view: View) -> str:
    """Return provided for required with the unit once: "56.4 for 60.0 L/s"."""
    if provided.dimension is not required.dimension:
        return f"{amount_words(provided, view)} for {amount_words(required, view)}"
    places = provided.decimals if view == "si" else None
    number = shown(provided.value, provided.dimension, view, places)
    limit = shown(required.value, required.dimension, view, places)
    unit = display_unit(required.dimension, view).printed
    return f"{number} for {limit}" + (f"\u00a0{unit}" if unit else "")


def runs_out_words(row: RequirementRow, station: Station) -> str:
    """Return when a requirement is no longer met: "2039, supplying main", "after 2047"."""
    if not row.grows:
        return ""
    years = [horizon.year for horizon in station.horizons if horizon.year is not None]
    if row.runs_out is None:
        met = all(cell.verdict in (Verdict.MEETS, Verdict.AT_LIMIT) for cell in row.cells)
        return f"after {max(years)}" if years and met else ""
    return f"{row.runs_out}, {limit_title(row.runs_out_limit, station)}"


def limit_title(limit: str, station: Station) -> str:
    """Return in few words what limits a firm capacity."""
    if limit.startswith("point:"):
        point = limit.removeprefix("point:")
        return next(
            (p.title for p in station.zone.points if p.id == point and p.title), "a point"
        )
    return _LIMITS.get(limit, limit.replace("_", " "))


def compliance_words(
    row: ComplianceRow, station: Station, view: View
) -> tuple[str, str, str, str]:
    """Return required, provided, verdict and case or reason of a compliance row."""
    required = "" if row.required is None else amount_words(row.required, view)
    known = row.provided is not None and row.provided.value is not None
    provided = amount_words(row.provided, view) if known and row.provided else ""
    case = "" if row.case is None else scenario_title(station, row.case)
    said = ", ".join(part for part in (case, row.because) if part)
    return required, provided, VERDICT_WORDS[row.verdict], said


def lead(
    station: Station,
    set_id: str | None,
    holds: bool | None,
    findings: Iterable[Finding],
    view: View,
) -> str:
    """Return whether the proposed set holds, and why not, in one or two sentences."""
    title = next((each.title for each in station.sets if each.id == set_id), "")
    name = f"Set “{title}”" if title else "The proposed set"
    years = [horizon.year for horizon in station.horizons if horizon.year is not None]
    last = f" to {max(years)}" if years else ""
    own = [f for f in findings if f.pump_set in (None, set_id)]
    if set_id is None:
        return "No set is proposed yet, so nothing can be said to hold."
    if holds:
        return f"{name} holds every requirement that is judged{last}."
    if holds is None:
        open_ = [f for f in own if f.severity is Severity.NOT_CHECKED]
        return (
            f"Whether {name[:1].lower()}{name[1:]} holds is not known: {len(open_)} "
            f"{'thing is' if len(open_) == 1 else 'things are'} not checked. "
            + (sentence(open_[0], station, view) if open_ else "")
        ).rstrip()
    worst = [f for f in own if f.severity in (Severity.STOP, Severity.FAIL)]
    reasons = " ".join(sentence(f, station, view) for f in worst[:MOST_REASONS])
    more = len(worst) - MOST_REASONS
    rest = (
        f" {more} more {'finding does' if more == 1 else 'findings do'} not meet."
        if more > 0
        else ""
    )
    return f"{name} does not hold, because: {reasons}{rest}"
