"""The affinity laws of speed against published examples.

Sources: data/doe_handbook_pump_laws.csv, technical_paper_410_speed.csv,
fluid_mechanics_companion_14_10.csv, hydraulic_institute_reduced_speed.csv,
course_pump_control_speed.csv, drive_own_model.csv, drive_half_pumps.csv,
speed_flow_own_cases.csv, speed_turn_down.csv.
"""

import pytest
from scipy.optimize import brentq

from server import units
from server.hydraulics import affinity
from server.hydraulics.friction import colebrook_head_loss
from server.hydraulics.pump_curve import PumpCurve, pump_curve
from server.hydraulics.water import density, kinematic_viscosity
from tests.published.published_pumps import from_formula
from tests.published.sources import Row, checks

DRIVE_DENSITY = 998.2  # of the own models of drive and throttle [kg/m3]


def through(row: Row, power_unit: str) -> PumpCurve:
    """Return a curve with the published point as its middle row, the neighbours made up."""
    power = units.to_si(row[f"power_{power_unit}"], power_unit)
    return pump_curve(
        [units.to_si(row["flow_gpm"] * share, "gpm_us") for share in (0.5, 1.0, 1.5)],
        head=[units.to_si(row["head_ft"] * share, "ft") for share in (1.1, 1.0, 0.8)],
        shaft_power=[power * share for share in (0.8, 1.0, 1.2)],
        tested_speed=row["speed_1_rpm"],
    )


def moved(row: Row, power_unit: str) -> tuple[float, float, float]:
    """Return flow [gal/min], head [ft] and power of the similar point at the second speed."""
    curve = through(row, power_unit)
    s = row["speed_2_rpm"] / row["speed_1_rpm"]
    flow = units.to_si(row["flow_gpm"], "gpm_us") * s
    return (
        units.from_si(flow, "gpm_us"),
        units.from_si(float(affinity.head(curve, flow, speed=s)), "ft"),
        units.from_si(
            float(affinity.shaft_power(curve, flow, speed=s, density=998.2)), power_unit
        ),
    )


@pytest.mark.parametrize("row", checks("doe_handbook_pump_laws"))
def test_a_faster_pump_gives_the_point_of_the_handbook(row: Row) -> None:
    assert moved(row, "kW") == pytest.approx(
        (row["expected_gpm"], row["expected_ft"], row["expected_kW"]), rel=1e-12
    )


@pytest.mark.parametrize("row", checks("technical_paper_410_speed"))
def test_a_slower_pump_gives_the_point_of_the_problem(row: Row) -> None:
    assert moved(row, "hp") == pytest.approx(
        (row["expected_gpm"], row["expected_ft"], row["expected_hp"]), rel=1e-3
    )


@pytest.mark.parametrize("row", checks("fluid_mechanics_companion_14_10"))
def test_power_goes_with_the_cube_of_speed(row: Row) -> None:
    curve = from_formula(lambda q: 50.0 - q * q, last_flow=5.0, efficiency=lambda q: 0.7)
    s = row["speed_ratio"]
    at_speed = affinity.shaft_power(curve, 3.0 * s, speed=s, density=1000.0)

    assert float(at_speed / curve.shaft_power(3.0, density=1000.0)) == pytest.approx(
        row["power_ratio"], rel=1e-12
    )


@pytest.mark.parametrize("row", checks("hydraulic_institute_reduced_speed"))
def test_a_curve_at_reduced_speed_is_that_of_the_worked_example(row: Row) -> None:
    rows = [r.values[0] for r in checks("hydraulic_institute_reduced_speed", id=row.check)]
    curve = pump_curve(
        [units.to_si(r["flow_gpm"], "gpm_us") for r in rows],
        head=[units.to_si(r["head_ft"], "ft") for r in rows],
        tested_speed=1740.0,
    )
    flow = units.to_si(row["expected_gpm"], "gpm_us")
    head = affinity.head(curve, flow, speed=1566.0 / 1740.0)

    assert row["expected_gpm"] == pytest.approx(0.9 * row["flow_gpm"])
    assert units.from_si(float(head), "ft") == pytest.approx(row["expected_ft"], abs=0.0051)


@pytest.mark.parametrize("row", checks("course_pump_control_speed"))
def test_speed_for_half_the_flow_is_that_of_the_course(row: Row) -> None:
    curve = from_formula(
        lambda q: 150.0 - 20.0 * q * q,
        last_flow=1.9,
        efficiency=lambda q: max(-0.42 * q * q + 1.06 * q + 0.188, 0.0),
        tested_speed=1170.0,
    )
    flow = row["flow_m3_s"]
    wanted = 35.0 + float(
        colebrook_head_loss(
            flow,
            length=450.0,
            bore=0.42846,
            roughness=0.5e-3,
            kinematic_viscosity=kinematic_viscosity(20.0),
        )
    )
    s = brentq(lambda s: float(affinity.head(curve, flow, speed=s)) - wanted, 0.5, 1.0)
    power = affinity.shaft_power(curve, flow, speed=s, density=density(20.0))

    assert wanted == pytest.approx(row["head_m"], rel=1e-3)
    assert s * curve.tested_speed == pytest.approx(row["speed_rpm"], rel=1e-3)
    assert units.from_si(float(power), "kW") == pytest.approx(row["power_kW"], rel=1e-3)


