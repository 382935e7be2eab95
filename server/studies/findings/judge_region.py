"""Where each running pump stands on its curve: its regions, its least flow, its end."""

from collections.abc import Iterator

import numpy as np

from server.hydraulics.states import State
from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.findings.reading import Reading, Sense
from server.studies.shapes import Path, Region, Severity
from server.units import Dimension as D


def judge_region(judged: JudgedSet) -> list[Reading]:
    """Return readings of every running pump, and of the cases that have no duty."""
    readings = list(_without_duty(judged))
    for c, k in judged.stated:
        for n, title in judged.running_kinds(c, k):
            readings.extend(_of_pump(judged, c, k, n, title))
    return readings


def _of_pump(judged: JudgedSet, c: int, k: int, n: int, title: str) -> Iterator[Reading]:
    """Yield the readings of one kind of running pump in one case."""
    share = float(judged.result.best_efficiency_share[c, k, n])
    if share != share:
        return
    fire = bool(judged.result.is_fire[c])
    low, high = judged.preferred(n)
    common = Reading(
        code="region_outside_in_fire" if fire else "region_outside",
        severity=Severity.CAUTION if fire else Severity.FAIL,
        subject=judged.slot_path(n), pump_set=judged.id,
        criterion=judged.criterion(judged.preferred_key(n, high=False)), case=judged.case(c),
        provided=amount("share", share, D.RATIO, _decimals(share, low)),
        required=amount("required", low, D.RATIO, 0), sense="at_least",
        mend=_mend(judged, n, left=True), at_limit_share=0.0,
        others=(amount("flow", float(judged.result.leg_flow[c, k, n]), D.FLOW),
                amount("low", low, D.RATIO, 0), amount("high", high, D.RATIO, 0)),
        names=(("slot", title), ("set", judged.title), ("run", _run(title)),
               ("side", "left" if share < low else "right")),
    )  # fmt: skip
    yield common
    yield common.varied(criterion=judged.criterion(judged.preferred_key(n, high=True)),
                        sense="at_most",
        provided=amount("share", share, D.RATIO, _decimals(share, high)),
        required=amount("required", high, D.RATIO, 0), mend=_mend(judged, n, left=False),
    )  # fmt: skip
    if not fire and judged.region_in(c, k, n) is Region.EDGE:
        yield _edge(judged, common, share, low, high)
    yield from _further_ends(judged, common, n, share)


def _decimals(share: float, end: float) -> int:
    """Return the decimals of a share: one more where rounding would contradict the verdict."""
    return 0 if abs(share - end) > 0.01 else 1


def _run(title: str) -> str:
    return "run" if " and " in title else "runs"


def _mend(judged: JudgedSet, n: int, left: bool) -> tuple[Path, ...]:
    pump = f"{judged.curve_path(n)}/table"
    set_point = judged.result.set_point is not None
    return (pump, f"{judged.path}/{'control/pressure' if left and set_point else 'slots'}")


def _edge(judged: JudgedSet, common: Reading, share: float, low: float, high: float) -> Reading:
    """Return the reading that tells of an edge: the required value is the edge's inner side."""
    edge = judged.limit("region-edge")
    left = share - low < high - share
    return common.varied(code="region_edge", severity=Severity.CAUTION,
        criterion=judged.criterion("region-edge"),
        required=amount("required", low + edge if left else high - edge, D.RATIO, 0),
        sense="at_least" if left else "at_most",
        provided=amount("share", share, D.RATIO, 1),
    )  # fmt: skip


def _further_ends(
    judged: JudgedSet, common: Reading, n: int, share: float
) -> Iterator[Reading]:
    """Yield the maker's allowable region and the minimum continuous flow."""
    slot = judged.slots[n]
    base = common.varied(severity=Severity.FAIL, provided=amount("share", share, D.RATIO, 0))
    ends: tuple[tuple[float | None, Sense, str], ...] = (
        (slot.allowable_low, "at_least", "low"),
        (slot.allowable_high, "at_most", "high"),
    )
    for end, sense, field in ends:
        if end is not None:
            yield base.varied(code="allowable_region_outside", sense=sense,
                criterion=judged.criterion("allowable-region"),
                required=amount("required", end, D.RATIO, 0),
                mend=(f"{judged.pump_path(n)}/allowable_region/{field}",
                      f"{judged.curve_path(n)}/table"),
            )  # fmt: skip
    yield base.varied(code="minimum_flow_broken", criterion=judged.criterion("minimum-flow"),
        required=amount("required", slot.minimum_flow, D.RATIO, 0), sense="at_least",
        mend=(f"{judged.pump_path(n)}/minimum_flow", f"{judged.curve_path(n)}/table"),
        names=(*common.names, ("state", "assumed" if slot.minimum_flow_assumed else "")),
    )  # fmt: skip


