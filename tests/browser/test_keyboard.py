"""A sheet is worked by keyboard alone; units of reading are switched without losing a place."""

import pytest
from playwright.sync_api import Page, expect

from server.units import Dimension, shown
from tests.browser.driving import QUIET, Driver
from tests.studies.demo import case_index, solved

ALTITUDE, FLOOR, EYE = "/site/altitude", "/site/floor_level", "/site/eye_level"
FOCUSED = "() => document.activeElement.id"


def focused(page: Page) -> str:
    return str(page.evaluate(FOCUSED))


def test_the_first_tab_offers_the_way_past_the_spine(demo_driver: Driver):
    page = demo_driver.open("supply").page

    page.keyboard.press("Tab")
    expect(page.locator(".skip")).to_be_focused()
    page.keyboard.press("Enter")
    page.keyboard.press("Tab")

    inside = "() => document.getElementById('sheet').contains(document.activeElement)"
    assert page.evaluate(inside)


@pytest.mark.parametrize("sheet", ["supply", "sets"])
def test_tab_reaches_every_field_in_the_order_of_the_sheet(demo_driver: Driver, sheet: str):
    page = demo_driver.open(sheet).page
    visible = page.evaluate(
        "() => [...document.querySelectorAll('main [data-control]')]"
        ".filter((e) => e.checkVisibility() && !e.disabled).map((e) => e.id)"
    )
    last = visible[-1]
    reached: list[str] = []

    for _ in range(6 * len(visible)):
        page.keyboard.press("Tab")
        reached.append(focused(page))
        if reached[-1] == last:
            break

    assert [name for name in reached if name in set(visible)] == visible
    mark = "() => getComputedStyle(document.activeElement).outlineStyle"
    assert page.evaluate(mark) != "none", "where the focus stands is not seen"


def test_enter_saves_and_the_field_keeps_the_focus(demo_driver: Driver):
    driver, page = demo_driver.open("supply"), demo_driver.page
    driver.at(ALTITUDE).focus()
    page.keyboard.press("Control+A")
    page.keyboard.type("113")

    driver.saved(page.keyboard.press, "Enter")

    expect(driver.at(ALTITUDE)).to_be_focused()
    assert driver.stored.site.altitude.si == 113
    # and it goes on from there, without the mouse
    page.keyboard.press("End")
    page.keyboard.type(".5")
    driver.saved(page.keyboard.press, "Enter")
    assert driver.stored.site.altitude.si == 113.5


def test_what_is_typed_on_while_the_last_field_saves_is_not_lost(demo_driver: Driver):
    driver, page = demo_driver.open("supply"), demo_driver.page
    page.route("**/edits", lambda route: (page.wait_for_timeout(150), route.continue_()))
    driver.at(FLOOR).focus()
    for text in ("109.2", "109.9", "110.1"):  # floor, eye and suction gauge, one after another
        page.keyboard.press("Control+A")
        page.keyboard.type(text)
        page.keyboard.press("Tab")

    expect(page.locator("#revision")).to_have_attribute("data-number", "4")
    page.wait_for_function(QUIET)

    site = driver.stored.site
    levels = (site.floor_level.si, site.eye_level.si, site.suction_gauge_level.si)
    assert levels == pytest.approx((109.2, 109.9, 110.1))
    assert focused(page) == "site--discharge_gauge_level"


def test_the_focus_stays_when_a_new_name_redraws_the_sheet(demo_driver: Driver):
    driver, page = demo_driver.open("demand"), demo_driver.page
    title = "/horizons/hz-d8gn4k/title"
    driver.at(title).focus()
    page.keyboard.press("Control+A")
    page.keyboard.type("Design year")

    driver.saved(page.keyboard.press, "Tab")

    expect(page.locator("#scenarios-slot")).to_be_visible()
    assert focused(page) == "horizons--hz-d8gn4k--year"
    expect(driver.at("/scenarios/sc-f2re9k/horizon")).to_contain_text("Design year")


def test_units_of_reading_are_switched_and_go_along_while_values_stay_as_entered(
    demo_driver: Driver,
):
    driver, page = demo_driver, demo_driver.page
    driver.without_live_figures().open("supply", "?case=sc-f2re9k")
    result = solved(driver.stored)
    suction = float(result.suction_pressure[case_index(result, "sc-f2re9k", "low")])
    psi = shown(suction, Dimension.PRESSURE, "us")
    before = driver.stored

    page.get_by_role("link", name="US units").focus()
    page.keyboard.press("Enter")

    expect(page.locator("#strip-slot")).to_contain_text("psi")
    expect(driver.at("/supply/states/low")).to_have_value("-40")
    expect(driver.field("/supply/states/low")).to_contain_text("kPa")
    expect(driver.field("/supply/states/low")).to_contain_text("psi")
    assert "case=sc-f2re9k" in page.url

    page.get_by_role("link", name="Duty").click()
    expect(page.locator("#duty-table thead")).to_contain_text("gpm")
    row = page.locator("#duty-table [data-point=sc-f2re9k]")
    expect(row).to_contain_text(psi)
    assert driver.stored == before

    # an edit made in this view answers in this view
    driver.open("supply", "?units=us&case=sc-f2re9k")
    driver.enter(driver.at("/supply/states/low"), "-5 psi")
    expect(page.locator("#strip-slot")).to_contain_text("psi")
    expect(page.locator("#strip-slot")).not_to_contain_text("kPa")
    assert driver.stored.supply.states.low.unit == "psi"


def test_the_station_can_be_set_to_us_units_for_everybody(demo_driver: Driver):
    driver = demo_driver.without_live_figures().open("summary")
    legend = driver.page.locator("[id='display--units']")
    driver.saved(legend.get_by_role("radio").nth(1).check)

    assert driver.stored.display.units == "us"
    driver.open("duty")
    expect(driver.page.locator("#duty-table thead")).to_contain_text("gpm")
