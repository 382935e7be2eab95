"""The list of stations: made, taken in, given out, copied, renamed, put away, refused."""

import re
from pathlib import Path

import pytest

from tests.pages.page_reader import ReadPage

BAD = sorted((Path(__file__).parents[1] / "bad_stations").glob("*.json"))


def made(client, title="Trial", units="si"):
    answer = client.post("/stations", data={"title": title, "units": units})
    assert answer.status_code == 303
    return answer.headers["location"].split("/")[-2]


def test_the_root_leads_to_the_list(client):
    assert client.get("/").headers["location"].endswith("/stations")


def test_a_new_station_opens_where_the_work_begins(client):
    answer = client.post("/stations", data={"title": "  Trial  station ", "units": "us"})

    assert answer.headers["location"].endswith("/supply")
    station = answer.headers["location"].split("/")[-2]
    body = client.get(f"/stations/{station}/file").json()
    assert body["identity"]["title"] == "Trial station"
    assert body["criteria"]["profile"] == "us_municipal"
    assert body["display"] == {"units": "us", "paper": "letter"}


def test_a_station_without_a_name_is_not_made(client):
    answer = client.post("/stations", data={"title": "  "})

    assert answer.status_code == 422
    assert "Enter a name" in answer.text


def test_a_station_file_goes_out_and_in_with_the_same_bytes(client, demo_id, demo_bytes):
    out = client.get(f"/stations/{demo_id}/file")
    assert "upper-fold-booster.json" in out.headers["content-disposition"]

    answer = client.post("/stations/import", files={"file": ("x.json", out.content)})
    assert answer.status_code == 303
    again = answer.headers["location"].split("/")[-2]
    assert client.get(f"/stations/{again}/file").content == out.content == demo_bytes


def test_every_bad_file_is_refused_in_sentences_and_nothing_is_kept(client):
    assert len(BAD) >= 30
    for file in BAD:
        answer = client.post("/stations/import", files={"file": (file.name, file.read_bytes())})
        page = ReadPage(answer.text)

        assert answer.status_code == 422, file.name
        assert f"{file.name} was not taken in" in page.words
        assert "Nothing was stored" in page.words
        assert "No station yet" in page.words


@pytest.mark.parametrize("files", [None, {"file": ("", b"")}], ids=["none", "unnamed"])
def test_an_import_without_a_file_says_so(client, files):
    answer = client.post("/stations/import", files=files)

    assert answer.status_code == 422
    assert "traceback" not in answer.text.lower()


def test_a_station_is_copied_with_its_content(client, demo_id):
    client.post(f"/stations/{demo_id}/copy")

    assert "Upper Fold booster (copy)" in client.get("/stations").text


def test_a_station_is_renamed_and_cannot_lose_its_name(client, demo_id):
    assert client.post(f"/stations/{demo_id}/rename", data={"title": "New"}).status_code == 303
    assert client.post(f"/stations/{demo_id}/rename", data={"title": " "}).status_code == 422
    assert (
        client.post(f"/stations/{demo_id}/rename", data={"title": "x" * 400}).status_code == 422
    )

    assert ">New</a>" in client.get("/stations").text


def test_an_archived_station_is_kept_and_can_be_read_but_not_changed(client, demo_id):
    client.post(f"/stations/{demo_id}/archive", data={"away": "1"})

    assert "Upper Fold" not in client.get("/stations").text
    assert "Upper Fold" in client.get("/stations?archived=1").text
    page = client.get(f"/stations/{demo_id}/supply")
    assert "This station is archived" in page.text
    edit = {"path": "/site/datum", "text": "x", "base": "1"}
    assert client.post(f"/stations/{demo_id}/edits", data=edit).status_code == 422

    client.post(f"/stations/{demo_id}/archive", data={"away": "0"})
    assert "Upper Fold" in client.get("/stations").text
    assert client.post(f"/stations/{demo_id}/edits", data=edit).status_code == 303


@pytest.mark.parametrize("action", ["copy", "rename", "archive", "undo", "redo", "restore"])
def test_an_action_on_no_station_is_404(client, action):
    answer = client.post(f"/stations/nosuchid/{action}", data={"title": "x", "number": "1"})

    assert answer.status_code == 404


@pytest.mark.parametrize("sheet", ["summary", "supply", "history", "file", "supply/sources"])
def test_a_page_of_no_station_is_404_with_a_sentence(client, sheet):
    answer = client.get(f"/stations/nosuchid/{sheet}")

    assert answer.status_code == 404
    assert "There is no such station" in answer.text


def test_a_station_without_a_name_is_refused_and_its_units_stay_chosen(client):
    answer = client.post("/stations", data={"title": " ", "units": "us"})

    assert answer.status_code == 422
    assert re.search(r'value="us"[^>]* checked', answer.text)
