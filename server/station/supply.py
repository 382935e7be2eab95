"""Site and supply of a station, as entered."""

from typing import Annotated, Literal

from server.station.entry import Entry, Part, Quantity, Record
from server.units import Dimension as D

LEVEL_LOW, LEVEL_HIGH = -450.0, 9000.0


def _level(title: str, guidance: str = "") -> Entry:
    return Entry(
        title, "supply", guidance or "Above the site datum.", D.LEVEL, LEVEL_LOW, LEVEL_HIGH
    )


class WaterTemperature(Record):
    """The water's lowest, usual and highest temperature."""

    low: Annotated[
        Quantity | None,
        Entry(
            "Lowest water temperature",
            "supply",
            "Cold water is thicker: the most friction.",
            D.TEMPERATURE,
            0,
            60,
        ),
    ] = None
    normal: Annotated[
        Quantity | None,
        Entry(
            "Water temperature for friction",
            "supply",
            "Sets density and friction.",
            D.TEMPERATURE,
            0,
            60,
        ),
    ] = None
    high: Annotated[
        Quantity | None,
        Entry(
            "Highest water temperature",
            "supply",
            "For NPSH: warm water boils sooner.",
            D.TEMPERATURE,
            0,
            60,
        ),
    ] = None


class Site(Record):
    """Levels and water of the site."""

    altitude: Annotated[
        Quantity | None,
        Entry(
            "Altitude above sea level",
            "supply",
            "Sets air pressure, so NPSH. Type 0 at sea level.",
            D.LEVEL,
            -400,
            5000,
        ),
    ] = None
    datum: Annotated[
        str,
        Entry("Datum of all levels", "supply", "Name the survey datum; one for every level."),
    ] = ""
    water_temperature: Annotated[WaterTemperature, Part("Water temperature", "supply")] = (
        WaterTemperature()
    )
    weather_allowance: Annotated[
        Quantity | None,
        Entry(
            "Weather allowance on air pressure",
            "supply",
            "Taken off the air pressure of the altitude; 0 if left empty.",
            D.PRESSURE,
            0,
            10_000,
        ),
    ] = None
    floor_level: Annotated[Quantity | None, _level("Station floor level")] = None
    eye_level: Annotated[
        Quantity | None,
        _level("Pump eye level", "Centre of the first impeller; NPSH is judged here."),
    ] = None
    suction_gauge_level: Annotated[
        Quantity | None,
        _level("Suction gauge level", "Level of the instrument, not of the tapping."),
    ] = None
    discharge_gauge_level: Annotated[
        Quantity | None,
        _level("Discharge gauge level", "A set point is valid only at this level."),
    ] = None


class FlowTest(Record):
    """One hydrant flow test on the supplying main."""

    id: str
    title: Annotated[str, Entry("Place of the test", "supply")] = ""
    made_at: Annotated[
        str | None,
        Entry("Date and hour", "supply", "As 2025-05-14 07:30; a test is one moment."),
    ] = None
    gauge_level: Annotated[
        Quantity | None,
        _level("Gauge level of the test", "Level of the gauge on the residual hydrant."),
    ] = None
    static_pressure: Annotated[
        Quantity | None,
        Entry(
            "Static pressure",
            "supply",
            "Gauge, before the hydrant was opened.",
            D.PRESSURE,
            0,
            2.5e6,
            above=True,
        ),
    ] = None
    residual_pressure: Annotated[
        Quantity | None,
        Entry(
            "Residual pressure",
            "supply",
            "Gauge, while the hydrant flowed; below static.",
            D.PRESSURE,
            0,
            2.5e6,
        ),
    ] = None
    test_flow: Annotated[
        Quantity | None,
        Entry(
            "Test flow",
            "supply",
            "Drawn in addition to that day's demand.",
            D.FLOW,
            0,
            5,
            above=True,
        ),
    ] = None
    station_draw: Annotated[
        Quantity | None,
        Entry(
            "Draw of this station in the test",
            "supply",
            "0 if the station stood still.",
            D.FLOW,
            0,
            5,
        ),
    ] = None
    use: Annotated[
        Literal["basis", "compared"],
        Entry(
            "Use of the test",
            "supply",
            "One test is the design basis; others are compared with it.",
            choices=(("basis", "design basis"), ("compared", "compared")),
        ),
    ] = "basis"


