"""Pumps and their tested curves, as entered."""

from typing import Annotated, Literal

from server.station.entry import Entry, Part, Quantity, Record
from server.units import Dimension as D


class CurveUnits(Record):
    """Units of a curve table's columns; a column without a unit is not in the table."""

    flow: str = "L/s"
    head: str = "m"
    efficiency: str | None = None
    shaft_power: str | None = None
    npsh_required: str | None = None


class CurveTable(Record):
    """Rows of a tested curve: one field, replaced whole.

    Each row has as many cells as `units` has units, in the order flow, head, efficiency, shaft
    power, NPSH required; an empty cell is null, but not in flow and head.
    """

    units: CurveUnits = CurveUnits()
    rows: tuple[tuple[float | None, ...], ...] = ()


class Curve(Record):
    """A curve tested at the pump's speed with one impeller diameter."""

    id: str
    diameter: Annotated[
        Quantity | None, Entry("Impeller diameter", "pumps", "", D.BORE, 0, 3, above=True)
    ] = None
    fit: Annotated[
        Literal["through_points", "smoothed"],
        Entry(
            "Curve drawn",
            "pumps",
            "",
            choices=(("through_points", "through the rows"), ("smoothed", "smoothed")),
        ),
    ] = "through_points"
    best_efficiency_flow: Annotated[
        Quantity | None,
        Entry(
            "Best-efficiency flow, stated",
            "pumps",
            "The maker's; found from the rows if left empty.",
            D.FLOW,
            0,
            5,
            above=True,
        ),
    ] = None
    table: Annotated[
        CurveTable,
        Entry(
            "Tested rows",
            "pumps",
            "Flow, head and, where known, efficiency, shaft power and NPSH required.",
        ),
    ] = CurveTable()


class AllowableRegion(Record):
    """The maker's allowable operating region, in per cent of best-efficiency flow."""

    low: Annotated[
        Quantity | None,
        Entry(
            "Allowable region from",
            "pumps",
            "The maker's; not checked if empty.",
            D.RATIO,
            0,
            2,
            decimals=0,
        ),
    ] = None
    high: Annotated[
        Quantity | None,
        Entry(
            "Allowable region to",
            "pumps",
            "The maker's; not checked if empty.",
            D.RATIO,
            0,
            3,
            decimals=0,
        ),
    ] = None


class Pump(Record):
    """A pump as its maker states it."""

    id: str
    title: Annotated[str, Entry("Name of the pump", "pumps")] = ""
    kind: Annotated[
        Literal[
            "end_suction",
            "in_line",
            "double_suction",
            "vertical_multistage",
            "vertical_turbine",
        ]
        | None,
        Entry(
            "Kind of pump",
            "pumps",
            "",
            choices=(
                ("end_suction", "end suction"),
                ("in_line", "in line"),
                ("double_suction", "double suction"),
                ("vertical_multistage", "vertical multistage"),
                ("vertical_turbine", "vertical turbine"),
            ),
        ),
    ] = None
    stages: Annotated[int, Entry("Stages", "pumps", "", low=1, high=40)] = 1
    speed: Annotated[
        Quantity | None,
        Entry("Tested speed", "pumps", "Speed of the curve.", D.ROTATION, 0, 200, above=True),
    ] = None
    curves: Annotated[tuple[Curve, ...], Part("Curves", "pumps", "Curve")] = ()
    allowable_region: Annotated[AllowableRegion, Part("Allowable region", "pumps")] = (
        AllowableRegion()
    )
    least_diameter: Annotated[
        Quantity | None,
        Entry(
            "Least impeller diameter",
            "pumps",
            "The maker's; 75 % of the tested one is the least if left empty.",
            D.BORE,
            0,
            3,
            above=True,
        ),
    ] = None
    minimum_flow: Annotated[
        Quantity | None,
        Entry(
            "Minimum continuous flow",
            "pumps",
            "Per cent of best-efficiency flow; 25 % assumed if left empty.",
            D.RATIO,
            0,
            1,
            decimals=0,
        ),
    ] = None
    npsh_exponent: Annotated[
        float | None,
        Entry(
            "NPSH required grows with speed to the power",
            "pumps",
            "2 if left empty; lower is on the safe side when slower.",
            D.NUMBER,
            1.3,
            2,
        ),
    ] = None
    motor_power: Annotated[
        Quantity | None,
        Entry("Motor power", "pumps", "Rated, at the shaft.", D.POWER, 0, 5e6, above=True),
    ] = None
    motor_efficiency: Annotated[
        Quantity | None, Entry("Motor efficiency", "pumps", "", D.RATIO, 0.2, 1)
    ] = None
    drive_efficiency: Annotated[
        Quantity | None,
        Entry("Drive efficiency", "pumps", "97 % assumed if left empty.", D.RATIO, 0.2, 1),
    ] = None
    rating: Annotated[
        Quantity | None,
        Entry("Casing and flange rating", "pumps", "Gauge.", D.PRESSURE, 0, 1e7, above=True),
    ] = None
