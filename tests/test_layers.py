"""The one-way arrows of DEVELOPERS.md: what each layer may import, in whatever form."""

import ast
from collections.abc import Iterator
from pathlib import Path

import pytest

SERVER = Path(__file__).parents[1] / "server"

# Each layer with the layers that it may import; then the packages beside the standard library.
BELOW: dict[str, tuple[str, ...]] = {
    "units": (),
    "station": ("units",),
    "hydraulics": (),
    "studies": ("hydraulics", "station", "units"),
    "store": ("station", "units"),
    "figures": ("studies", "hydraulics", "station", "units"),
    "memo": ("figures", "studies", "hydraulics", "station", "units", "resources"),
    "resources": (),
    "top": (
        "memo",
        "figures",
        "studies",
        "hydraulics",
        "store",
        "station",
        "units",
        "resources",
    ),
}
PACKAGES: dict[str, frozenset[str]] = {
    "units": frozenset(),
    "station": frozenset({"pydantic", "pydantic_core"}),
    "hydraulics": frozenset({"numpy", "scipy"}),
    "studies": frozenset({"numpy", "scipy", "pydantic", "typing_extensions"}),
    "store": frozenset({"sqlalchemy"}),
    "figures": frozenset({"numpy", "scipy"}),
    "memo": frozenset({"numpy"}),
    "resources": frozenset(),
    "top": frozenset(
        {
            "fastapi",
            "starlette",
            "uvicorn",
            "jinja2",
            "markupsafe",
            "pydantic",
            "numpy",
            "orjson",
        }
    ),
}
# single modules that belong to a layer though they stand beside it
MODULES = {"units": "units", "entry_text": "units", "resources": "resources", "pages": "top"}
STANDARD = frozenset(__import__("sys").stdlib_module_names)


def layer_of(module: str) -> str:
    """Return the layer of a full module name that begins with server."""
    name = module.split(".")[1] if "." in module else ""
    return name if name in BELOW else MODULES.get(name, "top")


def imported(source: str, module: str, *, is_package: bool = False) -> Iterator[str]:
    """Return the full names that a module imports, relative ones resolved."""
    package = module.split(".") if is_package else module.split(".")[:-1]
    for node in ast.walk(ast.parse(source)):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            base = package[: len(package) - node.level + 1] if node.level else []
            name = ".".join([*base, *([node.module] if node.module else [])])
            # `from server import store` names a module, not something in one
            yield from (
                f"{name}.{alias.name}" if name == "server" else name for alias in node.names
            )
        elif isinstance(node, ast.Call):
            called = (
                node.func.attr
                if isinstance(node.func, ast.Attribute)
                else getattr(node.func, "id", "")
            )
            first = node.args[0] if node.args else None
            if called in ("import_module", "__import__") and isinstance(first, ast.Constant):
                yield str(first.value)


def violations(source: str, module: str, *, is_package: bool = False) -> list[str]:
    """Return what a module imports against the arrows."""
    layer = layer_of(module)
    wrong = []
    for name in imported(source, module, is_package=is_package):
        top = name.split(".")[0]
        if top == "server":
            # the version of the program is no layer
            if name in ("server", "server.__version__"):
                continue
            other = layer_of(name)
            allowed = other == layer or other in BELOW[layer]
        else:
            allowed = top in STANDARD or top in PACKAGES[layer]
        if not allowed:
            wrong.append(f"{module} imports {name}")
    return wrong


def modules() -> list[tuple[str, Path]]:
    return [
        (".".join(["server", *path.relative_to(SERVER).with_suffix("").parts]), path)
        for path in sorted(SERVER.rglob("*.py"))
        if "_bundled" not in path.parts
    ]


def test_no_module_imports_against_the_arrows():
    wrong = [
        found
        for name, path in modules()
        for found in violations(
            path.read_text(encoding="utf-8"),
            name.removesuffix(".__init__"),
            is_package=path.name == "__init__.py",
        )
    ]

    assert wrong == []


@pytest.mark.parametrize("layer", sorted(BELOW))
def test_every_layer_has_modules(layer):
    assert any(layer_of(name) == layer for name, _ in modules())


def test_the_arrows_have_no_circle():
    for layer, below in BELOW.items():
        for other in below:
            assert layer not in BELOW[other], f"{layer} and {other} know each other"


@pytest.mark.parametrize(
    ("module", "source"),
    [
        ("server.hydraulics.friction", "from server.station.station import Station"),
        ("server.hydraulics.friction", "import server.units"),
        ("server.hydraulics.friction", "import pydantic"),
        ("server.hydraulics.friction", "def f():\n    from ..studies import duty"),
        ("server.studies.duty", "from server import store"),
        ("server.studies.duty", "from .. import store"),
        ("server.studies.duty", "from ..store import store"),
        ("server.studies.duty", "from ..pages.sheet import open_sheet"),
        ("server.studies.duty", "import sqlalchemy.orm"),
        ("server.studies.findings.words", "from ...figures import chart"),
        (
            "server.station.paths",
            "from importlib import import_module\nimport_module('server.store')",
        ),
        ("server.store.store", "import fastapi"),
        ("server.store.store", "from server.studies.assess import assess"),
        ("server.figures.chart", "import plotly"),
        ("server.memo.book", "from server.pages import links"),
        ("server.units", "from server.station import entry"),
        ("server.entry_text", "from server.station import entry"),
    ],
)
def test_a_planted_violation_is_caught(module, source):
    assert violations(source, module) != []


def test_a_package_resolves_its_relative_imports_from_itself():
    assert list(imported("from .paths import get", "server.station", is_package=True)) == [
        "server.station.paths"
    ]
    assert violations("from ..pages import links", "server.station", is_package=True) != []


def test_what_is_allowed_passes():
    assert (
        violations("from server.units import View\nimport numpy as np", "server.studies.duty")
        == []
    )
    assert violations("from server import __version__", "server.memo.book") == []
