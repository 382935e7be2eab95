"""The `firmhead` command: called where it only computes, started where it serves."""

import json
import os
import signal
import socket
import subprocess
import sys
import urllib.request
from pathlib import Path

import pytest

from server import __version__
from server.cli import main
from server.studies.results_schema import results_adapter
from tests.conftest import DEMO_FILE

BAD = Path(__file__).parent / "bad_stations"


def run(capsys, *arguments):
    code = main([str(each) for each in arguments])
    printed = capsys.readouterr()
    return code, printed.out, printed.err


def changed(tmp_path, change):
    document = json.loads(DEMO_FILE.read_text(encoding="utf-8"))
    change(document)
    file = tmp_path / "changed.json"
    file.write_text(json.dumps(document), encoding="utf-8")
    return file


def test_the_version_is_that_of_the_program(capsys):
    with pytest.raises(SystemExit) as stopped:
        main(["--version"])

    assert stopped.value.code == 0
    assert capsys.readouterr().out == f"firmhead {__version__}\n"


def test_no_command_prints_the_help_and_is_bad_input(capsys):
    code, out, _ = run(capsys)

    assert code == 2
    for command in ("serve", "solve", "memo", "schema"):
        assert command in out


def test_solve_prints_the_duty_table_and_the_findings(capsys):
    code, out, err = run(capsys, "solve", DEMO_FILE)

    assert (code, err) == (0, "")
    assert "Minimum night, opening" in out
    assert "P1 + P2 + P3" in out
    assert "L/s" in out
    assert out.count("Does not meet:") == 2
    assert "Not checked:" in out
    assert "licensed engineer" in out
    assert "nan" not in out.lower()
    assert max(map(len, out.splitlines())) < 200


def test_solve_prints_us_units_when_the_station_is_shown_in_them(capsys, tmp_path):
    file = changed(tmp_path, lambda document: document.update(display={"units": "us"}))
    _, out, _ = run(capsys, "solve", file)

    assert "gpm" in out
    assert "psi" in out
    assert "L/s" not in out


def test_solve_under_strict_exits_1_when_something_does_not_meet(capsys):
    assert run(capsys, "solve", DEMO_FILE, "--strict")[0] == 1


def test_solve_under_strict_exits_1_when_something_is_only_not_checked(capsys, tmp_path):
    def empty(document):
        for key in [key for key in document if key not in ("format", "version")]:
            del document[key]

    code, out, _ = run(capsys, "solve", changed(tmp_path, empty), "--strict")

    assert code == (1 if "Not checked:" in out else 0)


def test_solve_writes_the_results_that_the_api_answers(capsys, tmp_path, client):
    out_file = tmp_path / "results.json"
    assert run(capsys, "solve", DEMO_FILE, "-o", out_file)[0] == 0
    answer = client.post(
        "/api/solve",
        content=DEMO_FILE.read_bytes(),
        headers={"Content-Type": "application/json"},
    )

    assert out_file.read_bytes() == answer.content
    results_adapter().validate_json(out_file.read_bytes())


def test_a_station_with_an_unsolvable_set_says_which_input_is_missing(capsys, tmp_path):
    def without_tests(document):
        del document["supply"]["flow_tests"]

    code, out, _ = run(capsys, "solve", changed(tmp_path, without_tests))

    assert code == 0
    assert "not solved" in out
    assert "/supply/flow_tests" in out


def test_an_empty_station_is_solved_without_a_word_of_python(capsys, tmp_path):
    file = tmp_path / "empty.json"
    file.write_text('{"format": "firmhead-station", "version": 1}')
    code, out, err = run(capsys, "solve", file)

    assert (code, err) == (0, "")
    assert "None" not in out


@pytest.mark.parametrize("command", [["solve"], ["memo", "-o", "memo.html"]])
@pytest.mark.parametrize(
    ("content", "phrase"), [(b"", "empty"), (b"{", "not JSON"), (b"[]", "not a station")]
)
def test_a_bad_file_is_refused_with_2_and_a_sentence(
    capsys, tmp_path, monkeypatch, command, content, phrase
):
    monkeypatch.chdir(tmp_path)
    file = tmp_path / "bad.json"
    file.write_bytes(content)
    code, out, err = run(capsys, command[0], file, *command[1:])

    assert (code, out) == (2, "")
    assert phrase in err
    assert "Traceback" not in err
    assert not Path("memo.html").exists()


