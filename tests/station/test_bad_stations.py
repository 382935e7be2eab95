"""Files that are not good stations: each is refused with a path and a sentence.

`tests/bad_stations/expected.csv` names for each file a path and a phrase of the sentence; a
file with several faults has several rows. `tests/test_bad_stations_everywhere.py` takes the
same files through the command line, the API and the import page.
"""

import csv
from pathlib import Path

import pytest

from server.station.faults import BadStation, errors_json
from server.station.fields import SHEET_TITLES, find
from server.station.reader import read_station

FOLDER = Path(__file__).parents[1] / "bad_stations"
with (FOLDER / "expected.csv").open(encoding="utf-8", newline="") as _lines:
    EXPECTED = [(row["file"], row["path"], row["phrase"]) for row in csv.DictReader(_lines)]


def faults_of(name):
    with pytest.raises(BadStation) as bad:
        read_station((FOLDER / name).read_bytes())
    return bad.value.faults


@pytest.mark.parametrize(("name", "path", "phrase"), EXPECTED)
def test_a_bad_station_is_refused_where_and_why(name, path, phrase):
    told = [(fault.path, fault.sentence) for fault in faults_of(name)]

    assert any(where == path and phrase in sentence for where, sentence in told), told


@pytest.mark.parametrize("name", sorted({name for name, _, _ in EXPECTED}))
def test_what_is_told_of_a_bad_station_is_fit_for_a_person(name):
    for fault in faults_of(name):
        assert fault.sentence.endswith(".")
        assert fault.allowed
        assert len(fault.sentence) < 400
        assert not {"Traceback", "pydantic", "validation error"} & set(fault.sentence.split())
        assert fault.sheet == "" or fault.sheet in SHEET_TITLES
        if find(fault.path) is not None and fault.path:
            assert fault.sheet == find(fault.path).sheet


def test_no_fault_is_told_that_is_not_expected():
    """The lists are closed: a good part of a bad file draws no sentence."""
    rows = {name: [r for r in EXPECTED if r[0] == name] for name, _, _ in EXPECTED}

    assert {n: len(faults_of(n)) for n in rows} == {n: len(e) for n, e in rows.items()}


def test_every_bad_file_is_expected_and_there_are_at_least_thirty():
    files = {path.name for path in FOLDER.glob("*.json")}

    assert files == {name for name, _, _ in EXPECTED}
    assert len(files) >= 30


def test_errors_have_one_shape():
    told = errors_json(faults_of("too_high.json"))

    assert told == {
        "errors": [
            {
                "path": "/zone/points/pt-top/elevation",
                "sheet": "main-and-zone",
                "given": "90000 m",
                "allowed": "-450 m to 9000 m",
                "sentence": "Elevation of Hilltop 4 must be between -450 m and 9000 m; 90000 m "
                "was given.",
            }
        ]
    }
