"""A floating tank: the demo's tables, the place of the demand, barrels, laws.

Sources
    Demo     demo/tank_filling.md section 2, by an independent scalar calculator (scipy brentq,
             fluids Colebrook, CoolProp water; PCHIP curves); printed to 0.01 L/s and 0.01 m.
             Its NPSH available stands at 12 degC, the water for friction: at 18 degC, the
             highest, it is 0.06 m less. Its efficiency runs by PCHIP between rows as well.
"""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.hydraulics import affinity
from server.hydraulics.combinations import most_flow, solve_combinations
from server.hydraulics.floating_tank import floating_tank, parted_at
from server.hydraulics.states import State
from server.hydraulics.suction import npsh_available, submergence
from server.hydraulics.water import atmospheric_pressure, density, vapour_pressure
from tests.hydraulics.demo_tank import (
    SUCTION,
    VISCOSITY,
    leg_t,
    main_line,
    tank_station,
    three_states,
)

LEG = leg_t()
PUMP = LEG.pump
ONE_TWO_THREE = [[True, False, False], [True, True, False], [True, True, True]]
CASES = np.arange(3)
# state, pumps on: Q L/s, head m, main loss m, % BEP, eff %, kW each, NPSHa, NPSHr m
TABLE = {
    (0, 1): (52.17, 65.02, 3.99, 106.4, 79.3, 42.41, 11.24, 5.01),
    (0, 2): (86.47, 71.90, 10.82, 88.2, 78.7, 39.02, 11.21, 4.22),
    (0, 3): (105.28, 77.09, 15.97, 71.6, 74.5, 35.75, 11.19, 3.70),
    (1, 1): (55.10, 62.48, 4.44, 112.4, 78.6, 43.50, 12.83, 5.32),
    (1, 2): (91.35, 70.15, 12.06, 93.2, 79.1, 40.03, 12.80, 4.41),
    (1, 3): (111.17, 75.93, 17.79, 75.6, 75.9, 36.50, 12.77, 3.81),
    (2, 1): (58.67, 59.19, 3.55, 119.7, 77.3, 44.75, 14.01, 5.74),
    (2, 2): (102.27, 65.89, 10.17, 104.3, 79.4, 42.02, 13.96, 4.91),
    (2, 3): (129.89, 71.86, 16.07, 88.3, 78.7, 39.04, 13.91, 4.23),
}


@pytest.fixture(scope="module")
def demo():
    station = three_states()
    return station, solve_combinations(
        [LEG] * 3, system=station.system, combinations=ONE_TWO_THREE
    )


@pytest.mark.parametrize(("state", "pumps"), TABLE)
def test_flow_head_and_main_loss_are_those_of_the_demo(demo, state, pumps):
    station, result = demo
    flow, head, lost = TABLE[state, pumps][:3]
    at = result.flow[state, pumps - 1 : pumps]

    assert at[0] * 1000 == pytest.approx(flow, abs=0.0051)
    assert result.manifold_head[state, pumps - 1] == pytest.approx(head, abs=0.0051)
    assert station.main_loss(at, case=np.array([state]))[0] == pytest.approx(lost, abs=0.0051)


@pytest.mark.parametrize(("state", "pumps"), TABLE)
def test_region_power_and_npsh_are_those_of_the_demo(demo, state, pumps):
    station, result = demo
    _, _, _, best, efficiency, power, available, required = TABLE[state, pumps]
    q = result.leg_flow[state, pumps - 1, 0]
    grade = station.suction_grade(result.flow[state, pumps - 1 : pumps], np.array([state]))
    branch = 1.3 * (q / (0.25 * np.pi * 0.25**2)) ** 2 / (2 * 9.80665)
    npsh = npsh_available(
        grade, eye_level=120.30, branch_loss=branch,
        atmospheric_pressure=atmospheric_pressure(120.0), vapour_pressure=vapour_pressure(12.0),
        density=density(12.0),
    )  # fmt: skip

    assert 100 * q / PUMP.best.flow == pytest.approx(best, abs=0.051)
    assert 100 * float(PUMP.efficiency(q)) == pytest.approx(efficiency, rel=0.0025)
    watts = affinity.shaft_power(PUMP, q, speed=1.0, density=density(12.0))
    assert float(watts) / 1000 == pytest.approx(power, rel=0.0025)
    assert npsh[0] == pytest.approx(available, abs=0.0051)
    assert float(PUMP.npsh_required(q)) == pytest.approx(required, abs=0.0051)


def test_firm_capacity_with_one_unit_out_is_that_of_two(demo):
    masks = [[bool(m >> n & 1) for n in range(3)] for m in range(1, 8)]
    result = solve_combinations([LEG] * 3, system=demo[0].system, combinations=masks)
    out = [
        most_flow(result, masks, allowed=np.arange(3) != slot)[0] * 1000 for slot in range(3)
    ]
    everything = most_flow(result, masks, allowed=np.ones(3, dtype=bool))[0] * 1000

    assert out == pytest.approx([86.5] * 3, abs=0.05)
    assert everything == pytest.approx(105.3, abs=0.05)


def test_best_efficiency_and_submergence_are_those_of_the_demo():
    assert PUMP.best.flow * 1000 == pytest.approx(49.03, abs=0.005)
    assert float(submergence(0.0865, bore=0.55)) == pytest.approx(0.75, abs=0.005)