def own_pump(shutoff: float, best_flow: float, *, duty_head: float = 50.0) -> PumpCurve:
    """Return H0 - a Q^2 through the duty head at best efficiency, 0.80, in m and m3/h."""

    def efficiency(q: float) -> float:
        x = q / best_flow
        return max(0.8 * (2.0 * x - x * x), 0.0)

    return from_formula(
        lambda q: shutoff - (shutoff - duty_head) * (q / best_flow) ** 2,
        last_flow=1.6 * best_flow,
        flow_unit="m3/h",
        efficiency=efficiency,
    )


def speed_for(curve: PumpCurve, flow: float, head: float) -> float:
    def excess(s: float) -> float:
        return float(affinity.head(curve, flow, speed=s)) - head

    slowest = max(0.05, flow / curve.last_flow * (1.0 + 1e-9))
    return float(brentq(excess, slowest, 1.5, xtol=1e-12))


@pytest.mark.parametrize("row", checks("drive_own_model"))
def test_throttle_and_drive_take_the_power_of_the_own_model(row: Row) -> None:
    curve = own_pump(65.0, 300.0)
    flow = units.to_si(row["flow_m3_h"], "m3/h")
    system = (
        row["static_head_m"] + (50.0 - row["static_head_m"]) * (row["flow_m3_h"] / 300) ** 2
    )
    s = speed_for(curve, flow, system)
    driven = affinity.shaft_power(curve, flow, speed=s, density=DRIVE_DENSITY)
    throttled = curve.shaft_power(flow, density=DRIVE_DENSITY)

    assert system == pytest.approx(row["head_m"], rel=1e-4)
    assert s == pytest.approx(row["speed"], abs=6e-5)
    assert float(affinity.efficiency(curve, flow, speed=s)) == pytest.approx(
        row["efficiency"], abs=5.1e-5
    )
    assert units.from_si(float(driven), "kW") == pytest.approx(row["power_kW"], rel=1e-4)
    assert float(curve.head(flow)) == pytest.approx(row["throttled_head_m"], rel=1e-4)
    assert units.from_si(float(throttled), "kW") == pytest.approx(
        row["throttled_power_kW"], rel=1e-4
    )


@pytest.mark.parametrize("row", checks("drive_half_pumps"))
def test_half_pumps_take_the_power_of_the_own_model(row: Row) -> None:
    curve = own_pump(65.0, 150.0)
    flow = units.to_si(row["flow_m3_h"], "m3/h")
    s = row["speed"] if row.text("speed") == "1" else speed_for(curve, flow, row["head_m"])
    power = row["units"] * float(
        affinity.shaft_power(curve, flow, speed=s, density=DRIVE_DENSITY)
    )

    if row.has("speed"):
        assert s == pytest.approx(row["speed"], abs=6e-5)
    if row.has("efficiency"):
        assert float(curve.efficiency(flow)) == pytest.approx(row["efficiency"], rel=1e-4)
        assert float(curve.head(flow)) == pytest.approx(row["head_m"], rel=1e-4)
    assert units.from_si(power, "kW") == pytest.approx(row["power_kW"], rel=1e-4)


@pytest.mark.parametrize("row", checks("speed_flow_own_cases"))
def test_flow_at_a_speed_is_that_of_the_own_case(row: Row) -> None:
    curve = own_pump(row["shutoff_head_m"], 300.0)
    static, s = row["static_head_m"], row["speed"]

    def excess(flow: float) -> float:
        system = static + (50.0 - static) * (flow / units.to_si(300.0, "m3/h")) ** 2
        return float(affinity.head(curve, flow, speed=s)) - system

    if row["expected_m3_h"] == 0:
        assert excess(0.0) < 0
        return
    flow = brentq(excess, 0.0, s * curve.last_flow)

    assert units.from_si(flow, "m3/h") == pytest.approx(row["expected_m3_h"], abs=0.1)


@pytest.mark.parametrize("row", checks("speed_turn_down"))
def test_turn_down_at_constant_pressure_is_that_of_the_own_case(row: Row) -> None:
    curve = from_formula(lambda q: 60.0 - 0.01 * q * q, last_flow=60.0, flow_unit="L/s")
    s = speed_for(curve, units.to_si(row["flow_L_s"], "L/s"), 50.0)

    assert s == pytest.approx(row["speed"], abs=0.001)
    assert row["flow_L_s"] / (30.0 * s) == pytest.approx(row["share_of_best"], abs=0.006)
