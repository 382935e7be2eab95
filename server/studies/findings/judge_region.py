"""Where each running pump stands on its curve: its regions, its least flow, its end."""

from collections.abc import Iterator

from server.hydraulics.states import State
from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.findings.reading import Reading, Sense
from server.studies.shapes import Finding, Path, Region, Severity
from server.units import Dimension as D


def judge_region(judged: JudgedSet) -> tuple[list[Reading], list[Finding]]:
    """Return readings of every running pump, and the cases that have no duty."""
    readings: list[Reading] = []
    for c, k in judged.stated:
        for n, title in judged.running_kinds(c, k):
            readings.extend(_of_pump(judged, c, k, n, title))
    return readings, list(_without_duty(judged))


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
    if not fire and judged.region(n, share) is Region.EDGE:
        yield _edge(judged, common, share, low, high)
    yield from _further_ends(judged, common, n, share)


def _decimals(share: float, end: float) -> int:
    """Return the decimals of a share: one more where rounding would contradict the verdict."""
    return 0 if abs(share - end) > 0.01 else 1


def _run(title: str) -> str:
    return "run" if " and " in title else "runs"


def _mend(judged: JudgedSet, n: int, left: bool) -> tuple[Path, ...]:
    pump = f"{judged.curve_path(n)}/table"
    return (pump, f"{judged.path}/control/pressure") if left else (pump, f"{judged.path}/slots")


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


def _without_duty(judged: JudgedSet) -> Iterator[Finding]:
    """Yield one finding for each way in which cases have no duty."""
    groups: dict[str, list[int]] = {}
    for c in judged.unstated:
        groups.setdefault(_why(judged, c), []).append(c)
    for code, cases in groups.items():
        cases.sort(key=lambda c: -float(judged.result.demand[c]))
        worst = cases[0]
        end = _flow_at_end(judged, worst)
        yield Finding(
            code=code, severity=Severity.STOP, subject=judged.path, pump_set=judged.id,
            governing=judged.case(worst), cases=tuple(judged.case(c) for c in cases),
            provided=amount("flow_at_end", end, D.FLOW),
            required=amount("demand", float(judged.result.demand[worst]), D.FLOW),
            names=(("set", judged.title),), basis="physics", mend=_mend_no_duty(judged, code),
        )  # fmt: skip


def _why(judged: JudgedSet, c: int) -> str:
    result = judged.result
    k = int(result.chosen[c])
    states = (
        {State(int(result.state[c, k]))}
        if k >= 0
        else {
            State(int(s))
            for s, on in zip(result.state[c], result.available[c], strict=True)
            if on
        }
    )
    if State.END_OF_CURVE in states:
        return "end_of_curve"
    # a combination with a unit held shut is never chosen: all that may run have one
    return "held_shut" if states & {State.BELOW_STATIC, State.HELD_SHUT} else "no_unit"


def _flow_at_end(judged: JudgedSet, c: int) -> float:
    ends = judged.result.flow_at_end[c]
    on = judged.result.available[c]
    known = [float(end) for end, used in zip(ends, on, strict=True) if used and end == end]
    return max(known, default=float("nan"))


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
