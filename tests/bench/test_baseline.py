"""The array solver gives the answers of the frozen scalar baseline, held shut or not."""

import numpy as np

from server.hydraulics.parallel import HEAD_TOLERANCE, solve_parallel
from server.hydraulics.states import State
from tests.bench.bench_parallel import SHUT, baseline_heads, problem


def test_arrays_and_one_root_at_a_time_agree_to_a_billionth_of_a_metre():
    cases = problem(300)
    result = solve_parallel(cases.legs, system=cases.system, speeds=cases.speeds)
    shut = result.state == State.HELD_SHUT

    assert np.abs(result.manifold_head - baseline_heads(cases, 300)).max() < HEAD_TOLERANCE
    assert SHUT / 2 < shut.mean() < 2 * SHUT
    assert set(result.state.tolist()) == {State.SOLVED, State.HELD_SHUT}
