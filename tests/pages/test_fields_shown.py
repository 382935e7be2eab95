"""Every field of the document is shown, and can be edited, on the sheet its entry names."""

import pytest
from fastapi.testclient import TestClient

from server.station import fields
from server.station.canonical import canonical_bytes
from server.station.edits import Edit, apply_edits
from server.station.fresh import new_item
from server.station.station import Station
from tests.pages.page_reader import ReadPage


def full(demo: Station) -> Station:
    """Return the demo with at least one item in every list, nested ones included."""
    station = demo
    lists = [
        "/suction_line/reaches/rc-s7n3de/fittings",
        "/discharge_main/reaches/rc-d1f5my/fittings",
        "/sets/st-v3a7pe/control/stages",
    ]
    for path in lists:
        station = apply_edits(station, [Edit("insert", path, new_item(station, path))])
    more = [
        ("/answers", {"finding": "region_outside", "text": "Seen."}),
        ("/memo/notes", {"section": "basis", "text": "A note."}),
    ]
    for path, members in more:
        item = {**new_item(station, path), **members}
        station = apply_edits(station, [Edit("insert", path, item)])
    limit = {"value": 150, "unit": "kPa"}
    row = "/criteria/rows/suction-gauge-minimum"
    # columns that a closed zone of single barrels has no use for
    scenario = f"/scenarios/{station.scenarios[0].id}"
    barrel = station.discharge_main.reaches[0].id
    return apply_edits(
        station,
        [
            Edit("set", f"{row}/limit", limit),
            Edit("set", f"{row}/reason", "Local rule."),
            Edit("set", f"{scenario}/tank_state", "normal"),
            Edit("set", f"{scenario}/barrel_out", barrel),
        ],
    )


@pytest.fixture
def full_id(client: TestClient, demo: Station) -> str:
    answer = client.post(
        "/stations/import",
        files={"file": ("full.json", canonical_bytes(full(demo)), "application/json")},
    )
    assert answer.status_code == 303, answer.text
    return answer.headers["location"].split("/")[-2]


def shown_on(client: TestClient, station: str, sheet: str) -> set[str]:
    page = ReadPage(client.get(f"/stations/{station}/{sheet}").text)
    return {node.pattern for path in page.paths if (node := fields.find(path)) is not None}


# shown as the subject of its text, never typed
SUBJECTS = {"/answers/*/finding"}


def test_every_field_stands_on_its_sheet(client, full_id):
    sheets = {sheet for sheet in fields.SHEET_TITLES if sheet not in ("duty", "history")}
    shown = {sheet: shown_on(client, full_id, sheet) for sheet in sheets}

    missing = [
        pattern
        for pattern in fields.patterns()
        if pattern not in SUBJECTS and pattern not in shown[fields.sheet_of(pattern)]
    ]
    assert missing == []


def unlabelled(page: ReadPage) -> list[dict[str, str]]:
    return [
        control
        for control in page.controls
        if control.get("type") not in ("hidden", "radio")
        and "aria-label" not in control
        and control.get("id") not in page.labelled
    ]


@pytest.mark.parametrize("empty", [False, True], ids=["full", "empty"])
def test_a_sheet_has_one_h1_unique_ids_and_a_label_for_every_control(client, full_id, empty):
    station = full_id
    if empty:
        made = client.post("/stations", data={"title": "Empty"})
        station = made.headers["location"].split("/")[-2]
    for sheet in fields.SHEET_TITLES:
        answer = client.get(f"/stations/{station}/{sheet}")
        page = ReadPage(answer.text)

        assert answer.status_code == 200, sheet
        assert page.headings.count("h1") == 1, sheet
        assert sorted(i for i in page.ids if page.ids.count(i) > 1) == [], sheet
        assert unlabelled(page) == [], sheet
        assert " style=" not in answer.text, sheet
        assert "<script>" not in answer.text, sheet


def test_labels_speak_the_unit_in_words(client, full_id):
    page = ReadPage(client.get(f"/stations/{full_id}/supply").text)

    assert "Altitude above sea level , in metres" in page.words
    assert "gauge level of the test, in metres" in page.words


def test_the_other_units_change_readings_and_empty_fields_but_no_entry(client, full_id):
    us = ReadPage(client.get(f"/stations/{full_id}/supply?units=us").text)
    si = ReadPage(client.get(f"/stations/{full_id}/supply").text)

    for path in ("/site/altitude", "/site/eye_level"):
        assert us.form_of(path).values["text"] == si.form_of(path).values["text"]
    assert us.form_of("/site/weather_allowance").values["unit"] == "psi"
    assert si.form_of("/site/weather_allowance").values["unit"] == "kPa"


def test_an_old_revision_is_shown_with_nothing_to_change(client, full_id):
    edit = {"path": "/site/datum", "text": "Newer", "base": "1"}
    client.post(f"/stations/{full_id}/edits", data=edit)
    for sheet in ("supply", "main-and-zone", "demand", "pumps", "sets", "criteria"):
        answer = client.get(f"/stations/{full_id}/{sheet}?at=r1")
        page = ReadPage(answer.text)

        assert "This is revision 1" in page.words
        visible = [c for c in page.controls if c.get("type") != "hidden"]
        assert [c for c in visible if "disabled" not in c] == [], sheet
        assert "hx-post" not in answer.text, sheet


@pytest.mark.parametrize("at", ["r99", "17x", "r", "-1"])
def test_a_revision_that_is_not_there_is_404(client, full_id, at):
    assert client.get(f"/stations/{full_id}/supply?at={at}").status_code == 404


def test_choices_that_no_longer_exist_fall_back_to_the_usual_ones(client, full_id):
    answer = client.get(f"/stations/{full_id}/supply?case=sc-zzzzzz&set=st-zzzzzz&units=xx")

    assert answer.status_code == 200
