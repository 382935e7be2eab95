"""Reading files: whatever the bytes, a station or sentences, never anything else."""

import json

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.station import reader
from server.station.canonical import canonical_bytes
from server.station.faults import BadStation
from server.station.fields import find
from server.station.reader import LARGEST_FILE, read_station, read_stored
from server.station.station import Station
from tests.conftest import DEMO_FILE as DEMO
from tests.strategies import station_trees, whole_stations

HEAD = {"format": "firmhead-station", "version": 1}


def refused(data: bytes) -> tuple[str, ...]:
    with pytest.raises(BadStation) as bad:
        read_station(data)
    return tuple(fault.sentence for fault in bad.value.faults)


def test_a_file_of_8_mb_is_read_and_one_byte_more_is_refused():
    body = json.dumps(HEAD).encode()

    assert read_station(body + b" " * (LARGEST_FILE - len(body))) == Station()
    assert "The file has 8.0 MB" in refused(body + b" " * (LARGEST_FILE + 1 - len(body)))[0]


def test_a_byte_order_mark_is_read_over():
    assert read_station(b"\xef\xbb\xbf" + json.dumps(HEAD).encode()) == Station()


def test_a_document_of_32_levels_is_judged_by_its_content_and_one_more_by_its_depth():
    def nested(levels):
        inner: object = 1
        for _ in range(levels - 1):
            inner = [inner]
        return json.dumps(HEAD | {"deep": inner}).encode()

    assert "deep is not a field" in refused(nested(32))[0]
    assert "more than 32 levels" in refused(nested(33))[0]


def test_a_hand_written_file_may_give_null_for_what_is_not_known():
    tree = HEAD | {"site": {"altitude": None}, "supply": {"kind": None}}

    assert read_station(json.dumps(tree).encode()) == Station()


def test_a_criterion_that_says_nothing_is_left_out():
    tree = HEAD | {"criteria": {"rows": [{"id": "npsh-margin"}]}}

    assert read_station(json.dumps(tree).encode()) == Station()


def test_at_most_a_hundred_faults_are_told():
    tree = HEAD | {"legs": [{"id": f"lg-{n}", "colour": n} for n in range(150)]}

    assert len(refused(json.dumps(tree).encode())) == 100


def test_references_are_not_judged_while_an_item_is_of_the_wrong_shape(demo):
    tree = json.loads(DEMO.read_bytes())
    del tree["zone"]["points"][0]["id"]

    assert refused(json.dumps(tree).encode()) == ("Top Row 31 has no id.",)


def test_stored_bytes_that_this_program_did_not_write_are_read_strictly():
    with pytest.raises(BadStation, match="version 2"):
        read_stored(json.dumps({**HEAD, "version": 2}).encode())
    with pytest.raises(BadStation, match="not JSON"):
        read_stored(b"{")


def test_an_older_stored_version_is_brought_up(monkeypatch):
    def step(tree, version):
        return tree | {"version": 1, "site": {"datum": f"from {version}"}}

    monkeypatch.setattr(reader, "upgraded", step)
    monkeypatch.setattr(reader, "_version", lambda tree: 0)

    assert read_stored(json.dumps({**HEAD, "version": 0}).encode()).site.datum == "from 0"


@settings(deadline=None, max_examples=200)
@given(st.binary(max_size=60))
def test_any_bytes_are_refused_in_sentences(data):
    assert all(sentence.endswith(".") for sentence in refused(data))


_json = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=5),
    lambda inner: (
        st.lists(inner, max_size=3) | st.dictionaries(st.text(max_size=5), inner, max_size=3)
    ),
    max_leaves=10,
)


@whole_stations
@given(station_trees(1), st.data())
def test_a_good_file_with_anything_put_anywhere_is_read_or_refused_with_a_path(tree, data):
    """One member of a good file is replaced by any JSON; the paths are those a page knows."""
    holders = list(_holders(tree))
    holder = data.draw(st.sampled_from(holders))
    key = data.draw(st.sampled_from(sorted(holder)) | st.text(min_size=1, max_size=5))
    holder[key] = data.draw(_json)
    try:
        station = read_station(json.dumps(tree).encode())
    except BadStation as bad:
        for fault in bad.faults:
            parent = fault.path.rpartition("/")[0]
            assert find(fault.path) is not None or find(parent) is not None, fault
    else:
        assert read_station(canonical_bytes(station)) == station


def _holders(value):
    if isinstance(value, dict):
        if value:
            yield value
        for member in value.values():
            yield from _holders(member)
    elif isinstance(value, list):
        for member in value:
            yield from _holders(member)


@pytest.mark.parametrize("key", ["/", "/a", "a/", ""])
def test_a_key_that_cannot_be_in_a_path_is_told_where_it_stands(key):
    tree = json.loads(canonical_bytes(Station()))
    tree["site"] = {key: 1}

    with pytest.raises(BadStation) as bad:
        read_station(json.dumps(tree).encode())
    assert [fault.path for fault in bad.value.faults] == ["/site"]
