"""Pumps without a drive, held flow, trimmed impellers, and the reducing valve."""

from collections.abc import Iterator

import numpy as np

from server.hydraulics.reducing_valve import wasted_power
from server.hydraulics.states import State
from server.hydraulics.trim import LIMIT_RATIO
from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.findings.reading import Reading
from server.studies.shapes import Finding, Severity
from server.units import Dimension as D


def judge_drives(judged: JudgedSet) -> tuple[list[Reading], list[Finding]]:
    """Return readings of held flow and trims, and what pumps without a drive or a valve do."""
    return (
        [*_held_flow(judged), *_trims(judged)],
        [*_fixed_exceeds(judged), *_valve(judged)],
    )


def _held_flow(judged: JudgedSet) -> Iterator[Reading]:
    result, control = judged.result, judged.entered.control
    if control.kind != "held_flow" or control.flow is None:
        return
    for c, k in judged.stated:
        short = State(int(result.state[c, k])) is State.TOP_SPEED
        yield Reading(
            code="held_flow_not_reached", severity=Severity.FAIL,
            subject=f"{judged.path}/control", pump_set=judged.id, criterion=None,
            case=judged.case(c), provided=amount("flow", float(result.flow[c, k]), D.FLOW),
            required=amount("held", control.flow.si if short else None, D.FLOW),
            sense="at_least", names=(("set", judged.title),), at_limit_share=0.0,
            mend=(f"{judged.path}/control/flow", *judged.pump_tables,
                  f"{judged.path}/control/highest_speed"),
        )  # fmt: skip


def _trims(judged: JudgedSet) -> Iterator[Reading]:
    for n, slot in enumerate(judged.slots):
        if slot.trim_ratio is None:
            continue
        yield Reading(
            code="trim_deep", severity=Severity.CAUTION,
            subject=f"{judged.slot_path(n)}/diameter", pump_set=judged.id, criterion=None,
            case=None, provided=amount("ratio", slot.trim_ratio, D.RATIO, 0),
            required=amount("limit", LIMIT_RATIO, D.RATIO, 0), sense="at_least",
            names=(("slot", judged.slot_title(n)), ("set", judged.title)),
            mend=(f"{judged.slot_path(n)}/diameter",), at_limit_share=0.0,
        )  # fmt: skip


def _fixed_exceeds(judged: JudgedSet) -> Iterator[Finding]:
    """Yield the cases in which what runs without a drive passes more than is asked."""
    result = judged.result
    cases = [(c, k) for c, k in judged.stated if result.fixed_exceeds[c, k]]
    cases = [(c, k) for c, k in cases if State(int(result.state[c, k])) is State.LOW_SPEED]
    if not cases or result.set_point is None:
        return
    worst, k = max(cases, key=lambda pair: float(result.held_pressure[pair]))
    fixed = [n for n in judged.running(worst, k) if judged.slots[n].fixed]
    yield Finding(
        code="fixed_unit_exceeds", severity=Severity.CAUTION, subject=judged.path,
        pump_set=judged.id, governing=judged.case(worst),
        cases=tuple(judged.case(c) for c, _ in cases),
        provided=amount("held", float(result.held_pressure[worst, k]), D.PRESSURE, 0),
        required=amount("set_point", float(result.set_pressure[worst]), D.PRESSURE),
        others=(amount("demand", float(result.demand[worst]), D.FLOW),),
        names=(("set", judged.title), ("held", judged.held_words)), basis="physics",
        mend=tuple(f"{judged.slot_path(n)}/drive" for n in fixed),
    )  # fmt: skip


def _valve(judged: JudgedSet) -> Iterator[Finding]:
    """Yield the most that the reducing valve takes away beside what it loses wide open."""
    result = judged.result
    if result.control != "reducing_valve":
        return
    taken = [
        (float(result.valve_loss[c, k]), c, k) for c, k in judged.stated
        if State(int(result.state[c, k])) is State.SOLVED and result.flow[c, k] > 0
    ]  # fmt: skip
    if not taken:
        return
    taken.sort(reverse=True)
    head, c, k = taken[0]
    power = float(wasted_power(float(result.flow[c, k]), head=head, density=result.density))
    cases = dict.fromkeys(judged.case(each) for _, each, _ in taken)
    control = f"{judged.path}/control"
    yield Finding(
        code="valve_wastes_head", severity=Severity.NOTE, subject=control, pump_set=judged.id,
        governing=judged.case(c), cases=tuple(cases),
        provided=amount("head", head, D.HEAD, 1),
        required=amount("none", 0.0, D.HEAD, 1),
        others=(amount("power", power if np.isfinite(power) else None, D.POWER),),
        names=(("set", judged.title),), basis="physics", mend=(f"{control}/kind",),
    )  # fmt: skip
