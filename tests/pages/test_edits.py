"""Edits sent from a page, with and without script: stored, answered, kept, refused."""

import json

import pytest

from tests.pages.page_reader import ReadPage

FRAME = {"spine-slot", "strip-slot", "scenarios-slot", "margin-slot", "revision-slot"}


def test_a_saved_field_answers_with_itself_and_the_parts_that_follow(send, now):
    answer = send("/site/altitude", "72 ft", base="1")

    page = ReadPage(answer.text)
    assert answer.status_code == 200
    assert set(page.oob) >= FRAME | {"site--altitude--field"}
    assert "Revision 2" in page.words
    assert now().site.altitude.value == 72
    assert now().site.altitude.unit == "ft"


def test_an_answer_never_holds_an_input_of_another_field(send):
    page = ReadPage(send("/site/altitude", "100", base="1").text)

    assert page.paths == {"/site/altitude"}


def test_the_entry_is_shown_as_entered_and_read_in_the_other_unit(send):
    page = ReadPage(send("/site/eye_level", "3*36.9", base="1").text)

    form = page.form_of("/site/eye_level")
    assert form.values["text"] == "3*36.9"
    assert "= 363.19\u00a0ft" in " ".join(page.text)


def test_a_plain_form_that_stores_goes_back_to_its_field(send, now):
    answer = send("/site/altitude", "99", base="1", htmx=False)

    assert answer.status_code == 303
    assert answer.headers["location"].endswith("/supply#site--altitude")
    assert now().site.altitude.value == 99


@pytest.mark.parametrize(
    ("text", "reason"),
    [
        ("90 psi", "psi is a unit of a pressure"),
        ("12,345", "may be 12345 or 12.345"),
        ("9999", "must be between -400 m and 5000 m"),
        ("high", "cannot be read"),
    ],
)
def test_a_refused_text_stays_in_its_field_with_the_reason(send, now, text, reason):
    answer = send("/site/altitude", text, base="1")

    page = ReadPage(answer.text)
    assert answer.status_code == 422
    assert page.form_of("/site/altitude").values["text"] == text
    assert reason in page.words
    assert "site--altitude--error" in page.ids
    assert now().site.altitude.value == 110


def test_a_refused_plain_form_shows_its_sheet_again_with_everything_else(send):
    answer = send("/site/altitude", "90 psi", base="1", htmx=False)

    page = ReadPage(answer.text)
    assert answer.status_code == 422
    assert "Error: " in answer.text
    assert "There is a problem" in page.words
    assert "#site--altitude" in page.links
    assert page.form_of("/site/altitude").values["text"] == "90 psi"
    assert page.form_of("/site/datum").values["text"] == "Harrowmere town datum"


@pytest.mark.parametrize("base", ["", "none", "99", "1e3"])
def test_an_edit_without_a_real_base_is_428_and_keeps_the_text(send, base):
    answer = send("/site/altitude", "100", base=base)

    assert answer.status_code == 428
    assert ReadPage(answer.text).form_of("/site/altitude").values["text"] == "100"


def test_edits_of_two_people_on_different_fields_are_both_kept(send, now):
    send("/site/altitude", "100", base="1")
    answer = send("/site/datum", "Another datum", base="1")

    assert answer.status_code == 200
    assert "Merged" in answer.text
    assert (now().site.altitude.value, now().site.datum) == (100, "Another datum")


def test_edits_of_two_people_on_one_field_are_409_with_both_values(send, now):
    send("/site/datum", "Theirs", base="1")
    answer = send("/site/datum", "Mine", base="1", was="Harrowmere town datum")

    page = ReadPage(answer.text)
    assert answer.status_code == 409
    assert page.form_of("/site/datum").values["text"] == "Mine"
    assert "Keep mine: Mine" in page.words
    assert "Keep theirs: Theirs" in page.words
    assert now().site.datum == "Theirs"


