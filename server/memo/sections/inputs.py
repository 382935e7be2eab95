"""Inputs with their sources; defaults are marked and listed."""

from server.memo.blocks import Block, Cell, Column, Heading, Items, Paragraph, Table
from server.memo.entered import entered_table, item_table
from server.memo.source import MemoSource
from server.station.pump import Curve, Pump
from server.studies.findings import words
from server.units import UNITS

GROUPS: tuple[tuple[str, tuple[str, ...]], ...] = (
    ("Site", ("/site",)),
    ("Supply and suction line", ("/supply", "/suction_line")),
    ("Discharge main", ("/discharge_main",)),
    ("Zone and its named points", ("/zone",)),
    ("Pumps", ("/pumps",)),
    ("Legs", ("/legs",)),
    ("Sets, control and protections", ("/sets",)),
)
SLOT = ("role", "pump", "curve", "leg", "drive", "from_horizon")
CURVE_COLUMNS = (
    ("flow", "Flow"),
    ("head", "Head"),
    ("efficiency", "Efficiency"),
    ("shaft_power", "Shaft power"),
    ("npsh_required", "NPSH required"),
)


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section."""
    made: list[Block] = [
        Heading("Inputs and their sources"),
        Paragraph(
            (
                "Values stand as they were entered; a reading in the units of this memo "
                "follows where"
                " that is another. DEFAULT marks a value that nobody stated for this station.",
            ),
            small=True,
        ),
    ]
    tables = [entered_table(of.station, caption, starts, of.view) for caption, starts in GROUPS]
    for pump_set in of.station.sets:
        caption = f"Slots of {pump_set.title or 'a set'}"
        tables.append(
            item_table(of.station, caption, f"/sets/{pump_set.id}/slots", SLOT, of.view)
        )
    made.extend(table for table in tables if table is not None)
    for pump in of.station.pumps:
        made.extend(_curve_table(pump, curve) for curve in pump.curves if curve.table.rows)
    if not any(tables):
        made.append(Paragraph(("Nothing is entered yet.",)))
    made.append(Heading("Defaults", 3))
    defaults = [f for f in of.findings if f.code == "default_used"]
    if defaults:
        made.append(Items(tuple((words.sentence(f, of.station, of.view),) for f in defaults)))
    else:
        made.append(
            Paragraph(("No default stands in for an input that the solved set needs.",))
        )
    return tuple(made)


def _curve_table(pump: Pump, curve: Curve) -> Table:
    """Return the tested rows as entered, in their own units: to be held against the maker's."""
    units = curve.table.units.model_dump()
    present = [(name, title) for name, title in CURVE_COLUMNS if units.get(name)]
    titles = [
        Column("Row"),
        *(Column(title, unit=UNITS[units[name]].printed) for name, title in present),
    ]
    rows: list[tuple[Cell, ...]] = []
    for number, row in enumerate(curve.table.rows, 1):
        cells = [row[i] if i < len(row) else None for i in range(len(present))]
        rows.append((str(number), *("–" if c is None else f"{c:.10g}" for c in cells)))
    speed = (
        ""
        if pump.speed is None
        else f" at {pump.speed.value:g} {UNITS[pump.speed.unit].printed}"
    )
    size = ""
    if curve.diameter is not None:
        size = f", impeller {curve.diameter.value:g} {UNITS[curve.diameter.unit].printed}"
    return Table(
        f"{pump.title or 'Pump'}, rows as entered{speed}{size}", tuple(titles), tuple(rows)
    )
