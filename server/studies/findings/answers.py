"""The engineer's answers to findings; an answer never hides its finding."""

from server.station.station import Station
from server.studies.shapes import Finding


def answer_key(finding: Finding) -> str:
    """Return what an answer names its finding by, in the document."""
    return " ".join(part for part in (finding.code, finding.subject, finding.pump_set) if part)


def answer_to(finding: Finding, station: Station) -> str:
    """Return the answer to a finding, empty when there is none."""
    key = answer_key(finding)
    return next((a.text for a in station.answers if a.finding == key and a.text), "")


def orphaned(station: Station, findings: tuple[Finding, ...]) -> tuple[str, ...]:
    """Return the texts of answers whose finding is no longer there."""
    standing = {answer_key(finding) for finding in findings}
    return tuple(a.text for a in station.answers if a.finding not in standing and a.text)
