"""The JSON API: files in and out, revisions as entity tags, conflicts, one error shape."""

import json
from pathlib import Path

import pytest
from fastapi.testclient import TestClient

from server.station.canonical import canonical_bytes
from server.studies.results_schema import results_adapter

JSON = {"Content-Type": "application/json"}
ERROR_KEYS = {"path", "sheet", "given", "allowed", "sentence"}


@pytest.fixture
def api(app):
    """Return a program that asks, without a browser's headers."""
    with TestClient(app, base_url="http://localhost:8765") as made:
        yield made


@pytest.fixture
def address(api, demo_bytes):
    answer = api.post("/api/stations", content=demo_bytes, headers=JSON)
    assert answer.status_code == 201
    return answer.headers["Location"]


def edit(path, value, **more):
    return {"edits": [{"op": "set", "path": path, "value": value, **more}]}


def errors(answer, status):
    assert answer.status_code == status, answer.text
    assert answer.headers["Content-Type"] == "application/json"
    found = answer.json()["errors"]
    assert set(answer.json()) == {"errors"}
    assert found
    for error in found:
        assert set(error) >= ERROR_KEYS
        assert error["sentence"].endswith((".", "…", "”"))
        assert "Traceback" not in error["sentence"]
    return found


def test_a_station_file_goes_in_and_comes_out_with_the_same_content(api, address, demo):
    answer = api.get(address)

    assert answer.content == canonical_bytes(demo)
    assert answer.headers["ETag"] == '"r1"'


def test_a_file_that_came_out_goes_in_with_the_same_bytes(api, address):
    first = api.get(address).content
    again = api.post("/api/stations", content=first, headers=JSON).headers["Location"]

    assert api.get(again).content == first


def test_the_list_names_the_station(api, address):
    (row,) = api.get("/api/stations").json()["stations"]

    assert address.endswith(row["id"])
    assert (row["title"], row["revision"], row["archived"]) == (
        "Upper Fold booster",
        "r1",
        False,
    )
    assert api.get("/api/stations?archived=true").json() == {"stations": []}


def test_a_known_revision_is_not_sent_again(api, address):
    answer = api.get(address, headers={"If-None-Match": '"r1"'})

    assert (answer.status_code, answer.content) == (304, b"")


def test_an_edit_gives_the_next_revision(api, address):
    answer = api.post(
        f"{address}/edits", json=edit("/identity/title", "A"), headers={"If-Match": '"r1"'}
    )

    assert answer.status_code == 200
    assert (answer.json()["revision"], answer.headers["ETag"]) == ("r2", '"r2"')
    assert api.get(address).json()["identity"]["title"] == "A"
    assert api.get(f"{address}?at=r1").json()["identity"]["title"] == "Upper Fold booster"


def test_edits_are_all_made_or_none(api, address):
    body = {
        "edits": [
            {"op": "set", "path": "/identity/title", "value": "A"},
            {"op": "set", "path": "/identity/nothing", "value": "B"},
        ]
    }
    errors(api.post(f"{address}/edits", json=body, headers={"If-Match": '"r1"'}), 422)

    assert api.get(address).headers["ETag"] == '"r1"'


@pytest.mark.parametrize("verb", ["edits", "put"])
def test_a_write_that_does_not_say_its_revision_is_428(api, address, verb):
    if verb == "edits":
        answer = api.post(f"{address}/edits", json=edit("/identity/title", "A"))
    else:
        answer = api.put(address, content=api.get(address).content, headers=JSON)

    (error,) = errors(answer, 428)
    assert '"r1"' in error["sentence"]


@pytest.mark.parametrize("tag", ['"r9"', "r1", "*", '"x"', '"r0"', '"r99999999999999"'])
def test_a_write_on_a_revision_that_is_none_is_412(api, address, tag):
    answer = api.post(
        f"{address}/edits", json=edit("/identity/title", "A"), headers={"If-Match": tag}
    )

    errors(answer, 412)


