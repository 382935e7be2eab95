"""The suction side: supplying main, suction gauge, supplying zone, NPSH, suction lift."""

from collections.abc import Iterator

from server.studies.duty_result import FirmCapacity
from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.findings.reading import TOLD_ELSEWHERE, Reading, broken
from server.studies.shapes import Amount, Path, Severity
from server.units import Dimension as D

SUCTION_LIMITS = ("connection", "suction_gauge")


def judge_suction(judged: JudgedSet) -> list[Reading]:
    """Return the readings of the suction side in every case."""
    readings = [*_main_and_gauge(judged), *_net_head(judged), *_lift(judged)]
    return readings


def suction_capacity(judged: JudgedSet) -> FirmCapacity | None:
    """Return the firm capacity that falls short because of the suction, the shortest one."""
    short = [
        firm
        for firm in judged.result.made.firm_capacity
        if firm.by_all_limit in SUCTION_LIMITS
        and firm.by_all < firm.required_flow <= firm.by_head
    ]
    return max(short, key=lambda firm: firm.required_flow - firm.by_all, default=None)


def _main_and_gauge(judged: JudgedSet) -> Iterator[Reading]:
    """Yield one reading a case: the worse of main and gauge, so that one cause is one finding.

    Both rows of the criteria are read; the finding stands under the main's row when the main is
    under its limit, with the gauge beside it, else under the gauge's row.
    """
    firm = suction_capacity(judged)
    for c, _ in judged.stated:
        main = _suction(judged, c, "suction-main-minimum",
                        float(judged.result.connection_pressure[c]),
                        (_low_state(judged), "/supply/connection_level"))  # fmt: skip
        gauge = _suction(judged, c, "suction-gauge-minimum",
                         float(judged.result.suction_pressure[c]),
                         (_low_state(judged), *_suction_bores(judged),
                          "/site/suction_gauge_level"))  # fmt: skip
        beside = _consequences(firm)
        if broken(main):
            yield main.varied(others=(*_gauge_beside(gauge), *beside),
                          names=(*main.names, ("state", _which(gauge, firm))))  # fmt: skip
            # the gauge is told in the same finding: its reading stays, but as one that is told
            yield gauge.varied(code=TOLD_ELSEWHERE)
        else:
            yield main
            yield gauge.varied(code="suction_gauge_low", others=beside,
                          names=(*gauge.names, ("state", "firm" if firm else "")))  # fmt: skip


def _which(gauge: Reading, firm: FirmCapacity | None) -> str:
    return ("gauge" if broken(gauge) else "") + ("-firm" if firm else "")


def _gauge_beside(gauge: Reading) -> tuple[Amount, ...]:
    return (
        amount("gauge", gauge.provided.value, D.PRESSURE, 1),
        amount("gauge_required", gauge.required.value, D.PRESSURE),
    )


def _consequences(firm: FirmCapacity | None) -> tuple[Amount, ...]:
    if firm is None:
        return ()
    return (
        amount("firm", firm.by_all, D.FLOW),
        amount("firm_required", firm.required_flow, D.FLOW),
        amount("short", firm.required_flow - firm.by_all, D.FLOW),
    )


def _suction(
    judged: JudgedSet, c: int, key: str, pressure: float, mend: tuple[Path, ...]
) -> Reading:
    return Reading(
        code="suction_main_low", severity=Severity.FAIL, subject="/supply", pump_set=judged.id,
        criterion=judged.criterion(key), case=judged.case(c),
        provided=amount("pressure", pressure, D.PRESSURE, 1),
        required=amount("required", judged.limit(key), D.PRESSURE), sense="at_least", mend=mend,
        names=(("supply", judged.station.supply.title or "the supplying main"),
               ("set", judged.title)),
    )  # fmt: skip


def _low_state(judged: JudgedSet) -> Path:
    """Return the field that lifts the supply in its low state."""
    if judged.station.supply.kind == "grade_line":
        return "/supply/grade_line/low"
    if judged.station.supply.kind == "tank":
        return "/supply/tank/low"
    return "/supply/states/low"


def _suction_bores(judged: JudgedSet) -> tuple[Path, ...]:
    return judged.suction_bores


def _net_head(judged: JudgedSet) -> Iterator[Reading]:
    """Yield NPSH of every running unit: broken, by ratio, by margin."""
    result, limits = judged.result, judged
    for c, k in judged.stated:
        for n, title in judged.running_kinds(c, k):
            available = float(result.npsh_available[c, k, n])
            required = float(result.npsh_required[c, k, n])
            if available != available or required != required:
                continue
            outside = not judged.inside(n, float(result.best_efficiency_share[c, k, n]))
            margin_key = "npsh-margin-outside-min" if outside else "npsh-margin-min"
            by_ratio = limits.limit("npsh-ratio-min") * required
            by_margin = required + limits.limit(margin_key)
            key = "npsh-ratio-min" if by_ratio >= by_margin else margin_key
            common = Reading(
                code="npsh_broken", severity=Severity.STOP, subject=judged.slot_path(n),
                pump_set=judged.id, criterion=None, case=judged.case(c),
                provided=amount("available", available, D.HEAD),
                required=amount("required", required, D.HEAD), sense="at_least",
                mend=(_low_state(judged), "/site/eye_level", *_suction_bores(judged),
                      f"{judged.curve_path(n)}/table"),
                names=(("slot", title), ("set", judged.title),
                       ("has", "have" if " and " in title else "has")),
                others=(amount("npsh_required", required, D.HEAD),),
            )  # fmt: skip
            yield common
            if not broken(common):
                yield common.varied(
                    code="npsh_short", severity=Severity.FAIL,
                    criterion=judged.criterion(key),
                    required=amount("required", max(by_ratio, by_margin), D.HEAD),
                )  # fmt: skip


def _lift(judged: JudgedSet) -> Iterator[Reading]:
    """Yield suction lift: the pump eye above the suction grade."""
    eye = judged.station.site.eye_level
    if eye is None:
        return
    for c, _ in judged.stated:
        lift = eye.si - float(judged.result.suction_grade[c])
        common = Reading(
            code="suction_lift_long", severity=Severity.FAIL, subject="/site/eye_level",
            pump_set=judged.id, criterion=judged.criterion("suction-lift-max"),
            case=judged.case(c),
            provided=amount("lift", lift, D.HEAD),
            required=amount("required", judged.limit("suction-lift-max"), D.HEAD),
            sense="at_most",
            mend=("/site/eye_level", _low_state(judged)), names=(("set", judged.title),),
            at_limit_share=0.0,
        )  # fmt: skip
        yield common
        if not broken(common):
            yield common.varied(code="suction_lift", severity=Severity.CAUTION, criterion=None,
                          required=amount("required", 0.0, D.HEAD))  # fmt: skip
