"""Sets: pumps in slots, their control, trips and power supply, as entered."""

from typing import Annotated, Literal

from server.station.entry import Entry, Part, Quantity, Record
from server.units import Dimension as D


class Slot(Record):
    """A place in the set with the pump that stands there."""

    id: str
    title: Annotated[str, Entry("Slot", "sets", "Its short name, as P1.")] = ""
    role: Annotated[
        Literal["duty", "standby", "jockey"],
        Entry(
            "Role",
            "sets",
            "",
            choices=(("duty", "duty"), ("standby", "standby"), ("jockey", "jockey")),
        ),
    ] = "duty"
    pump: Annotated[str | None, Entry("Pump", "sets", refers_to="/pumps")] = None
    curve: Annotated[
        str | None,
        Entry(
            "Curve",
            "sets",
            "The pump's first curve if left empty.",
            refers_to="/pumps/*/curves",
        ),
    ] = None
    diameter: Annotated[
        Quantity | None,
        Entry(
            "Impeller diameter",
            "sets",
            "The curve's own if left empty; else trimmed, or read between tested ones.",
            D.BORE,
            0,
            3,
            above=True,
        ),
    ] = None
    leg: Annotated[str | None, Entry("Leg", "sets", refers_to="/legs")] = None
    drive: Annotated[
        Literal["variable", "fixed"],
        Entry(
            "Drive",
            "sets",
            "",
            choices=(("variable", "variable speed"), ("fixed", "fixed speed")),
        ),
    ] = "variable"
    from_horizon: Annotated[
        str | None,
        Entry(
            "Installed from",
            "sets",
            "From the first horizon if left empty.",
            refers_to="/horizons",
        ),
    ] = None


class LevelStage(Record):
    """Start and stop level of the first, second, ... unit."""

    id: str
    start: Annotated[Quantity | None, Entry("Start level", "sets", "", D.LEVEL, -450, 9000)] = (
        None
    )
    stop: Annotated[Quantity | None, Entry("Stop level", "sets", "", D.LEVEL, -450, 9000)] = (
        None
    )


class Control(Record):
    """What the set holds, and between which speeds."""

    kind: Annotated[
        Literal[
            "zone_point_pressure",
            "discharge_pressure",
            "flow_compensated",
            "fixed_speed",
            "reducing_valve",
            "levels",
            "held_flow",
        ]
        | None,
        Entry(
            "Control",
            "sets",
            "",
            choices=(
                ("zone_point_pressure", "hold the pressure at a point of the zone"),
                ("discharge_pressure", "hold the pressure at the discharge gauge"),
                ("flow_compensated", "set point that rises with flow"),
                ("fixed_speed", "fixed speed"),
                ("reducing_valve", "reducing valve"),
                ("levels", "start and stop by level"),
                ("held_flow", "hold a flow"),
            ),
        ),
    ] = None
    pressure: Annotated[
        Quantity | None,
        Entry(
            "Set point",
            "sets",
            "Gauge, at the point or gauge that is held.",
            D.PRESSURE,
            0,
            5e6,
            above=True,
        ),
    ] = None
    point: Annotated[
        str | None, Entry("Held point", "sets", "A point of sheet 3.", refers_to="/zone/points")
    ] = None
    flow: Annotated[
        Quantity | None,
        Entry(
            "Flow",
            "sets",
            "The flow that is held; under a set point that rises, the flow it is full at.",
            D.FLOW,
            0,
            10,
            above=True,
        ),
    ] = None
    pressure_at_no_flow: Annotated[
        Quantity | None,
        Entry("Set point at no flow", "sets", "Gauge.", D.PRESSURE, 0, 5e6, above=True),
    ] = None
    valve_loss: Annotated[
        Quantity | None,
        Entry(
            "Loss of the reducing valve, fully open",
            "sets",
            "At the flow beside; it grows with the square of flow.",
            D.HEAD,
            0,
            100,
        ),
    ] = None
    valve_loss_at: Annotated[
        Quantity | None,
        Entry("At that flow", "sets", "Flow of that loss.", D.FLOW, 0, 10, above=True),
    ] = None
    lowest_speed: Annotated[
        Quantity | None,
        Entry(
            "Lowest speed",
            "sets",
            "Of the tested speed; the criteria row if left empty.",
            D.RATIO,
            0.2,
            1.2,
        ),
    ] = None
    highest_speed: Annotated[
        Quantity | None,
        Entry(
            "Highest speed",
            "sets",
            "Of the tested speed; the criteria row if left empty.",
            D.RATIO,
            0.2,
            1.2,
        ),
    ] = None
    running_rule: Annotated[
        Literal["fewest_units", "least_power"],
        Entry(
            "Running rule",
            "sets",
            "",
            choices=(("fewest_units", "fewest units"), ("least_power", "least power")),
        ),
    ] = "fewest_units"
    stages: Annotated[tuple[LevelStage, ...], Part("Level stages", "sets", "Stage")] = ()


