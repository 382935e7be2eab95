"""From the demo through a changed input to the printed memo, as a first user goes.

Sources: expected figures are those of the duty study on the document that the pages stored.
"""

import json
import os
import re
import shutil
import subprocess
from pathlib import Path
from typing import Any

import pytest
from playwright.sync_api import Page, expect

from server.studies.duty_result import DutyResult
from server.units import Dimension, from_si, shown
from tests.browser.driving import Driver
from tests.studies.demo import case_index, solved

FIRE = "sc-f2re9k"  # maximum day and fire, design: the scenario with the short suction
NIGHT = "sc-n1gh7a"
LOW, FLOW = "/supply/states/low", "/fires/fr-f6c1rs/flow"
A4, LETTER = (595, 842), (612, 792)  # points


def studied(driver: Driver) -> DutyResult:
    """Return the duty of the document as stored."""
    return solved(driver.stored)


def slots(page: Page) -> dict[str, str]:
    """Return what stands round and in a sheet, to be compared with a page loaded anew."""
    names = ("spine", "revision", "strip", "scenarios", "margin", "next", "content")
    return {name: page.locator(f"#{name}-slot").inner_text() for name in names}


def test_an_input_in_another_unit_is_followed_by_all_that_depends_on_it(demo_driver: Driver):
    driver, page = demo_driver, demo_driver.page
    driver.open("supply", f"?case={FIRE}")
    page.evaluate("() => { window.sameDocument = true; }")
    places = ("#margin-slot", "#strip-slot", "#supply-figure")
    before = {place: page.locator(place).inner_html() for place in places}
    expect(page.locator("#margin-slot")).to_contain_text("128.9 kPa")
    expect(page.locator("#strip-slot")).to_contain_text("129 kPa")

    driver.enter(driver.at(LOW), "-8 psi")

    stored = driver.stored.supply.states.low
    assert stored.si == pytest.approx(-8 * 6894.757, rel=1e-6)
    assert (stored.value, stored.unit) == (-8, "psi")
    result = studied(driver)
    case = case_index(result, FIRE, "low")
    suction = float(result.suction_pressure[case])
    assert suction == pytest.approx(128_900 - 8 * 6894.757 + 40_000, abs=300)
    expect(driver.at(LOW)).to_have_value("-8")
    expect(driver.field(LOW)).to_contain_text("psi")
    expect(driver.field(LOW)).to_contain_text(shown(stored.si, Dimension.PRESSURE, "si"))
    finding = shown(suction, Dimension.PRESSURE, "si", 1)
    expect(page.locator("#margin-slot")).to_contain_text(f"{finding}\u00a0kPa")
    expect(page.locator("#strip-slot")).to_contain_text(
        f"{shown(suction, Dimension.PRESSURE, 'si', 0)}\u00a0kPa"
    )
    expect(page.locator("#revision")).to_contain_text("Revision 2")
    for place in places:
        assert page.locator(place).inner_html() != before[place], place
    assert page.evaluate("() => window.sameDocument") is True
    put_in_place = slots(page)
    page.reload()
    assert slots(page) == put_in_place


def test_a_larger_fire_moves_the_scenario_row_and_the_drawn_figure(demo_driver: Driver):
    driver, page = demo_driver, demo_driver.page
    driver.open("demand", f"?case={FIRE}")
    page.evaluate("() => { window.sameDocument = true; }")
    fire = page.locator(f"[data-scenario={FIRE}]")
    night = page.locator(f"[data-scenario={NIGHT}]")
    expect(fire).to_contain_text("60.0 L/s")
    night_before = night.inner_text()

    driver.enter(driver.at(FLOW), "700 gpm")

    result = studied(driver)
    case = case_index(result, FIRE, "low")
    flow = float(result.demand[case])
    assert flow == pytest.approx(0.020 + 700 * 3.785411784e-3 / 60)
    expect(fire).to_contain_text(f"{shown(flow, Dimension.FLOW, 'si')}\u00a0L/s")
    expect(page.locator("#strip-slot")).to_contain_text("kPa")
    assert night.inner_text() == night_before
    assert page.evaluate("() => window.sameDocument") is True
    put_in_place = slots(page)
    page.reload()
    assert slots(page) == put_in_place

    # the duty: its table, the figure's data, and the curves that were really drawn
    page.get_by_role("link", name="Duty").click()
    page.wait_for_function("() => document.documentElement.dataset.figures")
    row = page.locator(f"#duty-table [data-point={FIRE}]")
    expect(row).to_contain_text(shown(flow, Dimension.FLOW, "si"))
    data = json.loads(page.locator("#data-duty").text_content() or "")
    drawn = page.evaluate(
        "() => document.getElementById('fig-duty').data.map((t) => [t.customdata, t.x, t.y])"
    )
    sent = [[trace.get("customdata"), trace["x"], trace["y"]] for trace in data["data"]]
    points = [trace for trace in sent if trace[0]]
    assert points
    assert [trace for trace in drawn if trace[0]] == points
    assert len(drawn) == len(sent)
    at = points[0][0].index(FIRE)
    assert points[0][1][at] == pytest.approx(from_si(flow, "L/s"), abs=0.01)
    chosen = result.chosen[case]
    assert points[0][2][at] == pytest.approx(float(result.station_head[case, chosen]), abs=0.01)


