"""Every finding code appears by an edit of the demo and goes by the field said to mend it."""

import re
from functools import cache

import pytest

from server.studies.assess import Assessment
from server.studies.findings import words
from server.studies.findings.registry import CODES
from server.studies.shapes import Finding
from server.units import View
from tests.studies.findings.code_cases import CASES as OF_CLOSED_ZONE
from tests.studies.findings.code_cases import CodeCase, mended, started
from tests.studies.findings.demo import assessed
from tests.studies.findings.tank_code_cases import TANK_CASES

CASES = (*OF_CLOSED_ZONE, *TANK_CASES)
IDS = [given.code for given in CASES]
BY_CODE = {given.code: given for given in CASES}


@cache
def _start(code: str) -> Assessment:
    return assessed(started(BY_CODE[code]))


def _of(given: CodeCase) -> list[Finding]:
    return [
        f
        for f in _start(given.code).findings
        if f.code == given.code and given.subject in (None, f.subject)
    ]


def test_every_code_has_a_case() -> None:
    assert sorted(IDS) == sorted(CODES)


@pytest.mark.parametrize("given", CASES, ids=IDS)
def test_code_appears_and_names_its_mend_first(given: CodeCase) -> None:
    findings = _of(given)
    assert findings
    assert given.mend in [finding.mend[0] for finding in findings]


@pytest.mark.parametrize("given", CASES, ids=IDS)
def test_code_goes_by_changing_only_the_field_that_mends_it(given: CodeCase) -> None:
    before = [finding for finding in _of(given) if finding.mend[0] == given.mend]
    after = {
        finding.key for finding in assessed(mended(given, _start(given.code).station)).findings
    }
    assert before
    assert not {finding.key for finding in before} & after


@pytest.mark.parametrize("view", ["si", "us"])
@pytest.mark.parametrize("given", CASES, ids=IDS)
def test_sentence_is_whole_in_both_units(given: CodeCase, view: View) -> None:
    station = _start(given.code).station
    for finding in _of(given):
        said = words.sentence(finding, station, view)
        assert said[0] == said[0].upper()
        assert said.endswith((".", "utility"))
        assert not re.search(r"[{}]|nan|None|–|  |\bOK\b|, ,|\(\)", said), said
        assert words.short(finding)
        assert words.basis(finding, station)
