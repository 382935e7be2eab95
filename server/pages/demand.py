"""Sheet 4, Demand and scenarios: horizons with their demand, fires, scenarios to be judged."""

from dataclasses import dataclass

from fastapi import APIRouter, Request
from fastapi.responses import HTMLResponse

from server.pages.forms import FieldView, field_view
from server.pages.frame import SheetPage, register, show
from server.pages.items import ItemTable, item_table
from server.pages.rights import needs
from server.pages.sheet import SheetView, open_sheet
from server.station.station import Station

router = APIRouter()

HORIZON = (
    "title",
    "year",
    "people",
    "demand/average_day",
    "demand/maximum_day",
    "demand/peak_hour",
    "demand/minimum_night",
    "pipes",
    "low_state",
)
FIRE = ("title", "point", "flow", "duration", "beside", "carried_by")
SCENARIO = (
    "title",
    "on",
    "horizon",
    "demand",
    "fire",
    "supply",
    "tank_state",
    "pipes",
    "barrel_out",
    "out",
)


@dataclass(frozen=True, slots=True)
class DemandPage:
    """All that the sheet's template reads."""

    basis: FieldView
    pattern: FieldView
    horizons: ItemTable
    fires: ItemTable
    scenarios: ItemTable
    can_add_usual: bool
    action: str
    base: int


def build(sheet: SheetView) -> DemandPage:
    """Return the content of the sheet."""
    return DemandPage(
        basis=field_view(sheet, "/demands/basis"),
        pattern=field_view(sheet, "/demands/daily_pattern/values"),
        horizons=item_table(
            sheet,
            "/horizons",
            HORIZON,
            "Horizons and their demand",
            note="The year of opening, the design year, and any year between.",
            empty="No horizon yet. Add the opening year and the design year.",
        ),
        fires=item_table(
            sheet,
            "/fires",
            FIRE,
            "Fires",
            note="The flow comes on top of the demand it stands beside.",
            empty="No fire yet. Without one, fire is not checked.",
        ),
        scenarios=item_table(
            sheet,
            "/scenarios",
            _scenario_columns(sheet.station),
            "Scenarios",
            note="Each is solved at the low, normal and high supply; the row shows its own.",
            empty="No scenario yet. The usual ones can be made from horizons and fires.",
        ),
        can_add_usual=not sheet.read_only and bool(sheet.station.horizons),
        action=sheet.action("edits"),
        base=sheet.loaded.number,
    )


def _scenario_columns(station: Station) -> tuple[str, ...]:
    """Return the columns of the scenarios without those that this station has no use for.

    A tank's level where the zone has none, and a barrel out where every reach has one, stay
    away unless a scenario names them.
    """
    idle = {
        "tank_state": station.zone.kind == "closed",
        "barrel_out": all(reach.barrels == 1 for reach in station.discharge_main.reaches),
    }
    return tuple(
        name
        for name in SCENARIO
        if not idle.get(name) or any(getattr(s, name) for s in station.scenarios)
    )


register(SheetPage("demand", build))


@router.get("/stations/{station_id}/demand", name="demand", dependencies=[needs("read")])
def demand(request: Request, station_id: str) -> HTMLResponse:
    """Show the sheet."""
    return show(open_sheet(request, station_id, "demand"))
