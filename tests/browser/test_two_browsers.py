"""Two people at one station: what does not meet is merged, what meets is shown to both."""

from collections.abc import Callable
from typing import Any

import pytest
from playwright.sync_api import expect

from server.station.edits import Edit
from tests.browser.driving import Driver
from tests.conftest import LiveServer

ALTITUDE, FLOOR, EYE = "/site/altitude", "/site/floor_level", "/site/eye_level"


@pytest.fixture
def two(new_page: Callable[..., Any], live: LiveServer) -> tuple[Driver, Driver]:
    """Open the supply sheet of one station in two browsers."""
    station_id = live.demo_copy()
    first, second = (
        Driver(new_page(name), live, station_id).open("supply") for name in ("first", "second")
    )
    return first, second


def test_edits_of_different_fields_are_both_kept_and_the_second_browser_shows_the_first(two):
    first, second = two

    first.enter(first.at(FLOOR), "109.8")
    second.enter(second.at(EYE), "110.4")

    expect(second.page.locator("#revision")).to_contain_text("Merged")
    expect(second.at(FLOOR)).to_have_value("109.8")
    site = second.stored.site
    assert (site.floor_level.si, site.eye_level.si) == pytest.approx((109.8, 110.4))


def test_a_field_that_was_changed_elsewhere_shows_both_values_and_either_can_be_kept(two):
    first, second = two
    first.enter(first.at(ALTITUDE), "111")
    mine = second.at(ALTITUDE)

    mine.fill("114")
    second.refused(409, mine.press, "Enter")

    said = second.field(ALTITUDE)
    expect(mine).to_have_value("114")
    expect(said.get_by_role("button", name="Keep mine: 114")).to_be_visible()
    expect(said.get_by_role("button", name="Keep theirs: 111 m")).to_be_visible()
    assert second.stored.site.altitude.si == 111

    second.saved(said.get_by_role("button", name="Keep mine").click)
    assert second.stored.site.altitude.si == 114
    expect(mine).to_have_value("114")
    expect(said.get_by_role("button")).to_have_count(0)

    # now the first browser is the one that is behind
    theirs = first.at(ALTITUDE)
    theirs.fill("108")
    first.refused(409, theirs.press, "Enter")
    first.saved(first.field(ALTITUDE).get_by_role("button", name="Keep theirs: 114 m").click)

    expect(theirs).to_have_value("114")
    assert first.stored.site.altitude.si == 114


def test_the_same_value_typed_twice_is_no_conflict(two):
    first, second = two
    first.enter(first.at(ALTITUDE), "111")

    second.enter(second.at(ALTITUDE), "111")

    expect(second.field(ALTITUDE).locator(".refusal")).to_have_count(0)
    assert second.stored.site.altitude.si == 111


def test_an_item_removed_elsewhere_is_said_and_nothing_typed_is_lost(two):
    first, second = two
    test_b = "/supply/flow_tests/ft-b8w4kx"
    first.press("Remove Mill Lane, test B")

    typed = second.at(f"{test_b}/static_pressure")
    typed.fill("344")
    second.refused(409, typed.press, "Enter")

    said = second.page.locator("#message-slot")
    expect(said.or_(second.field(f"{test_b}/static_pressure")).first).not_to_be_empty()
    expect(said).to_contain_text("test B")
    expect(typed).to_have_value("344")


def test_undo_takes_back_only_ones_own_last_edit(two, live: LiveServer):
    mine, _ = two
    mine.enter(mine.at(FLOOR), "109.5")
    others = {"value": 110.2, "unit": "m"}
    number = mine.live.store.load(mine.id).number
    live.store.save(mine.id, [Edit("set", EYE, others)], number, "a colleague")

    mine.saved(mine.page.get_by_role("button", name="Undo").click)

    site = mine.stored.site
    assert (site.floor_level.si, site.eye_level.si) == pytest.approx((110, 110.2))
    expect(mine.at(EYE)).to_have_value("110.2")
    mine.saved(mine.page.get_by_role("button", name="Redo").click)
    assert mine.stored.site.floor_level.si == pytest.approx(109.5)


def test_an_undo_of_what_another_changed_since_is_refused_in_words(two, live: LiveServer):
    mine, _ = two
    mine.enter(mine.at(FLOOR), "109.5")
    others = {"value": 109.1, "unit": "m"}
    number = mine.live.store.load(mine.id).number
    live.store.save(mine.id, [Edit("set", FLOOR, others)], number, "a colleague")

    mine.page.get_by_role("button", name="Undo").click()

    expect(mine.page.get_by_role("alert")).to_contain_text("There is a problem")
    assert mine.stored.site.floor_level.si == pytest.approx(109.1)
    mine.page.watch.forget_refusals()
