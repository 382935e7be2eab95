"""The limits of the criteria profiles against the codes and standards that they name.

Sources: data/waterworks_rules.csv, operating_region_rules.csv,
specific_speed_of_narrow_region.csv, preferred_region_numbers.csv.
"""

import pytest

from server.hydraulics.specific_speed import US_PER_SI
from server.station.entry import Quantity
from server.studies.findings.profiles import RULES, ProfileName, limit_in
from tests.published.sources import Row, checks

PROFILES: dict[str, ProfileName] = {
    "si_municipal": "si_municipal",
    "us_municipal": "us_municipal",
}


def limit(rule: str, profile: str) -> Quantity:
    quantity = limit_in(RULES[rule], PROFILES[profile])
    assert quantity is not None
    return quantity


@pytest.mark.parametrize("row", checks("waterworks_rules") + checks("operating_region_rules"))
def test_limit_is_that_of_the_rule_it_names(row: Row) -> None:
    ours = limit(row.text("rule"), row.text("profile"))
    holds = {
        "equals": ours.value == row["value"],
        "not_below": ours.value >= row["value"],
        "not_above": ours.value <= row["value"],
    }

    assert ours.unit == row.text("unit")
    assert holds[row.text("relation")], f"{row.text('rule')} is {ours.value} {ours.unit}"


@pytest.mark.parametrize("row", checks("specific_speed_of_narrow_region"))
def test_the_narrower_region_begins_at_the_specific_speed_in_print(row: Row) -> None:
    for profile in PROFILES:
        ns = limit(row.text("rule"), profile).value

        assert ns * US_PER_SI == pytest.approx(row["expected_us"], rel=0.01)


@pytest.mark.parametrize("row", checks("preferred_region_numbers"))
def test_preferred_region_in_flow_is_that_of_the_own_numbers(row: Row) -> None:
    at_speed = row["best_flow"] * row["speed"]
    low, high = (limit(row.text(end), "si_municipal").si for end in ("low_rule", "high_rule"))

    assert (low * at_speed, high * at_speed) == pytest.approx(
        (row["expected_low"], row["expected_high"]), rel=1e-12
    )
