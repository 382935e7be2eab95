"""A reading: one result against one limit. Findings and tables are made of readings."""

import math
from collections.abc import Iterable
from dataclasses import dataclass, field
from typing import Literal

from server.studies.shapes import SEVERITY_ORDER, Amount, Case, Finding, Path, Severity, Verdict

AT_LIMIT_SHARE = 0.02  # of the limit: a margin under it is said to be at the limit
TOLD_ELSEWHERE = (
    "told_elsewhere"  # code of a reading whose finding stands under another reading
)
ROUNDING = 1e-9  # relative: a held value is the limit itself but for the solver's last digits
Sense = Literal["at_least", "at_most"]
Names = tuple[tuple[str, str], ...]


@dataclass(kw_only=True, eq=False)
class Reading:
    """One comparison; `severity` is how it weighs when the limit is not met.

    Never changed after it is made. It is not frozen because a judgement makes a thousand of
    them between an edit and its answer, and a frozen one takes three times as long to make.
    """

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
    without_number: bool = False  # not met, and no number can say by how much: no water
    margin: float = field(init=False)  # provided over required, below zero is not met
    verdict: Verdict = field(init=False)

    def __post_init__(self) -> None:
        """Compare, once."""
        provided, required = self.provided.value, self.required.value
        if self.without_number:
            self.margin, self.verdict = -math.inf, Verdict.DOES_NOT_MEET
            return
        if provided is None or required is None:
            self.margin, self.verdict = float("nan"), Verdict.NOT_CHECKED
            return
        self.margin = provided - required if self.sense == "at_least" else required - provided
        scale = abs(required)
        if self.margin < -ROUNDING * (scale or 1e-12):
            self.verdict = Verdict.DOES_NOT_MEET
        else:
            at_limit = self.margin < self.at_limit_share * scale
            self.verdict = Verdict.AT_LIMIT if at_limit else Verdict.MEETS

    def varied(self, **changes: object) -> "Reading":
        """Return the same reading with some of it changed, compared anew."""
        new = object.__new__(Reading)
        new.__dict__.update(self.__dict__, **changes)
        new.__post_init__()
        return new

    @property
    def relative_margin(self) -> float:
        """The margin in proportion to the limit."""
        return self.margin / max(abs(self.required.value or 0.0), 1e-9)


def broken(reading: Reading) -> bool:
    """Return whether the limit is not met."""
    return reading.verdict is Verdict.DOES_NOT_MEET


def worst_first(readings: Iterable[Reading]) -> list[Reading]:
    """Return readings by severity, then by what is lacking in proportion to the limit."""
    return sorted(
        readings,
        key=lambda r: (
            SEVERITY_ORDER.index(r.severity),
            r.relative_margin,
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
