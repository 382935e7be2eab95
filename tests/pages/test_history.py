"""History: changes in words, revisions grouped, seen, compared, restored; sources."""

from datetime import UTC, datetime, timedelta

import pytest

from server.pages.history import grouped, shown_value
from server.store.revisions import RevisionRow
from tests.pages.page_reader import ReadPage


def row(number: int, minutes: float, author: str = "local") -> RevisionRow:
    made = datetime(2026, 1, 1, tzinfo=UTC) + timedelta(minutes=minutes)
    return RevisionRow(number, number - 1, "", author, made, "edit", (), None)


def test_revisions_of_one_author_within_ten_minutes_stand_together():
    rows = [row(5, 40), row(4, 32, "other"), row(3, 31), row(2, 22), row(1, 20.9)]

    assert [[r.number for r in group] for group in grouped(rows)] == [[5], [4], [3, 2], [1]]


def test_a_change_is_told_with_both_values_and_leads_to_its_field(opened, send):
    send("/zone/points/pt-t3r8nw/elevation", "512 ft", base="1", sheet="main-and-zone")
    page = opened("history")

    assert "Main and zone, Top Row 31, elevation : 156 m → 512 ft" in page.words.replace(
        "\u00a0", " "
    )
    assert any(
        link.endswith("/main-and-zone#zone--points--pt-t3r8nw--elevation")
        for link in page.links
    )


def test_items_added_and_removed_are_told_by_name(opened, send):
    send("/supply/flow_tests/ft-b8w4kx", base="1", op="copy")
    send("/supply/flow_tests/ft-b8w4kx", base="2", op="remove")
    words = opened("history").words

    assert "Site and supply, flow test Mill Lane, test B, copy: added" in words
    assert "Site and supply, flow test Mill Lane, test B: removed" in words


def test_an_old_revision_is_restored_as_a_new_one(client, demo_id, send, now):
    send("/site/datum", "Other", base="1")
    assert client.post(f"/stations/{demo_id}/restore", data={"number": "1"}).status_code == 303

    assert now().site.datum == "Harrowmere town datum"
    assert "Restored: revision 1" in client.get(f"/stations/{demo_id}/history").text
    assert "Revision 3" in client.get(f"/stations/{demo_id}/history").text


def test_restoring_what_stands_already_says_so(client, demo_id, send):
    answer = client.post(f"/stations/{demo_id}/restore", data={"number": "1"})
    page = ReadPage(client.get(answer.headers["location"]).text)

    assert "holds the same as the newest one, so nothing was changed" in page.words
    assert "Revision 2" not in page.words


@pytest.mark.parametrize("number", ["99", "x", ""])
def test_restoring_what_is_not_there_says_so(client, demo_id, number):
    answer = client.post(f"/stations/{demo_id}/restore", data={"number": number})

    assert answer.status_code in (404, 422)


def test_two_revisions_stand_side_by_side(client, demo_id, send):
    send("/site/datum", "Other", base="1")
    send("/legs", base="2", op="insert", sheet="sets")
    leading = client.get(f"/stations/{demo_id}/compare", params={"left": "1", "right": "3"})
    page = ReadPage(client.get(leading.headers["location"]).text)

    assert "2 differences" in page.words
    assert "Harrowmere town datum Other" in page.words
    assert page.headings.count("h1") == 1


@pytest.mark.parametrize("pair", ["1..99", "99..1", "x..1"])
def test_comparing_what_is_not_there_is_refused(client, demo_id, pair):
    assert client.get(f"/stations/{demo_id}/history/{pair}").status_code in (404, 422)


@pytest.mark.parametrize(
    ("path", "value", "words"),
    [
        ("/site/altitude", {"value": 110.0, "unit": "m"}, "110\u00a0m"),
        ("/site/altitude", {"value": 55.5, "unit": "m", "typed": "3*18.5"}, "3*18.5\u00a0m"),
        ("/site/altitude", None, "empty"),
        ("/supply/kind", "main", "a main with flow tests"),
        ("/supply/bypass/fitted", False, "none"),
        ("/proposed_set", "st-v3a7pe", "Three mains, standby, jockey"),
        ("/proposed_set", "st-zzzzzz", "an item since removed"),
        ("/sets/st-v3a7pe/slots/sl-p1d4fg/curve", "cu-m1a2bc", "212 mm impeller"),
        ("/demands/daily_pattern/values", [1.0] * 24, "24 numbers"),
        ("/pumps/pu-m5x8qd/curves/cu-m1a2bc/table", {"units": {}, "rows": [[0, 1]]}, "1 row"),
    ],
)
def test_a_stored_value_is_told_in_a_few_words(demo, path, value, words):
    assert shown_value(demo, path, value) == words


def test_the_sources_of_a_sheet_are_listed_and_saved_one_by_one(opened, send):
    page = opened("supply/sources")
    form = page.form_of("/site/altitude")
    assert form.values["source_kind"] == "survey"
    assert form.values["source_text"] == "site levels, sheet 3"

    answer = send("/site/altitude", base="1", look="source", source_kind="", source_text="x")
    assert answer.status_code == 422
    assert "Choose what kind of source" in answer.text

    answer = send(
        "/site/altitude", base="1", look="source", source_kind="office", source_text="x"
    )
    assert ReadPage(answer.text).oob == ["site--altitude--said", "revision"]


def test_a_revision_with_many_changes_counts_those_it_does_not_list(opened, send):
    rows = "\n".join(f"Test {n}\t10" for n in range(9))
    send("/supply/flow_tests", base="1", op="paste", columns="title test_flow", rows=rows)
    page = opened("history")

    assert "and 3 more changes" in page.words
    assert any(link.endswith("/history/1..2") for link in page.links)
