"""Browser files: ours and those of packages, by the digest of their bytes."""

import gzip
import hashlib

import pytest

from server.resources import folder, package_file
from server.vendor import PACKAGED, own_file, packaged_file

# computed from the package that the project pins: a new file is looked at before it is served
HTMX_SHA256 = "491955cd1810747d7d7b9ccb936400afb760e06d25d53e4572b64b6563b2784e"


def test_htmx_is_the_file_that_was_looked_at():
    plain = packaged_file("htmx.min.js").plain

    assert hashlib.sha256(plain).hexdigest() == HTMX_SHA256
    assert b'version:"2.0.3"' in plain


def test_plotly_is_found_without_importing_it():
    import subprocess
    import sys

    script = (
        "import sys; from server.vendor import packaged_file; packaged_file('plotly.min.js'); "
        "sys.exit('plotly' in sys.modules)"
    )
    assert subprocess.run([sys.executable, "-c", script], check=False).returncode == 0


@pytest.mark.parametrize("name", sorted(PACKAGED))
def test_a_third_party_file_is_served_once_and_for_a_year(client, name):
    found = packaged_file(name)
    address = f"/vendor/{found.digest}/{name}"
    plain = client.get(address, headers={"Accept-Encoding": "identity"})
    squeezed = client.get(address, headers={"Accept-Encoding": "gzip"})

    assert hashlib.sha256(plain.content).hexdigest().startswith(found.digest)
    assert squeezed.content == plain.content  # the client unpacks it
    assert squeezed.headers["Content-Encoding"] == "gzip"
    assert int(squeezed.headers["Content-Length"]) == len(found.squeezed) < len(found.plain) / 2
    assert gzip.decompress(found.squeezed) == found.plain
    assert "immutable" in plain.headers["Cache-Control"]
    assert plain.headers["Content-Type"].startswith("text/javascript")


@pytest.mark.parametrize("name", sorted(path.name for path in folder("static").iterdir()))
def test_each_file_of_ours_is_served(client, name):
    found = own_file(name)
    answer = client.get(f"/static/{found.digest}/{name}")

    assert answer.status_code == 200
    assert answer.content == found.plain
    assert "octet-stream" not in answer.headers["Content-Type"]


@pytest.mark.parametrize(
    "address",
    [
        "/static/0000000000000000/firmhead.css",
        "/static/x/nothing.css",
        "/static/x/..%2Fpyproject.toml",
        "/static/x/.gitignore",
        "/vendor/x/nothing.js",
        "/vendor/x/plotly.min.js",
    ],
)
def test_a_file_that_is_none_of_ours_is_not_found(client, address):
    assert client.get(address).status_code == 404


def test_a_missing_folder_or_package_is_named():
    with pytest.raises(FileNotFoundError, match="no_such_folder"):
        folder("no_such_folder")
    with pytest.raises(FileNotFoundError, match="no_such_package"):
        package_file("no_such_package", "file.js")
    with pytest.raises(FileNotFoundError, match=r"no_such\.js"):
        package_file("plotly", "no_such.js")