@pytest.mark.parametrize(("keep", "stands"), [("mine", "Mine"), ("theirs", "Theirs")])
def test_a_conflict_is_settled_by_keeping_one(send, now, keep, stands):
    send("/site/datum", "Theirs", base="1")
    send("/site/datum", "Mine", base="1")
    answer = send("/site/datum", "Mine", base="1", keep=keep)

    assert answer.status_code == 200
    assert ReadPage(answer.text).form_of("/site/datum").values["text"] == stands
    assert now().site.datum == stands


def test_a_field_that_showed_something_else_than_its_base_is_a_conflict(send, now):
    send("/site/datum", "Theirs", base="1")
    # the page knew of revision 2 by another field, but this field still showed the old text
    answer = send("/site/datum", "Mine", base="2", was="Harrowmere town datum")

    assert answer.status_code == 409
    assert now().site.datum == "Theirs"


def test_a_field_that_showed_nothing_and_has_been_filled_is_a_conflict(send, now):
    send("/site/weather_allowance", "1 kPa", base="1")
    answer = send("/site/weather_allowance", "2 kPa", base="2", was="")

    assert answer.status_code == 409
    assert now().site.weather_allowance.value == 1


def test_the_same_value_twice_makes_no_revision(send):
    answer = send("/site/altitude", "110", base="1")

    assert answer.status_code == 200
    assert "Revision 1" in answer.text


def test_a_choice_that_decides_what_is_asked_answers_with_the_content(send, opened):
    answer = send("/supply/kind", "tank", base="1", look="choice")

    page = ReadPage(answer.text)
    assert "content-slot" in page.oob
    assert "/supply/tank/cut_out" in page.paths
    assert "/supply/flow_tests" in page.paths


def test_an_item_is_added_copied_moved_and_removed(send, now):
    path = "/supply/flow_tests"
    answer = send(path, base="1", op="insert")
    first, second, third = (test.id for test in now().supply.flow_tests)
    focus = json.loads(answer.headers["HX-Trigger-After-Settle"])["firmhead:focus"]["id"]
    assert focus == f"supply--flow_tests--{third}"

    send(f"{path}/{third}", base="2", op="move", before=first)
    assert [test.id for test in now().supply.flow_tests] == [third, first, second]

    send(f"{path}/{first}", base="3", op="copy")
    copied = now().supply.flow_tests[2]
    assert copied.id not in (first, second, third)
    assert copied.static_pressure == now().supply.flow_tests[1].static_pressure

    send(f"{path}/{third}", base="4", op="remove")
    assert [test.id for test in now().supply.flow_tests] == [first, copied.id, second]


def test_an_item_that_is_used_is_not_removed_and_says_where(send, now):
    answer = send("/zone/points/pt-h7f2cs", base="1", op="remove", sheet="main-and-zone")

    assert answer.status_code in (409, 422)
    assert "message-slot" in ReadPage(answer.text).oob
    assert len(now().zone.points) == 3


@pytest.mark.parametrize(
    ("op", "path"),
    [
        ("insert", "/site/altitude"),
        ("remove", "/supply/flow_tests"),
        ("sort", "/site/altitude"),
        ("set", "/supply/flow_tests"),
        ("set", "/no/such/field"),
        ("set", ""),
        ("explode", "/site/altitude"),
        ("default", "/site/altitude"),
        ("set", "/supply/flow_tests/ft-zzzzzz/title"),
    ],
)
def test_an_edit_that_cannot_be_is_refused_in_words(send, now, op, path):
    answer = send(path, "x", base="1", op=op)

    assert answer.status_code == 422
    assert "Traceback" not in answer.text
    assert len(ReadPage(answer.text).words) > 10


def test_a_default_is_written_only_with_its_source(send, now):
    send("/site/water_temperature/high", "", base="1")
    answer = send("/site/water_temperature/high", base="2", op="default")

    high = now().site.water_temperature.high
    assert answer.status_code == 200
    assert (high.value, high.unit, high.source.kind) == (20, "degC", "default")
    assert "a default, listed in the memo" in answer.text