class States(Record):
    """Shift of the tested curve in the three states of the supply."""

    low: Annotated[
        Quantity | None,
        Entry(
            "Low state, shift from the test",
            "supply",
            "Negative: summer evening, reservoir low. Often 35 to 70 kPa (5 to 10 psi) under "
            "the test (common practice).",
            D.PRESSURE,
            -2e6,
            2e6,
        ),
    ] = None
    normal: Annotated[
        Quantity | None,
        Entry(
            "Normal state, shift from the test",
            "supply",
            "0 if the test day was usual.",
            D.PRESSURE,
            -2e6,
            2e6,
        ),
    ] = None
    high: Annotated[
        Quantity | None,
        Entry(
            "High state, shift from the test",
            "supply",
            "Positive: night, reservoir full.",
            D.PRESSURE,
            -2e6,
            2e6,
        ),
    ] = None


class SupplyTank(Record):
    """A tank that the station draws from."""

    cut_out: Annotated[Quantity | None, _level("Low cut-out level", "The pumps stop here.")] = (
        None
    )
    low: Annotated[Quantity | None, _level("Low level")] = None
    normal: Annotated[Quantity | None, _level("Normal level")] = None
    top: Annotated[Quantity | None, _level("Top level")] = None
    outlet_level: Annotated[Quantity | None, _level("Outlet lip level")] = None
    outlet_bore: Annotated[
        Quantity | None, Entry("Outlet bore", "supply", "At the lip.", D.BORE, 0, 5, above=True)
    ] = None


class GradeLine(Record):
    """A fixed hydraulic grade line at the connection."""

    low: Annotated[Quantity | None, _level("Grade line, low")] = None
    normal: Annotated[Quantity | None, _level("Grade line, normal")] = None
    high: Annotated[Quantity | None, _level("Grade line, high")] = None


class SupplyingZone(Record):
    """The zone that the supplying main belongs to, for the check both ways."""

    lowest_customer_level: Annotated[
        Quantity | None, _level("Highest ground in the supplying zone")
    ] = None
    loss: Annotated[
        Quantity | None,
        Entry(
            "Loss in the supplying zone",
            "supply",
            "From its source to the worst customer, at the flow beside.",
            D.HEAD,
            0,
            300,
        ),
    ] = None
    at_flow: Annotated[
        Quantity | None, Entry("Flow of that loss", "supply", "", D.FLOW, 0, 10, above=True)
    ] = None
    source_grade: Annotated[Quantity | None, _level("Grade line of its source")] = None
    maximum_day: Annotated[
        Quantity | None, Entry("Its own maximum day", "supply", "", D.FLOW, 0, 10)
    ] = None
    peak_hour: Annotated[
        Quantity | None, Entry("Its own peak hour", "supply", "", D.FLOW, 0, 10)
    ] = None
    fire_flow: Annotated[
        Quantity | None, Entry("Its own fire flow", "supply", "", D.FLOW, 0, 10)
    ] = None


class Bypass(Record):
    """A line round the pumps with a check valve; never assumed."""

    fitted: Annotated[
        bool | None,
        Entry(
            "Bypass with check valve",
            "supply",
            "It carries flow when the supply stands above the zone.",
            choices=(("true", "fitted"), ("false", "none")),
        ),
    ] = None
    bore: Annotated[
        Quantity | None, Entry("Bypass bore", "supply", "", D.BORE, 0, 3, above=True)
    ] = None
    k: Annotated[
        float | None,
        Entry("Bypass, sum of K", "supply", "Check valve included.", D.NUMBER, 0, 1e4),
    ] = None


class Supply(Record):
    """What feeds the station."""

    kind: Annotated[
        Literal["main", "tank", "grade_line"] | None,
        Entry(
            "Kind of supply",
            "supply",
            "",
            choices=(
                ("main", "a main with flow tests"),
                ("tank", "a tank"),
                ("grade_line", "a fixed grade line"),
            ),
        ),
    ] = None
    title: Annotated[
        str, Entry("Name of the supply", "supply", "For example the street main's name.")
    ] = ""
    connection_level: Annotated[
        Quantity | None,
        _level(
            "Ground level at the connection",
            "The supplying main's least pressure is judged here.",
        ),
    ] = None
    flow_tests: Annotated[tuple[FlowTest, ...], Part("Flow tests", "supply", "Flow test")] = ()
    states: Annotated[States, Part("States of the supply", "supply")] = States()
    tank: Annotated[SupplyTank, Part("Supply tank", "supply")] = SupplyTank()
    grade_line: Annotated[GradeLine, Part("Fixed grade line", "supply")] = GradeLine()
    supplying_zone: Annotated[SupplyingZone, Part("Supplying zone", "supply")] = SupplyingZone()
    bypass: Annotated[Bypass, Part("Bypass", "supply")] = Bypass()
