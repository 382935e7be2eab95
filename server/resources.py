"""Folders that lie beside pyproject.toml in a checkout and inside the package in a wheel."""

import importlib.util
from pathlib import Path

_PACKAGE = Path(__file__).resolve().parent


def folder(name: str) -> Path:
    """Return the folder `templates`, `static` or `seed_demo`, wherever it is installed.

    An editable install leaves a stale copy of the folders in site-packages; going by this
    file's own place finds the checkout then.

    Raises
    ------
    FileNotFoundError
        If the folder is in neither place.
    """
    for candidate in (_PACKAGE / "_bundled" / name, _PACKAGE.parent / name):
        if candidate.is_dir():
            return candidate
    raise FileNotFoundError(f"{name}: neither bundled in {_PACKAGE} nor beside it")


def package_file(package: str, *parts: str) -> Path:
    """Return a data file of an installed package, found without importing that package.

    Raises
    ------
    FileNotFoundError
        If the package or the file is not installed.
    """
    spec = importlib.util.find_spec(package)
    if spec is None or not spec.submodule_search_locations:
        raise FileNotFoundError(f"package {package} is not installed")
    path = Path(next(iter(spec.submodule_search_locations))).joinpath(*parts)
    if not path.is_file():
        raise FileNotFoundError(str(path))
    return path
