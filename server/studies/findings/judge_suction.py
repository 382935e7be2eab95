"""The suction side: supplying main, suction gauge, suction lift, and where no water is left.

In a closed zone the demand is imposed: what it leaves of the supply is known, and judged,
whether or not the pumps have a duty.
"""

from collections.abc import Iterator

from server.studies.duty_result import FirmCapacity, Place
from server.studies.findings.judged_set import JudgedSet, amount
from server.studies.findings.reading import TOLD_ELSEWHERE, Reading, broken
from server.studies.shapes import Amount, Case, Path, Severity
from server.units import Dimension as D

SUCTION_LIMITS = ("connection", "suction_gauge")
PLACE_WORDS = {
    Place.CONNECTION: "the connection to the supplying main",
    Place.SUCTION_GAUGE: "the suction gauge",
    Place.PUMP_EYE: "the pump eye",
}


def judge_suction(judged: JudgedSet) -> list[Reading]:
    """Return the readings of the suction side in every case."""
    return [*_without_water(judged), *_main_and_gauge(judged), *_lift(judged)]


def suction_capacity(judged: JudgedSet) -> FirmCapacity | None:
    """Return the firm capacity that falls short because of the suction, the shortest one."""
    short = [
        firm
        for firm in judged.result.made.firm_capacity
        if firm.by_all_limit in SUCTION_LIMITS
        and firm.by_all < firm.required_flow <= firm.by_head
    ]
    return max(short, key=lambda firm: firm.required_flow - firm.by_all, default=None)


def no_water(judged: JudgedSet, case: Case, place: Place) -> Reading:
    """Return that there is no water to pump, and where: no number can say by how much."""
    bores = judged.suction_bores
    mend = {
        Place.CONNECTION: (low_state(judged), "/supply/connection_level"),
        Place.SUCTION_GAUGE: (low_state(judged), *bores, "/site/suction_gauge_level"),
        Place.PUMP_EYE: (low_state(judged), "/site/eye_level", *bores),
    }[place]
    return Reading(
        code="no_water_at_suction", severity=Severity.STOP, subject="/supply",
        pump_set=judged.id, criterion=None, case=case, sense="at_least", without_number=True,
        provided=amount("pressure", None, D.PRESSURE),
        required=amount("required", judged.result.lowest_pressure, D.PRESSURE), mend=mend,
        names=(("place", PLACE_WORDS[place]), ("set", judged.title)),
    )  # fmt: skip


def _without_water(judged: JudgedSet) -> Iterator[Reading]:
    """Yield the cases without water to pump, the largest demand first, and what they break."""
    criteria = [
        judged.criterion(key)
        for key in ("suction-main-minimum", "suction-gauge-minimum", "suction-lift-max")
    ]
    for c in sorted(judged.dry, key=lambda c: -float(judged.result.demand[c])):
        reading = no_water(judged, judged.case(c), judged.dry[c])
        yield reading
        for criterion in criteria:
            yield reading.varied(code=TOLD_ELSEWHERE, criterion=criterion)


def _below_atmosphere(judged: JudgedSet, c: int) -> Iterator[Reading]:
    """Yield a suction side that sucks at its pipes, at the place nearest to the supply."""
    for pressure, place in (
        (float(judged.result.connection_pressure[c]), Place.CONNECTION),
        (float(judged.result.suction_pressure[c]), Place.SUCTION_GAUGE),
    ):
        if pressure < 0:
            yield below_atmosphere(
                judged, judged.case(c), "/supply", PLACE_WORDS[place], pressure,
                (low_state(judged), *judged.suction_bores),
            )  # fmt: skip
            return


def below_atmosphere(
    judged: JudgedSet, case: Case, subject: Path, place: str, pressure: float,
    mend: tuple[Path, ...],
) -> Reading:  # fmt: skip
    """Return that a pressure is below that of the air: dirty water can be drawn in."""
    return Reading(
        code="below_atmosphere", severity=Severity.FAIL, subject=subject, pump_set=judged.id,
        criterion=None, case=case, provided=amount("pressure", pressure, D.PRESSURE, 0),
        required=amount("required", 0.0, D.PRESSURE), sense="at_least", mend=mend,
        names=(("place", place), ("set", judged.title)), at_limit_share=0.0,
    )  # fmt: skip


def _main_and_gauge(judged: JudgedSet) -> Iterator[Reading]:
    """Yield one reading a case: the worse of main and gauge, so that one cause is one finding.

    Both rows of the criteria are read; the finding stands under the main's row when the main is
    under its limit, with the gauge beside it, else under the gauge's row.
    """
    firm = suction_capacity(judged)
    from_tank = judged.result.supply_kind == "tank"
    for c in judged.supplied:
        yield from _below_atmosphere(judged, c)
        if from_tank:
            continue  # the limits guard a main and its other customers: a tank has none
        main = _suction(judged, c, "suction-main-minimum",
                        float(judged.result.connection_pressure[c]),
                        (low_state(judged), "/supply/connection_level"))  # fmt: skip
        gauge = _suction(judged, c, "suction-gauge-minimum",
                         float(judged.result.suction_pressure[c]),
                         (low_state(judged), *judged.suction_bores,
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


def low_state(judged: JudgedSet) -> Path:
    """Return the field that lifts the supply in its low state."""
    if judged.station.supply.kind == "grade_line":
        return "/supply/grade_line/low"
    if judged.station.supply.kind == "tank":
        return "/supply/tank/low"
    return "/supply/states/low"


def _lift(judged: JudgedSet) -> Iterator[Reading]:
    """Yield suction lift: the pump eye above the suction grade."""
    eye = judged.station.site.eye_level
    if eye is None:
        return
    for c in judged.supplied:
        lift = eye.si - float(judged.result.suction_grade[c])
        common = Reading(
            code="suction_lift_long", severity=Severity.FAIL, subject="/site/eye_level",
            pump_set=judged.id, criterion=judged.criterion("suction-lift-max"),
            case=judged.case(c),
            provided=amount("lift", lift, D.HEAD),
            required=amount("required", judged.limit("suction-lift-max"), D.HEAD),
            sense="at_most",
            mend=("/site/eye_level", low_state(judged)), names=(("set", judged.title),),
            at_limit_share=0.0,
        )  # fmt: skip
        yield common
        if not broken(common):
            yield common.varied(code="suction_lift", severity=Severity.CAUTION, criterion=None,
                          required=amount("required", 0.0, D.HEAD))  # fmt: skip
