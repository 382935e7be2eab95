"""Every way of solving gives the answers of the named problems.

Sources
    Beside each problem in duty_problems.py. The frozen scalar baseline (tests/bench) solves
    those on a square law once more, one root inside another.
"""

from collections import Counter

import numpy as np
import pytest

from server.hydraulics.combinations import solve_combinations
from server.hydraulics.control import hold_head
from server.hydraulics.held_flow import hold_flow
from server.hydraulics.imposed_flow import impose_flow
from server.hydraulics.mixed_control import hold_head_mixed
from server.hydraulics.operating_points import Answer, all_operating_points
from server.hydraulics.parallel import solve_parallel
from server.hydraulics.states import State
from server.hydraulics.system_curve import PowerSystem
from tests.bench.baseline import operating_point, scalar_leg
from tests.hydraulics.duty_problems import PROBLEMS

NAMES = [one.name for one in PROBLEMS]
FLOWING = [one for one in PROBLEMS if one.flow > 0]
LIMIT = (0.2, 1.3)


def over(problems):
    return pytest.mark.parametrize("problem", problems, ids=[one.name for one in problems])


def check(problem, flow, head, leg_flow):
    """Hold an answer against the problem's."""
    near = problem.head_rel or problem.rel
    assert flow == pytest.approx(problem.flow, rel=problem.rel)
    if np.isfinite(problem.head):
        assert head == pytest.approx(problem.head, rel=near)
    assert np.sum(leg_flow) == pytest.approx(flow, rel=1e-12)
    if problem.leg_flow is not None:
        least = 10 * problem.rel * problem.flow
        assert leg_flow == pytest.approx(problem.leg_flow, rel=10 * problem.rel, abs=least)


def exact(problem):
    """Return flow and head of the problem as solved, for ways that are given one of them."""
    result = solve_parallel(problem.legs, system=problem.system, speeds=problem.ratios)
    return result.flow, result.manifold_head


def test_there_are_twenty_five_problems_or_more_and_each_has_its_own_name():
    assert len(PROBLEMS) >= 25
    assert [name for name, count in Counter(NAMES).items() if count > 1] == []
    assert {one.source for one in PROBLEMS} >= {"closed form", "EDL", "CE3305", "made", "Demo"}


@over(FLOWING)
def test_legs_in_parallel_meet_the_system(problem):
    result = solve_parallel(problem.legs, system=problem.system, speeds=problem.ratios)

    check(problem, result.flow[0], result.manifold_head[0], result.leg_flow[0])
    assert result.energy_residual[0] < 1e-9
    assert result.mass_residual[0] < 1e-9


@over(FLOWING)
def test_a_combination_among_others_meets_the_system(problem):
    count = len(problem.legs)
    masks = np.vstack([np.zeros((1, count + 1), bool), np.eye(count + 1, dtype=bool),
                       [[True] * count + [False]]])  # fmt: skip
    result = solve_combinations(
        [*problem.legs, problem.legs[0]],
        system=problem.system,
        combinations=masks,
        speeds=[*problem.ratios, 0.5],
    )
    check(problem, result.flow[0, -1], result.manifold_head[0, -1], result.leg_flow[0, -1, :-1])
    assert result.state[0, 0] == State.NOT_AVAILABLE


@over(PROBLEMS)
def test_the_scan_finds_every_state(problem):
    found = all_operating_points(problem.legs, system=problem.system, speeds=problem.ratios)

    assert found.answer == problem.answer
    expected = problem.others or ((problem.flow,) if problem.flow > 0 else ())
    assert [one.flow for one in found.points] == pytest.approx(
        expected, rel=max(problem.rel, 1e-8), abs=1e-9
    )
    assert all(one.energy_residual < 1e-9 for one in found.points)
    if problem.flow > 0:
        best = found.best
        check(problem, best.flow, best.manifold_head, best.leg_flow)
    else:
        assert found.best is None


@over(FLOWING)
def test_the_flow_imposed_gives_the_head(problem):
    flow, head = exact(problem)
    result = impose_flow(
        flow,
        legs=problem.legs,
        combinations=[[True] * len(problem.legs)],
        speeds=problem.ratios,
    )
    check(problem, flow[0], result.head[0, 0], result.leg_flow[0, 0])
    assert result.head[0, 0] == pytest.approx(head[0], abs=1e-8)
    assert result.mass_residual[0, 0] < 1e-9


