"""The Memo sheet, the paper page, its stylesheet and its one-file form."""


def test_the_sheet_has_names_paper_and_the_way_to_the_memo(client, demo_id):
    answer = client.get(f"/stations/{demo_id}/memo")

    assert answer.status_code == 200
    for name in (
        "memo--issue",
        "memo--date",
        "memo--prepared",
        "memo--checked",
        "memo--approved",
    ):
        assert f'id="{name}"' in answer.text
    assert f"/stations/{demo_id}/memo/paper" in answer.text


def test_the_paper_page_carries_its_own_stylesheet(client, demo_id):
    answer = client.get(f"/stations/{demo_id}/memo/paper")
    css = client.get(f"/stations/{demo_id}/memo/page.css")

    assert "/memo/page.css" in answer.text
    assert "style=" not in answer.text
    assert css.headers["content-type"].startswith("text/css")
    assert "size:A4" in css.text


def test_issue_and_names_reach_the_paper(client, demo_id, send):
    assert send("/memo/issue", "B", base="1", was="", sheet="memo").status_code == 200
    assert (
        send("/memo/prepared", "R. Example", base="2", was="", sheet="memo").status_code == 200
    )
    paper = client.get(f"/stations/{demo_id}/memo/paper").text

    assert "Issue B" in paper
    assert "R. Example" in paper
    assert "Issue B" in client.get(f"/stations/{demo_id}/memo/page.css").text


def test_the_file_is_the_memo_that_needs_no_other(client, demo_id):
    answer = client.get(f"/stations/{demo_id}/memo/file")

    assert "attachment" in answer.headers["content-disposition"]
    assert "<link" not in answer.text
    assert "does not hold" in answer.text


def test_an_old_revision_has_its_own_memo(client, demo_id, send):
    assert send("/identity/title", "Another name", base="1", was="Upper Fold booster",
                sheet="summary").status_code == 200  # fmt: skip

    assert "Another name" in client.get(f"/stations/{demo_id}/memo/paper").text
    assert "Upper Fold booster" in client.get(f"/stations/{demo_id}/memo/paper?at=r1").text


def test_the_memo_of_an_empty_station_opens(client):
    answer = client.post("/stations", data={"title": "New works"})
    station = answer.headers["location"].split("/stations/")[1].split("/")[0]

    assert client.get(f"/stations/{station}/memo").status_code == 200
    assert "No set is proposed yet" in client.get(f"/stations/{station}/memo/paper").text
