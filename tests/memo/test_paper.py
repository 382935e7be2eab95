"""The memo as it prints from the browser."""

import re
import shutil
import subprocess

import pytest

pytestmark = pytest.mark.browser


def pages_of(pdf):
    return len(re.findall(rb"/Type\s*/Page[^s]", pdf))


def boxes_of(pdf):
    return {
        tuple(round(float(n)) for n in box.split()[2:])
        for box in re.findall(rb"/MediaBox\s*\[([^\]]+)\]", pdf)
    }


@pytest.fixture
def printed(page, live):
    def print_memo(station, query=""):
        page.goto(f"/stations/{station}/memo/paper{query}")
        return page.pdf(prefer_css_page_size=True)

    return print_memo


def test_the_memo_prints_on_a4_with_vector_figures(printed, live):
    pdf = printed(live.demo_copy())

    assert 12 <= pages_of(pdf) <= 30
    assert boxes_of(pdf) == {(595, 842)}
    assert b"/Subtype /Image" not in pdf
    assert b"/Subtype/Image" not in pdf


def test_the_memo_prints_on_letter_when_the_station_says_so(printed, live):
    station = live.demo_copy()
    loaded = live.store.load(station)
    from server.station.edits import Edit

    live.store.save(station, (Edit("set", "/display/paper", "letter"),), loaded.number, "local")

    assert boxes_of(printed(station)) == {(612, 792)}


@pytest.mark.skipif(
    shutil.which("pdftotext") is None, reason="pdftotext reads the printed words"
)
def test_pages_are_numbered_and_heads_repeat(printed, live, tmp_path):
    file = tmp_path / "memo.pdf"
    file.write_bytes(printed(live.demo_copy()))
    text = subprocess.run(
        ["pdftotext", "-layout", str(file), "-"], capture_output=True, text=True, check=True
    ).stdout
    sheets = text.split("\f")[:-1]

    assert f"page 1 of {len(sheets)}" in sheets[0]
    assert all(f"page {n} of {len(sheets)}" in sheet for n, sheet in enumerate(sheets, 1))
    assert "does not hold" in sheets[0]
    assert sum("As entered" in sheet for sheet in sheets) >= 3


def test_the_paper_page_is_whole_without_script(new_page, live):
    opened = new_page(java_script_enabled=False)
    opened.goto(f"/stations/{live.demo_copy()}/memo/paper")

    assert opened.locator("figure svg").count() == 3
    assert opened.locator("h1").count() == 1
