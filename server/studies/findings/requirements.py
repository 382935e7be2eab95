"""Requirements by horizon: the table of the Summary and of the memo's first page."""

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from itertools import chain

from server.station.station import Station
from server.studies.duty_result import DutyResult, FirmCapacity
from server.studies.findings.criteria import Criterion
from server.studies.findings.judged_set import MADE, amount
from server.studies.findings.reading import Reading, broken
from server.studies.shapes import Amount, Case, Region, Verdict
from server.units import Dimension as D


@dataclass(frozen=True, slots=True)
class RequirementCell:
    """The answer to one requirement at one horizon."""

    horizon: str
    verdict: Verdict
    provided: Amount | None = None
    required: Amount | None = None
    region: Region | None = None
    case: Case | None = None
    because: str = ""  # in words, of NOT_CHECKED and of what is not met without a number


@dataclass(frozen=True, slots=True)
class RequirementRow:
    """One requirement at every horizon."""

    key: str
    limits: tuple[Amount, ...]
    names: tuple[tuple[str, str], ...]
    cells: tuple[RequirementCell, ...]
    runs_out: int | None = None  # year
    runs_out_limit: str = ""  # limit code of the firm capacity
    grows: bool = False  # whether a year in which it runs out is looked for


Keep = Callable[[Reading], bool]
# a case without a duty, or without water, does not have what is required either
NO_DUTY = ("end_of_curve", "held_shut", "no_unit", "no_water_at_suction", "no_water_at_point")


def requirement_rows(
    station: Station,
    result: DutyResult,
    readings: Iterable[Reading],
    criteria: dict[str, Criterion],
) -> tuple[RequirementRow, ...]:
    """Return the rows for one set.

    Parameters
    ----------
    station : Station
        The document.
    result : DutyResult
        Duty of the set that is proposed.
    readings : iterable of Reading
        All comparisons of the judgement.
    criteria : dict of str to Criterion
        The limits that hold.
    """
    own = [r for r in readings if r.pump_set in (None, result.pump_set)]
    demand = {scenario.id: scenario.demand for scenario in station.scenarios}
    fires = {scenario.id for scenario in station.scenarios if scenario.fire is not None}

    def of_demand(kind: str) -> Keep:
        return lambda r: (
            r.case is not None
            and demand.get(r.case.scenario) == kind
            and r.case.scenario not in fires
        )

    def in_fire(r: Reading) -> bool:
        return r.case is not None and r.case.scenario in fires

    critical = _point(station, "critical")
    by_code: dict[str, list[Reading]] = {}
    for reading in own:
        by_code.setdefault(reading.code, []).append(reading)
    table = _Table(station, own, by_code)
    firm: dict[str, list[FirmCapacity]] = {}
    for capacity in result.made.firm_capacity:
        firm.setdefault(capacity.requirement, []).append(capacity)
    least = _asked(station, criteria, "critical", "required_pressure", "service-pressure-min")
    most = _asked(station, criteria, "lowest", "highest_pressure", "service-pressure-max")
    service = amount("service", least, D.PRESSURE)
    highest = amount("limit", most, D.PRESSURE)
    return (
        table.firm("peak_hour", (service,), (("point", critical),), firm.get("peak_hour", []),
                   ("pressure_low", *NO_DUTY), of_demand("peak_hour")),
        table.plain("maximum_day", (service,), (("point", critical),),
                    ("pressure_low", *NO_DUTY), of_demand("maximum_day")),
        table.firm("maximum_day_fire", _fire_limits(station, criteria),
                   (("point", _point(station, "hydrant")),), firm.get("maximum_day_fire", []),
                   ("hydrant_residual_low", "fire_pressure_low", *NO_DUTY), in_fire),
        table.night(of_demand("minimum_night")),
        table.plain("npsh", (amount("ratio", criteria["npsh-ratio-min"].si, D.NUMBER, 1),
                              amount("margin", criteria["npsh-margin-min"].si, D.HEAD)), (),
                    ("npsh_broken", "npsh_short", "no_water_at_suction"), lambda r: True),
        table.plain("suction_main", (amount("limit", criteria["suction-main-minimum"].si,
                                            D.PRESSURE),),
                    (("supply", station.supply.title or "Supplying main"),), (),
                    lambda r: _of(r, "suction-main-minimum")),
        table.plain("highest_pressure", (highest,), (("point", _point(station, "lowest")),),
                    ("pressure_high",), lambda r: True),
        table.plain("supplying_zone", (), (), ("supplying_zone_low",), lambda r: True),
    )  # fmt: skip


def _of(reading: Reading, key: str) -> bool:
    return reading.criterion is not None and reading.criterion.endswith(f"/{key}")


def _point(station: Station, role: str) -> str:
    return next((p.title for p in station.zone.points if p.role == role and p.title), "")


def _asked(
    station: Station, criteria: dict[str, Criterion], role: str, field: str, key: str
) -> float | None:
    """Return the limit typed at the first point of a role, else the criterion's."""
    for point in station.zone.points:
        if point.role == role and (typed := getattr(point, field)) is not None:
            return float(typed.si)
    return criteria[key].si


def _fire_limits(station: Station, criteria: dict[str, Criterion]) -> tuple[Amount, ...]:
    key = "hydrant-residual-min"
    residual = _asked(station, criteria, "hydrant", "residual_pressure", key)
    return (
        amount("residual", residual, D.PRESSURE),
        amount("fire", criteria["fire-pressure-min"].si, D.PRESSURE),
    )


