"""The index of checks: each has a test that exists or a reason, and none is forgotten."""

import csv
import importlib
import json
import re
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from types import ModuleType

import pytest

from tests.published.sources import DATA, HEADINGS, Row, source

HERE = Path(__file__).parent
CHECKS = HERE.parents[2] / "shared" / "checks"  # beside the checkout, where it is present
TOPICS = ("hydraulics", "pumps", "demand", "surge", "energy")


@dataclass(frozen=True)
class Entry:
    """One line of the index."""

    check: str
    topic: str
    tests: tuple[str, ...]
    reason: str

    @property
    def key(self) -> tuple[str, str]:
        return self.topic, self.check


@cache
def index() -> tuple[Entry, ...]:
    with (HERE / "index.csv").open(encoding="utf-8", newline="") as file:
        return tuple(
            Entry(line["id"], line["topic"], tuple(line["test"].split()), line["reason"])
            for line in csv.DictReader(file)
        )


@cache
def test_modules() -> dict[str, ModuleType]:
    names = sorted(path.stem for path in HERE.glob("test_*.py") if path.stem != "test_index")
    return {f"{name}.py": importlib.import_module(f"tests.published.{name}") for name in names}


test_modules.__test__ = False  # type: ignore[attr-defined]


@cache
def checks_of_tests() -> dict[str, set[tuple[str, str]]]:
    """Return the checks that each test function runs over, by `file::function`."""
    found: dict[str, set[tuple[str, str]]] = {}
    for file, module in test_modules().items():
        for name, function in vars(module).items():
            if not name.startswith("test_"):
                continue
            rows = found.setdefault(f"{file}::{name}", set())
            for mark in getattr(function, "pytestmark", []):
                if mark.name == "parametrize":
                    values = [getattr(param, "values", (param,))[0] for param in mark.args[1]]
                    rows |= {(v.topic, v.check) for v in values if isinstance(v, Row)}
    return found


def test_every_check_has_a_test_or_a_reason() -> None:
    bare = [entry.key for entry in index() if not entry.tests and not entry.reason.strip()]

    assert bare == []


def test_no_check_is_in_the_index_twice() -> None:
    keys = [entry.key for entry in index()]

    assert sorted(keys) == sorted(set(keys))
    assert {entry.topic for entry in index()} == set(TOPICS)


def test_every_test_named_exists_and_runs_over_its_check() -> None:
    run = checks_of_tests()
    wrong = [
        (entry.key, test)
        for entry in index()
        for test in entry.tests
        if entry.key not in run.get(test, set())
    ]

    assert wrong == []


def test_every_check_that_a_test_runs_over_is_in_the_index_with_that_test() -> None:
    named = {(test, entry.key) for entry in index() for test in entry.tests}
    run = {(test, key) for test, keys in checks_of_tests().items() for key in keys}

    assert run - named == set()


@pytest.mark.parametrize("name", sorted(path.stem for path in DATA.glob("*.csv")))
def test_every_data_file_states_its_source(name: str) -> None:
    heading = source(name).heading

    assert tuple(heading) == HEADINGS
    assert all(value.strip() for value in heading.values())
    assert heading["checks"] in TOPICS
    assert re.search(r"\b(read|computed|recalled|definition)\b", heading["provenance"])
    assert source(name).rows


def test_every_data_file_is_used() -> None:
    text = "".join(Path(str(module.__file__)).read_text() for module in test_modules().values())
    unused = [path.stem for path in DATA.glob("*.csv") if f'"{path.stem}"' not in text]

    assert unused == []


def _ids_in(topic: str) -> set[str]:
    """Return the ids of a file of checks: tables headed `id`, worked examples, numeric rows."""
    found: set[str] = set()
    in_table = False
    for line in (CHECKS / f"{topic}.md").read_text(encoding="utf-8").splitlines():
        first = line.strip().strip("|").split("|")[0].strip()
        if not line.startswith("|"):
            in_table = False
            worked = re.match(r"\*\*(W\d+)\b", line)
            found |= {worked[1]} if worked else set()
        elif first == "id":
            in_table = True
        elif in_table and set(first) - set("-: "):
            found.add(first)
    numeric = CHECKS / f"{topic}.json"
    if numeric.exists():
        found |= {row["id"] for row in json.loads(numeric.read_text(encoding="utf-8"))}
    return found


@pytest.mark.parametrize("topic", TOPICS)
def test_no_check_of_the_shared_files_is_missing_from_the_index(topic: str) -> None:
    listed = {entry.check for entry in index() if entry.topic == topic}
    if not CHECKS.is_dir():
        # a checkout by itself has no shared files: the index stands alone
        assert listed
        return

    assert _ids_in(topic) == listed
