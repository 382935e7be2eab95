"""Horizons with their demand, fires and scenarios, as entered."""

from typing import Annotated, Literal

from server.station.entry import Entry, Part, Quantity, Record
from server.units import Dimension as D


def _flow(title: str, guidance: str = "") -> Entry:
    return Entry(title, "demand", guidance, D.FLOW, 0, 10)


class Demand(Record):
    """The four demands of a horizon."""

    average_day: Annotated[Quantity | None, _flow("Average day")] = None
    maximum_day: Annotated[Quantity | None, _flow("Maximum day")] = None
    peak_hour: Annotated[Quantity | None, _flow("Peak hour", "In the year's worst day.")] = None
    minimum_night: Annotated[
        Quantity | None,
        _flow("Minimum night", "Legitimate use plus leakage at night pressure; never zero."),
    ] = None


class Horizon(Record):
    """A year that the station is judged in."""

    id: str
    title: Annotated[str, Entry("Horizon", "demand", "Opening, design or a year between.")] = ""
    year: Annotated[int | None, Entry("Year", "demand", "", low=1950, high=2200)] = None
    people: Annotated[
        int | None, Entry("People served", "demand", "", low=0, high=10_000_000)
    ] = None
    demand: Annotated[Demand, Part("Demand", "demand")] = Demand()
    pipes: Annotated[
        Literal["new", "aged"] | None,
        Entry(
            "Pipes in that year",
            "demand",
            "New at opening, aged at the design year if left empty.",
            choices=(("new", "new"), ("aged", "aged")),
        ),
    ] = None
    low_state: Annotated[
        Quantity | None,
        Entry(
            "Low state of the supply in that year",
            "demand",
            "The supply's own low state if left empty.",
            D.PRESSURE,
            -2e6,
            2e6,
        ),
    ] = None


class Fire(Record):
    """A design fire."""

    id: str
    title: Annotated[str, Entry("Fire", "demand")] = ""
    point: Annotated[
        str | None,
        Entry("Hydrant", "demand", "A hydrant of sheet 3.", refers_to="/zone/points"),
    ] = None
    flow: Annotated[
        Quantity | None,
        Entry("Fire flow", "demand", "By the adopted fire code.", D.FLOW, 0, 5, above=True),
    ] = None
    duration: Annotated[
        Quantity | None, Entry("Duration", "demand", "", D.TIME, 0, 86400, above=True)
    ] = None
    beside: Annotated[
        Literal["average_day", "maximum_day", "peak_hour"],
        Entry(
            "Beside the demand of",
            "demand",
            "Usually the maximum day.",
            choices=(
                ("average_day", "average day"),
                ("maximum_day", "maximum day"),
                ("peak_hour", "peak hour"),
            ),
        ),
    ] = "maximum_day"
    carried_by: Annotated[
        Literal["pumps", "bypass", "storage"],
        Entry(
            "Carried by",
            "demand",
            "A recorded decision.",
            choices=(("pumps", "the pumps"), ("bypass", "the bypass"), ("storage", "storage")),
        ),
    ] = "pumps"


class Scenario(Record):
    """One state of the station that is solved and judged."""

    id: str
    title: Annotated[str, Entry("Scenario", "demand")] = ""
    on: Annotated[
        bool, Entry("Used", "demand", "", choices=(("true", "used"), ("false", "left out")))
    ] = True
    horizon: Annotated[str | None, Entry("Horizon", "demand", refers_to="/horizons")] = None
    demand: Annotated[
        Literal["average_day", "maximum_day", "peak_hour", "minimum_night", "none"] | None,
        Entry(
            "Demand",
            "demand",
            "",
            choices=(
                ("minimum_night", "minimum night"),
                ("average_day", "average day"),
                ("maximum_day", "maximum day"),
                ("peak_hour", "peak hour"),
                ("none", "none (shut-off)"),
            ),
        ),
    ] = None
    fire: Annotated[str | None, Entry("Fire", "demand", refers_to="/fires")] = None
    supply: Annotated[
        Literal["low", "normal", "high"],
        Entry(
            "Supply state shown",
            "demand",
            "All three are solved; the row shows this one.",
            choices=(("low", "low"), ("normal", "normal"), ("high", "high")),
        ),
    ] = "normal"
    pipes: Annotated[
        Literal["new", "aged"],
        Entry("Pipes", "demand", "", choices=(("new", "new"), ("aged", "aged"))),
    ] = "aged"
    tank_state: Annotated[
        Literal["low", "normal", "top"] | None,
        Entry(
            "Level of the zone tank",
            "demand",
            "Where a tank floats on the zone: normal if left empty; top is hardest to fill.",
            choices=(("low", "low"), ("normal", "normal"), ("top", "top")),
        ),
    ] = None
    barrel_out: Annotated[
        str | None,
        Entry(
            "One barrel out of",
            "demand",
            "A reach of the discharge main with two or more barrels.",
            refers_to="/discharge_main/reaches",
        ),
    ] = None
    out: Annotated[
        Literal["none", "largest"],
        Entry(
            "Unit out",
            "demand",
            "The largest unit counts as missing.",
            choices=(("none", "none"), ("largest", "the largest")),
        ),
    ] = "none"


Pattern = tuple[float, ...]


class DailyPattern(Record):
    """Twenty-four hourly factors from midnight."""

    values: Annotated[
        Pattern, Entry("Hourly factors", "demand", "24 numbers from midnight; their mean is 1.")
    ] = ()


class Demands(Record):
    """Group of what is not a list on the demand sheet."""

    daily_pattern: Annotated[DailyPattern, Part("Daily pattern", "demand")] = DailyPattern()
    basis: Annotated[
        str,
        Entry("Basis of demand", "demand", "Method, factors and source, in words.", long=True),
    ] = ""
