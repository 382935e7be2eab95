"""The pressure zone, its named points and its tank, as entered."""

from typing import Annotated, Literal

from server.station.entry import Entry, Part, Quantity, Record
from server.units import Dimension as D


class LossAtFlow(Record):
    """A head loss known at one domestic flow; it grows with flow to the power 1.852."""

    loss: Annotated[
        Quantity | None,
        Entry(
            "Zone loss",
            "main-and-zone",
            "From the end of the main to this point.",
            D.HEAD,
            0,
            300,
        ),
    ] = None
    at_flow: Annotated[
        Quantity | None,
        Entry(
            "At station flow",
            "main-and-zone",
            "The flow at which that loss holds.",
            D.FLOW,
            0,
            10,
            above=True,
        ),
    ] = None


class BranchLoss(Record):
    """Head loss of a hydrant's own branch, known at one flow of the hydrant."""

    loss: Annotated[
        Quantity | None,
        Entry(
            "Branch loss",
            "main-and-zone",
            "From the zone pipe to the hydrant outlet; none if left empty.",
            D.HEAD,
            0,
            300,
        ),
    ] = None
    at_flow: Annotated[
        Quantity | None,
        Entry(
            "At hydrant flow",
            "main-and-zone",
            "The hydrant's flow at which that loss holds.",
            D.FLOW,
            0,
            10,
            above=True,
        ),
    ] = None


class Point(Record):
    """A named point of the zone with what it requires."""

    id: str
    role: Annotated[
        Literal["critical", "lowest", "hydrant", "customer"],
        Entry(
            "What it stands for",
            "main-and-zone",
            "Critical: least pressure. Lowest: highest pressure.",
            choices=(
                ("critical", "critical customer"),
                ("lowest", "lowest customer"),
                ("hydrant", "hydrant"),
                ("customer", "other customer"),
            ),
        ),
    ] = "customer"
    title: Annotated[str, Entry("Name of the point", "main-and-zone")] = ""
    elevation: Annotated[
        Quantity | None,
        Entry(
            "Elevation",
            "main-and-zone",
            "Of the tap or outlet, on the site datum.",
            D.LEVEL,
            -450,
            9000,
        ),
    ] = None
    required_pressure: Annotated[
        Quantity | None,
        Entry(
            "Least pressure, normal",
            "main-and-zone",
            "Gauge, at this point; the criteria row if left empty.",
            D.PRESSURE,
            0,
            2.5e6,
        ),
    ] = None
    fire_pressure: Annotated[
        Quantity | None,
        Entry(
            "Least pressure, fire",
            "main-and-zone",
            "Gauge, at this point; the criteria row if left empty.",
            D.PRESSURE,
            0,
            2.5e6,
        ),
    ] = None
    highest_pressure: Annotated[
        Quantity | None,
        Entry(
            "Highest pressure, normal",
            "main-and-zone",
            "Gauge; the criteria row if left empty.",
            D.PRESSURE,
            0,
            5e6,
        ),
    ] = None
    highest_pressure_abnormal: Annotated[
        Quantity | None,
        Entry(
            "Highest pressure, abnormal",
            "main-and-zone",
            "Gauge, pumps at shut-off; the criteria row if left empty.",
            D.PRESSURE,
            0,
            5e6,
        ),
    ] = None
    residual_pressure: Annotated[
        Quantity | None,
        Entry(
            "Residual at the hydrant",
            "main-and-zone",
            "Gauge, while it flows; the criteria row if left empty.",
            D.PRESSURE,
            0,
            2.5e6,
        ),
    ] = None
    loss: Annotated[LossAtFlow, Part("Zone loss", "main-and-zone")] = LossAtFlow()
    fire_share: Annotated[
        float | None,
        Entry(
            "Share of the fire flow on this path",
            "main-and-zone",
            "0 to 1; taken as 1 if left empty, which is on the safe side.",
            D.NUMBER,
            0,
            1,
        ),
    ] = None
    branch: Annotated[BranchLoss, Part("Hydrant branch", "main-and-zone")] = BranchLoss()


class ZoneTank(Record):
    """A tank that floats on the zone."""

    low: Annotated[
        Quantity | None, Entry("Tank low level", "main-and-zone", "", D.LEVEL, -450, 9000)
    ] = None
    normal: Annotated[
        Quantity | None, Entry("Tank normal level", "main-and-zone", "", D.LEVEL, -450, 9000)
    ] = None
    top: Annotated[
        Quantity | None, Entry("Tank top level", "main-and-zone", "", D.LEVEL, -450, 9000)
    ] = None
    area: Annotated[
        Quantity | None,
        Entry("Tank plan area", "main-and-zone", "", D.AREA, 0, 1e6, above=True),
    ] = None
    use: Annotated[
        Literal["floating", "fire_only"],
        Entry(
            "Use of the tank",
            "main-and-zone",
            "",
            choices=(("floating", "floats on the zone"), ("fire_only", "only for fire")),
        ),
    ] = "floating"
    demand_at: Annotated[
        Quantity | None,
        Entry(
            "Demand drawn at chainage",
            "main-and-zone",
            "From the station; at the tank if left empty.",
            D.LENGTH,
            0,
            200_000,
        ),
    ] = None


class Zone(Record):
    """The zone that the station feeds."""

    kind: Annotated[
        Literal["closed", "tank", "both"] | None,
        Entry(
            "Kind of zone",
            "main-and-zone",
            "",
            choices=(
                ("closed", "closed: no tank on the zone"),
                ("tank", "a tank floats on it"),
                ("both", "closed with a tank for fire"),
            ),
        ),
    ] = None
    title: Annotated[str, Entry("Name of the zone", "main-and-zone")] = ""
    points: Annotated[tuple[Point, ...], Part("Named points", "main-and-zone", "Point")] = ()
    tank: Annotated[ZoneTank, Part("Zone tank", "main-and-zone")] = ZoneTank()
