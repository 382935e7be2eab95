"""Grade lines put together from our losses against worked examples.

Sources: data/grade_line_own_example.csv, reservoir_pumping_lecture.csv.
"""

import pytest

from server import units
from server.hydraulics.conduit import FrictionLaw, conduit
from server.hydraulics.fittings import minor_head_loss, velocity
from server.hydraulics.water import GRAVITY
from tests.published.sources import Row, checks

FLOW = 0.060
DENSITY, VISCOSITY = 999.10262, 1.1385893e-6
PUMP_HEAD = 45.0


def _energy_grades() -> dict[str, float]:
    def line(length: float, k: float) -> float:
        reach = conduit(
            FrictionLaw.DARCY_WEISBACH, length=length, bore=0.25, resistance=1e-4, k=k
        )
        return float(reach.head_loss(FLOW, kinematic_viscosity=VISCOSITY))

    def fitting(bore: float, k: float) -> float:
        return float(minor_head_loss(FLOW, bore=bore, k=k))

    main = 100.0 + 250e3 / (DENSITY * GRAVITY) + fitting(0.25, 1.0)
    steps = {
        "A": 0.0,
        "B": -line(20.0, 1.0),
        "C": -fitting(0.2, 0.05),
        "D": PUMP_HEAD,
        "E": -fitting(0.15, 0.2),
        "F": -fitting(0.2, 2.5),
        "G": -line(15.0, 1.3),
    }
    grades, at = {}, main
    for point, step in steps.items():
        at += step
        grades[point] = at
    return grades


@pytest.mark.parametrize("row", checks("grade_line_own_example"))
def test_grade_line_through_a_station_is_that_of_the_example(row: Row) -> None:
    energy = _energy_grades()[row.text("point")]
    speed = float(velocity(FLOW, bore=units.to_si(row["bore_mm"], "mm")))
    hydraulic = energy - speed**2 / (2.0 * GRAVITY)
    pressure = DENSITY * GRAVITY * (hydraulic - row["elevation_m"])

    assert energy == pytest.approx(row["energy_grade_m"], abs=1e-5)
    assert hydraulic == pytest.approx(row["hydraulic_grade_m"], abs=1e-5)
    assert units.from_si(pressure, "kPa") == pytest.approx(row["expected_kPa"], abs=2e-4)


@pytest.mark.parametrize("row", checks("reservoir_pumping_lecture"))
def test_pump_head_between_reservoirs_is_that_of_the_lecture(row: Row) -> None:
    loss = minor_head_loss(
        units.to_si(row["flow_ft3_s"], "ft3/s"),
        bore=units.to_si(row["bore_ft"], "ft"),
        k=row["factor"] * row["length_ft"] / row["bore_ft"],
    )

    assert row["lift_ft"] + units.from_si(float(loss), "ft") == pytest.approx(
        row["expected_ft"], abs=0.5
    )
