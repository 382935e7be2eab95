"""Random well-formed stations, often absurd: no traceback, no NaN, no pass by silence."""

import re

import pytest
from hypothesis import HealthCheck, assume, given, settings
from hypothesis import strategies as st

from server.hydraulics.states import State
from server.memo.to_html import memo_html
from server.studies.assess import assess
from server.studies.duty_curves import duty_curves
from server.studies.duty_result import DutyResult
from server.studies.findings import words
from server.studies.results_json import results_bytes
from server.studies.results_schema import results_adapter
from server.studies.shapes import Severity, Verdict
from tests.studies.absurd import absurd_station

odd_stations = settings(
    deadline=None, max_examples=25, suppress_health_check=[HealthCheck.filter_too_much]
)
OPEN = (Severity.STOP, Severity.FAIL, Severity.NOT_CHECKED)


@odd_stations
@given(st.integers(0, 10**9))
def test_every_station_is_assessed_and_told(seed: int) -> None:
    station = absurd_station(seed)
    assume(station is not None)
    assert station is not None
    assessment = assess(station)
    results_adapter().validate_json(results_bytes(assessment), strict=True)
    for finding in assessment.findings:
        for view in ("si", "us"):
            said = words.sentence(finding, station, view)
            assert not re.search(r"\bnan\b|None|[{}]", said), said
    for row in assessment.requirements:
        for cell in row.cells:
            assert cell.verdict is not Verdict.NOT_CHECKED or cell.because, row.key
    assert memo_html(station, "si", "a4")
    for result in assessment.results.values():
        if isinstance(result, DutyResult):
            duty_curves(station, result)


@odd_stations
@given(st.integers(0, 10**9))
def test_what_cannot_be_solved_is_never_silent(seed: int) -> None:
    station = absurd_station(seed)
    assume(station is not None)
    assert station is not None
    assessment = assess(station)
    for name, result in assessment.results.items():
        told = {f.severity for f in assessment.findings if f.pump_set in (None, name)}
        if not isinstance(result, DutyResult):
            assert result.missing
            assert told & set(OPEN)
            continue
        without = [
            c for c, k in enumerate(result.chosen)
            if k < 0 or result.state[c, k] in (State.END_OF_CURVE, State.BELOW_STATIC)
        ]  # fmt: skip
        if without:
            assert told & set(OPEN)


@odd_stations
@given(st.integers(0, 10**9))
def test_energy_mass_and_firm_capacity_keep_their_laws(seed: int) -> None:
    station = absurd_station(seed)
    assume(station is not None)
    assert station is not None
    for result in assess(station).results.values():
        if not isinstance(result, DutyResult):
            continue
        known = result.energy_residual == result.energy_residual
        if known.any():
            assert float(result.energy_residual[known].max()) < 1e-8
            assert float(result.mass_residual[known].max()) < 1e-8
        for firm in result.made.firm_capacity:
            assert firm.by_all <= firm.by_head * (1 + 1e-6)
            assert firm.by_head <= firm.all_running * (1 + 1e-6)
            assert firm.by_all_weak <= firm.by_all * (1 + 1e-6)


@pytest.mark.parametrize("seed", [1, 2, 3])
def test_a_seed_gives_one_station(seed: int) -> None:
    assert absurd_station(seed) == absurd_station(seed)
