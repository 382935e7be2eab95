"""A requirement at every horizon: its row, its cells, and how readings become cells."""

from collections.abc import Callable
from dataclasses import dataclass
from itertools import chain

from server.station.station import Station
from server.studies.duty_result import FirmCapacity
from server.studies.findings.judged_set import MADE
from server.studies.findings.reading import Reading, broken
from server.studies.shapes import Amount, Case, Region, Verdict


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


def _worst(readings: list[Reading]) -> Reading:
    """Return the reading with the least margin in proportion to its limit."""
    return min(readings, key=lambda r: (not broken(r), r.relative_margin))


@dataclass(frozen=True, slots=True)
class Table:
    """The readings of one set, from which the rows are made."""

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

    def failing(self, key: str, codes: tuple[str, ...], because: str) -> RequirementRow:
        """Return a row that is not met where a reading says so, and else not checked."""
        cells = tuple(
            self._cell(h.id, failing, "") if failing
            else RequirementCell(h.id, Verdict.NOT_CHECKED, because=_BECAUSE[because])
            for h in self.station.horizons
            for failing in ([r for r in self._kept(codes, lambda r: True, h.id) if broken(r)],)
        )  # fmt: skip
        return RequirementRow(key, (), (), cells)

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

    def region(self, key: str, keep: Keep) -> RequirementRow:
        """Return a row of the preferred region, the pump nearest to an end or past it."""
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
                                             because=_BECAUSE[key]))  # fmt: skip
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
        return RequirementRow(key, (), (), tuple(cells))


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
    "tank_refill": "maximum day, low supply, full tank or aged pipes not given",
    "region": "no best-efficiency flow, or no scenario",
    "submergence": "cut-out level, outlet level or outlet bore not given",
    "motor": "motor power or shaft power not given",
    "fire_storage": "the run of the tank's level over a day is not computed in this version",
}