@over([one for one in FLOWING if len(set(one.ratios)) == 1])
def test_the_head_held_gives_the_speed(problem):
    flow, head = exact(problem)
    result = hold_head(
        flow,
        head=head,
        legs=problem.legs,
        combinations=[[True] * len(problem.legs)],
        lowest_speed=LIMIT[0],
        highest_speed=LIMIT[1],
    )
    assert result.speed[0, 0] == pytest.approx(problem.ratios[0], rel=1e-9)
    check(problem, flow[0], result.head[0, 0], result.leg_flow[0, 0])


@over([one for one in FLOWING if len(set(one.ratios)) == 1])
def test_the_flow_held_gives_the_speed(problem):
    flow, _ = exact(problem)
    result = hold_flow(
        flow,
        system=problem.system,
        legs=problem.legs,
        combinations=[[True] * len(problem.legs)],
        lowest_speed=LIMIT[0],
        highest_speed=LIMIT[1],
    )
    assert result.held[0, 0]
    assert result.speed[0, 0] == pytest.approx(
        [problem.ratios[0]] * len(problem.legs), rel=1e-9
    )
    check(problem, result.flow[0, 0], result.head[0, 0], result.leg_flow[0, 0])


@over([one for one in FLOWING if len(set(one.ratios[1:])) == 1])
def test_beside_a_fixed_first_pump_the_others_take_the_rest(problem):
    flow, head = exact(problem)
    fixed = np.arange(len(problem.legs)) == 0
    result = hold_head_mixed(
        flow,
        head=head,
        legs=problem.legs,
        combinations=[[True] * len(problem.legs)],
        variable=~fixed,
        fixed_speeds=problem.ratios,
        lowest_speed=LIMIT[0],
        highest_speed=LIMIT[1],
    )
    check(problem, flow[0], result.head[0, 0], result.leg_flow[0, 0])
    if np.all(result.leg_flow[0, 0] > 0):
        assert result.speed[0, 0] == pytest.approx(problem.ratios, rel=1e-8)


@over(
    [
        one
        for one in FLOWING
        if isinstance(one.system, PowerSystem)
        and one.system.exponent == 2.0
        and one.system.static_head[0] >= 0
        and all(leg.shares_uniquely for leg in one.legs)
    ]
)
def test_one_root_inside_another_gives_the_same(problem):
    legs = [
        scalar_leg(
            leg.pump.head_curve.breaks.tolist(),
            leg.pump.head_curve.coefficients.tolist(),
            leg.loss,
        )
        for leg in problem.legs
    ]
    head, flow = operating_point(
        legs,
        problem.ratios,
        float(problem.system.static_head[0]),
        float(problem.system.coefficient[0]),
    )
    ours = solve_parallel(problem.legs, system=problem.system, speeds=problem.ratios)
    assert ours.manifold_head[0] == pytest.approx(head, abs=1e-9)
    assert ours.flow[0] == pytest.approx(flow, rel=1e-9)


@over([one for one in PROBLEMS if one.flow == 0])
def test_what_has_no_answer_says_which_limit_binds(problem):
    found = all_operating_points(problem.legs, system=problem.system)
    result = solve_parallel(problem.legs, system=problem.system)
    if problem.answer == Answer.RUN_OUT:
        assert result.state[0] == State.END_OF_CURVE
        assert np.isnan(result.flow[0])
        assert found.last_row_surplus == pytest.approx(result.last_row_surplus[0])
        assert found.last_row_surplus > 0
        assert found.last_row_flow == pytest.approx(result.last_row_flow[0])
    elif problem.answer == Answer.BELOW_STATIC:
        assert result.state[0] == State.BELOW_STATIC
        assert result.flow[0] == 0
        assert found.head_missing >= 0
        assert found.static_head >= found.highest_head
    else:
        assert np.any(result.cannot_start[0])
        assert [one.startable for one in found.points] == [False, False, True]
        assert [one.stable for one in found.points] == [True, False, True]