@pytest.mark.parametrize("file", sorted(BAD.glob("*.json")), ids=lambda file: file.stem)
def test_a_bad_station_is_refused_with_the_sentences_of_the_api(capsys, client, file):
    code, out, err = run(capsys, "solve", file)
    answer = client.post(
        "/api/solve", content=file.read_bytes(), headers={"Content-Type": "application/json"}
    )

    assert (code, out) == (2, "")
    for error in answer.json()["errors"]:
        assert error["sentence"] in err


def test_a_file_that_is_not_there_is_refused(capsys, tmp_path):
    code, _, err = run(capsys, "solve", tmp_path / "none.json")

    assert code == 2
    assert "none.json cannot be read: No such file or directory." in err


def test_a_folder_in_place_of_a_file_is_refused(capsys, tmp_path):
    assert run(capsys, "solve", tmp_path)[0] == 2
    code, _, err = run(capsys, "solve", DEMO_FILE, "-o", tmp_path)

    assert code == 2
    assert "cannot be written" in err


def test_memo_writes_a_page_that_needs_no_other(capsys, tmp_path):
    file = tmp_path / "memo.html"
    code, out, err = run(capsys, "memo", DEMO_FILE, "-o", file)
    page = file.read_text(encoding="utf-8")

    assert (code, out, err) == (0, "", "")
    assert page.startswith("<!doctype html>")
    assert "Upper Fold booster" in page
    assert "does not hold" in page
    assert "<svg" in page
    assert "src=" not in page
    assert "<link" not in page


@pytest.mark.parametrize(("flags", "title"), [([], "Station"), (["--results"], "ResultsJson")])
def test_schema_prints_a_schema(capsys, flags, title):
    code, out, _ = run(capsys, "schema", *flags)

    assert code == 0
    assert json.loads(out)["title"] == title


def serve(*arguments, **environment):
    return subprocess.Popen(
        [sys.executable, "-m", "server", "serve", *arguments],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
        encoding="utf-8",
        env={**os.environ, **environment},
    )


def test_serve_says_its_address_loads_the_demo_once_and_stops_when_told(tmp_path):
    for _ in range(2):
        with serve("--port", "0", "--demo", "--data", str(tmp_path / "data")) as process:
            address = process.stdout.readline().split()[3]
            folder = process.stdout.readline()
            with urllib.request.urlopen(f"{address}api/stations", timeout=20) as answer:
                stations = json.load(answer)["stations"]
            process.send_signal(signal.SIGINT)
            _, err = process.communicate(timeout=20)

        assert address.startswith("http://127.0.0.1:")
        assert str(tmp_path / "data") in folder
        assert sorted(row["title"] for row in stations) == [
            "Low Works to Beacon reservoir",
            "Upper Fold booster",
        ]
        assert process.returncode == 0
        assert "Traceback" not in err


def refusal(*arguments, **environment):
    with serve(*arguments, **environment) as process:
        out, err = process.communicate(timeout=20)
    assert (process.returncode, out) == (2, "")
    assert len(err.splitlines()) == 1
    return err


def test_serve_says_that_a_port_is_taken(tmp_path):
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        port = taken.getsockname()[1]
        err = refusal("--port", str(port), "--data", str(tmp_path))

    assert f"Port {port} is taken" in err
    assert "--port" in err


def test_serve_says_that_a_folder_cannot_be_used(tmp_path):
    (tmp_path / "file").write_text("")

    assert "is a file" in refusal("--port", "0", "--data", str(tmp_path / "file"))
    assert "FIRMHEAD_PORT" in refusal("--data", str(tmp_path), FIRMHEAD_PORT="no")


def test_solving_imports_neither_the_web_nor_the_database():
    script = (
        "import sys; from server.cli import main; main(['solve', sys.argv[1]]); "
        "print([n for n in ('fastapi', 'sqlalchemy', 'uvicorn', 'plotly') if n in sys.modules])"
    )
    done = subprocess.run(
        [sys.executable, "-c", script, str(DEMO_FILE)],
        capture_output=True, text=True, encoding="utf-8", check=True,
    )  # fmt: skip

    assert done.stdout.splitlines()[-1] == "[]"
