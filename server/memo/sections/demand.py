"""Horizons with their demand, fires, and the scenarios that are solved."""

from server.memo.blocks import Block, Cell, Column, Heading, Paragraph, Spans, Table
from server.memo.entered import quantity_spans
from server.memo.source import MemoSource
from server.station import fields
from server.station.demand import Horizon, Scenario
from server.station.entry import Quantity
from server.units import Dimension as D

DEMANDS = ("average_day", "maximum_day", "peak_hour", "minimum_night")


def blocks(of: MemoSource) -> tuple[Block, ...]:
    """Return the section."""
    station = of.station
    made: list[Block] = [Heading("Demand and scenarios")]
    if station.demands.basis:
        made.append(Paragraph((station.demands.basis,)))
    else:
        made.append(Paragraph(("The basis of the demands is not stated.",)))
    if station.horizons:
        made.append(_horizons(of))
    if station.fires:
        made.append(_fires(of))
    used = [s for s in station.scenarios if s.on]
    if used:
        made.append(_scenarios(of, used))
    else:
        made.append(Paragraph(("No scenario is used, so nothing is solved.",)))
    return tuple(made)


def _horizons(of: MemoSource) -> Table:
    def row(horizon: Horizon) -> tuple[Cell, ...]:
        flows = tuple(_si(getattr(horizon.demand, name)) for name in DEMANDS)
        people = "–" if horizon.people is None else f"{horizon.people:,}".replace(",", "\u202f")
        return (horizon.title or "Horizon", str(horizon.year or "–"), people, *flows)

    return Table(
        "Demand by horizon",
        (
            Column("Horizon"),
            Column("Year"),
            Column("People"),
            Column("Average day", D.FLOW),
            Column("Maximum day", D.FLOW),
            Column("Peak hour", D.FLOW),
            Column("Minimum night", D.FLOW),
        ),
        tuple(row(h) for h in of.station.horizons),
    )


def _fires(of: MemoSource) -> Table:
    points = {p.id: p.title for p in of.station.zone.points}

    def quantity(value: Quantity | None, path: str) -> Spans:
        return (
            ("–",) if value is None else quantity_spans(value, fields.entry_for(path), of.view)
        )

    return Table(
        "Design fires",
        (
            Column("Fire"),
            Column("Hydrant"),
            Column("Flow"),
            Column("Duration"),
            Column("Beside"),
            Column("Carried by"),
        ),
        tuple(
            (
                f.title or "Fire",
                points.get(f.point or "", "–"),
                quantity(f.flow, "/fires/*/flow"),
                quantity(f.duration, "/fires/*/duration"),
                f.beside.replace("_", " "),
                f"the {f.carried_by}",
            )
            for f in of.station.fires
        ),
    )


def _scenarios(of: MemoSource, used: list[Scenario]) -> Table:
    horizons = {h.id: h.title or str(h.year or "") for h in of.station.horizons}
    flows = {duty.scenario: duty.own.flow for duty in of.duties}

    def row(s: Scenario) -> tuple[Cell, ...]:
        demand = "" if s.demand is None else s.demand.replace("_", " ")
        return (
            s.title or "Scenario",
            horizons.get(s.horizon or "", "–"),
            f"{demand} and fire" if s.fire else demand,
            flows.get(s.id),
            s.supply,
            s.pipes,
            "the largest unit" if s.out == "largest" else "none",
        )

    return Table(
        "Scenarios",
        (
            Column("Scenario"),
            Column("Horizon"),
            Column("Demand"),
            Column("Flow", D.FLOW),
            Column("Supply shown"),
            Column("Pipes"),
            Column("Unit out"),
        ),
        tuple(row(s) for s in used),
        (
            "Each is solved at low, normal and high supply; the tables print the state shown "
            "and the worst of the three.",
        ),
    )


def _si(quantity: Quantity | None) -> float | None:
    return None if quantity is None else quantity.si
