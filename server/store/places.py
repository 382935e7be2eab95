"""The data folder: made if it is not there, tried before the program starts."""

import tempfile
from pathlib import Path

from server.store.problems import StoreRefused


def make_usable(folder: Path) -> None:
    """Make the folder, and write and remove a file in it.

    Raises
    ------
    StoreRefused
        If it is no folder, or cannot be written.
    """
    if folder.exists() and not folder.is_dir():
        raise StoreRefused(f"{folder} is a file; --data names a folder.")
    try:
        folder.mkdir(parents=True, exist_ok=True)
        with tempfile.TemporaryFile(dir=folder):
            pass
    except OSError as problem:
        why = problem.strerror or str(problem)
        raise StoreRefused(
            f"The data folder {folder} cannot be written ({why}); "
            "choose another with --data FOLDER."
        ) from problem
