"""Criteria: both profiles, departures, and the limits that the studies read.

Sources of the limits tested: WAC 246-290-230(6) and 30 TAC 290.45(a)(2), 20 psi in a fire; Utah
R309-540-6(3)(b), 20 psi at a booster's intake; UPC 608.2, 80 psi; ANSI/HI 9.6.3 as quoted, 70 '
                                     'to 120 %;
the others common practice.
"""

from pathlib import Path

import pytest

from server.station import paths
from server.studies.findings.criteria import criteria_of
from server.studies.findings.profiles import RULES, limit_in
from server.studies.findings.rule import BASIS_WORDS
from server.studies.limits import limits_of
from server.units import symbols, to_si
from tests.studies.findings.demo import demo, edited, put, q

KEYS = Path(__file__).with_name("rule_keys.txt")


def test_rule_keys_are_those_that_station_files_already_hold() -> None:
    assert list(RULES) == KEYS.read_text(encoding="utf-8").split()


@pytest.mark.parametrize("key", RULES)
def test_rule_says_its_source_and_its_limits_have_units_of_its_dimension(key: str) -> None:
    rule = RULES[key]
    assert rule.source_words.startswith(BASIS_WORDS[rule.basis])
    assert rule.basis == "common_practice" or rule.source
    for limit in (rule.si, rule.us):
        assert limit is None or limit.unit in symbols(rule.dimension)
    assert (rule.si is None and rule.us is None) == (rule.sense == "stated")


@pytest.mark.parametrize(
    ("key", "si", "us"),
    [
        ("service-pressure-min", (200, "kPa"), (35, "psi")),
        ("fire-pressure-min", (140, "kPa"), (20, "psi")),
        ("hydrant-residual-min", (150, "kPa"), (20, "psi")),
        ("service-pressure-max", (600, "kPa"), (80, "psi")),
        ("suction-main-minimum", (140, "kPa"), (20, "psi")),
        ("suction-branch-velocity-max", (1.5, "m/s"), (5, "ft/s")),
        ("npsh-margin-min", (1.0, "m"), (3, "ft")),
        ("firm-tank-hours", (20, "h"), (24, "h")),
    ],
)
def test_us_limits_are_customary_numbers_not_conversions(
    key: str, si: tuple[float, str], us: tuple[float, str]
) -> None:
    for profile, (value, unit) in (("si_municipal", si), ("us_municipal", us)):
        limit = limit_in(RULES[key], profile)  # type: ignore[arg-type]
        assert limit is not None
        assert (limit.value, limit.unit) == (value, unit)


def test_us_profile_reaches_the_studies() -> None:
    limits = limits_of(edited(put("/criteria/profile", "us_municipal")))
    assert limits.suction_gauge == pytest.approx(to_si(20, "psi"))
    assert limits.npsh_margin == pytest.approx(to_si(3, "ft"))


def test_preferred_region_narrows_at_high_specific_speed() -> None:
    limits = limits_of(demo())
    assert limits.preferred_region(40.0) == pytest.approx((0.70, 1.20))
    assert limits.preferred_region(87.0) == pytest.approx((0.70, 1.20))
    assert limits.preferred_region(95.0) == pytest.approx((0.80, 1.15))
    assert limits.preferred_region(None) == pytest.approx((0.70, 1.20))


def test_typed_limit_departs_and_carries_its_own_source() -> None:
    limit = {**q(100, "kPa"), "source": {"kind": "code", "text": "utility standard 4"}}
    station = edited(put("/criteria/rows/suction-gauge-minimum/limit", limit))
    criterion = criteria_of(station)["suction-gauge-minimum"]
    assert criterion.departs
    assert criterion.si == pytest.approx(100e3)
    assert criterion.source == "Typed for this station: utility standard 4"
    assert criterion.path == "/criteria/rows/suction-gauge-minimum"
    assert limits_of(station).suction_gauge == pytest.approx(100e3)


def test_limit_typed_as_the_profile_has_it_does_not_depart() -> None:
    station = edited(put("/criteria/rows/suction-gauge-minimum/limit", q(1.4, "bar")))
    assert not criteria_of(station)["suction-gauge-minimum"].departs


def test_criterion_path_can_be_set_and_read() -> None:
    for key, rule in RULES.items():
        if rule.si is not None:
            station = paths.put(
                demo(), f"/criteria/rows/{key}/limit", q(rule.si.value, rule.si.unit)
            )  # type: ignore[arg-type]
            assert criteria_of(station)[key].quantity == rule.si
