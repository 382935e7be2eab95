"""A reading: one result against one limit, met or not. Findings and tables are made of readings."""

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Literal

from server.studies.shapes import SEVERITY_ORDER, Amount, Case, Finding, Path, Severity, Verdict

AT_LIMIT_SHARE = 0.02  # of the limit: a margin under it is said to be at the limit
TOLD_ELSEWHERE = "told_elsewhere"  # code of a reading whose finding stands under another reading
ROUNDING = 1e-9  # relative: a held value is the limit itself but for the solver's last digits
Sense = Literal["at_least", "at_most"]
Names = tuple[tuple[str, str], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """One comparison; `severity` is how it weighs when the limit is not met."""

    code: str
    severity: Severity
    subject: Path
    pump_set: str | None
    criterion: Path | None
    case: Case | None
    provided: Amount
    required: Amount
    sense: Sense
    mend: tuple[Path, ...]
    others: tuple[Amount, ...] = ()
    names: Names = ()
    at_limit_share: float = AT_LIMIT_SHARE

    @property
    def margin(self) -> float:
        """Provided over required, in the sense of the limit: below zero is not met."""
        provided, required = self.provided.value, self.required.value
        if provided is None or required is None:
            return float("nan")
        return provided - required if self.sense == "at_least" else required - provided

    @property
    def verdict(self) -> Verdict:
        """The answer of this one comparison."""
        margin, scale = self.margin, abs(self.required.value or 0.0)
        if margin != margin:
            return Verdict.NOT_CHECKED
        if margin < -ROUNDING * max(scale, 1e-12):
            return Verdict.DOES_NOT_MEET
        return Verdict.AT_LIMIT if margin < self.at_limit_share * scale else Verdict.MEETS


def broken(reading: Reading) -> bool:
    """Return whether the limit is not met."""
    return reading.verdict is Verdict.DOES_NOT_MEET


def worst_first(readings: Iterable[Reading]) -> list[Reading]:
    """Return readings by severity, then by what is lacking in proportion to the limit."""
    return sorted(
        readings,
        key=lambda r: (
            SEVERITY_ORDER.index(r.severity),
            r.margin / max(abs(r.required.value or 0.0), 1e-9),
        ),
    )


def findings_from(readings: Iterable[Reading]) -> list[Finding]:
    """Return one finding for each (code, subject, set, criterion) whose limit is not met."""
    groups: dict[tuple[str, str, str | None, str | None], list[Reading]] = {}
    for reading in readings:
        if broken(reading) and reading.code != TOLD_ELSEWHERE:
            key = (reading.code, reading.subject, reading.pump_set, reading.criterion)
            groups.setdefault(key, []).append(reading)
    return [_finding(worst_first(group)) for group in groups.values()]


def _finding(group: list[Reading]) -> Finding:
    worst = group[0]
    cases = tuple(dict.fromkeys(reading.case for reading in group if reading.case is not None))
    return Finding(
        code=worst.code,
        severity=worst.severity,
        subject=worst.subject,
        pump_set=worst.pump_set,
        criterion=worst.criterion,
        governing=worst.case,
        cases=cases,
        provided=worst.provided,
        required=worst.required,
        others=worst.others,
        names=worst.names,
        basis=worst.criterion.rsplit("/", 1)[-1] if worst.criterion else "physics",
        mend=worst.mend,
    )
