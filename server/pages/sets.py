"""Sheet 6, Sets: the legs, and each arrangement of pumps with its control and protections."""

from dataclasses import dataclass

from fastapi import APIRouter, Request
from fastapi.responses import HTMLResponse

from server.pages.forms import FieldView, field_view, field_views
from server.pages.frame import SheetPage, register, show
from server.pages.items import Adding, ItemTable, Steps, adding, item_table, items_of, steps_of
from server.pages.rights import needs
from server.pages.sheet import SheetView, open_sheet
from server.station import paths

router = APIRouter()

LEG = (
    "title",
    "suction_branch/bore",
    "suction_branch/k",
    "discharge_branch/bore",
    "discharge_branch/k",
    "discharge_branch/full_open_velocity",
    "discharge_branch/cracking_head",
)
SLOT = ("title", "role", "pump", "curve", "diameter", "leg", "drive", "from_horizon")
STAGE = ("start", "stop")
SPEEDS = ("lowest_speed", "highest_speed", "running_rule")
SETTINGS = (
    "pressure",
    "point",
    "flow",
    "pressure_at_no_flow",
    "valve_loss",
    "valve_loss_at",
)
# what each kind of control holds; the rest is folded away
BY_CONTROL: dict[str, tuple[str, ...]] = {
    "zone_point_pressure": ("pressure", "point"),
    "discharge_pressure": ("pressure",),
    "flow_compensated": ("pressure", "pressure_at_no_flow", "flow"),
    "reducing_valve": ("pressure", "point", "valve_loss", "valve_loss_at"),
    "held_flow": ("flow",),
}
TRIPS = (
    "low_suction_alarm",
    "low_suction_slow_down",
    "low_suction_trip",
    "low_suction_delay",
    "high_discharge_trip",
    "high_discharge_delay",
    "low_level_alarm",
    "high_level_trip",
    "relief_pressure",
)
STANDBY = ("kind", "transfer_time", "carries")


@dataclass(frozen=True, slots=True)
class SetCard:
    """One set."""

    steps: Steps
    proposed: bool
    looked_at: bool
    href: str
    title: tuple[FieldView, ...]
    slots: ItemTable
    control: FieldView
    settings: tuple[FieldView, ...]
    other_settings: tuple[FieldView, ...]
    stages: ItemTable
    by_level: bool
    trips: tuple[FieldView, ...]
    standby: tuple[FieldView, ...]


@dataclass(frozen=True, slots=True)
class SetsPage:
    """All that the sheet's template reads."""

    legs: ItemTable
    proposed: FieldView
    sets: tuple[SetCard, ...]
    add_set: Adding


def build(sheet: SheetView) -> SetsPage:
    """Return the content of the sheet."""
    sets = tuple(_set(sheet, path) for path in items_of(sheet, "/sets"))
    return SetsPage(
        legs=item_table(
            sheet,
            "/legs",
            LEG,
            "Legs: the pipe round a pump",
            note="The pipe round one pump, to and from the manifolds; the check valve is in "
            "the discharge branch. One leg serves many slots.",
            empty="No leg yet. A leg is the pipe round one pump: its suction branch, and its "
            "discharge branch with the check valve.",
        ),
        proposed=field_view(sheet, "/proposed_set"),
        sets=sets,
        add_set=adding(sheet, "/sets", main=not sets),
    )


def _set(sheet: SheetView, path: str) -> SetCard:
    own = path.rpartition("/")[2]
    control = f"{path}/control"
    kind = paths.get(sheet.station, f"{control}/kind")
    held = BY_CONTROL.get(str(kind), ())
    title = paths.item_title(sheet.station, path)
    return SetCard(
        steps=steps_of(sheet, path),
        proposed=sheet.station.proposed_set == own,
        looked_at=sheet.set_id == own,
        href=sheet.set_href(own),
        title=field_views(sheet, path, ("title", "flange_rating")),
        slots=item_table(
            sheet,
            f"{path}/slots",
            SLOT,
            f"Slots of {title}",
            note="One pump in its place. Standby counts as installed; a jockey runs alone "
            "at small flow.",
        ),
        control=field_view(sheet, f"{control}/kind"),
        settings=field_views(sheet, control, held + SPEEDS),
        other_settings=field_views(
            sheet, control, [name for name in SETTINGS if name not in held]
        ),
        stages=item_table(sheet, f"{control}/stages", STAGE, f"Level stages of {title}"),
        by_level=kind == "levels",
        trips=field_views(sheet, f"{path}/trips", TRIPS),
        standby=field_views(sheet, f"{path}/standby_power", STANDBY),
    )


register(SheetPage("sets", build))


@router.get("/stations/{station_id}/sets", name="sets", dependencies=[needs("read")])
def sets(request: Request, station_id: str) -> HTMLResponse:
    """Show the sheet."""
    return show(open_sheet(request, station_id, "sets"))