def test_a_plain_number_is_read_in_the_unit_that_stood_beside_the_field(send, now):
    send("/site/eye_level", "", base="1")
    send("/site/eye_level", "360", base="2", unit="ft")

    assert (now().site.eye_level.value, now().site.eye_level.unit) == (360, "ft")


def test_the_source_of_a_value_is_set_and_dropped(send, now):
    more = {"look": "source", "source_text": "levels", "source_date": "2026-05-14"}
    send("/site/altitude", base="1", source_kind="survey", **more)
    source = now().site.altitude.source
    assert (source.kind, source.text, source.date) == ("survey", "levels", "2026-05-14")

    send("/site/altitude", base="2", source_kind="", look="source")
    assert now().site.altitude.source is None


def test_undo_and_redo_lead_to_what_they_changed(client, send, demo_id, now):
    send("/site/altitude", "100", base="1")
    back = client.post(
        f"/stations/{demo_id}/undo",
        headers={"Referer": f"http://127.0.0.1/stations/{demo_id}/duty"},
    )
    assert back.status_code == 303
    assert back.headers["location"].endswith("/supply#site--altitude")
    assert now().site.altitude.value == 110

    assert client.post(f"/stations/{demo_id}/redo").status_code == 303
    assert now().site.altitude.value == 100


@pytest.mark.parametrize(("step", "told"), [("undo", "to undo"), ("redo", "to make again")])
def test_nothing_to_undo_is_said_on_the_sheet_it_came_from(client, demo_id, step, told):
    address = f"http://127.0.0.1/stations/{demo_id}/demand"
    answer = client.post(f"/stations/{demo_id}/{step}", headers={"Referer": address})

    assert answer.status_code == 303
    assert f"/stations/{demo_id}/demand?" in answer.headers["location"]
    page = ReadPage(client.get(answer.headers["location"]).text)
    assert f"There is nothing of yours {told}." in page.words
    assert not [link for link in page.links if "said=" in link]


@pytest.mark.parametrize("step", ["undo", "redo"])
def test_the_address_of_a_step_opened_again_leads_to_the_history(client, demo_id, step):
    answer = client.get(f"/stations/{demo_id}/{step}")

    assert answer.status_code == 303
    assert answer.headers["location"].endswith(f"/stations/{demo_id}/history")


def test_undo_and_redo_are_offered_only_when_there_is_something_to_take(
    client, demo_id, opened, send
):
    def offered(page):
        steps = {form.action.rpartition("/")[2] for form in page.forms}
        return steps & {"undo", "redo"}

    assert offered(opened("supply")) == set()
    assert offered(ReadPage(send("/site/altitude", "100", base="1").text)) == {"undo"}
    client.post(f"/stations/{demo_id}/undo")
    assert offered(opened("supply")) == {"redo"}


def test_the_first_set_made_is_proposed_in_the_same_edit(client, send, now, demo_id):
    empty = client.post("/stations", data={"title": "New"}).headers["location"].split("/")[2]
    send("/sets", base="1", op="insert", sheet="sets", station=empty)
    first = now(empty).sets[0].id
    assert now(empty).proposed_set == first
    assert (
        "proposed set" in ReadPage(client.get(f"/stations/{empty}/history").text).words.lower()
    )

    send("/sets", base="2", op="insert", sheet="sets", station=empty)
    assert now(empty).proposed_set == first
    for _ in range(2):
        assert client.post(f"/stations/{empty}/undo").status_code == 303
    assert (now(empty).sets, now(empty).proposed_set) == ((), None)


def test_an_edit_of_no_station_is_404(client):
    assert (
        client.post("/stations/nosuchid/edits", data={"path": "/site/datum"}).status_code == 404
    )


def test_the_fragments_of_an_edit_are_small(send, client, demo_id):
    whole = len(client.get(f"/stations/{demo_id}/supply").text)
    answer = send("/site/altitude", "100", base="1")

    assert len(answer.text) < whole / 3
    assert len(answer.text) < 40_000
