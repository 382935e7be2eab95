"""Findings, cases and verdicts in words, in the reader's units: spelled here only."""

from server.station import paths
from server.station.station import Station
from server.studies.findings.case_words import also_words, horizon_title, scenario_title
from server.studies.findings.criteria import ROWS, criteria_of
from server.studies.findings.profiles import RULES
from server.studies.findings.reason_words import REASONS
from server.studies.findings.registry import CODES
from server.studies.findings.rule import BASIS_WORDS
from server.studies.shapes import Amount, Finding, Path, Region, Severity, Verdict
from server.units import Dimension, View, display_decimals, shown_with_unit

__all__ = [
    "REGION_WORDS", "SEVERITY_WORDS", "VERDICT_WORDS", "amount_words", "basis", "field_words",
    "horizon_title", "scenario_title", "sentence", "severity_words", "short",
]  # fmt: skip

SEVERITY_WORDS: dict[Severity, str] = {
    Severity.STOP: "Stop",
    Severity.FAIL: "Does not meet",
    Severity.NOT_CHECKED: "Not checked",
    Severity.CAUTION: "Caution",
    Severity.NOTE: "Note",
}
VERDICT_WORDS: dict[Verdict, str] = {
    Verdict.MEETS: "Meets",
    Verdict.AT_LIMIT: "At the limit",
    Verdict.DOES_NOT_MEET: "Does not meet",
    Verdict.NOT_CHECKED: "Not checked",
    Verdict.NOT_APPLICABLE: "Not applicable",
}
REGION_WORDS: dict[Region, str] = {
    Region.INSIDE: "inside",
    Region.EDGE: "edge",
    Region.OUTSIDE: "outside",
    Region.NOT_CHECKED: "not checked",
}
_CHECKS = {
    "peak_hour": "in its own peak hour with the station's largest normal draw",
    "fire_there": "in its own fire and maximum day with the station at peak hour",
    "fire_here": "in its own peak hour with the station pumping a fire",
}


def severity_words(severity: Severity) -> str:
    """Return how a severity is said."""
    return SEVERITY_WORDS[severity]


def short(finding: Finding) -> str:
    """Return the finding in a few words."""
    return CODES[finding.code].short


def basis(finding: Finding, station: Station | None = None) -> str:
    """Return on what a finding rests: source of the limit, common practice, or the physics."""
    if finding.basis in RULES:
        if station is not None:
            return criteria_of(station)[finding.basis].source
        return RULES[finding.basis].source_words
    return BASIS_WORDS["common_practice"] if finding.basis == "common_practice" else "Computed"


def field_words(station: Station, path: Path) -> str:
    """Return a field in words; a criterion by its rule's title."""
    if path.startswith(f"{ROWS}/"):
        key, _, field = path.removeprefix(f"{ROWS}/").partition("/")
        if key in RULES:
            return f"Criteria, {RULES[key].title}" + (f", {field}" if field else "")
    return paths.words(station, path)


def amount_words(amount: Amount, view: View, more: int = 0) -> str:
    """Return an amount with its unit as a person reads it; `more` adds decimals."""
    if amount.dimension is Dimension.TIME and amount.value is not None and amount.value >= 3600:
        return f"{amount.value / 3600:.3g}\u00a0h"
    decimals = amount.decimals
    if view == "us" and amount.dimension not in (Dimension.RATIO, Dimension.NUMBER):
        decimals = None  # the decimals stated are those of the SI unit
    if decimals is None:
        decimals = display_decimals(amount.dimension, view)
    if amount.value is None:
        return "–"
    return shown_with_unit(amount.value, amount.dimension, view, decimals + more)


def _pair(finding: Finding, view: View) -> dict[str, str]:
    """Return provided and required, with digits enough that they do not read the same."""
    provided, required = finding.provided, finding.required
    if provided is None or required is None:
        return {
            name: amount_words(each, view)
            for name, each in (("provided", provided), ("required", required))
            if each is not None
        }
    more = 0
    while (
        more < 4
        and provided.dimension is required.dimension
        and provided.value != required.value
        and amount_words(provided, view, more) == amount_words(required, view, more)
    ):
        more += 1
    return {
        "provided": amount_words(provided, view, more),
        "required": amount_words(required, view, more),
    }


