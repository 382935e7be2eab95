"""Sheet 5, Pumps: each pump as its maker states it, with its tested curves."""

from dataclasses import dataclass

from fastapi import APIRouter, Request
from fastapi.responses import HTMLResponse

from server.pages.curve_grid import CurveGrid, curve_grid
from server.pages.forms import FieldView, field_views
from server.pages.frame import SheetPage, register, show
from server.pages.items import Adding, Steps, adding, items_of, steps_of
from server.pages.rights import needs
from server.pages.sheet import SheetView, open_sheet
from server.station import paths

router = APIRouter()

PUMP = (
    "title",
    "kind",
    "stages",
    "speed",
    "motor_power",
    "allowable_region/low",
    "allowable_region/high",
    "minimum_flow",
    "least_diameter",
    "npsh_exponent",
    "motor_efficiency",
    "drive_efficiency",
    "rating",
)
CURVE = ("diameter", "fit", "best_efficiency_flow")


@dataclass(frozen=True, slots=True)
class CurveCard:
    """One tested curve: its fields and its rows."""

    steps: Steps
    fields: tuple[FieldView, ...]
    grid: CurveGrid


@dataclass(frozen=True, slots=True)
class PumpCard:
    """One pump."""

    steps: Steps
    fields: tuple[FieldView, ...]
    curves: tuple[CurveCard, ...]
    add_curve: Adding


@dataclass(frozen=True, slots=True)
class PumpsPage:
    """All that the sheet's template reads."""

    pumps: tuple[PumpCard, ...]
    add_pump: Adding


def build(sheet: SheetView) -> PumpsPage:
    """Return the content of the sheet."""
    pumps = tuple(_pump(sheet, path) for path in items_of(sheet, "/pumps"))
    return PumpsPage(pumps, adding(sheet, "/pumps", main=not pumps))


def _pump(sheet: SheetView, path: str) -> PumpCard:
    curves = f"{path}/curves"
    return PumpCard(
        steps_of(sheet, path),
        field_views(sheet, path, PUMP),
        tuple(_curve(sheet, curve) for curve in items_of(sheet, curves)),
        adding(sheet, curves),
    )


def _curve(sheet: SheetView, path: str) -> CurveCard:
    pump = paths.item_title(sheet.station, path.split("/curves")[0])
    title = paths.item_title(sheet.station, path)
    return CurveCard(
        steps_of(sheet, path),
        field_views(sheet, path, CURVE),
        curve_grid(sheet, f"{path}/table", f"Tested rows of {pump}, {title}"),
    )


register(SheetPage("pumps", build))


@router.get("/stations/{station_id}/pumps", name="pumps", dependencies=[needs("read")])
def pumps(request: Request, station_id: str) -> HTMLResponse:
    """Show the sheet."""
    return show(open_sheet(request, station_id, "pumps"))
