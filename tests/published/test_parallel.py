"""Pumps in parallel on a system against published and closed-form operating points.

Sources: data/hydraulic_institute_operating_point.csv, course_ce3305_pump.csv,
course_ce3305_rows.csv, series_parallel_exercise.csv, held_shut_own_case.csv,
identical_pumps_closed_form.csv, run_out_of_one.csv, twice_the_pumps.csv,
course_pump_control.csv, course_pump_control_parallel.csv.
"""

import numpy as np
import pytest

from server import units
from server.hydraulics.fittings import minor_head_loss
from server.hydraulics.friction import colebrook_head_loss
from server.hydraulics.leg_curve import leg_curve
from server.hydraulics.parallel import ParallelResult, solve_parallel
from server.hydraulics.pump_curve import PumpCurve, pump_curve
from server.hydraulics.states import State
from server.hydraulics.system_curve import FunctionSystem, PowerSystem, SystemCurve
from server.hydraulics.water import density, kinematic_viscosity
from tests.published.published_pumps import from_formula
from tests.published.sources import Row, checks, source


def operate(pumps: list[PumpCurve], system: SystemCurve) -> ParallelResult:
    """Return the operating point of pumps without branch losses, as the sources take them."""
    result = solve_parallel([leg_curve(pump, loss=0.0) for pump in pumps], system=system)
    assert float(result.energy_residual[0]) < 1e-9
    return result


def quadratic(static: float, coefficient: float, flow_unit: str, head_unit: str) -> PowerSystem:
    """Return static + c Q^2 with the coefficient in the source's units."""
    return PowerSystem(
        static_head=np.array([units.to_si(static, head_unit)]),
        coefficient=np.array(
            [units.to_si(coefficient, head_unit) / units.to_si(1.0, flow_unit) ** 2]
        ),
    )


def point(result: ParallelResult, flow_unit: str, head_unit: str) -> tuple[float, float]:
    return (
        units.from_si(float(result.flow[0]), flow_unit),
        units.from_si(float(result.manifold_head[0]), head_unit),
    )


@pytest.mark.parametrize("row", checks("hydraulic_institute_operating_point"))
def test_operating_point_is_that_of_the_data_book(row: Row) -> None:
    pump = from_formula(
        lambda q: 380.0 - 0.06 * q - 0.0018 * q * q,
        last_flow=300.0,
        flow_unit="gpm_us",
        head_unit="ft",
    )
    system = quadratic(row["static_ft"], 7.75e-4, "gpm_us", "ft")
    found = point(operate([pump] * int(row["units"]), system), "gpm_us", "ft")

    assert found == pytest.approx(
        (row["expected_gpm"], row["expected_ft"]), rel=row["relative"]
    )


@pytest.mark.parametrize("row", checks("course_ce3305_pump"))
def test_operating_point_of_a_pump_table_is_that_of_the_course(row: Row) -> None:
    rows = source("course_ce3305_rows").rows
    pump = pump_curve(
        [units.to_si(r["flow_gpm"], "gpm_us") for r in rows],
        head=[units.to_si(r["head_ft"], "ft") for r in rows],
        tested_speed=1450.0,
    )
    system = quadratic(10.0, 6.577e-6, "gpm_us", "ft")
    flow, head = point(operate([pump] * int(row["units"]), system), "gpm_us", "ft")

    if row.has("printed_gpm"):
        assert flow == pytest.approx(row["printed_gpm"], rel=0.02)
        assert head == pytest.approx(row["printed_ft"], rel=0.05)
    assert flow == pytest.approx(row["expected_gpm"], rel=0.005)
    assert head == pytest.approx(row["expected_ft"], rel=0.005)


@pytest.mark.parametrize("row", checks("series_parallel_exercise"))
def test_one_and_two_pumps_give_the_points_of_the_exercise(row: Row) -> None:
    pump = from_formula(
        lambda q: 365.0 - 20.0 * q * q, last_flow=4.0, flow_unit="ft3/s", head_unit="ft"
    )
    system = quadratic(290.0, 26.351, "ft3/s", "ft")
    found = point(operate([pump] * int(row["units"]), system), "ft3/s", "ft")

    assert found == pytest.approx((row["expected_ft3_s"], row["expected_ft"]), rel=1e-3)


