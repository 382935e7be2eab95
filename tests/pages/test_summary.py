"""The Summary: whether the set holds, requirements by horizon, what stands before signing."""

import pytest

from server.studies.assess import assess
from server.studies.findings.answers import answer_key


def text_of(page):
    return " ".join(" ".join(page.text).split())


def test_the_demo_s_summary_says_that_the_set_does_not_hold_and_why(opened):
    text = text_of(opened("summary"))

    assert "does not hold" in text
    assert "119.3\u00a0kPa at the connection" in text or "119.3 kPa at the connection" in text


def test_each_requirement_has_a_verdict_at_each_horizon(opened):
    text = text_of(opened("summary"))

    assert "2027 opening" in text
    assert "2047 design" in text
    assert "2039, supplying main" in text
    assert "33 %, outside" in text.replace("\u00a0", " ")


def test_results_follow_the_units_of_the_address(opened):
    text = text_of(opened("summary", units="us")).replace("\u00a0", " ")

    assert "56.4 for 60.0 L/s" not in text
    assert "894 for 951 gpm" in text


def test_an_empty_station_says_what_is_missing(client, opened):
    answer = client.post("/stations", data={"title": "New works"})
    assert answer.status_code == 303
    station = answer.headers["location"].split("/stations/")[1].split("/")[0]
    text = text_of(opened("summary", station=station))

    assert "No set is proposed yet" in text
    assert "is not checked" in text or "are not checked" in text


def test_a_finding_is_answered_and_stays(send, now, opened, demo):
    finding = assess(demo).findings[0]
    answer = send("/answers", op="answer", item=answer_key(finding), base="1", sheet="summary")
    assert answer.status_code == 200, answer.text[:500]
    (made,) = now().answers
    path = f"/answers/{made.id}/text"
    assert made.finding == answer_key(finding)
    assert (
        send(path, "Storage is studied.", base="2", was="", sheet="summary").status_code == 200
    )

    text = text_of(opened("summary"))
    assert "Storage is studied." in text
    assert "does not hold" in text


@pytest.mark.parametrize("sheet", ["summary", "duty", "memo", "supply"])
def test_a_sheet_has_one_heading_and_unique_ids(opened, sheet):
    page = opened(sheet)

    assert page.headings.count("h1") == 1
    assert len(page.ids) == len(set(page.ids))