class Trips(Record):
    """Protections with their levels and delays."""

    low_suction_alarm: Annotated[
        Quantity | None,
        Entry(
            "Low-suction alarm", "sets", "Gauge, at the suction gauge.", D.PRESSURE, -1e5, 2e6
        ),
    ] = None
    low_suction_slow_down: Annotated[
        Quantity | None,
        Entry(
            "Low-suction slow-down", "sets", "Gauge; none if left empty.", D.PRESSURE, -1e5, 2e6
        ),
    ] = None
    low_suction_trip: Annotated[
        Quantity | None,
        Entry(
            "Low-suction trip", "sets", "Gauge, at the suction gauge.", D.PRESSURE, -1e5, 2e6
        ),
    ] = None
    low_suction_delay: Annotated[
        Quantity | None, Entry("Low-suction trip delay", "sets", "", D.TIME, 0, 3600)
    ] = None
    high_discharge_trip: Annotated[
        Quantity | None,
        Entry(
            "High-discharge trip", "sets", "Gauge, at the discharge gauge.", D.PRESSURE, 0, 1e7
        ),
    ] = None
    high_discharge_delay: Annotated[
        Quantity | None, Entry("High-discharge trip delay", "sets", "", D.TIME, 0, 3600)
    ] = None
    low_level_alarm: Annotated[
        Quantity | None,
        Entry("Low-level alarm, zone tank", "sets", "None if left empty.", D.LEVEL, -450, 9000),
    ] = None
    high_level_trip: Annotated[
        Quantity | None,
        Entry(
            "High-level trip, zone tank",
            "sets",
            "It stops the pumps before the tank overflows.",
            D.LEVEL,
            -450,
            9000,
        ),
    ] = None
    relief_pressure: Annotated[
        Quantity | None,
        Entry(
            "Relief valve opens at", "sets", "Gauge; none if left empty.", D.PRESSURE, 0, 1e7
        ),
    ] = None


class StandbyPower(Record):
    """What runs the set when the mains power fails."""

    kind: Annotated[
        Literal["none", "automatic", "manual"] | None,
        Entry(
            "Standby power",
            "sets",
            "",
            choices=(
                ("none", "none"),
                ("automatic", "automatic generator"),
                ("manual", "started by hand"),
            ),
        ),
    ] = None
    transfer_time: Annotated[
        Quantity | None, Entry("Time to transfer", "sets", "", D.TIME, 0, 86400)
    ] = None
    carries: Annotated[str, Entry("It carries", "sets", "Which slots, in words.")] = ""


class PumpSet(Record):
    """An arrangement of pumps with its control; a station may compare several."""

    id: str
    title: Annotated[str, Entry("Name of the set", "sets")] = ""
    slots: Annotated[tuple[Slot, ...], Part("Slots", "sets", "Slot")] = ()
    control: Annotated[Control, Part("Control", "sets")] = Control()
    trips: Annotated[Trips, Part("Protections", "sets")] = Trips()
    standby_power: Annotated[StandbyPower, Part("Standby power", "sets")] = StandbyPower()
    flange_rating: Annotated[
        Quantity | None,
        Entry("Manifold and flange rating", "sets", "Gauge.", D.PRESSURE, 0, 1e7, above=True),
    ] = None