def _worst(readings: list[Reading]) -> Reading:
    """Return the reading with the least margin in proportion to its limit."""
    return min(readings, key=lambda r: (not broken(r), r.relative_margin))


@dataclass(frozen=True, slots=True)
class _Table:
    station: Station
    readings: list[Reading]
    by_code: dict[str, list[Reading]]

    def _kept(self, codes: tuple[str, ...], keep: Keep, horizon: str) -> list[Reading]:
        """Return a row's readings at a horizon; a made case without one counts at each."""
        return [
            r
            for r in (
                chain.from_iterable(self.by_code.get(code, ()) for code in codes)
                if codes
                else self.readings
            )
            if (r.case is None or r.case.horizon in ("", horizon))
            and r.verdict is not Verdict.NOT_CHECKED
            and keep(r)
        ]

    def _cell(self, horizon: str, kept: list[Reading], because: str) -> RequirementCell:
        if not kept:
            return RequirementCell(horizon, Verdict.NOT_CHECKED, because=because)
        worst = _worst(kept)
        return RequirementCell(
            horizon, worst.verdict, worst.provided, worst.required, None, worst.case,
            _WITHOUT_NUMBER.get(worst.code, "no duty") if worst.without_number else "",
        )  # fmt: skip

    def plain(
        self, key: str, limits: tuple[Amount, ...], names: tuple[tuple[str, str], ...],
        codes: tuple[str, ...], keep: Keep,
    ) -> RequirementRow:  # fmt: skip
        """Return a row of the worst reading at each horizon."""
        cells = tuple(
            self._cell(h.id, self._kept(codes, keep, h.id), _BECAUSE[key])
            for h in self.station.horizons
        )
        return RequirementRow(key, limits, names, cells)

    def firm(
        self, key: str, limits: tuple[Amount, ...], names: tuple[tuple[str, str], ...],
        firm: list[FirmCapacity], codes: tuple[str, ...], keep: Keep,
    ) -> RequirementRow:  # fmt: skip
        """Return a row of firm capacity, which a scenario that does not meet also breaks."""
        cells = []
        for horizon in self.station.horizons:
            capacity = [
                r for r in self.readings
                if r.case is not None and r.case.horizon == horizon.id
                and r.case.scenario == f"{MADE}firm-{key}"
            ]  # fmt: skip
            scenarios = self._kept(codes, keep, horizon.id)
            failing = [r for r in capacity if broken(r)] or [r for r in scenarios if broken(r)]
            if failing or not (capacity or scenarios):
                cells.append(self._cell(horizon.id, failing, _BECAUSE[key]))
            elif not capacity or any(r.verdict is Verdict.NOT_CHECKED for r in capacity):
                cells.append(RequirementCell(horizon.id, Verdict.NOT_CHECKED,
                                             because=_BECAUSE["firm"]))  # fmt: skip
            else:
                cells.append(self._cell(horizon.id, capacity, ""))
        years = [f for f in firm if f.runs_out is not None and not f.not_counted]
        first = min(years, key=lambda f: f.runs_out or 0, default=None)
        return RequirementRow(
            key, limits, names, tuple(cells),
            None if first is None else first.runs_out,
            "" if first is None else first.by_all_limit,
            grows=bool(firm),
        )  # fmt: skip

    def night(self, keep: Keep) -> RequirementRow:
        """Return the row of the preferred region at minimum night."""
        cells = []
        for horizon in self.station.horizons:
            without = self._kept(NO_DUTY, keep, horizon.id)
            if without:
                cells.append(self._cell(horizon.id, without, ""))
                continue
            kept = self._kept(("region_outside",), keep, horizon.id)
            if not kept:
                cells.append(RequirementCell(horizon.id, Verdict.NOT_CHECKED,
                                             region=Region.NOT_CHECKED,
                                             because=_BECAUSE["minimum_night"]))  # fmt: skip
                continue
            worst = _worst(kept)
            edge = self._kept(("region_edge",), keep, horizon.id)
            region = Region.OUTSIDE if broken(worst) else Region.EDGE if edge else Region.INSIDE
            verdict = {
                Region.OUTSIDE: Verdict.DOES_NOT_MEET,
                Region.EDGE: Verdict.AT_LIMIT,
            }.get(region, Verdict.MEETS)
            cells.append(RequirementCell(horizon.id, verdict, worst.provided, worst.required,
                                         region,
                                         worst.case))  # fmt: skip
        return RequirementRow("minimum_night", (), (), tuple(cells))


_WITHOUT_NUMBER = {
    "no_water_at_suction": "no water to pump",
    "no_water_at_point": "no water",
    "no_unit": "no unit can run",
    "held_shut": "held shut",
}
_BECAUSE = {
    "firm": "firm capacity: a figure that limits it is not given",
    "peak_hour": "no scenario of peak hour",
    "maximum_day": "no scenario of maximum day",
    "maximum_day_fire": "no scenario of a fire",
    "minimum_night": "no scenario of minimum night, or no best-efficiency flow",
    "npsh": "NPSH required, altitude or eye level not given",
    "suction_main": "ground level at the connection or a supply state not given",
    "highest_pressure": "not computed",
    "supplying_zone": "its figures are not given",
}