def _without_duty(judged: JudgedSet) -> Iterator[Reading]:
    """Yield the cases without a duty, the largest demand first, each with why."""
    result = judged.result
    for c in sorted(judged.unstated, key=lambda c: -float(result.demand[c])):
        code = _why(judged, c)
        if code is None:
            continue  # there is no water to pump: the suction side tells it
        if result.zone_kind == "floating_tank":
            yield _against_tank(judged, c, code)
            continue
        end, speed = _end(judged, c)
        demand = float(result.demand[c])
        yield Reading(
            code=code, severity=Severity.STOP, subject=judged.path, pump_set=judged.id,
            criterion=None, case=judged.case(c), provided=amount("flow_at_end", end, D.FLOW),
            required=amount("demand", demand, D.FLOW), sense="at_least",
            without_number=code != "end_of_curve" or not end < demand,
            others=(amount("speed", speed, D.RATIO, 0),), names=(("set", judged.title),),
            mend=_mend_no_duty(judged, code),
        )  # fmt: skip


def _against_tank(judged: JudgedSet, c: int, code: str) -> Reading:
    """Return a case without a duty against a tank: there the flow follows, and none fits."""
    result, k = judged.result, int(judged.result.chosen[c])
    ended = code == "end_of_curve"
    if k < 0:
        lacks = np.where(result.available[c], np.abs(result.lack[c]), np.inf)
        k = int(np.argmin(np.nan_to_num(lacks, nan=np.inf)))
    lack = abs(float(result.lack[c, k]))
    end = float(result.flow_at_end[c, k])
    provided = amount("flow_at_end", end, D.FLOW) if ended else amount("lack", lack, D.HEAD, 1)
    return Reading(
        code=code, severity=Severity.STOP, subject=judged.path, pump_set=judged.id,
        criterion=None, case=judged.case(c), provided=provided,
        required=amount("demand", float(result.demand[c]), D.FLOW), sense="at_least",
        without_number=True, others=(amount("surplus", lack, D.HEAD, 1),),
        names=(("set", judged.title), ("state", "tank" if ended else "")),
        mend=_mend_no_duty(judged, code),
    )  # fmt: skip


def _why(judged: JudgedSet, c: int) -> str | None:
    result = judged.result
    k = int(result.chosen[c])
    seen = result.state[c, k : k + 1] if k >= 0 else result.state[c, result.available[c]]
    states = {State(int(state)) for state in seen}
    if State.NO_WATER in states:
        return None
    if State.END_OF_CURVE in states:
        return "end_of_curve"
    if State.BELOW_STATIC in states and result.zone_kind == "floating_tank":
        return "static_head_not_reached"
    # a combination with a unit held shut is never chosen: all that may run have one
    return "held_shut" if states & {State.BELOW_STATIC, State.HELD_SHUT} else "no_unit"


def _end(judged: JudgedSet, c: int) -> tuple[float, float]:
    """Return the flow at which the curves end, and at which speed, of what would run."""
    result, k = judged.result, int(judged.result.chosen[c])
    if k < 0:
        ends = np.where(result.available[c], result.flow_at_end[c], np.nan)
        if not np.isfinite(ends).any():
            return float("nan"), float("nan")
        k = int(np.nanargmax(ends))
    return float(result.flow_at_end[c, k]), float(result.speed_at_end[c, k])


def _mend_no_duty(judged: JudgedSet, code: str) -> tuple[Path, ...]:
    """Return the fields that give the case a duty, best first."""
    slots = (f"{judged.path}/slots",)
    if code == "no_unit":
        later = tuple(
            f"{judged.path}/slots/{slot.id}/from_horizon"
            for slot in judged.entered.slots
            if slot.from_horizon is not None and slot.role == "duty"
        )
        return (*later, *slots)
    if code == "held_shut":
        legs = dict.fromkeys(leg for leg in judged.leg_of_slot if leg is not None)
        return tuple(f"/legs/{leg}/discharge_branch/cracking_head" for leg in legs)
    tables = dict.fromkeys(
        f"{judged.curve_path(n)}/table"
        for n in range(len(judged.slots))
        if judged.slots[n].role != "jockey"
    )
    return (*tables, *slots)
