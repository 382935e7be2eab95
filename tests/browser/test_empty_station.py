"""An empty station filled by hand, field by field, until its duty is solved.

The station is invented (ours): Kiln Rise, three equal pumps on a street main, a closed zone.
The expected numbers are those of the duty study on the same document, and the flow and pressure
that were typed.
"""

import csv
import io
from collections.abc import Mapping

import pytest
from playwright.sync_api import Page, expect

from server.station.paths import path_of
from server.studies.duty import duty
from server.studies.duty_result import DutyResult
from server.studies.limits import limits_of
from server.units import Dimension, shown
from tests.browser.driving import Driver
from tests.conftest import LiveServer

SITE = {
    "/site/altitude": "64 m",
    "/site/datum": "Harrowmere town datum",
    "/site/floor_level": "64",
    "/site/eye_level": "64.6",
    "/site/suction_gauge_level": "64.6",
    "/site/discharge_gauge_level": "64.9",
    "/supply/connection_level": "65",
    "/supply/title": "Kiln Lane street main",
}
FLOW_TEST = {
    "gauge_level": "65",
    "static_pressure": "300",
    "residual_pressure": "34.8 psi",
    "test_flow": "108 m3/h",
    "station_draw": "0",
}
SUCTION = {"length": "12", "bore": "200", "k": "2*0.75 + 1"}
MAIN = {"length": "600", "bore": "250", "k": "5"}
WALL = {"roughness/new": "0.1", "roughness/aged": "0.5"}
CRITICAL = {
    "title": "Kiln Row 12",
    "elevation": "98",
    "required_pressure": "200",
    "loss/loss": "2",
    "loss/at_flow": "18",
}
LOWEST = {
    "title": "Clay Gate",
    "role": "lowest customer",
    "elevation": "80",
    "highest_pressure": "700",
}
HORIZON = {
    "year": "2045",
    "demand/average_day": "6",
    "demand/maximum_day": "10",
    "demand/peak_hour": "18",
    "demand/minimum_night": "1.5",
}
LEG = {
    "suction_branch/bore": "125",
    "suction_branch/k": "1",
    "discharge_branch/bore": "100",
    "discharge_branch/k": "4.2",
}
# as copied from a spreadsheet: flow, head, efficiency, shaft power, NPSH required
CURVE = """Flow\tHead\tEfficiency\tShaft power\tNPSH required
0\t48\t0\t2.9\t1.6
3\t47.2\t38\t\t1.7
6\t44.9\t61\t\t1.9
9\t40.8\t71\t\t2.3
12\t34.6\t69\t\t3
15\t26.2\t57\t\t4.1"""
SLOTS = "P1\tduty\tKiln pump\nP2\tduty\tKiln pump\nP3\tstandby\tKiln pump"


def fill(driver: Driver, base: str, typed: Mapping[str, str]) -> None:
    for name, text in typed.items():
        driver.enter(driver.at(f"{base}/{name}" if base else name), text)


def add(driver: Driver, button: str, within: str = "#content-slot") -> str:
    """Add an item by its button and return its path: its first field has the focus."""
    driver.saved(driver.page.locator(within).get_by_role("button", name=button).click)
    driver.page.wait_for_function("() => document.activeElement.matches('[data-control]')")
    focused = driver.page.evaluate("() => document.activeElement.id")
    return path_of(focused).rpartition("/")[0]


def paste(page: Page, text: str) -> None:
    """Paste into what has the focus, as from a spreadsheet."""
    page.evaluate(
        """(text) => {
          const data = new DataTransfer();
          data.setData("text/plain", text);
          const how = {clipboardData: data, bubbles: true, cancelable: true};
          document.activeElement.dispatchEvent(new ClipboardEvent("paste", how));
        }""",
        text,
    )


def make(page: Page, live: LiveServer) -> Driver:
    page.goto("/")
    page.get_by_label("Name of the station").fill("Kiln Rise booster")
    page.get_by_role("button", name="Make it").click()
    page.wait_for_url("**/supply")
    return Driver(page, live, page.url.split("/")[-2])


def fill_supply(driver: Driver) -> None:
    fill(driver, "", SITE)
    offered = driver.field("/site/water_temperature/normal").get_by_role(
        "button", name="Use 10"
    )
    driver.saved(offered.click)
    driver.choose("Kind of supply", "a main with flow tests")
    test = add(driver, "Add a flow test")
    fill(driver, test, FLOW_TEST)
    fill(driver, "/supply/states", {"low": "-25", "normal": "0", "high": "25"})
    reach = add(driver, "Add a reach")
    fill(driver, reach, SUCTION | WALL)


def fill_zone(driver: Driver) -> str:
    driver.open("main-and-zone")
    reach = add(driver, "Add a reach")
    fill(driver, reach, MAIN | WALL)
    driver.choose("Kind of zone", "closed: no tank on the zone")
    critical = add(driver, "Add a point")
    fill(driver, critical, CRITICAL)
    fill(driver, add(driver, "Add a point"), LOWEST)
    return critical


