"""What the tests of figures share: the demo set solved, and its charts."""

import pytest

from server.figures.case_words import judged_set
from server.figures.duty_charts import duty_chart
from server.figures.supply_chart import supply_chart
from server.studies.assess import assess
from server.studies.duty_curves import duty_curves
from server.studies.supply_curve import supply_curve


@pytest.fixture(scope="session")
def judged(demo):
    return judged_set(assess(demo), demo.proposed_set)


@pytest.fixture(scope="session")
def curves(demo, judged):
    return duty_curves(demo, judged.result)


@pytest.fixture(scope="session")
def duty(curves, judged):
    return duty_chart(curves, judged, "sc-f2re9k")


@pytest.fixture(scope="session")
def main_curve(demo, judged):
    return supply_curve(demo, judged.result)


@pytest.fixture(scope="session")
def supply(demo, main_curve):
    return supply_chart(main_curve, demo, "si")
