"""What htmx could not do fails a browser test: the watch is proved by planted failures."""

import pytest
from playwright.sync_api import Page

from tests.browser.driving import QUIET, Driver

LOST = '<div id="no-such-place" hx-swap-oob="innerHTML">lost</div>'


def test_a_fragment_without_a_place_is_told(page: Page, demo_driver: Driver):
    demo_driver.open("supply")
    page.route("**/edits", lambda route: route.fulfill(body=LOST, content_type="text/html"))

    with page.expect_event("console", lambda said: "htmx:oobErrorNoTarget" in said.text):
        demo_driver.at("/site/altitude").fill("111")
        demo_driver.at("/site/altitude").press("Tab")

    page.wait_for_function(QUIET)
    said = page.watch.console
    page.watch.console = []
    assert any(text.startswith("htmx:oobErrorNoTarget") for text in said)


def test_an_answer_that_never_comes_leaves_what_was_typed_and_is_sent_again(
    page: Page, demo_driver: Driver
):
    demo_driver.open("supply")
    altitude = demo_driver.at("/site/altitude")
    page.route("**/edits", lambda route: route.abort())

    altitude.fill("111.5")
    altitude.press("Enter")
    page.get_by_text("Firmhead does not answer").wait_for()
    assert altitude.input_value() == "111.5"
    page.watch.console = []

    page.unroute("**/edits")
    demo_driver.saved(altitude.press, "Enter")

    assert demo_driver.stored.site.altitude.si == pytest.approx(111.5)
    assert page.get_by_text("Firmhead does not answer").count() == 0