@pytest.mark.parametrize(
    ("draw", "pumped", "to_tank"),
    [
        (0, 86.5, 86.5),
        (20, 89.3, 69.3),
        (50, 92.3, 42.3),
        (75, 93.7, 18.7),
        (130, 95.3, -34.7),
    ],
)
def test_a_demand_drawn_part_way_is_that_of_the_demo(draw, pumped, to_tank):
    station = tank_station([121.6], [182.6], ["aged"], draw=draw / 1000, after_reach=1)
    result = solve_combinations(
        [LEG] * 3, system=station.system, combinations=[[True, True, False]]
    )
    filled = station.tank_flow(result.flow[0], case=np.array([0]))

    assert result.flow[0, 0] * 1000 == pytest.approx(pumped, abs=0.051)
    assert filled[0] * 1000 == pytest.approx(to_tank, abs=0.051)


def test_while_the_tank_feeds_the_grade_at_the_draw_is_below_its_level():
    station = tank_station([121.6], [182.6], ["aged"], draw=0.130, after_reach=1)
    case = np.array([0])
    assert station.draw_grade(np.array([0.0953]), case=case)[0] < 182.6
    assert station.draw_grade(np.array([0.150]), case=case)[0] > 182.6
    assert station.draw_grade(np.array([0.130]), case=case)[0] == 182.6


def test_the_same_demand_drawn_at_the_tank_changes_nothing(demo):
    station = tank_station([121.6], [182.6], ["aged"], draw=0.075, after_reach=3)
    result = solve_combinations([LEG] * 3, system=station.system, combinations=ONE_TWO_THREE)

    assert result.flow[0] == pytest.approx(demo[1].flow[0], rel=1e-12)


@settings(max_examples=20, deadline=None)
@given(st.floats(0.0, 0.2), st.floats(0.0, 0.05), st.integers(0, 3))
def test_more_draw_never_means_less_pumped(draw, more, reach):
    flows = []
    for taken in (draw, draw + more):
        station = tank_station([121.6], [182.6], ["aged"], draw=taken, after_reach=reach)
        result = solve_combinations([LEG] * 3, system=station.system, combinations=[[True] * 3])
        flows.append(
            result.flow[0, 0]
            if result.state[0, 0] == State.SOLVED
            else result.last_row_flow[0, 0]
        )
        assert result.energy_residual[0, 0] < 1e-9 or result.state[0, 0] == State.END_OF_CURVE
    assert flows[1] >= flows[0] - 1e-12


def test_one_barrel_out_leaves_less_flow(demo):
    narrowed = tank_station([121.6], [182.6], ["aged"], barrels=[1, 1, 1])
    result = solve_combinations([LEG] * 3, system=narrowed.system, combinations=ONE_TWO_THREE)

    assert np.all(result.flow[0] < demo[1].flow[0])
    one_out = main_line("aged").with_barrel_out(1)
    lost = one_out.head_loss(result.flow[0], kinematic_viscosity=VISCOSITY)
    assert narrowed.main_loss(result.flow[0], case=np.zeros(3, dtype=int)) == pytest.approx(
        lost
    )


def test_energy_is_that_of_the_way_by_hand(demo):
    station, result = demo
    for case in CASES:
        q = result.flow[case]
        level = [182.6, 181.2, 180.0][case] - [121.6, 123.2, 124.4][case]
        line = main_line("new" if case == 2 else "aged")
        lost = line.head_loss(q, kinematic_viscosity=VISCOSITY) + SUCTION.head_loss(
            q, kinematic_viscosity=VISCOSITY
        )
        assert result.manifold_head[case] == pytest.approx(level + lost, abs=1e-9)


@pytest.mark.parametrize("chainage", [0.0, 700.0, 2150.0, 2300.0, 2390.0, 3370.0])
def test_a_line_parted_anywhere_loses_as_much_as_whole(chainage):
    line = main_line("aged")
    before, after = parted_at(line, chainage=chainage)
    flow = np.array([-0.05, 0.0, 0.09])
    parts = [p.head_loss(flow, kinematic_viscosity=VISCOSITY) for p in (before, after)]

    assert sum(parts) == pytest.approx(line.head_loss(flow, kinematic_viscosity=VISCOSITY))
    assert float(before.length.sum()) == pytest.approx(chainage)


def test_a_cut_at_the_end_of_a_reach_keeps_whole_reaches():
    before, after = parted_at(main_line("aged"), chainage=2150.0)
    assert (before.reaches, after.reaches) == (1, 2)
    assert after.k.tolist() == [3.0, 6.0]


@pytest.mark.parametrize("chainage", [-1.0, 3371.0, float("nan")])
def test_a_cut_off_the_line_is_refused(chainage):
    with pytest.raises(ValueError, match="chainage must be between 0 and 3370 m"):
        parted_at(main_line("aged"), chainage=chainage)


def nothing(flow, case):
    return 0.0 * flow


@pytest.mark.parametrize(
    ("level", "draw", "largest", "said"),
    [
        ([np.nan], 0.0, 0.1, "level must be a finite number"),
        ([180.0], -0.01, 0.1, "draw must not be below zero"),
        ([180.0], 0.0, 0.0, "largest_flow must be above zero"),
    ],
)
def test_a_tank_that_cannot_be_is_refused(level, draw, largest, said):
    with pytest.raises(ValueError, match=said):
        floating_tank(
            level=level, draw=draw, before=nothing, after=nothing, suction_grade=nothing,
            largest_flow=largest,
        )  # fmt: skip