def sentence(finding: Finding, station: Station, view: View) -> str:
    """Return the finding as a sentence for a person, with numbers in the view's units.

    Parameters
    ----------
    finding : Finding
        What was found.
    station : Station
        The document it was found in: names of scenarios and fields are read from it.
    view : {"si", "us"}
        Units in which it is read.
    """
    names = dict(finding.names)
    given = CODES[finding.code]
    template = given.variants.get(names.get("state", ""), given.sentence)
    values = {
        **names,
        **{each.name: amount_words(each, view) for each in finding.others},
        **_pair(finding, view),
        "case": "" if finding.governing is None else scenario_title(station, finding.governing),
        "also": also_words(station, finding),
        "field": _capital(field_words(station, finding.subject)),
        **_derived(finding, station, names, view),
    }
    return _capital(template.format_map(values))


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]


def _derived(
    finding: Finding, station: Station, names: dict[str, str], view: View
) -> dict[str, str]:
    """Return the words that are put together from several amounts or names."""
    delay = next((each for each in finding.others if each.name == "delay"), None)
    known_delay = delay is not None and delay.value is not None
    return {
        "after_delay": f" after {amount_words(delay, view)}" if known_delay and delay else "",
        "water_words": _water(finding, names, view),
        "standby_words": _standby(finding, names, view),
        "end_words": "starts at" if names.get("side") == "left" else "ends at",
        "check_words": _CHECKS.get(names.get("check", ""), ""),
        "absent_words": _absent(station, finding),
        "reason_words": _reason(finding.because or ""),
        "part_words": "the set is not solved" if names.get("state") == "stops"
        else "what hangs on it is not checked",
        "said_words": _said(finding, names, view),
        "horizon": names.get("horizon")
        or ("" if finding.governing is None else horizon_title(station,
                                                               finding.governing.horizon)),
    }  # fmt: skip


def _said(finding: Finding, names: dict[str, str], view: View) -> str:
    """Return the default that stands in, in brackets: in words, or as an amount."""
    assumed = next((each for each in finding.others if each.name == "assumed"), None)
    said = names.get("said") or ("" if assumed is None else amount_words(assumed, view))
    return f" ({said})" if said else ""


def _reason(reason: str) -> str:
    return REASONS.get(reason, reason.replace("_", " "))


def _water(finding: Finding, names: dict[str, str], view: View) -> str:
    """Return what the zone has with the station off; never a figure below a vacuum."""
    bound = " at most" if names.get("path") == "through_pumps" else ""
    if (
        names.get("water") == "none"
        or finding.provided is None
        or finding.provided.value is None
    ):
        return "there is no water: the main drains"
    pressure = amount_words(finding.provided, view)
    if names.get("water") == "below":
        below = "below atmosphere, where dirty water is drawn in,"
        return f"the pressure falls to {pressure}{bound}, {below}"
    return f"the pressure falls to {pressure}{bound}"


def _standby(finding: Finding, names: dict[str, str], view: View) -> str:
    transfer = next((each for each in finding.others if each.name == "transfer"), None)
    if names.get("kind", "") == "":
        return "standby power is not given"
    engine = (
        "the automatic generator"
        if names["kind"] == "automatic"
        else "a generator started by hand"
    )
    if transfer is None or transfer.value is None:
        return f"the time to transfer to {engine} is not given"
    carries = f" and its carrying {names['carries']}" if names.get("carries") else ""
    return f"{engine}, {amount_words(transfer, view)} to transfer{carries}"


def _absent(station: Station, finding: Finding) -> str:
    """Return the absent fields: "loss in the supplying zone and 6 more are not given"."""
    if not finding.mend:
        return ""
    first = field_words(station, finding.mend[0]).rsplit(", ", 1)[-1]
    rest = len(finding.mend) - 1
    return f"{first} is not given" if rest == 0 else f"{first} and {rest} more are not given"
