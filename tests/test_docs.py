"""What the documents say is there, and what is there is said: commands, codes, docstrings."""

import argparse
import ast
import inspect
import re
from collections.abc import Iterator
from pathlib import Path

import pytest

from server.cli import _parser
from server.studies.findings.registry import CODES

ROOT = Path(__file__).parents[1]
README = (ROOT / "README.md").read_text(encoding="utf-8")
DEVELOPERS = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")
LONGEST_FILE = 350  # lines
# arithmetic on any numbers: nothing in them has a unit
NUMERICAL = ("arrays", "piecewise_cubic", "falling_root")
NUMBERS = re.compile(r"array_like|float|ndarray")


def python_files() -> list[Path]:
    return sorted(p for p in (ROOT / "server").rglob("*.py") if "_bundled" not in p.parts)


def text_files() -> Iterator[Path]:
    for folder in ("server", "templates", "static", "seed_demo", "tests", ".ci"):
        for path in sorted((ROOT / folder).rglob("*")):
            if (
                path.is_file()
                and path.suffix not in (".pyc", ".sql")
                and "_bundled" not in path.parts
            ):
                yield path
    yield from (ROOT / "README.md", ROOT / "DEVELOPERS.md", ROOT / "pyproject.toml")


def commands() -> dict[str, argparse.ArgumentParser]:
    (found,) = (a for a in _parser()._actions if isinstance(a, argparse._SubParsersAction))
    return dict(found.choices)


@pytest.mark.parametrize("command", sorted(commands()))
def test_the_readme_names_a_command_with_its_flags(command):
    line = next((x for x in README.splitlines() if x.startswith(f"    firmhead {command}")), "")

    assert line, f"README.md does not say `firmhead {command}`"
    for action in commands()[command]._actions:
        flags = [flag for flag in action.option_strings if flag not in ("-h", "--help")]
        assert not flags or any(flag in line for flag in flags), f"{line} lacks {flags}"


def test_the_readme_names_the_settings_of_the_environment():
    source = (ROOT / "server" / "settings.py").read_text(encoding="utf-8")

    for name in sorted(set(re.findall(r"FIRMHEAD_[A-Z]+", source))):
        assert name in README, f"README.md does not say {name}"


def finding_table() -> str:
    """Return the table of finding codes as DEVELOPERS.md holds it."""
    rows = [f"| `{each.code}` | {each.short} | {each.sheet} |" for each in CODES.values()]
    return "\n".join(["| code | in a few words | sheet |", "|---|---|---|", *rows])


def test_developers_lists_every_finding_code():
    wanted = finding_table()

    assert wanted in DEVELOPERS, f"put this table into DEVELOPERS.md:\n\n{wanted}\n"


def test_the_stack_and_its_layers_are_told():
    for folder in sorted(
        p.name for p in (ROOT / "server").iterdir() if (p / "__init__.py").exists()
    ):
        assert f"server/{folder}/" in DEVELOPERS, f"DEVELOPERS.md does not say server/{folder}/"


@pytest.mark.parametrize("path", python_files(), ids=lambda p: str(p.relative_to(ROOT)))
def test_a_file_says_its_one_job_and_is_not_long(path):
    source = path.read_text(encoding="utf-8")

    assert ast.get_docstring(ast.parse(source)), "no docstring"
    assert len(source.splitlines()) <= LONGEST_FILE


def physics() -> list[tuple[str, ast.FunctionDef, str]]:
    """Return every public function of the physics."""
    found = []
    for path in sorted((ROOT / "server" / "hydraulics").glob("*.py")):
        if path.stem in NUMERICAL:
            continue
        tree = ast.parse(path.read_text(encoding="utf-8"))
        for node in tree.body:
            if isinstance(node, ast.FunctionDef) and not node.name.startswith("_"):
                found.append((f"{path.stem}.{node.name}", node, ast.get_docstring(node) or ""))
    return found


@pytest.mark.parametrize(("name", "node", "text"), physics(), ids=[p[0] for p in physics()])
def test_a_function_of_the_physics_tells_parameters_units_and_refusals(name, node, text):
    arguments = [
        a.arg for a in (*node.args.posonlyargs, *node.args.args, *node.args.kwonlyargs)
    ]
    sections = text.split("\n\n", 1)

    assert sections[0].strip().endswith("."), "the first line is one sentence"
    if arguments:
        assert "Parameters\n---" in text
        for argument in arguments:
            told = re.search(
                rf"^[\w, ]*\b{argument}\b[\w, ]* : *(.*\n(?:    .*\n?|\n)*)", text, re.MULTILINE
            )
            assert told, f"{argument} is not told"
            kind = told[1].splitlines()[0]
            elsewhere = "of bool" in kind or "As the attributes of" in told[1]
            assert not NUMBERS.search(kind) or elsewhere or "[" in told[1], (
                f"{argument}: no unit"
            )
    if any(isinstance(part, ast.Raise) for part in ast.walk(node)):
        assert "Raises\n---" in text


FORBIDDEN = re.compile(
    "|".join(
        (
            "TO" + "DO",
            "FIX" + "ME",
            "NotImplemented" + "Error",
            "lorem " + "ipsum",
            "for " + "now\\b",
        )
    ),
    re.IGNORECASE,
)
PLACES = re.compile(
    "|".join(("/wo" + "rk/", "/ho" + "me/", "seed " + "document", "trans" + "cript"))
)


def test_nothing_is_left_for_later_and_no_place_of_ours_is_named():
    wrong = []
    for path in text_files():
        try:
            text = path.read_text(encoding="utf-8")
        except UnicodeDecodeError:
            continue
        for number, line in enumerate(text.splitlines(), 1):
            if FORBIDDEN.search(line) or PLACES.search(line):
                wrong.append(f"{path.relative_to(ROOT)}:{number}: {line.strip()[:100]}")

    assert wrong == []


def test_the_two_lines_of_the_readme_are_the_ones_that_are_checked():
    run = (ROOT / ".ci" / "run").read_text(encoding="utf-8")

    assert (
        "python3 -m venv .venv && .venv/bin/pip install . && .venv/bin/firmhead serve --demo"
        in README
    )
    assert ".venv/bin/pip install '.[test]' && .venv/bin/pytest" in README
    for part in ("'.[test]'", "serve --demo", '/pytest"'):
        assert part in run


def test_the_version_is_written_once():
    from server import __version__

    assert re.fullmatch(r"\d+\.\d+\.\d+", __version__)
    assert 'dynamic = ["version"]' in (ROOT / "pyproject.toml").read_text(encoding="utf-8")


def test_a_docstring_check_catches_a_bare_function():
    bare = ast.parse(inspect.cleandoc('''
        def head(flow):
            """Return the head."""
            return flow
    ''')).body[0]  # fmt: skip
    assert isinstance(bare, ast.FunctionDef)
    with pytest.raises(AssertionError):
        test_a_function_of_the_physics_tells_parameters_units_and_refusals(
            "bare.head", bare, ast.get_docstring(bare) or ""
        )