def test_edits_of_different_fields_are_merged(api, address):
    first, second = edit("/identity/title", "A"), edit("/identity/place", "B")
    api.post(f"{address}/edits", json=first, headers={"If-Match": '"r1"'})
    answer = api.post(f"{address}/edits", json=second, headers={"If-Match": '"r1"'})

    assert answer.json()["merged"] is True
    identity = api.get(address).json()["identity"]
    assert (identity["title"], identity["place"]) == ("A", "B")


def test_edits_of_one_field_are_409_with_both_values(api, address):
    first, second = edit("/identity/title", "A"), edit("/identity/title", "B")
    api.post(f"{address}/edits", json=first, headers={"If-Match": '"r1"'})
    answer = api.post(f"{address}/edits", json=second, headers={"If-Match": '"r1"'})

    (error,) = errors(answer, 409)
    assert error["path"] == "/identity/title"
    assert error["sheet"] == "summary"
    assert (error["base"], error["yours"], error["theirs"]) == ("Upper Fold booster", "B", "A")


def test_a_whole_file_takes_the_stations_place(api, address):
    document = api.get(address).json()
    document["identity"]["title"] = "Replaced"
    answer = api.put(
        address, content=json.dumps(document), headers={**JSON, "If-Match": '"r1"'}
    )

    assert answer.json()["revision"] == "r2"
    assert api.get(address).json()["identity"]["title"] == "Replaced"


def test_the_revisions_say_what_was_changed(api, address):
    api.post(
        f"{address}/edits", json=edit("/identity/title", "A"), headers={"If-Match": '"r1"'}
    )
    newest, first = api.get(f"{address}/revisions").json()["revisions"]

    assert (newest["revision"], newest["kind"], first["kind"]) == ("r2", "edit", "import")
    assert newest["changes"][0]["path"] == "/identity/title"


def test_the_findings_are_those_of_the_solve(api, address, demo_bytes):
    found = api.get(f"{address}/findings").json()
    solved = api.post("/api/solve", content=demo_bytes, headers=JSON).json()

    assert found["findings"] == solved["findings"]
    assert found["holds"] is solved["holds"] is False
    assert found["revision"] == "r1"


def test_solving_stores_nothing_and_answers_in_the_schema_it_gives(api, demo_bytes):
    answer = api.post("/api/solve", content=demo_bytes, headers=JSON)

    results = results_adapter().validate_json(answer.content)
    assert results["sets"][0]["solved"]
    assert api.get("/api/stations").json() == {"stations": []}


def test_results_have_no_nan_and_every_null_number_has_a_reason(api, demo_bytes):
    document = json.loads(demo_bytes)
    # without NPSH rows and altitude some numbers cannot be had
    for pump in document["pumps"]:
        for curve in pump["curves"]:
            del curve["table"]["units"]["npsh_required"]
            curve["table"]["rows"] = [row[:4] for row in curve["table"]["rows"]]
    del document["site"]["altitude"]
    answer = api.post("/api/solve", content=json.dumps(document), headers=JSON)
    (solved,) = json.loads(answer.content, parse_constant=pytest.fail)["sets"]

    holders = [each for case in solved["cases"] for each in with_numbers(case)]
    absent = [name for holder in holders for name in nulls(holder)]
    assert "npsh_required_m" in absent
    assert "npsh_available_m" in absent
    for holder in holders:
        assert set(holder.get("null_because", {})) == set(nulls(holder))
    assert any(each["path"].startswith("/site/altitude") for each in solved["inputs_missing"])


def with_numbers(case):
    yield case
    for combination in case["combinations"]:
        yield combination
        yield from combination["units"]
        yield from combination["points"]


def nulls(holder):
    named = {"chosen", "fire_point", "out"}
    return [name for name, value in holder.items() if value is None and name not in named]


def test_a_set_that_cannot_be_solved_says_what_is_missing(api, demo_bytes):
    document = json.loads(demo_bytes)
    del document["supply"]["flow_tests"]
    solved = api.post("/api/solve", content=json.dumps(document), headers=JSON).json()

    (answer,) = solved["sets"]
    assert answer["solved"] is False
    assert answer["inputs_missing"]
    assert solved["holds"] is None


