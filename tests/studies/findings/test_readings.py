"""A reading compares one number with one limit; findings gather those not met."""

from dataclasses import replace

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.findings.reading import Reading, findings_from
from server.studies.limits import limits_of
from server.studies.shapes import Case, Region, Severity, Verdict
from server.units import Dimension
from tests.studies.findings.demo import assessed, demo


def _reading(provided: float, required: float = 140e3, **changes: object) -> Reading:
    base = Reading(
        code="suction_main_low", severity=Severity.FAIL, subject="/supply", pump_set="st-a",
        criterion="/criteria/rows/suction-main-minimum",
        case=Case("sc-a", "st-a", "hz-a", "low", "aged", None),
        provided=amount("pressure", provided, Dimension.PRESSURE),
        required=amount("required", required, Dimension.PRESSURE), sense="at_least",
        mend=("/supply/states/low",),
    )  # fmt: skip
    return base.varied(**changes)


@pytest.mark.parametrize(
    ("provided", "verdict"),
    [
        (139_999.0, Verdict.DOES_NOT_MEET),
        (140_000.0, Verdict.AT_LIMIT),
        (142_000.0, Verdict.AT_LIMIT),
        (143_000.0, Verdict.MEETS),
        (float("nan"), Verdict.NOT_CHECKED),
    ],
)
def test_limit_is_judged_unrounded_and_close_above_it_is_at_the_limit(
    provided: float, verdict: Verdict
) -> None:
    assert _reading(provided).verdict is verdict


def test_last_digit_of_a_solver_is_no_failure() -> None:
    assert _reading(140_000.0 * (1 - 1e-12)).verdict is Verdict.AT_LIMIT


def test_largest_allowed_turns_the_sense() -> None:
    assert _reading(150e3, sense="at_most").verdict is Verdict.DOES_NOT_MEET
    assert _reading(130e3, sense="at_most").verdict is Verdict.MEETS


@given(st.lists(st.floats(1e3, 300e3), min_size=1, max_size=8))
@settings(deadline=None, max_examples=40)
def test_one_finding_a_key_with_the_worst_case_first(pressures: list[float]) -> None:
    readings = [
        _reading(p, case=Case(f"sc-{i}", "st-a", "hz-a", "low", "aged", None))
        for i, p in enumerate(pressures)
    ]
    findings = findings_from(readings)
    low = [p for p in pressures if p < 140e3 * (1 - 1e-9)]
    assert len(findings) == (1 if low else 0)
    if low:
        finding = findings[0]
        assert finding.provided is not None
        assert finding.provided.value == min(low)
        assert finding.governing == finding.cases[0]
        assert len(finding.cases) == len(low)


@pytest.mark.parametrize(
    ("share", "region"),
    [
        (0.699, Region.OUTSIDE), (0.70, Region.EDGE), (0.719, Region.EDGE),
        (0.721, Region.INSIDE),
        (1.0, Region.INSIDE), (1.179, Region.INSIDE), (1.185, Region.EDGE), (1.20, Region.EDGE),
        (1.201, Region.OUTSIDE), (float("nan"), Region.NOT_CHECKED),
    ],
)  # fmt: skip
def test_region_has_its_ends_inside_and_an_edge_of_two_points(
    share: float, region: Region
) -> None:
    assert _judged().region(0, share) is region


def test_region_of_a_pump_of_high_specific_speed_is_narrower() -> None:
    judged = _judged()
    low, high = limits_of(judged.station).preferred_region(100.0)
    first = replace(judged.result.slots[0], preferred_low=low, preferred_high=high)
    slots = (first, *judged.result.slots[1:])
    fast = JudgedSet(
        judged.station, judged.criteria, judged.entered, replace(judged.result, slots=slots)
    )
    assert fast.region(0, 0.75) is Region.OUTSIDE
    assert fast.region(0, 1.17) is Region.OUTSIDE
    assert fast.region(1, 0.75) is Region.INSIDE


def _judged() -> JudgedSet:
    assessment = assessed(demo())
    result = assessment.results["st-v3a7pe"]
    return JudgedSet(demo(), assessment.criteria, demo().sets[0], result)  # type: ignore[arg-type]
