"""What is absent is named: a cleared field is never a pass by silence, nor an error."""

import pytest

from server.station import fields, paths
from server.station.entry import Quantity, Record
from server.station.station import Station
from server.studies.duty_result import NotSolved
from server.studies.findings import words
from server.studies.shapes import Severity
from tests.studies.findings.demo import SET, assessed, demo, edited, put, remove

# cleared fields for which something documented stands in, or on which nothing judged here hangs
STANDS_IN = {
    "/site/water_temperature/low": "friction is read at the usual temperature",
    "/site/floor_level": "the flood level is stated, not judged",
    "/suction_line/reaches/*/roughness/new": "the scenarios ask for aged pipes",
    "/discharge_main/reaches/*/roughness/new": "the scenarios ask for aged pipes",
    "/zone/points/*/required_pressure": "the criteria row",
    "/zone/points/*/fire_pressure": "the criteria row",
    "/zone/points/*/residual_pressure": "the criteria row",
    "/zone/points/*/highest_pressure": "the criteria row",
    "/zone/points/*/highest_pressure_abnormal": "the criteria row",
    "/pumps/*/curves/*/diameter": "one diameter, no trim",
    "/sets/*/trips/low_suction_alarm": "an alarm stops nothing",
}


def _quantities(record: Record, path: str = "") -> list[str]:
    found: list[str] = []
    for name in type(record).model_fields:
        value = getattr(record, name)
        if isinstance(value, Quantity):
            found.append(f"{path}/{name}")
        elif isinstance(value, Record):
            found.extend(_quantities(value, f"{path}/{name}"))
        elif isinstance(value, tuple):
            for item in value:
                if isinstance(item, Record):
                    found.extend(_quantities(item, f"{path}/{name}/{item.id}"))  # type: ignore[attr-defined]
    return found


PATHS = {fields.node_at(path).pattern: path for path in _quantities(demo())}


@pytest.mark.parametrize("pattern", PATHS)
def test_cleared_field_is_named_or_something_documented_stands_in(pattern: str) -> None:
    path = PATHS[pattern]
    station = paths.put(demo(), path, None)
    assessment = assessed(station)
    named = set(assessment.missing) | {
        f.subject for f in assessment.findings if f.code == "default_used"
    }
    assert (path in named) != (pattern in STANDS_IN)
    for finding in assessment.findings:
        said = words.sentence(finding, station, "us")
        assert "nan" not in said
        assert "–" not in said


def test_empty_station_lists_its_missing_inputs_and_nothing_holds() -> None:
    station = Station()
    assessment = assessed(station)
    assert {f.severity for f in assessment.findings} == {Severity.NOT_CHECKED}
    for path in ("/supply/kind", "/zone/points", "/horizons", "/scenarios", "/pumps", "/sets"):
        assert path in assessment.missing
    assert assessment.holds is None
    assert assessment.requirements == ()
    assert assessment.lead("si") == "No set is proposed yet, so nothing can be said to hold."
    for finding in assessment.findings:
        assert "is not given" in words.sentence(finding, station, "si")


def test_set_that_is_not_solved_is_neither_held_nor_failed() -> None:
    assessment = assessed(edited(put("/zone/points/pt-t3r8nw/elevation", None)))
    assert isinstance(assessment.for_set("st-v3a7pe"), NotSolved)
    assert assessment.holds is None
    assert "/zone/points/pt-t3r8nw/elevation" in assessment.missing
    assert "is not known" in assessment.lead("si")


def test_set_without_slots_names_its_slots() -> None:
    slots = [f"{SET}/slots/{slot.id}" for slot in demo().sets[0].slots]
    assessment = assessed(edited(remove(*slots)))
    assert f"{SET}/slots" in assessment.missing


def test_low_supply_that_is_not_stated_is_not_checked_rather_than_failed() -> None:
    assessment = assessed(edited(put("/supply/states/low", None)))
    codes = {f.code for f in assessment.findings}
    assert "/supply/states/low" in assessment.missing
    assert "no_unit" not in codes
    assert all(c.supply != "low" for f in assessment.findings for c in f.cases
               if f.code == "region_outside")  # fmt: skip
