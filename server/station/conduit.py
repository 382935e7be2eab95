"""Suction line, legs and discharge main, as entered."""

from typing import Annotated, Literal

from server.station.entry import Entry, Part, Quantity, Record
from server.units import Dimension as D


class FittingLoss(Record):
    """How the loss of a fitting is given."""

    by: Annotated[
        Literal["k", "kv", "cv", "equivalent_length", "loss_at_flow"],
        Entry(
            "Loss given by",
            "main-and-zone",
            "",
            choices=(
                ("k", "K"),
                ("kv", "Kv"),
                ("cv", "Cv"),
                ("equivalent_length", "equivalent length"),
                ("loss_at_flow", "a loss at a flow"),
            ),
        ),
    ] = "k"
    value: Annotated[
        float | None, Entry("K, Kv or Cv", "main-and-zone", "", D.NUMBER, 0, 1e6)
    ] = None
    length: Annotated[
        Quantity | None, Entry("Equivalent length", "main-and-zone", "", D.LENGTH, 0, 1e4)
    ] = None
    loss: Annotated[Quantity | None, Entry("Loss", "main-and-zone", "", D.HEAD, 0, 300)] = None
    at_flow: Annotated[
        Quantity | None, Entry("At flow", "main-and-zone", "", D.FLOW, 0, 10, above=True)
    ] = None


class Fitting(Record):
    """Fittings of one kind in a reach."""

    id: str
    kind: Annotated[str, Entry("Fitting", "main-and-zone", "Kind of fitting, in words.")] = ""
    count: Annotated[int, Entry("Number", "main-and-zone", "", D.NUMBER, 0, 1000)] = 1
    loss: Annotated[FittingLoss, Part("Loss of the fitting", "main-and-zone")] = FittingLoss()


class Roughness(Record):
    """Wall of a reach, new and aged, by one of two laws."""

    law: Annotated[
        Literal["colebrook", "hazen_williams"],
        Entry(
            "Friction law",
            "main-and-zone",
            "",
            choices=(
                ("colebrook", "Darcy-Weisbach, Colebrook-White"),
                ("hazen_williams", "Hazen-Williams"),
            ),
        ),
    ] = "colebrook"
    new: Annotated[
        Quantity | None,
        Entry(
            "Roughness, new",
            "main-and-zone",
            "Lined iron about 0.1 mm or 0.004 in (common practice).",
            D.ROUGHNESS,
            0,
            0.02,
        ),
    ] = None
    aged: Annotated[
        Quantity | None,
        Entry(
            "Roughness, aged",
            "main-and-zone",
            "At the design year; the larger decides peak hour.",
            D.ROUGHNESS,
            0,
            0.02,
        ),
    ] = None
    coefficient_new: Annotated[
        float | None,
        Entry(
            "C, new",
            "main-and-zone",
            "Hazen-Williams coefficient.",
            D.NUMBER,
            20,
            180,
            decimals=0,
        ),
    ] = None
    coefficient_aged: Annotated[
        float | None,
        Entry(
            "C, aged",
            "main-and-zone",
            "Hazen-Williams coefficient.",
            D.NUMBER,
            20,
            180,
            decimals=0,
        ),
    ] = None


class Reach(Record):
    """A length of pipe of one bore; reaches of a conduit lie in series."""

    id: str
    title: Annotated[str, Entry("Reach", "main-and-zone")] = ""
    length: Annotated[
        Quantity | None, Entry("Length", "main-and-zone", "Laid length.", D.LENGTH, 0, 200_000)
    ] = None
    bore: Annotated[
        Quantity | None,
        Entry(
            "Bore",
            "main-and-zone",
            "Inside diameter, not the nominal size.",
            D.BORE,
            0,
            5,
            above=True,
        ),
    ] = None
    barrels: Annotated[int, Entry("Equal barrels", "main-and-zone", "", D.NUMBER, 1, 8)] = 1
    material: Annotated[str, Entry("Material", "main-and-zone")] = ""
    roughness: Annotated[Roughness, Part("Wall", "main-and-zone")] = Roughness()
    k: Annotated[
        float | None,
        Entry(
            "Sum of K",
            "main-and-zone",
            "All fittings of the reach not listed singly.",
            D.NUMBER,
            0,
            1e4,
        ),
    ] = None
    fittings: Annotated[tuple[Fitting, ...], Part("Fittings", "main-and-zone", "Fitting")] = ()
    rating: Annotated[
        Quantity | None,
        Entry(
            "Pressure rating",
            "main-and-zone",
            "Gauge; no surge allowance inside.",
            D.PRESSURE,
            0,
            1e7,
            above=True,
        ),
    ] = None
    end_level: Annotated[
        Quantity | None,
        Entry(
            "Pipe level at its end",
            "main-and-zone",
            "For the long section.",
            D.LEVEL,
            -450,
            9000,
        ),
    ] = None


class Conduit(Record):
    """Reaches in series, in the direction of flow."""

    reaches: Annotated[tuple[Reach, ...], Part("Reaches", "main-and-zone", "Reach")] = ()


class Branch(Record):
    """Pipe of one leg before or after its pump."""

    bore: Annotated[
        Quantity | None, Entry("Bore", "sets", "Inside diameter.", D.BORE, 0, 3, above=True)
    ] = None
    k: Annotated[
        float | None,
        Entry(
            "Sum of K",
            "sets",
            "On this bore; friction of short pipes included.",
            D.NUMBER,
            0,
            1e4,
        ),
    ] = None


class DischargeBranch(Branch):
    """Discharge branch of a leg, with its check valve."""

    full_open_velocity: Annotated[
        Quantity | None,
        Entry(
            "Check valve fully open above",
            "sets",
            "Assumed 1.5 m/s if left empty (common practice).",
            D.SPEED,
            0,
            10,
        ),
    ] = None
    cracking_head: Annotated[
        Quantity | None,
        Entry("Check valve cracking head", "sets", "0 if left empty.", D.HEAD, 0, 20),
    ] = None


class Leg(Record):
    """A kind of leg: the branches before and after a pump; slots name the leg they use."""

    id: str
    title: Annotated[str, Entry("Leg", "sets")] = ""
    suction_branch: Annotated[Branch, Part("Suction branch", "sets")] = Branch()
    discharge_branch: Annotated[DischargeBranch, Part("Discharge branch", "sets")] = (
        DischargeBranch()
    )
