"""One opened sheet of a station: document, assessment, and what the address chose."""

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from urllib.parse import urlencode

from fastapi import HTTPException, Request

from server.pages.links import link
from server.pages.still_needed import still_needed
from server.pages.store_of import store_of
from server.station import fields, paths
from server.station.entry import Sheet
from server.station.station import Station
from server.store.store import Loaded
from server.studies.assess import Assessment, assess
from server.studies.duty_result import DutyResult
from server.studies.findings import words
from server.studies.shapes import Finding, Severity
from server.units import View

SHEET_TITLES = fields.SHEET_TITLES
SHEETS: tuple[tuple[Sheet, str], ...] = tuple(SHEET_TITLES.items())
SHEET_NUMBERS: dict[Sheet, int] = {sheet: number for number, (sheet, _) in enumerate(SHEETS, 1)}
# what a sheet says once after it was led to, by the word in its address
SAID = {
    "undo": "There is nothing of yours to undo.",
    "redo": "There is nothing of yours to make again.",
    "same": "That revision holds the same as the newest one, so nothing was changed.",
}
OPEN = (Severity.STOP, Severity.FAIL, Severity.CAUTION)


@dataclass(frozen=True, slots=True)
class Refusal:
    """A value that was not stored: as typed, why not; `theirs` when another's stands there."""

    text: str
    sentence: str
    theirs: str | None = None
    cells: frozenset[tuple[int, int]] = frozenset()


@dataclass(frozen=True, slots=True)
class SheetView:
    """An opened sheet, all that its template and its parts may ask for."""

    request: Request
    station_id: str
    sheet: Sheet
    loaded: Loaded
    assessment: Assessment
    view: View
    set_id: str | None
    scenario_id: str | None
    at: int | None
    chosen: Mapping[str, str]
    missing: frozenset[str]
    needed: Mapping[str, str]
    refused: Mapping[str, Refusal] = field(default_factory=dict)

    @property
    def station(self) -> Station:
        """The document that is shown."""
        return self.loaded.station

    @property
    def read_only(self) -> bool:
        """Whether the sheet shows an old revision, or an archived station."""
        return self.at is not None or self.loaded.archived

    @property
    def said(self) -> str:
        """What the address asks to be said on top of the sheet, empty for nothing."""
        return SAID.get(self.request.query_params.get("said", ""), "")

    @property
    def title(self) -> str:
        """The station's name."""
        return self.station.identity.title or "Station without a name"

    @property
    def heading(self) -> str:
        """Number and title of the sheet."""
        return f"{SHEET_NUMBERS[self.sheet]} {SHEET_TITLES[self.sheet]}"

    @property
    def result(self) -> DutyResult | None:
        """The duty of the chosen set, or None while it is not solved."""
        found = self.assessment.for_set(self.set_id) if self.set_id else None
        return found if isinstance(found, DutyResult) else None

    @property
    def findings(self) -> tuple[Finding, ...]:
        """What this sheet can mend in the set that is looked at, worst first."""
        return self.findings_of(self.sheet)

    def findings_of(self, sheet: Sheet) -> tuple[Finding, ...]:
        """Return what a sheet can mend in the set that is looked at, worst first."""
        found = self.assessment.findings_on(sheet)
        return tuple(f for f in found if f.pump_set in (None, self.set_id))

    def href(self, sheet: Sheet | None = None, anchor: str = "", **changes: str | None) -> str:
        """Return a sheet's address with what is chosen now; `changes` of None are dropped."""
        name = sheet or self.sheet
        kept: dict[str, str | None] = {**self.chosen, **changes}
        query = urlencode({key: value for key, value in kept.items() if value is not None})
        base = link(self.request, name, station_id=self.station_id)
        return base + (f"?{query}" if query else "") + (f"#{anchor}" if anchor else "")

    def action(self, name: str, **params: str) -> str:
        """Return the address of something that can be done with this station."""
        return link(self.request, name, station_id=self.station_id, **params)

    def case_href(self, scenario_id: str) -> str:
        """Return the address of this sheet with another scenario chosen."""
        return self.href(case=scenario_id)

    def set_href(self, set_id: str) -> str:
        """Return the address of this sheet with another set chosen."""
        return self.href(set=set_id)

    def view_href(self, view: View) -> str:
        """Return the address of this sheet in the other units."""
        return self.href(units=view)

    def field_href(self, path: str) -> str:
        """Return the address of the field at a path, on its own sheet."""
        try:
            sheet = fields.sheet_of(path)
        except KeyError:
            sheet = self.sheet
        return self.href(sheet, anchor=paths.html_id(path))

    def field_words(self, path: str) -> str:
        """Return a field in words, without the name of the sheet when it is this one."""
        told = words.field_words(self.station, path)
        short = told.removeprefix(f"{fields.SHEET_TITLES[self.sheet]}, ")
        return short[:1].upper() + short[1:]

    def with_refusal(self, path: str, refusal: Refusal) -> "SheetView":
        """Return the same sheet with a refused entry in one of its fields."""
        return replace(self, refused={**self.refused, path: refusal})


def open_sheet(request: Request, station_id: str, sheet: Sheet) -> SheetView:
    """Open a sheet as its address says: `case`, `set`, `units`, and `at` for an old revision.

    Raises
    ------
    HTTPException
        404 when there is no such station or revision.
    """
    query = {
        key: request.query_params[key]
        for key in ("case", "set", "units", "at")
        if request.query_params.get(key)
    }
    return opened(request, station_id, sheet, query)


def opened(
    request: Request, station_id: str, sheet: Sheet, query: Mapping[str, str]
) -> SheetView:
    """Open a sheet with what `query` chose; a choice that does not exist is the usual one."""
    at = _revision_number(query.get("at"))
    try:
        loaded = store_of(request).load(station_id, at)
    except KeyError as missing:
        raise HTTPException(
            404, "There is no such station, or no such revision of it."
        ) from missing
    return view_of(request, loaded, sheet, query, at)


def view_of(
    request: Request, loaded: Loaded, sheet: Sheet, query: Mapping[str, str], at: int | None
) -> SheetView:
    """Return the sheet of a document that is already loaded."""
    station = loaded.station
    assessment = assess(station, loaded.hash)
    set_id = _chosen(query.get("set"), [s.id for s in station.sets], station.proposed_set)
    needed = still_needed(assessment, set_id)
    view: View = "us" if query.get("units", station.display.units) == "us" else "si"
    return SheetView(
        request=request,
        station_id=loaded.id,
        sheet=sheet,
        loaded=loaded,
        assessment=assessment,
        view=view,
        set_id=set_id,
        scenario_id=_chosen(query.get("case"), [s.id for s in station.scenarios if s.on], None),
        at=at,
        chosen=dict(query),
        missing=frozenset(assessment.missing) | frozenset(needed),
        needed=needed,
    )


def _chosen(asked: str | None, ids: list[str], usual: str | None) -> str | None:
    for candidate in (asked, usual):
        if candidate in ids:
            return candidate
    return ids[0] if ids else None


def _revision_number(text: str | None) -> int | None:
    if text is None:
        return None
    digits = text.removeprefix("r")
    if not digits.isdecimal() or len(digits) > 9:
        raise HTTPException(
            404, f"“{text[:20]}” is not a revision; revisions are written as r17."
        )
    return int(digits)
