"""What stands before every route: host names, cross-site requests, headers, our faults."""

import logging

import pytest
from fastapi.testclient import TestClient

from server.pages import problems
from server.security import CONTENT_SECURITY_POLICY

JSON = {"Content-Type": "application/json"}


@pytest.fixture
def bare(app):
    """Return a client that sends no header of a browser."""
    with TestClient(app, base_url="http://127.0.0.1:8765", follow_redirects=False) as made:
        yield made


@pytest.mark.parametrize(
    "host", ["127.0.0.1", "localhost", "localhost:80", "[::1]:8765", "LOCALHOST"]
)
def test_our_own_names_are_answered(bare, host):
    assert bare.get("/healthz", headers={"Host": host}).status_code == 200


@pytest.mark.parametrize(
    "host", ["evil.example", "127.0.0.1.evil.example", "", "[::2]", "localhost.evil"]
)
def test_a_foreign_name_is_refused(bare, host):
    answer = bare.get("/healthz", headers={"Host": host})

    assert answer.status_code == 400
    assert "does not answer to the name" in answer.text


@pytest.mark.parametrize(
    ("headers", "status"),
    [
        ({"Sec-Fetch-Site": "same-origin"}, 405),
        ({"Sec-Fetch-Site": "cross-site", "HX-Request": "true"}, 403),
        ({"Sec-Fetch-Site": "same-site", "Content-Type": "application/json"}, 403),
        ({"Sec-Fetch-Site": "none"}, 403),
        ({"Origin": "http://127.0.0.1:8765"}, 405),
        ({"Origin": "http://127.0.0.1:9999"}, 403),
        ({"Origin": "https://evil.example"}, 403),
        ({"Origin": "null"}, 403),
        ({"HX-Request": "true"}, 405),
        ({"Content-Type": "application/json; charset=utf-8"}, 405),
        ({"Content-Type": "text/plain"}, 403),
        ({"Content-Type": "application/x-www-form-urlencoded"}, 403),
        ({}, 403),
    ],
)
def test_a_change_is_taken_from_our_pages_and_from_programs_only(bare, headers, status):
    """405 says that the request came through: the address itself takes no POST."""
    assert bare.post("/healthz", headers=headers).status_code == status


@pytest.mark.parametrize("path", ["/healthz", "/api/nothing", "/nothing", "/api/openapi.json"])
def test_every_answer_says_what_its_page_may_load(bare, path):
    headers = bare.get(path).headers

    assert headers["Content-Security-Policy"] == CONTENT_SECURITY_POLICY
    assert headers["X-Content-Type-Options"] == "nosniff"
    assert headers["Cache-Control"] == "no-cache"


def test_the_policy_lets_nothing_in_from_elsewhere():
    assert "http" not in CONTENT_SECURITY_POLICY
    assert "unsafe" not in CONTENT_SECURITY_POLICY
    assert "default-src 'none'" in CONTENT_SECURITY_POLICY


@pytest.mark.parametrize("path", ["/docs", "/redoc", "/openapi.json"])
def test_no_page_that_loads_a_script_from_outside_is_served(bare, path):
    assert bare.get(path).status_code == 404


@pytest.mark.parametrize(
    ("method", "path", "status", "words"),
    [
        ("GET", "/nothing", 404, "There is no page at this address."),
        ("DELETE", "/healthz", 405, "does not take that kind of request"),
        ("GET", "/stations/nothere1/summary", 404, "There is no"),
    ],
)
def test_a_person_is_told_in_a_page_with_a_way_back(client, method, path, status, words):
    answer = client.request(method, path)

    assert answer.status_code == status
    assert answer.headers["Content-Type"].startswith("text/html")
    assert answer.text.count("<h1>") == 1
    assert words in answer.text
    assert 'href="/stations"' in answer.text


def test_what_was_asked_for_is_never_markup_in_the_answer(bare):
    answer = bare.get("/healthz", headers={"Host": "<script>alert(1)</script>"})

    assert "<script>alert" not in answer.text


@pytest.mark.parametrize("path", ["/api/stations", "/healthz"])
def test_a_fault_of_ours_is_a_sentence_and_no_traceback(app, monkeypatch, caplog, path):
    def broken(*arguments, **more):
        raise RuntimeError("a secret of ours")

    monkeypatch.setattr(app.state.store, "list_stations", broken)
    with (
        caplog.at_level(logging.ERROR, "firmhead"),
        TestClient(app, base_url="http://localhost") as browser,
    ):
        answer = browser.get(path)

    assert answer.status_code == 500
    assert "fault of the program" in answer.text
    assert "secret" not in answer.text
    assert "Traceback" not in answer.text
    assert answer.headers["Content-Security-Policy"] == CONTENT_SECURITY_POLICY
    assert "a secret of ours" in caplog.text


def test_everything_works_under_a_prefix(app, demo_bytes):
    with TestClient(app, base_url="http://localhost", root_path="/pumps") as browser:
        made = browser.post("/api/stations", content=demo_bytes, headers=JSON)
        assert made.headers["Location"].startswith("/pumps/api/stations/")
        page = browser.get("/nothing")

    assert 'href="/pumps/stations"' in page.text
    assert 'src="/pumps/vendor/' in page.text
    assert 'href="/pumps/static/' in page.text


def test_what_begins_like_the_api_is_a_page():
    class Asked:
        def __init__(self, path, prefix=""):
            self.scope = {"path": path, "root_path": prefix}

    asked = [
        Asked("/api"),
        Asked("/api/x"),
        Asked("/p/api/x", "/p"),
        Asked("/apis"),
        Asked("/"),
    ]
    assert [problems.is_api(each) for each in asked] == [True, True, True, False, False]
