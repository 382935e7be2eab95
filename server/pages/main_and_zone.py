"""Sheet 3, Main and zone: the discharge main, the zone's named points, its tank."""

from dataclasses import dataclass

from fastapi import APIRouter, Request
from fastapi.responses import HTMLResponse

from server.pages.forms import FieldView, field_view, field_views
from server.pages.frame import SheetPage, register, show
from server.pages.items import Adding, ItemTable, Steps, adding, item_table, items_of, steps_of
from server.pages.reaches import ReachesView, reaches_view
from server.pages.rights import needs
from server.pages.sheet import SheetView, open_sheet
from server.station import paths

router = APIRouter()

POINTS = "/zone/points"
OVERVIEW = ("title", "role", "elevation", "loss/loss", "loss/at_flow")
TANK = ("use", "low", "normal", "top", "area", "demand_at")
NORMAL = ("required_pressure", "fire_pressure", "highest_pressure", "highest_pressure_abnormal")
HYDRANT = ("residual_pressure", "branch/loss", "branch/at_flow")
# what a point of each role is mostly there for; the rest is folded away
BY_ROLE: dict[str, tuple[str, ...]] = {
    "critical": ("required_pressure", "fire_pressure"),
    "lowest": ("highest_pressure", "highest_pressure_abnormal"),
    "hydrant": HYDRANT,
    "customer": ("required_pressure", "fire_pressure"),
}
REQUIREMENTS = (*NORMAL, *HYDRANT, "fire_share")


@dataclass(frozen=True, slots=True)
class PointCard:
    """What is required at one point."""

    steps: Steps
    role: str
    main: tuple[FieldView, ...]
    rest: tuple[FieldView, ...]


@dataclass(frozen=True, slots=True)
class MainAndZonePage:
    """All that the sheet's template reads."""

    main: ReachesView
    kind: FieldView
    chosen: str
    title: FieldView
    points: ItemTable
    cards: tuple[PointCard, ...]
    tank: tuple[FieldView, ...]
    add_point: Adding


def build(sheet: SheetView) -> MainAndZonePage:
    """Return the content of the sheet."""
    return MainAndZonePage(
        main=reaches_view(sheet, "/discharge_main/reaches", "Discharge main"),
        kind=field_view(sheet, "/zone/kind", "choice"),
        chosen=sheet.station.zone.kind or "",
        title=field_view(sheet, "/zone/title"),
        points=item_table(
            sheet,
            POINTS,
            OVERVIEW,
            "Named points of the zone",
            note="The critical customer, the lowest customer, every hydrant that a fire uses.",
            empty="No point yet: the set is judged by the pressure at named points.",
        ),
        cards=tuple(_card(sheet, path) for path in items_of(sheet, POINTS)),
        tank=field_views(sheet, "/zone/tank", TANK),
        add_point=adding(sheet, POINTS),
    )


def _card(sheet: SheetView, path: str) -> PointCard:
    role = str(paths.get(sheet.station, f"{path}/role"))
    first = BY_ROLE[role]
    return PointCard(
        steps_of(sheet, path),
        role,
        field_views(sheet, path, first),
        field_views(sheet, path, [name for name in REQUIREMENTS if name not in first]),
    )


register(SheetPage("main-and-zone", build))


@router.get(
    "/stations/{station_id}/main-and-zone", name="main-and-zone", dependencies=[needs("read")]
)
def main_and_zone(request: Request, station_id: str) -> HTMLResponse:
    """Show the sheet."""
    return show(open_sheet(request, station_id, "main-and-zone"))
