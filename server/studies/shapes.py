"""Severities, cases, findings and the stamp that stands in front of every result."""

from dataclasses import dataclass
from enum import StrEnum
from typing import Literal, NamedTuple

from server.units import Dimension

# a tank that feeds the station has a fourth state, which is made and never a scenario's
SupplyState = Literal["low", "normal", "high", "cut_out"]
SUPPLY_STATES: tuple[SupplyState, ...] = ("low", "normal", "high")
PipeAge = Literal["new", "aged"]
Path = str  # a field's or item's address in the document, "/zone/points/pt-c6n2vh/elevation"


class Severity(StrEnum):
    """How a finding weighs, worst first."""

    STOP = "stop"
    FAIL = "fail"
    NOT_CHECKED = "not_checked"
    CAUTION = "caution"
    NOTE = "note"


SEVERITY_ORDER: tuple[Severity, ...] = tuple(Severity)


class Verdict(StrEnum):
    """The answer to one requirement."""

    MEETS = "meets"
    AT_LIMIT = "at_limit"
    DOES_NOT_MEET = "does_not_meet"
    NOT_CHECKED = "not_checked"
    NOT_APPLICABLE = "not_applicable"


class Region(StrEnum):
    """Where a pump stands against its preferred operating region."""

    INSIDE = "inside"
    EDGE = "edge"
    OUTSIDE = "outside"
    NOT_CHECKED = "not_checked"


class Amount(NamedTuple):
    """An SI number that knows its dimension; `value` is None when it could not be had.

    A tuple, because a judgement makes two thousand of them between an edit and its answer.
    """

    name: str
    value: float | None
    dimension: Dimension
    decimals: int | None = None


@dataclass(frozen=True, slots=True)
class Case:
    """A fully determined state: ids of scenario, set and horizon, and the states chosen."""

    scenario: str
    pump_set: str
    horizon: str
    supply: SupplyState
    pipes: PipeAge
    out: str | None
    units: int | None = None  # running, where the level of a tank and not the demand tells

    def with_units(self, units: int | None) -> "Case":
        """Return the case with some number of units running; quicker than `replace`."""
        return Case(
            self.scenario, self.pump_set, self.horizon, self.supply, self.pipes, self.out, units
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class Finding:
    """One thing found, in all cases in which it stands; its sentence is made at the edge."""

    code: str
    severity: Severity
    subject: Path
    pump_set: str | None
    criterion: Path | None = None
    governing: Case | None = None
    cases: tuple[Case, ...] = ()
    provided: Amount | None = None
    required: Amount | None = None
    others: tuple[Amount, ...] = ()
    names: tuple[
        tuple[str, str], ...
    ] = ()  # words the sentence needs, as ("point", "Top Row 31")
    basis: str = "common_practice"
    mend: tuple[Path, ...] = ()
    because: str | None = None

    @property
    def key(self) -> tuple[str, str, str | None, str | None]:
        """What tells this finding from every other of the station."""
        return self.code, self.subject, self.pump_set, self.criterion


@dataclass(frozen=True, slots=True)
class Stamp:
    """Which study of which document by which program a result is."""

    study: str
    study_version: int
    program: str
    document: str
    inputs: str