# ---- the memo on paper


def tool(name: str) -> str:
    found = shutil.which(name)
    if found is None:
        reason = f"{name} not found; apt-get install poppler-utils"
        if os.environ.get("CI"):
            pytest.fail(reason)
        pytest.skip(reason)
    return found


def said(*command: str | Path) -> str:
    return subprocess.run(command, check=True, capture_output=True, text=True).stdout


def printed(page: Page, station_id: str, to: Path) -> tuple[str, dict[str, str]]:
    """Print the paper page as the browser's own print command does; return text and facts."""
    page.goto(f"/stations/{station_id}/memo/paper")
    page.pdf(path=to, prefer_css_page_size=True, tagged=True, outline=True)
    info = said(tool("pdfinfo"), to)
    facts = dict(line.split(":", 1) for line in info.splitlines() if ":" in line)
    return said(tool("pdftotext"), "-layout", to, "-"), facts


def size(facts: dict[str, str]) -> tuple[int, int]:
    width, height = re.findall(r"[\d.]+", facts["Page size"])[:2]
    return round(float(width)), round(float(height))


@pytest.fixture
def paper(tmp_path: Path) -> Path:
    return tmp_path / "memo.pdf"


def test_the_memo_prints_on_both_papers_with_its_verdict_pages_and_vector_figures(
    demo_driver: Driver, paper: Path
):
    driver, page = demo_driver, demo_driver.page
    driver.open("supply").enter(driver.at(LOW), "-8 psi")
    suction = float(studied(driver).suction_pressure.min())

    text, facts = printed(page, driver.id, paper)

    pages = text.rstrip("\f").split("\f")
    count = int(facts["Pages"])
    assert size(facts) == A4
    assert facts["Tagged"].strip() == "yes"
    assert len(pages) == count > 3
    for number, of in enumerate(pages, 1):
        assert f"page {number} of {count}" in " ".join(of.split())
    first = " ".join(pages[0].split())
    assert "does not hold" in first
    assert f"{shown(suction, Dimension.PRESSURE, 'si', 1)} kPa" in first.replace("\u00a0", " ")
    assert "8 psi" in text.replace("\u00a0", " ")
    assert said(tool("pdfimages"), "-list", paper).splitlines()[2:] == []
    # a figure's own words are text, not a picture; and no number of it is without meaning
    assert "Top Row 31" in text
    assert not re.search(r"\bnan\b|\binf\b|\bNone\b|undefined", text)

    # the inputs take several pages: every one of them repeats the head of its table
    head = re.compile(r"^\s*Input\s+As entered\s+Source", re.MULTILINE)
    broken = [of for of in pages if head.match(of)]
    assert len(broken) >= 2, "no table goes on from one page to the next"

    driver.open("memo")
    driver.choose("Paper", "Letter")
    text, facts = printed(page, driver.id, paper)

    assert size(facts) == LETTER
    assert f"page 1 of {int(facts['Pages'])}" in " ".join(text.split())
    assert "does not hold" in " ".join(text.split("\f")[0].split())


def test_nothing_of_the_program_is_printed_with_the_memo(demo_driver: Driver, paper: Path):
    text, _ = printed(demo_driver.page, demo_driver.id, paper)

    for word in ("Back to the station", "Save as one file", "Undo"):
        assert word not in text


def test_the_saved_memo_stands_alone(demo_driver: Driver, new_page: Any, tmp_path: Path):
    page = demo_driver.open("memo").page
    with page.expect_download() as told:
        page.get_by_role("link", name="Save it as one file").click()
    alone = tmp_path / "memo.html"
    told.value.save_as(alone)

    other = new_page("offline")
    asked: list[str] = []
    other.on("request", lambda request: asked.append(request.url))
    other.goto(alone.as_uri())

    assert asked == [alone.as_uri()]
    other.watch.outside = []
    expect(other.locator("h1")).to_have_count(1)
    expect(other.locator("body")).to_contain_text("does not hold")
    assert other.locator("figure svg").count() >= 3
