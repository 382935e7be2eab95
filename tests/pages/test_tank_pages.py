"""A station that fills a tank stands on every sheet, in tables, figures and memo."""

import re

import pytest
from fastapi.testclient import TestClient

from server.demo import load_demo
from server.pages.default_scenarios import default_scenarios
from server.station import fields
from server.station.edits import apply_edits
from server.station.reader import read_station
from tests.pages.page_reader import ReadPage


@pytest.fixture
def tank_id(client: TestClient, app) -> str:
    return load_demo(app.state.store)[1]


@pytest.mark.parametrize("units", ["si", "us"])
@pytest.mark.parametrize("sheet", list(fields.SHEET_TITLES))
def test_every_sheet_shows_the_station(client, tank_id, sheet, units):
    answer = client.get(f"/stations/{tank_id}/{sheet}?units={units}")

    assert answer.status_code == 200
    assert not re.search(r"\bnan\b|>None<", answer.text)


def test_the_duty_tells_every_stage_and_what_the_tank_asks(client, tank_id):
    page = ReadPage(client.get(f"/stations/{tank_id}/duty").text)

    assert "119.7" in page.words
    assert "the head that the tank asks" in page.words
    assert "from a full tank at low supply on aged pipes" in page.words
    table = client.get(f"/stations/{tank_id}/tables/duty.csv")
    assert table.text.count("T1 + T2") == 27


def test_the_summary_answers_what_a_filling_station_is_asked(client, tank_id):
    page = ReadPage(client.get(f"/stations/{tank_id}/summary").text)

    assert "Maximum day into the full tank in 22" in page.words
    assert "86.5 for 81.8" in page.words
    assert "Water over the outlet of the supply tank at its cut-out" in page.words


def test_the_supply_says_that_a_tank_has_no_curve(client, tank_id):
    page = ReadPage(client.get(f"/stations/{tank_id}/supply").text)

    assert "A tank gives its level, whatever is drawn" in page.words


def test_the_usual_scenarios_of_a_tank_are_made(client, tank_id):
    station = read_station(client.get(f"/stations/{tank_id}/file").content)
    without = station.model_copy(update={"scenarios": ()})
    made = apply_edits(without, default_scenarios(without)).scenarios

    assert len(made) == 5 * len(station.horizons)
    told = {(s.demand, s.supply, s.tank_state) for s in made}
    assert ("none", "high", "low") in told
    assert ("maximum_day", "low", "top") in told
    # the tank holds the fire: no scenario pumps it
    assert not [s for s in made if s.fire]


def test_the_scenario_row_tells_what_the_pumps_give_a_tank(client, tank_id):
    page = ReadPage(client.get(f"/stations/{tank_id}/summary").text)

    assert "58.7\u00a0L/s, T1" in page.words or "58.7 L/s, T1" in page.words
