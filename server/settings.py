"""Settings of a running Firmhead: from flags, then from the environment, then the defaults."""

import os
import sys
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

DEFAULT_PORT = 8765
LOOPBACK_HOSTS = ("127.0.0.1", "localhost", "[::1]")
LARGEST_BODY = 10_000_000  # bytes of one request; a station file may be 8 MB


class SettingRefused(ValueError):
    """A setting that cannot be used; its text names it, the value and what is wanted."""


@dataclass(frozen=True, slots=True)
class Settings:
    """What the application needs to know before it starts."""

    data_folder: Path
    port: int = DEFAULT_PORT
    demo: bool = False
    host: str = "127.0.0.1"  # loopback only: there are no people and no passwords yet
    allowed_hosts: tuple[str, ...] = LOOPBACK_HOSTS


def default_data_folder(environ: Mapping[str, str]) -> Path:
    """Return where stations are kept when nothing is said: the user's own data folder."""
    named = environ.get("XDG_DATA_HOME")
    if named and Path(named).is_absolute():
        return Path(named) / "firmhead"
    if sys.platform == "win32" and environ.get("LOCALAPPDATA"):
        return Path(environ["LOCALAPPDATA"]) / "Firmhead"
    try:
        return Path.home() / ".local" / "share" / "firmhead"
    except RuntimeError:  # an account without a home folder
        return Path.cwd() / "firmhead-data"


def read_settings(
    *,
    port: str | None = None,
    data_folder: str | None = None,
    demo: bool = False,
    environ: Mapping[str, str] | None = None,
) -> Settings:
    """Return the settings: a flag, else FIRMHEAD_PORT and FIRMHEAD_DATA, else the default.

    Raises
    ------
    SettingRefused
        If a value cannot be used.
    """
    environ = os.environ if environ is None else environ
    if port is not None:
        named, text = "--port", port
    else:
        named, text = "FIRMHEAD_PORT", environ.get("FIRMHEAD_PORT") or str(DEFAULT_PORT)
    if not text.isascii() or not text.isdigit() or not 0 <= int(text) <= 65535:
        raise SettingRefused(f"{named} is {text!r}; it must be a whole number from 0 to 65535.")
    chosen = data_folder or environ.get("FIRMHEAD_DATA")
    folder = Path(chosen).expanduser() if chosen else default_data_folder(environ)
    return Settings(data_folder=folder.absolute(), port=int(text), demo=demo)