def test_an_empty_station_is_solved_to_nothing(api):
    empty = json.dumps({"format": "firmhead-station", "version": 1})
    solved = api.post("/api/solve", content=empty, headers=JSON).json()

    assert solved["sets"] == []
    assert solved["holds"] is None


@pytest.mark.parametrize(
    ("path", "schema"), [("station", "Station"), ("results", "ResultsJson")]
)
def test_a_schema_is_given(api, path, schema):
    answer = api.get(f"/api/schema/{path}").json()

    assert answer["title"] == schema
    assert answer["$schema"].startswith("https://json-schema.org/")


def test_the_station_schema_says_unit_and_range_of_a_field(api):
    answer = api.get("/api/schema/station").json()
    told = answer["$defs"]["Point"]["properties"]["elevation"]

    assert told["x-firmhead"]["dimension"] == "level"
    assert told["x-firmhead"]["units"] == ["m", "ft"]
    assert told["title"] == "Elevation"


def test_the_api_describes_every_address_it_has(api):
    described = api.get("/api/openapi.json").json()

    assert set(described["paths"]) == {
        "/api/stations",
        "/api/stations/{station_id}",
        "/api/stations/{station_id}/edits",
        "/api/stations/{station_id}/revisions",
        "/api/stations/{station_id}/findings",
        "/api/solve",
        "/api/schema/station",
        "/api/schema/results",
    }


@pytest.mark.parametrize(
    ("method", "path", "status"),
    [
        ("GET", "/api", 404),
        ("GET", "/api/nothing", 404),
        ("GET", "/api/stations/nothere1", 404),
        ("GET", "/api/stations/nothere1/revisions", 404),
        ("GET", "/api/stations/nothere1/findings", 404),
        ("DELETE", "/api/stations", 405),
        ("GET", "/api/solve", 405),
        ("GET", "/api/stations?archived=perhaps", 422),
    ],
)
def test_every_refusal_under_api_has_the_one_shape(api, method, path, status):
    errors(api.request(method, path), status)


@pytest.mark.parametrize("at", ["r0", "r99", "x", "-1", "r1e3"])
def test_a_revision_that_is_none_is_404(api, address, at):
    errors(api.get(f"{address}?at={at}"), 404)


@pytest.mark.parametrize(
    "body",
    [b"", b"{", b"[]", b"{}", b'{"edits": 1}', b'{"edits": [1]}', b'{"edits": [], "more": 1}',
     b'{"edits": [{"op": "burn", "path": "/x"}]}', b"\xff\xfe", b"[" * 100_000,
     b'{"edits": [{"op": "set", "path": "/zone", "value": NaN}]}'],
)  # fmt: skip
def test_a_body_that_is_not_edits_is_refused_in_a_sentence(api, address, body):
    headers = {**JSON, "If-Match": '"r1"'}

    errors(api.post(f"{address}/edits", content=body, headers=headers), 422)


def test_content_that_is_not_json_is_415(api, address, demo_bytes):
    answer = api.put(
        address, content=demo_bytes, headers={"Content-Type": "text/plain", "If-Match": '"r1"'}
    )

    errors(answer, 415)


def test_a_body_over_ten_megabytes_is_413(api):
    errors(api.post("/api/solve", content=b"x" * 10_000_001, headers=JSON), 413)
    chunks = iter([b"x" * 1_000_000] * 11)
    errors(api.post("/api/solve", content=chunks, headers=JSON), 413)


def bad_stations():
    folder = Path(__file__).parents[1] / "bad_stations"
    return sorted(folder.glob("*.json"))


@pytest.mark.parametrize("file", bad_stations(), ids=lambda file: file.stem)
def test_a_bad_station_is_refused_alike_by_every_way_in(api, address, file):
    data = file.read_bytes()
    solved = errors(api.post("/api/solve", content=data, headers=JSON), 422)
    made = errors(api.post("/api/stations", content=data, headers=JSON), 422)
    put = errors(api.put(address, content=data, headers={**JSON, "If-Match": '"r1"'}), 422)

    assert solved == made == put
    assert api.get(address).headers["ETag"] == '"r1"'
