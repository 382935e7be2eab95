"""Sheet 4, Demand and scenarios: horizons with their demand, fires, scenarios to be judged."""

from dataclasses import dataclass

from fastapi import APIRouter, Request
from fastapi.responses import HTMLResponse

from server.pages.forms import FieldView, field_view
from server.pages.frame import SheetPage, register, show
from server.pages.items import ItemTable, item_table
from server.pages.rights import needs
from server.pages.sheet import SheetView, open_sheet

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
            SCENARIO,
            "Scenarios",
            note="Each is solved at the low, normal and high supply; the row shows its own.",
            empty="No scenario yet. The usual ones can be made from horizons and fires.",
        ),
        can_add_usual=not sheet.read_only and bool(sheet.station.horizons),
        action=sheet.action("edits"),
        base=sheet.loaded.number,
    )


register(SheetPage("demand", build))


@router.get("/stations/{station_id}/demand", name="demand", dependencies=[needs("read")])
def demand(request: Request, station_id: str) -> HTMLResponse:
    """Show the sheet."""
    return show(open_sheet(request, station_id, "demand"))
