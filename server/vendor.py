"""Serve browser files, ours and those of packages, under the digest of their bytes."""

import gzip
import hashlib
from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path

from fastapi import APIRouter, HTTPException, Request, Response

from server.pages.rights import needs
from server.resources import folder, package_file

# Third-party files are not committed: they come from the packages that carry them.
PACKAGED: dict[str, tuple[str, ...]] = {
    "plotly.min.js": ("plotly", "package_data", "plotly.min.js"),
    "htmx.min.js": ("js_lib_htmx", "static", "htmx", "htmx.min.js"),
}
MEDIA_TYPES = {
    ".css": "text/css; charset=utf-8",
    ".js": "text/javascript; charset=utf-8",
    ".svg": "image/svg+xml",
    ".woff2": "font/woff2",
    ".png": "image/png",
}
YEAR = "public, max-age=31536000, immutable"

router = APIRouter()


@dataclass(frozen=True, slots=True)
class BrowserFile:
    """A file's bytes, squeezed once, and the digest in its address."""

    digest: str
    plain: bytes
    squeezed: bytes
    media_type: str


@lru_cache(maxsize=64)
def _load(path: Path, changed: int) -> BrowserFile:
    plain = path.read_bytes()
    return BrowserFile(
        hashlib.sha256(plain).hexdigest()[:16],
        plain,
        gzip.compress(plain, 6, mtime=0),
        MEDIA_TYPES.get(path.suffix, "application/octet-stream"),
    )


def _read(path: Path) -> BrowserFile:
    # the time of change is part of the key: an edited style sheet is seen without a restart
    return _load(path, path.stat().st_mtime_ns)


@lru_cache(maxsize=8)
def _packaged_path(name: str) -> Path:
    return package_file(*PACKAGED[name])


def packaged_file(name: str) -> BrowserFile:
    """Return a third-party file; KeyError for a name that is not in `PACKAGED`."""
    return _read(_packaged_path(name))


def own_file(name: str) -> BrowserFile:
    """Return a file of `static`; KeyError if there is none of that name."""
    path = folder("static") / name
    if "/" in name or "\\" in name or name.startswith(".") or not path.is_file():
        raise KeyError(name)
    return _read(path)


def _answer(request: Request, found: BrowserFile, digest: str) -> Response:
    if found.digest != digest:
        raise HTTPException(404, "There is no such file; the page that asked is an old one.")
    headers = {"Cache-Control": YEAR, "Vary": "Accept-Encoding"}
    if "gzip" in request.headers.get("accept-encoding", ""):
        headers["Content-Encoding"] = "gzip"
        return Response(found.squeezed, media_type=found.media_type, headers=headers)
    return Response(found.plain, media_type=found.media_type, headers=headers)


@router.get("/vendor/{digest}/{name}", dependencies=[needs("public")])
def vendor_file(request: Request, digest: str, name: str) -> Response:
    """Return a third-party file."""
    if name not in PACKAGED:
        raise HTTPException(404, "There is no such file.")
    return _answer(request, packaged_file(name), digest)


@router.get("/static/{digest}/{name}", dependencies=[needs("public")])
def static_file(request: Request, digest: str, name: str) -> Response:
    """Return one of our own files."""
    try:
        found = own_file(name)
    except KeyError:
        raise HTTPException(404, "There is no such file.") from None
    return _answer(request, found, digest)
