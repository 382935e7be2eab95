"""Submergence of an outlet against published values.

Sources: data/submergence_forum_9_8.csv, submergence_own_cases.csv, submergence_us_constant.csv.
"""

import pytest

from server import units
from server.hydraulics.suction import submergence
from tests.published.sources import Row, checks


@pytest.mark.parametrize(
    "row", checks("submergence_forum_9_8") + checks("submergence_own_cases")
)
def test_submergence_is_that_of_the_standard(row: Row) -> None:
    depth = submergence(
        units.to_si(row["flow"], row.text("flow_unit")),
        bore=units.to_si(row["bore"], row.text("bore_unit")),
    )

    assert units.from_si(float(depth), row.text("bore_unit")) == pytest.approx(
        row["expected"], abs=row["absolute"]
    )


@pytest.mark.parametrize("row", checks("submergence_us_constant"))
def test_constant_in_us_units_is_that_of_the_standard(row: Row) -> None:
    flow, bore = 1000.0, 16.0
    depth = submergence(units.to_si(flow, "gpm_us"), bore=units.to_si(bore, "in"))
    constant = (units.from_si(float(depth), "in") - bore) * bore**1.5 / flow

    assert constant == pytest.approx(row["expected"], abs=1e-5)