def fill_pumps(driver: Driver) -> None:
    driver.open("pumps")
    pump = add(driver, "Add a pump")
    fill(driver, pump, {"title": "Kiln pump", "kind": "end suction", "speed": "2900"})
    page = driver.page
    if page.locator("form.grid").count() == 0:
        driver.press("Add a curve")
    page.locator("form.grid input[name=cell]").first.focus()
    driver.saved(paste, page, CURVE)


def fill_set(driver: Driver) -> str:
    driver.open("sets")
    fill(driver, add(driver, "Add a leg"), {"title": "Leg"} | LEG)
    new = add(driver, "Add a set")
    page = driver.page
    box = page.locator("details.paste", has_text="role").last
    box.locator("summary").click()
    box.get_by_role("textbox").fill(SLOTS)
    driver.saved(box.get_by_role("button", name="Store these rows").click)
    for row in page.locator(f"table[data-list='{new}/slots'] tbody tr").all():
        driver.enter(row.get_by_label(", leg"), "Leg")
    control = f"{new}/control"
    driver.enter(driver.at(f"{control}/kind"), "hold the pressure at a point of the zone")
    driver.enter(driver.at(f"{control}/pressure"), "200")
    driver.enter(driver.at(f"{control}/point"), "Kiln Row 12")
    fill(driver, control, {"lowest_speed": "55", "highest_speed": "100"})
    return new


@pytest.fixture
def by_hand(page: Page, live: LiveServer) -> Driver:
    """Fill an empty station through its sheets, in the order of the spine."""
    driver = make(page, live)
    fill_supply(driver)
    fill_zone(driver)
    driver.open("demand")
    fill(driver, add(driver, "Add a horizon"), {"title": "Design"} | HORIZON)
    driver.press("Add the usual scenarios")
    fill_pumps(driver)
    fill_set(driver)
    return driver


def test_an_empty_station_typed_in_by_hand_is_solved_and_its_duty_is_shown(by_hand: Driver):
    driver, page = by_hand, by_hand.page
    station = driver.stored
    # what was typed is what is stored, in SI
    assert station.supply.flow_tests[0].test_flow.si == pytest.approx(0.030)
    assert station.supply.flow_tests[0].residual_pressure.si == pytest.approx(
        239_937.6, rel=1e-5
    )
    assert station.suction_line.reaches[0].k == 2.5
    assert station.site.water_temperature.normal.si == 10
    assert len(station.pumps[0].curves[0].table.rows) == 6
    assert [slot.role for slot in station.sets[0].slots] == ["duty", "duty", "standby"]

    result = duty(station, station.sets[0].id, limits_of(station))
    assert isinstance(result, DutyResult), result

    # each row of the sheet says what the study says of the scenario's own state
    driver.open("duty")
    page.wait_for_function("() => document.documentElement.dataset.figures")
    answer = page.context.request.get(f"/stations/{driver.id}/tables/duty.csv")
    rows = list(csv.reader(io.StringIO(answer.text().removeprefix("\ufeff"))))
    solved = 0
    for c, case in enumerate(result.cases):
        if not result.shown[c]:
            continue
        row = page.locator(f"#duty-table [data-point={case.scenario}]")
        k = int(result.chosen[c])
        told = row.inner_text().replace("\u00a0", " ")
        for value, dimension in (
            (result.flow[c, k], Dimension.FLOW),
            (result.station_head[c, k], Dimension.HEAD),
        ):
            assert shown(float(value), dimension, "si") in told, told
        solved += bool(result.set_point_held[c, k])
    assert len(rows) > solved >= 5
    peak = next(
        c
        for c, case in enumerate(result.cases)
        if result.shown[c] and result.demand[c] == pytest.approx(0.018)
    )
    k = int(result.chosen[peak])
    # the set point and the demand that were typed are met
    assert result.held_pressure[peak, k] == pytest.approx(200_000, abs=1)
    assert result.flow[peak, k] == pytest.approx(0.018, rel=1e-6)
    expect(page.locator("#strip-slot svg")).to_be_visible()
    driver.open("summary")
    expect(page.locator("#content-slot .lead")).to_contain_text("hold")


def test_what_stands_in_the_way_of_the_duty_is_a_link_to_its_field(demo_driver: Driver):
    driver, page = demo_driver, demo_driver.page
    for sheet, path in (
        ("pumps", "/pumps/pu-m5x8qd/speed"),
        ("main-and-zone", "/discharge_main/reaches/rc-d1f5my/bore"),
    ):
        driver.open(sheet).enter(driver.at(path), "")

    driver.open("duty")
    links = page.locator("#content-slot ul.plain a")
    expect(links).to_have_count(2)
    for link in links.all():
        there = link.get_attribute("href") or ""
        other = page.context.request.get(there)
        assert f'id="{there.partition("#")[2]}"' in other.text(), there
    links.first.click()
    expect(page.locator(":target")).to_be_visible()
