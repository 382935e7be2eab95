"""Sheet 2, Site and supply: levels and water, what feeds the station, the suction line."""

from dataclasses import dataclass

from fastapi import APIRouter, Request
from fastapi.responses import HTMLResponse

from server.pages.charts import FigureView
from server.pages.forms import FieldView, field_view, field_views
from server.pages.frame import SheetPage, register, show
from server.pages.items import ItemTable, item_table
from server.pages.reaches import ReachesView, reaches_view
from server.pages.rights import needs
from server.pages.sheet import SheetView, open_sheet
from server.pages.supply_figure import supply_figure

router = APIRouter()

SITE = (
    "altitude",
    "datum",
    "water_temperature/low",
    "water_temperature/normal",
    "water_temperature/high",
    "weather_allowance",
    "floor_level",
    "eye_level",
    "suction_gauge_level",
    "discharge_gauge_level",
)
FLOW_TEST = (
    "title",
    "made_at",
    "gauge_level",
    "static_pressure",
    "residual_pressure",
    "test_flow",
    "station_draw",
    "use",
)
TANK = ("cut_out", "low", "normal", "top", "outlet_level", "outlet_bore")
SUPPLYING_ZONE = (
    "lowest_customer_level",
    "loss",
    "at_flow",
    "source_grade",
    "maximum_day",
    "peak_hour",
    "fire_flow",
)


@dataclass(frozen=True, slots=True)
class SupplyPage:
    """All that the sheet's template reads; a kind not chosen is folded away, not lost."""

    site: tuple[FieldView, ...]
    kind: FieldView
    chosen: str
    named: tuple[FieldView, ...]
    tests: ItemTable
    states: tuple[FieldView, ...]
    figure: FigureView
    tank: tuple[FieldView, ...]
    grade_line: tuple[FieldView, ...]
    supplying_zone: tuple[FieldView, ...]
    bypass: tuple[FieldView, ...]
    suction_line: ReachesView


def build(sheet: SheetView) -> SupplyPage:
    """Return the content of the sheet."""
    return SupplyPage(
        site=field_views(sheet, "/site", SITE),
        kind=field_view(sheet, "/supply/kind", "choice"),
        chosen=sheet.station.supply.kind or "",
        named=field_views(sheet, "/supply", ("title", "connection_level")),
        tests=item_table(
            sheet,
            "/supply/flow_tests",
            FLOW_TEST,
            "Flow tests on the main",
            note="Pressures are gauge; the flow is drawn in addition to that day's demand. "
            "Dates as 2026-05-14 07:30.",
            empty="No flow test yet. The supply is known by at least one.",
        ),
        states=field_views(sheet, "/supply/states", ("low", "normal", "high")),
        figure=supply_figure(sheet),
        tank=field_views(sheet, "/supply/tank", TANK),
        grade_line=field_views(sheet, "/supply/grade_line", ("low", "normal", "high")),
        supplying_zone=field_views(sheet, "/supply/supplying_zone", SUPPLYING_ZONE),
        bypass=field_views(sheet, "/supply/bypass", ("fitted", "bore", "k")),
        suction_line=reaches_view(sheet, "/suction_line/reaches", "Suction line"),
    )


@dataclass(frozen=True, slots=True)
class SupplyResults:
    """What follows an edit of a field on this sheet."""

    figure: FigureView


def follow(sheet: SheetView) -> SupplyResults:
    """Return the results that stand among the fields."""
    return SupplyResults(supply_figure(sheet))


register(SheetPage("supply", build, "supply/results.html", follow))


@router.get("/stations/{station_id}/supply", name="supply", dependencies=[needs("read")])
def supply(request: Request, station_id: str) -> HTMLResponse:
    """Show the sheet."""
    return show(open_sheet(request, station_id, "supply"))
