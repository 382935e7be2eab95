"""What every judge of one set needs at hand: the result, the criteria, the running units."""

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from server.hydraulics import operating_region
from server.hydraulics.operating_region import region
from server.hydraulics.states import State
from server.station.demand import Scenario
from server.station.pump_set import PumpSet
from server.station.station import Station
from server.studies.duty_result import DutyResult, Place, PointFacts, SlotFacts
from server.studies.findings.criteria import Criterion
from server.studies.shapes import SUPPLY_STATES, Amount, Case, Path, PipeAge, Region
from server.units import Dimension

_GAUGE = "the discharge gauge"
MADE = "made:"  # scenario ids of cases that are always made
STATED = (
    State.SOLVED,
    State.TOP_SPEED,
    State.LOW_SPEED,
)  # states in which numbers have meaning
_REGIONS: dict[int, Region] = {
    operating_region.Region.INSIDE: Region.INSIDE,
    operating_region.Region.EDGE: Region.EDGE,
    operating_region.Region.OUTSIDE: Region.OUTSIDE,
    operating_region.Region.UNKNOWN: Region.NOT_CHECKED,
}


@dataclass(frozen=True, eq=False)
class JudgedSet:
    """One solved set of a station with its criteria."""

    station: Station
    criteria: dict[str, Criterion]
    entered: PumpSet
    result: DutyResult

    @property
    def id(self) -> str:
        """The set's id."""
        return self.entered.id

    @property
    def path(self) -> Path:
        """The set's path."""
        return f"/sets/{self.entered.id}"

    @property
    def title(self) -> str:
        """The set's name."""
        return self.entered.title or "the set"

    def limit(self, key: str) -> float:
        """Return the limit of a rule in SI; nan where the profile has none."""
        value = self.criteria[key].si
        return float("nan") if value is None else value

    def criterion(self, key: str) -> Path:
        """Return the path of a rule's row."""
        return self.criteria[key].path

    def limit_field(self, key: str) -> Path:
        """Return the path of a rule's limit."""
        return f"{self.criteria[key].path}/limit"

    def slot_path(self, n: int) -> Path:
        """Return the path of slot `n`."""
        return f"{self.path}/slots/{self.result.slots[n].id}"

    def pump_path(self, n: int) -> Path:
        """Return the path of the pump in slot `n`."""
        return f"/pumps/{self.result.slots[n].pump}"

    def curve_path(self, n: int) -> Path:
        """Return the path of the curve in slot `n`."""
        return f"{self.pump_path(n)}/curves/{self.result.slots[n].curve}"

    def slot_title(self, n: int) -> str:
        """Return the short name of slot `n`."""
        return self.result.slots[n].title or f"slot {n + 1}"

    def pump_title(self, n: int) -> str:
        """Return the name of the pump in slot `n`."""
        for pump in self.station.pumps:
            if pump.id == self.result.slots[n].pump and pump.title:
                return pump.title
        return self.slot_title(n)

    def point_path(self, p: int) -> Path:
        """Return the path of point `p`."""
        return f"/zone/points/{self.result.points[p].id}"

    @cached_property
    def held_index(self) -> int:
        """Index of the point whose pressure is held, -1 when it is the discharge gauge."""
        ids = [point.id for point in self.result.points]
        return ids.index(self.result.held_point) if self.result.held_point in ids else -1

    @property
    def held_words(self) -> str:
        """Where the pressure is held, in words."""
        return self.points[self.held_index].title if self.held_index >= 0 else _GAUGE

    @cached_property
    def pump_tables(self) -> tuple[Path, ...]:
        """Curves of the pumps, each once, those of jockeys last."""
        order = sorted(range(len(self.slots)), key=lambda n: self.slots[n].role == "jockey")
        return tuple(dict.fromkeys(f"{self.curve_path(n)}/table" for n in order))

    def scenario_of(self, c: int) -> Scenario | None:
        """Return the scenario of case `c`."""
        own = self.result.cases[c].scenario
        return next((each for each in self.station.scenarios if each.id == own), None)

    def held_grade(self, c: int) -> float:
        """Return the least grade at a fire tank's node that a held set point gives [m]."""
        grades = self.result.closed_grade[c, self.result.tank_draws_down[c]]
        return float(np.nanmin(grades)) if grades.size else float("nan")

    @cached_property
    def suction_bores(self) -> tuple[Path, ...]:
        """Paths of the bores of the suction line."""
        reaches = self.station.suction_line.reaches
        return tuple(f"/suction_line/reaches/{reach.id}/bore" for reach in reaches)

    def preferred(self, n: int) -> tuple[float, float]:
        """Return the preferred region of slot `n`, ratios of best-efficiency flow."""
        slot = self.result.slots[n]
        return slot.preferred_low, slot.preferred_high

    def preferred_key(self, n: int, high: bool) -> str:
        """Return the rule of the lower or upper end of the preferred region of slot `n`."""
        speed = self.result.slots[n].specific_speed
        narrow = speed is not None and speed > self.limit("high-specific-speed")
        return f"preferred-region-{'high' if high else 'low'}" + (
            "-high-specific-speed" if narrow else ""
        )

    def region(self, n: int, share: float) -> Region:
        """Return where a share of best-efficiency flow stands against the preferred region."""
        low, high = self.preferred(n)
        edge = self.limit("region-edge")
        return _REGIONS[int(region(share, lower=low, upper=high, edge=edge))]

    def region_in(self, c: int, k: int, n: int) -> Region:
        """Return where slot `n` stands in a case: as `region`, read for all of them at once."""
        return _REGIONS[int(self._regions[c, k, n])]

    @cached_property
    def _regions(self) -> NDArray[np.int8]:
        low, high = np.array([self.preferred(n) for n in range(len(self.slots))]).T
        return region(
            self.result.best_efficiency_share, lower=low, upper=high,
            edge=self.limit("region-edge"),
        )  # fmt: skip

    def inside(self, c: int, k: int, n: int) -> bool:
        """Return whether slot `n` is inside its preferred region in a case, edge included."""
        return self.region_in(c, k, n) in (Region.INSIDE, Region.EDGE)

    @cached_property
    def leg_of_slot(self) -> tuple[str | None, ...]:
        """Leg id per slot of the result."""
        legs = {slot.id: slot.leg for slot in self.entered.slots}
        return tuple(legs.get(slot.id) for slot in self.result.slots)

    @cached_property
    def stated(self) -> tuple[tuple[int, int], ...]:
        """Pairs of case and chosen combination in which the numbers have meaning."""
        result = self.result
        return tuple(
            (c, int(k))
            for c, k in enumerate(result.chosen)
            if k >= 0 and State(int(result.state[c, k])) in STATED
        )

    @cached_property
    def supplied(self) -> tuple[int, ...]:
        """Cases whose supply is entered: in a closed zone it is known whatever the pumps do."""
        result = self.result
        known = np.isfinite(result.required_head) | (result.suction_breaks_at != Place.NOWHERE)
        return tuple(int(c) for c in np.flatnonzero(known))

    @cached_property
    def unstated(self) -> tuple[int, ...]:
        """Cases with no duty: no combination, one past the end of its curve, or no water."""
        with_duty = {c for c, _ in self.stated}
        # a case whose supply is not entered is no failure: the absent field is named instead
        return tuple(c for c in self.supplied if c not in with_duty)

    @cached_property
    def dry(self) -> dict[int, Place]:
        """Cases in which the water column breaks before the pumps, and where."""
        result = self.result
        found = {
            int(c): Place(int(result.suction_breaks_at[c]))
            for c in np.flatnonzero(result.suction_breaks_at)
        }
        for c in self.unstated:
            k = int(result.chosen[c])
            states = result.state[c] if k < 0 else result.state[c, k : k + 1]
            if (states == State.NO_WATER).any():
                found.setdefault(c, Place.PUMP_EYE)
        return found

    def running(self, c: int, k: int) -> tuple[int, ...]:
        """Return the slots that pass water in case `c` with combination `k`."""
        on = self.result.combinations[k] & (self.result.leg_flow[c, k] > 0)
        return tuple(on.nonzero()[0].tolist())

    def running_kinds(self, c: int, k: int) -> tuple[tuple[int, str], ...]:
        """Return the first of each kind of running unit, with the names of all that run alike.

        Equal units at one speed pass the same flow: they are judged, and told, together.
        """
        kept = self._running_kinds
        if (c, k) not in kept:
            kept[c, k] = tuple(self._told_together(c, k))
        return kept[c, k]

    @cached_property
    def _running_kinds(self) -> dict[tuple[int, int], tuple[tuple[int, str], ...]]:
        """What `running_kinds` has found: every judge of pumps asks for it."""
        return {}

    def _told_together(self, c: int, k: int) -> Iterator[tuple[int, str]]:
        alike: dict[tuple[object, ...], list[int]] = {}
        shares = self.result.best_efficiency_share[c, k].tolist()
        for n in self.running(c, k):
            slot, share = self.result.slots[n], shares[n]
            key = (
                slot.pump,
                slot.curve,
                self.leg_of_slot[n],
                round(share, 6) if share == share else None,
            )
            alike.setdefault(key, []).append(n)
        for slots in alike.values():
            titles = [self.slot_title(n) for n in slots]
            last = titles.pop()
            yield slots[0], f"{', '.join(titles)} and {last}" if titles else last

    def case(self, c: int) -> Case:
        """Return case `c`."""
        return self.result.cases[c]

    def is_kind(self, c: int, demand: str) -> bool:
        """Return whether case `c` is a scenario of that demand, without a fire."""
        return not self.result.is_fire[c] and self.demand_of(c) == demand

    def demand_of(self, c: int) -> str | None:
        """Return the kind of demand of case `c`."""
        return self.demand_of_scenario.get(self.result.cases[c].scenario)

    @cached_property
    def demand_of_scenario(self) -> dict[str, str | None]:
        """Kind of demand by scenario id."""
        return {scenario.id: scenario.demand for scenario in self.station.scenarios}

    def made_case(self, name: str, supply: int, pipes: PipeAge = "aged") -> Case:
        """Return the case of an always-made state; supply is 0 low, 1 normal, 2 high."""
        return Case(f"{MADE}{name}", self.id, "", SUPPLY_STATES[supply], pipes, None)

    @property
    def slots(self) -> tuple[SlotFacts, ...]:
        """Facts of the slots."""
        return self.result.slots

    @property
    def points(self) -> tuple[PointFacts, ...]:
        """Facts of the points."""
        return self.result.points


def amount(
    name: str, value: float | None, dimension: Dimension, decimals: int | None = None
) -> Amount:
    """Return an amount; nan becomes "could not be had"."""
    known = None if value is None or value != value else float(value)
    return Amount(name, known, dimension, decimals)
