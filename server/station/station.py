"""The whole document of a station, version 1."""

from typing import Annotated, Literal

from server.station.conduit import Conduit, Leg
from server.station.demand import Demands, Fire, Horizon, Scenario
from server.station.entry import Entry, Part, Quantity, Record, Source
from server.station.pump import Pump
from server.station.pump_set import PumpSet
from server.station.supply import Site, Supply
from server.station.zone import Zone

FORMAT = "firmhead-station"
VERSION = 1


class Identity(Record):
    """What the station is called and for what it is sized."""

    title: Annotated[str, Entry("Name of the station", "summary")] = ""
    number: Annotated[str, Entry("Job number", "summary")] = ""
    place: Annotated[str, Entry("Place", "summary")] = ""
    client: Annotated[str, Entry("Water utility", "summary")] = ""
    purpose: Annotated[
        str,
        Entry("Purpose", "summary", "What the station is for, in a few sentences.", long=True),
    ] = ""


class Display(Record):
    """How the station is shown when a reader does not say otherwise."""

    units: Annotated[
        Literal["si", "us"],
        Entry("Units shown", "summary", "", choices=(("si", "SI"), ("us", "US customary"))),
    ] = "si"
    paper: Annotated[
        Literal["a4", "letter"],
        Entry("Paper", "memo", "", choices=(("a4", "A4"), ("letter", "Letter"))),
    ] = "a4"


class CriteriaRow(Record):
    """A criterion whose limit differs from its profile; its id is the rule's key."""

    id: str
    limit: Annotated[
        Quantity | None, Entry("Limit", "criteria", "The profile's if left empty.")
    ] = None
    source: Annotated[
        Source | None,
        Entry("Source of the limit", "criteria", "Code, standard or office rule."),
    ] = None
    reason: Annotated[
        str, Entry("Reason for the departure", "criteria", "Printed in the memo.", long=True)
    ] = ""


class Criteria(Record):
    """Profile of criteria, and the rows that depart from it."""

    profile: Annotated[
        Literal["si_municipal", "us_municipal"],
        Entry(
            "Profile of criteria",
            "criteria",
            "",
            choices=(("si_municipal", "SI, municipal"), ("us_municipal", "US, municipal")),
        ),
    ] = "si_municipal"
    rows: Annotated[tuple[CriteriaRow, ...], Part("Criteria", "criteria", "Criterion")] = ()


class Answer(Record):
    """The engineer's answer to a finding; it never hides the finding."""

    id: str
    finding: Annotated[str, Entry("Finding answered", "summary")] = ""
    text: Annotated[str, Entry("Answer", "summary", "", long=True)] = ""


class MemoNote(Record):
    """A paragraph of the engineer's in a section of the memo."""

    id: str
    section: Annotated[str, Entry("Printed at the end of", "memo")] = ""
    text: Annotated[str, Entry("Note", "memo", "", long=True)] = ""


class Memo(Record):
    """Who stands under the memo and what the engineer adds."""

    issue: Annotated[str, Entry("Issue", "memo", "A letter or number.")] = ""
    date: Annotated[str, Entry("Date of issue", "memo", "As 2026-05-14.")] = ""
    prepared: Annotated[str, Entry("Prepared by", "memo")] = ""
    checked: Annotated[str, Entry("Checked by", "memo")] = ""
    approved: Annotated[str, Entry("Approved by", "memo")] = ""
    notes: Annotated[tuple[MemoNote, ...], Part("Notes in the memo", "memo", "Note")] = ()


class Station(Record):
    """A station file: everything the engineer entered, nothing computed."""

    format: Literal["firmhead-station"] = "firmhead-station"
    version: Literal[1] = 1
    identity: Annotated[Identity, Part("Identity", "summary")] = Identity()
    display: Annotated[Display, Part("Display", "summary")] = Display()
    site: Annotated[Site, Part("Site", "supply")] = Site()
    supply: Annotated[Supply, Part("Supply", "supply")] = Supply()
    suction_line: Annotated[Conduit, Part("Suction line", "supply")] = Conduit()
    legs: Annotated[tuple[Leg, ...], Part("Legs", "sets", "Leg")] = ()
    discharge_main: Annotated[Conduit, Part("Discharge main", "main-and-zone")] = Conduit()
    zone: Annotated[Zone, Part("Zone", "main-and-zone")] = Zone()
    demands: Annotated[Demands, Part("Demand", "demand")] = Demands()
    horizons: Annotated[tuple[Horizon, ...], Part("Horizons", "demand", "Horizon")] = ()
    fires: Annotated[tuple[Fire, ...], Part("Fires", "demand", "Fire")] = ()
    scenarios: Annotated[tuple[Scenario, ...], Part("Scenarios", "demand", "Scenario")] = ()
    pumps: Annotated[tuple[Pump, ...], Part("Pumps", "pumps", "Pump")] = ()
    sets: Annotated[tuple[PumpSet, ...], Part("Sets", "sets", "Set")] = ()
    proposed_set: Annotated[
        str | None,
        Entry("Proposed set", "sets", "The set that the memo proposes.", refers_to="/sets"),
    ] = None
    criteria: Annotated[Criteria, Part("Criteria", "criteria")] = Criteria()
    answers: Annotated[
        tuple[Answer, ...], Part("Answers to findings", "summary", "Answer")
    ] = ()
    memo: Annotated[Memo, Part("Memo", "memo")] = Memo()
