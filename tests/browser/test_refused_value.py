"""A value that is refused stays where it was typed, with the reason; the rest is unharmed."""

import pytest
from playwright.sync_api import expect

from server.units import to_si
from tests.browser.driving import Driver

GAUGE = "/site/suction_gauge_level"
LOW = "/supply/states/low"


def test_a_refused_value_stays_with_its_reason_and_range_also_after_a_reload(
    demo_driver: Driver,
):
    driver, page = demo_driver.open("supply"), demo_driver.page
    altitude = driver.at("/site/altitude")
    before = driver.revision

    altitude.fill("99999")
    driver.refused(422, altitude.press, "Enter")

    refusal = driver.field("/site/altitude").locator(".refusal")
    expect(refusal).to_contain_text("99999")
    said = refusal.inner_text()
    assert "-400 m" in said, said
    assert "5000 m" in said, said
    expect(altitude).to_have_value("99999")
    expect(altitude).to_have_attribute("aria-invalid", "true")
    assert refusal.get_attribute("id") in (altitude.get_attribute("aria-describedby") or "")
    assert driver.revision == before

    driver.enter(driver.at(GAUGE), "110.7")  # another field saves; the refused one stays
    expect(altitude).to_have_value("99999")
    assert driver.stored.site.suction_gauge_level.si == pytest.approx(110.7)
    assert driver.stored.site.altitude.si == 110

    page.reload()
    expect(altitude).to_have_value("99999")
    expect(refusal).to_contain_text("99999")

    driver.enter(altitude, "112")
    expect(refusal).to_have_count(0)
    page.reload()
    expect(altitude).to_have_value("112")
    expect(refusal).to_have_count(0)


def test_a_head_typed_for_a_pressure_is_refused_in_words_that_name_both(demo_driver: Driver):
    driver = demo_driver.open("supply")

    driver.at(LOW).fill("-4 m")
    driver.refused(422, driver.at(LOW).press, "Tab")

    said = driver.field(LOW).locator(".refusal").inner_text()
    assert "head" in said, said
    assert "pressure" in said, said
    expect(driver.at(LOW)).to_have_value("-4 m")
    assert driver.stored.supply.states.low.si == to_si(-40, "kPa")


def test_a_bad_cell_of_a_curve_is_marked_and_kept_and_the_stored_rows_stay(demo_driver: Driver):
    driver, page = demo_driver.open("pumps"), demo_driver.page
    rows = driver.stored.pumps[0].curves[0].table.rows
    cell = page.locator("form.grid").first.get_by_label("Head, row 3", exact=False)

    cell.fill("eighty")
    driver.refused(422, cell.press, "Enter")

    expect(cell).to_have_attribute("aria-invalid", "true")
    said = page.locator("form.grid").first.locator("[role=status]")
    expect(said).to_contain_text("eighty")
    assert driver.stored.pumps[0].curves[0].table.rows == rows

    page.reload()
    expect(cell).to_have_value("eighty")
    expect(said).to_contain_text("eighty")

    cell.fill("81.5")
    driver.saved(cell.press, "Enter")
    expect(said).to_have_text("Saved.")
    assert driver.stored.pumps[0].curves[0].table.rows[2][1] == 81.5
