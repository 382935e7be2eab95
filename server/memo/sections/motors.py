"""Motors and power: what each pump can ask of its motor, and what each scenario takes."""

from server.memo.blocks import Block, Cell, Column, Heading, Paragraph, Table
from server.memo.source import MemoSource
from server.studies.findings.judged_set import JudgedSet
from server.units import Dimension as D


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section."""
    made: list[Block] = [Heading("Motors and power")]
    if of.judged is None:
        return (*made, Paragraph(("Not computed: the proposed set is not solved.",)))
    made.append(_motors(of.judged))
    made.append(_power(of))
    power = next((s.standby_power for s in of.station.sets if s.id == of.judged.id), None)
    if power is None or power.kind is None:
        made.append(Paragraph(("Standby power: not stated.",)))
    else:
        carries = f" It carries {power.carries}." if power.carries else ""
        kind = {
            "none": "none",
            "automatic": "automatic generator",
            "manual": "started by hand",
        }[power.kind]
        made.append(Paragraph((f"Standby power: {kind}.{carries}",)))
    return tuple(made)


def _motors(judged: JudgedSet) -> Table:
    rows: list[tuple[Cell, ...]] = []
    seen: set[tuple[str | None, str | None]] = set()
    for n, slot in enumerate(judged.slots):
        if (slot.pump, slot.curve) in seen:
            continue
        seen.add((slot.pump, slot.curve))
        slots = ", ".join(
            judged.slot_title(i)
            for i, s in enumerate(judged.slots)
            if (s.pump, s.curve) == (slot.pump, slot.curve)
        )
        rows.append(
            (
                judged.pump_title(n),
                slots,
                slot.largest_shaft_power,
                slot.motor_power,
                slot.motor_efficiency,
                slot.drive_efficiency,
            )
        )
    return Table(
        "Motors",
        (
            Column("Pump"),
            Column("Slots"),
            Column("Largest shaft power", D.POWER),
            Column("Motor", D.POWER),
            Column("Motor efficiency", D.RATIO),
            Column("Drive efficiency", D.RATIO),
        ),
        tuple(rows),
        (
            "Largest shaft power: to the last row of the curve at top speed, so that the "
            "motor cannot be overloaded.",
        ),
    )


def _power(of: MemoSource) -> Table:
    return Table(
        "Power and specific energy by scenario, in the state shown",
        (
            Column("Scenario"),
            Column("Running"),
            Column("Efficiency of the pumps", D.RATIO),
            Column("Shaft power", D.POWER),
            Column("Wire power", D.POWER),
            Column("Energy", D.SPECIFIC_ENERGY),
        ),
        tuple(
            (
                d.own.title,
                d.own.running,
                d.own.efficiency,
                d.own.shaft_power,
                d.own.wire_power,
                d.own.energy,
            )
            for d in of.duties
        ),
        (
            "A dash: not computed, because an efficiency is not given or there is no duty. "
            "Energy over the year"
            " is not computed in this version.",
        ),
    )
