"""Tables with long names fit beside the margin, and a new name stands in every heading."""

from playwright.sync_api import expect

from server.station.edits import Edit, apply_edits
from server.station.reader import read_station
from tests.browser.driving import Driver
from tests.conftest import DEMO_FILE

LONG = {
    "horizons": "Design horizon, full growth", "fires": "Warehouse, north yard",
    "pumps": "End suction 100-250 main", "legs": "Leg of the main pumps",
    "scenarios": "Maximum day and fire, design, low supply",
}  # fmt: skip
WIDER = """() => [...document.querySelectorAll(".scroll")]
  .filter((e) => e.scrollWidth > e.clientWidth).map((e) => e.getAttribute("aria-labelledby"))"""


def test_rows_of_long_names_are_seen_whole_at_1440(demo_driver: Driver):
    driver, page = demo_driver.without_live_figures(), demo_driver.page
    demo = read_station(DEMO_FILE.read_bytes())
    edits = [
        Edit("set", f"/{name}/{item.id}/title", title)
        for name, title in LONG.items()
        for item in getattr(demo, name)
    ]
    driver.id = driver.live.store.create(apply_edits(demo, edits), "local")

    assert page.viewport_size == {"width": 1440, "height": 900}
    for sheet in ("main-and-zone", "demand", "sets"):
        driver.open(sheet)
        assert page.evaluate(WIDER) == [], sheet


def test_a_new_name_of_a_reach_is_told_in_its_headings_at_once(demo_driver: Driver):
    driver, page = demo_driver.open("main-and-zone"), demo_driver.page
    reach = f"/discharge_main/reaches/{driver.stored.discharge_main.reaches[0].id}"

    driver.enter(driver.at(f"{reach}/title"), "Kiln Lane main")

    expect(page.get_by_role("heading", name="Wall of Kiln Lane main")).to_be_visible()
    expect(page.get_by_text("Fittings of Kiln Lane main")).to_have_count(1)
