"""What the tests of the memo share: the demo's memo, as blocks and as text."""

import re
from html import unescape

import pytest

from server.memo.to_html import memo_html


@pytest.fixture(scope="session")
def memo(demo):
    return memo_html(demo, "si", "a4")


@pytest.fixture(scope="session")
def words():
    """Return what a reader sees of a page, spaces evened out."""

    def read(page: str) -> str:
        body = page[page.index("<main") :]
        return " ".join(unescape(re.sub(r"<[^>]+>", " ", body)).replace("\u00a0", " ").split())

    return read
