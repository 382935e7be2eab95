"""Trim of an impeller, efficiency lost with speed and the legal least efficiency.

Sources: data/hydraulic_institute_trim.csv, trim_own_cases.csv, sarbu_borza.csv,
eu_547_2012.csv.
"""

import numpy as np
import pytest

from server import units
from server.hydraulics.attainable_efficiency import PumpType, least_best_efficiency
from server.hydraulics.pump_curve import pump_curve
from server.hydraulics.specific_speed import specific_speed
from server.hydraulics.speed_loss import sarbu_borza
from server.hydraulics.trim import trim_for_duty, trimmed
from tests.published.published_pumps import from_formula
from tests.published.sources import Row, checks


@pytest.mark.parametrize("row", checks("hydraulic_institute_trim"))
def test_an_impeller_is_cut_to_the_diameter_of_the_example(row: Row) -> None:
    """The example moves along one similar point: a curve as level as can be passes it."""
    flow = units.to_si(row["flow"], row.text("unit_flow"))
    head = units.to_si(row["head"], row.text("unit_head"))
    wanted = units.to_si(row["wanted_head"], row.text("unit_head"))
    share = np.array([0.4, 0.8, 1.0, 1.2])
    curve = pump_curve(
        flow * share, head=head * (1.0 - 1e-9 * (share - 1.0)), tested_speed=1750.0
    )
    ratio = trim_for_duty(curve, flow=flow * (wanted / head) ** 0.5, head=wanted)
    ordered = trimmed(curve, ratio=row["ordered_diameter"] / row["diameter"])

    assert ratio * row["diameter"] == pytest.approx(
        row["expected_diameter"], rel=row["relative_diameter"]
    )
    assert units.from_si(
        float(ordered.curve.rows.flow[2]), row.text("unit_flow")
    ) == pytest.approx(row["expected_flow"], rel=row["relative_flow"])


@pytest.mark.parametrize("row", checks("trim_own_cases", id="A8"))
def test_a_cut_of_a_tenth_is_that_of_the_powers(row: Row) -> None:
    curve = pump_curve(
        [0.0, 0.01, 0.02, 0.03],
        head=[50.0, 47.0, 40.0, 29.0],
        efficiency=[0.0, 0.6, 0.75, 0.7],
        tested_speed=1450.0,
    )
    cut = trimmed(curve, ratio=row["ratio"]).curve
    best, at = curve.best, cut.best
    assert best is not None
    assert at is not None
    power = [c.shaft_power(b.flow, density=998.0) for c, b in ((cut, at), (curve, best))]

    assert at.flow / best.flow == pytest.approx(row["expected_flow"], rel=1e-12)
    assert float(cut.head(at.flow) / curve.head(best.flow)) == pytest.approx(
        row["expected_head"], rel=1e-12
    )
    assert float(power[0] / power[1]) == pytest.approx(row["expected_power"], rel=1e-12)
    assert (cut.specific_speed or 0) / (curve.specific_speed or 1) == pytest.approx(
        row["expected_specific_speed"], abs=5e-5
    )


@pytest.mark.parametrize("row", checks("trim_own_cases", id="A9"))
def test_a_duty_is_reached_along_the_similar_point(row: Row) -> None:
    curve = from_formula(lambda q: 60.0 - 0.002 * q * q, last_flow=140.0, flow_unit="m3/h")
    flow = units.to_si(100.0, "m3/h")

    assert trim_for_duty(curve, flow=flow, head=35.0) == pytest.approx(row["ratio"], rel=1e-4)


@pytest.mark.parametrize("row", checks("sarbu_borza"))
def test_efficiency_lost_with_speed_is_that_of_the_formula(row: Row) -> None:
    found = sarbu_borza(row["efficiency"], speed=row["speed"])

    assert float(found) == pytest.approx(row["expected"], abs=5e-6)


@pytest.mark.parametrize("row", checks("eu_547_2012"))
def test_the_least_efficiency_is_that_of_the_regulation(row: Row) -> None:
    flow, speed = units.to_si(row["flow_m3_h"], "m3/h"), row["speed_rpm"]
    # a head that is not printed follows from the specific speed that is
    head = (
        row["head_m"]
        if row.has("head_m")
        else (speed * flow**0.5 / row["specific_speed"]) ** (4 / 3)
    )
    found = least_best_efficiency(
        flow,
        head=head,
        pump_type=PumpType(row.text("type")),
        nominal_speed=int(speed),
        index=row["index"],
    )
    assert float(specific_speed(speed, flow=flow, head=head)) == pytest.approx(
        row["specific_speed"], rel=1e-5
    )
    assert 100.0 * float(found) == pytest.approx(row["expected_per_cent"], abs=0.01)