@pytest.mark.parametrize("row", checks("held_shut_own_case"))
def test_a_weaker_pump_is_held_shut_by_a_stronger_one(row: Row) -> None:
    strong = from_formula(lambda q: 60.0 - 0.001 * q * q, last_flow=150.0, flow_unit="L/s")
    weak = from_formula(lambda q: 50.0 - 0.002 * q * q, last_flow=100.0, flow_unit="L/s")
    system = quadratic(row["static_m"], row["coefficient"], "L/s", "m")
    result = operate([strong, weak], system)

    assert point(result, "L/s", "m") == pytest.approx(
        (row["expected_L_s"], row["expected_m"]), rel=1e-4
    )
    assert result.leg_flow[0, 1] == 0.0
    assert result.leg_state[0, 1] == State.HELD_SHUT


def _closed_form_pumps(count: int) -> ParallelResult:
    pump = from_formula(lambda q: 80.0 - 0.004 * q * q, last_flow=120.0, flow_unit="L/s")
    return operate([pump] * count, quadratic(50.0, 0.001, "L/s", "m"))


@pytest.mark.parametrize("row", checks("identical_pumps_closed_form"))
def test_equal_pumps_give_the_points_of_the_closed_form(row: Row) -> None:
    found = point(_closed_form_pumps(int(row["units"])), "L/s", "m")

    assert found == pytest.approx((row["expected_L_s"], row["expected_m"]), rel=1e-5)


@pytest.mark.parametrize("row", checks("run_out_of_one"))
def test_one_pump_alone_runs_out_as_the_own_case_says(row: Row) -> None:
    alone = units.from_si(float(_closed_form_pumps(1).leg_flow[0, 0]), "L/s")
    each = units.from_si(float(_closed_form_pumps(3).leg_flow[0, 0]), "L/s")

    assert (alone, each) == pytest.approx(
        (row["alone_L_s"], row["each_of_three_L_s"]), rel=1e-4
    )
    assert alone / each == pytest.approx(row["ratio"], rel=1e-4)


@pytest.mark.parametrize("row", checks("twice_the_pumps"))
def test_two_pumps_do_not_give_twice_the_flow(row: Row) -> None:
    pump = from_formula(lambda q: 60.0 - 0.01 * q * q, last_flow=60.0, flow_unit="L/s")
    system = quadratic(45.0, 0.005, "L/s", "m")
    one, two = (float(operate([pump] * n, system).flow[0]) for n in (1, 2))

    assert two / one == pytest.approx(row["expected_ratio"], rel=1e-3)


def _course_pump() -> PumpCurve:
    return from_formula(
        lambda q: 150.0 - 20.0 * q * q,
        last_flow=1.9,
        efficiency=lambda q: max(-0.42 * q * q + 1.06 * q + 0.188, 0.0),
        tested_speed=1170.0,
    )


def _course_line(valve: float) -> FunctionSystem:
    """Lift, friction by Colebrook-White, and a valve of so many velocity heads."""

    def head(flow: np.ndarray, case: np.ndarray) -> np.ndarray:
        friction = colebrook_head_loss(
            flow,
            length=450.0,
            bore=0.42846,
            roughness=0.5e-3,
            kinematic_viscosity=kinematic_viscosity(20.0),
        )
        return 35.0 + friction + minor_head_loss(flow, bore=0.42846, k=valve)

    return FunctionSystem(function=head, case_count=1)


@pytest.mark.parametrize("row", checks("course_pump_control"))
def test_throttled_operating_point_is_that_of_the_course(row: Row) -> None:
    pump = _course_pump()
    result = operate([pump], _course_line(row["valve_k"]))
    flow, head = point(result, "m3/s", "m")
    power = pump.shaft_power(flow, density=density(20.0))

    assert flow == pytest.approx(row["flow_m3_s"], rel=1e-3)
    assert head == pytest.approx(row["head_m"], rel=3e-3)
    assert float(pump.efficiency(flow)) == pytest.approx(row["efficiency"], rel=3e-3)
    assert units.from_si(float(power), "kW") == pytest.approx(row["power_kW"], rel=3e-3)


@pytest.mark.parametrize("row", checks("course_pump_control_parallel"))
def test_two_pumps_on_the_line_of_the_course_give_the_point_computed(row: Row) -> None:
    pump = _course_pump()
    result = operate([pump, pump], _course_line(0.0))
    each = float(result.leg_flow[0, 0])
    power = 2.0 * float(pump.shaft_power(each, density=density(20.0)))

    assert point(result, "m3/s", "m") == pytest.approx(
        (row["flow_m3_s"], row["head_m"]), rel=1e-3
    )
    assert float(pump.efficiency(each)) == pytest.approx(row["efficiency"], rel=1e-3)
    assert units.from_si(power, "kW") == pytest.approx(row["power_kW"], rel=1e-3)
