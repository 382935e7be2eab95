"""One sentence at every door: bad station files by command line, API and import page."""

import subprocess
import sys
from collections.abc import Iterator
from html.parser import HTMLParser
from pathlib import Path

import pytest
from fastapi.testclient import TestClient

from server.app import create_app
from server.cli import BAD_INPUT, main
from server.settings import Settings
from server.station.faults import BadStation, Fault, errors_json
from server.station.reader import read_station

FOLDER = Path(__file__).parent / "bad_stations"
FILES = sorted(path.name for path in FOLDER.glob("*.json"))
JSON = {"Content-Type": "application/json"}


@pytest.fixture(scope="module")
def doors(tmp_path_factory: pytest.TempPathFactory) -> Iterator[TestClient]:
    """One application for all files: none of them may leave anything in it."""
    app = create_app(Settings(tmp_path_factory.mktemp("data")))
    headers = {"Sec-Fetch-Site": "same-origin"}
    with TestClient(
        app, base_url="http://127.0.0.1", headers=headers, follow_redirects=False
    ) as client:
        yield client


def told(name: str) -> tuple[Fault, ...]:
    with pytest.raises(BadStation) as bad:
        read_station((FOLDER / name).read_bytes())
    return bad.value.faults


class Text(HTMLParser):
    """The text of a page."""

    def __init__(self, page: str) -> None:
        super().__init__()
        self.parts: list[str] = []
        self.feed(page)

    def handle_data(self, data: str) -> None:
        self.parts.append(data)


@pytest.mark.parametrize("name", FILES)
@pytest.mark.parametrize("command", ["solve", "memo"])
def test_the_command_line_says_every_sentence_and_exits_with_2(name, command, tmp_path, capsys):
    out = tmp_path / "out"
    code = main([command, str(FOLDER / name), "-o", str(out)])
    said = capsys.readouterr()

    assert code == BAD_INPUT
    assert said.out == ""
    assert not out.exists()
    lines = said.err.splitlines()
    assert len(lines) == len(told(name))
    for line, fault in zip(lines, told(name), strict=True):
        assert fault.sentence in line
        assert fault.path in line


@pytest.mark.parametrize("name", FILES)
@pytest.mark.parametrize("address", ["/api/solve", "/api/stations"])
def test_the_api_answers_422_with_every_fault_in_the_one_shape(name, address, doors):
    answer = doors.post(address, content=(FOLDER / name).read_bytes(), headers=JSON)

    assert answer.status_code == 422
    assert answer.json() == errors_json(told(name))


@pytest.mark.parametrize("name", FILES)
def test_the_import_page_says_every_sentence_and_stores_nothing(name, doors):
    files = {"file": (name, (FOLDER / name).read_bytes(), "application/json")}
    answer = doors.post("/stations/import", files=files)
    text = "".join(Text(answer.text).parts)

    assert answer.status_code == 422
    assert f"{name} was not taken in" in text
    for fault in told(name):
        assert fault.sentence in text
        assert fault.path in text
    assert "No station yet" in text


def test_a_real_run_of_the_command_shows_no_traceback():
    run = subprocess.run(
        [sys.executable, "-m", "server", "solve", str(FOLDER / "much_too_deep.json")],
        capture_output=True,
        cwd=FOLDER.parents[1],
        text=True,
        timeout=60,
        check=False,
    )

    assert run.returncode == BAD_INPUT
    assert run.stdout == ""
    assert run.stderr.count("\n") == 1
    assert "more than 32 levels deep" in run.stderr
