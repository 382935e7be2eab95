"""Firm capacity: the largest flow with each installed unit in turn out.

At low supply, on aged pipes, all other units at full speed, as many as the level stages start;
a standby counts as installed. Two numbers, by head and by all limits, and the second once more
with every pump at the lower corner of its test grade.
"""

from collections.abc import Sequence

import numpy as np

from server.hydraulics.leg_curve import LegCurve
from server.studies.acceptance_grade import grade_of, weak_leg
from server.studies.capacity import NO_UNIT, Capacity, capacities
from server.studies.cases import installed_slots
from server.studies.duty_result import FirmCapacity
from server.studies.firm_requirements import (
    TANK_REFILL,
    Requirement,
    asked_of,
    requirements,
    runs_out,
)
from server.studies.limits import StudyLimits
from server.studies.lowering.lowered import LoweredSet
from server.studies.set_ends import CommonSpeed, relative_speeds

SAME = 1e-6  # of a capacity: what roots are sought to, with room
Counts = tuple[int, ...]  # how many of each unit
Job = tuple[Counts, tuple[object, ...]]
Jobs = dict[Job, Requirement]


def firm_capacity(of: LoweredSet, limits: StudyLimits) -> tuple[FirmCapacity, ...]:
    """Return the firm capacity of each horizon for each requirement."""
    if not of.route.knows("aged"):
        return ()
    asked = [
        one
        for one in requirements(of, limits)
        if not np.isnan(one.shift) and installed_slots(of.slots, one.horizon.order)
    ]
    jobs: Jobs = {}
    for one in asked:
        for counts in (together(of, _installed(of, one)), *_without(of, one).values()):
            jobs.setdefault((counts, one.physics), one)
    solved, weak = _solve(of, limits, jobs)
    return tuple(_of(of, limits, one, solved, weak) for one in asked)


def _of(
    of: LoweredSet, limits: StudyLimits, one: Requirement, solved: dict[Job, Capacity],
    weak: dict[Job, Capacity],
) -> FirmCapacity:  # fmt: skip
    """Return one capacity with the unit that is out; the lower corner has the same one out."""
    counts = _without(of, one)
    without = {out: solved[n, one.physics] for out, n in counts.items()}
    worst, out = worst_out([(capacity, i) for i, capacity in without.items()])
    by_head = min(without.values(), key=lambda each: each.by_head)
    not_counted = dict.fromkeys(name for each in without.values() for name in each.not_counted)
    return FirmCapacity(
        requirement=one.name,
        fire=one.fire,
        horizon=one.horizon.id,
        required_flow=one.required_flow,
        by_head=by_head.by_head,
        by_head_limit=by_head.by_head_limit,
        by_all=worst.by_all,
        by_all_limit=worst.by_all_limit,
        unit_out=of.slots[out].facts.id,
        all_running=solved[together(of, _installed(of, one)), one.physics].by_head,
        best_efficiency_share=by_head.share,
        runs_out=runs_out(of, one, worst.by_all),
        by_all_weak=weak[counts[out], one.physics].by_all,
        test_grade=grades_of(of),
        hours=limits.tank_hours if one.name == TANK_REFILL else None,
        not_counted=tuple(not_counted),
    )


def _installed(of: LoweredSet, one: Requirement) -> tuple[int, ...]:
    return installed_slots(of.slots, one.horizon.order)


def _without(of: LoweredSet, one: Requirement) -> dict[int, Counts]:
    """Return what works with each installed unit in turn out."""
    installed = _installed(of, one)
    return {out: working(of, [i for i in installed if i != out]) for out in installed}


def worst_out(without: Sequence[tuple[Capacity, int]]) -> tuple[Capacity, int]:
    """Return the least capacity and the unit that is out: by all limits, then by head.

    Where the suction side limits them all, capacities differ by rounding only: the choice goes
    on by head, and among equals the last in slot order counts as the one that is out.
    """
    least = min(capacity.by_all for capacity, _ in without)
    left = [pair for pair in without if pair[0].by_all <= least * (1 + SAME)]
    least = min(capacity.by_head for capacity, _ in left)
    left = [pair for pair in left if pair[0].by_head <= least * (1 + SAME)]
    return max(left, key=lambda pair: pair[1])


def _solve(
    of: LoweredSet, limits: StudyLimits, jobs: Jobs
) -> tuple[dict[Job, Capacity], dict[Job, Capacity]]:
    """Return every capacity that is looked up, and those of pumps that just pass their test.

    All are solved side by side: the weak pumps stand beside the others as further kinds.
    """
    still = {key: NO_UNIT for key in jobs if not any(key[0])}
    rest = {key: one for key, one in jobs.items() if any(key[0])}
    if not rest:
        return still, still
    counts = np.array([n for n, _ in rest], dtype=np.float64)
    none = np.zeros(counts.shape)
    units = CommonSpeed(
        legs=(*(unit.leg for unit in of.units), *_weak_legs(of)),
        count=np.block([[counts, none], [none, counts]]),
        relative=2 * relative_speeds(of),
    )
    found = capacities(of, limits, units, asked_of(2 * tuple(rest.values())))
    own, weak = found[: len(rest)], found[len(rest) :]
    return (
        still | dict(zip(rest, own, strict=True)),
        still | dict(zip(rest, weak, strict=True)),
    )


def _weak_legs(of: LoweredSet) -> tuple[LegCurve, ...]:
    """Return every leg with its pump at the lower corner of its test grade."""
    pairs = zip(of.units, _motor_powers(of), strict=True)
    return tuple(weak_leg(unit.leg, grade_of(power)) for unit, power in pairs)


def grades_of(of: LoweredSet) -> str:
    """Return the grades of the pumps' tests, each once: "2B"."""
    return ", ".join(dict.fromkeys(grade_of(power).name for power in _motor_powers(of)))


def _motor_powers(of: LoweredSet) -> list[float]:
    """Return the largest shaft power of each kind of unit, else its motor's; 0 when unknown."""
    powers = []
    for t in range(len(of.units)):
        facts = next(slot.facts for slot in of.slots if slot.unit == t)
        powers.append(facts.motor_power or facts.largest_shaft_power or 0.0)
    return powers


def working(of: LoweredSet, some: Sequence[int]) -> Counts:
    """Return the units that work together: as many as the control starts, in slot order."""
    stages = len(of.control.stages)
    return _counts(of, _mains(of, some)[: stages or None])


def together(of: LoweredSet, some: Sequence[int]) -> Counts:
    """Return all the units that could work together, however many the control starts."""
    return _counts(of, _mains(of, some))


def _mains(of: LoweredSet, some: Sequence[int]) -> list[int]:
    """Return the main units, or the jockeys where there is no main."""
    return [i for i in some if of.slots[i].facts.role != "jockey"] or list(some)


def _counts(of: LoweredSet, some: Sequence[int]) -> Counts:
    units = [of.slots[i].unit for i in some]
    return tuple(units.count(t) for t in range(len(of.units)))
