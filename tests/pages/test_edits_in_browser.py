"""Fields that save themselves, in a browser: nothing typed is lost, whatever happens."""

from collections.abc import Callable
from typing import Any

import pytest

pytestmark = pytest.mark.browser

DATUM = "#site--datum"
ALTITUDE = "#site--altitude"
PASTE = """text => {
  const data = new DataTransfer();
  data.setData('text/plain', text);
  const how = {clipboardData: data, bubbles: true, cancelable: true};
  document.activeElement.dispatchEvent(new ClipboardEvent('paste', how));
}"""


@pytest.fixture
def station(live: Any) -> str:
    return live.demo_copy()


@pytest.fixture
def supply(page: Any, station: str) -> Any:
    page.goto(f"/stations/{station}/supply")
    return page


def revision(page: Any, number: int) -> None:
    page.wait_for_function(
        "n => document.getElementById('revision').dataset.number === String(n)", arg=number
    )


def posts(page: Any) -> list[str]:
    sent: list[str] = []
    page.on("request", lambda r: sent.append(r.post_data or "") if r.method == "POST" else None)
    return sent


def test_a_field_saves_itself_and_the_strip_follows(supply, live, station):
    before = supply.locator("#strip-slot").inner_html()
    supply.fill("#supply--states--low", "-60")
    supply.press("#supply--states--low", "Tab")
    revision(supply, 2)

    assert live.store.load(station).station.supply.states.low.value == -60
    assert supply.locator("#strip-slot").inner_html() != before


def test_enter_saves_once_and_leaves_the_focus(supply):
    sent = posts(supply)
    supply.fill(ALTITUDE, "120 m")
    supply.press(ALTITUDE, "Enter")
    revision(supply, 2)
    supply.wait_for_timeout(100)

    assert len(sent) == 1
    assert supply.evaluate("() => document.activeElement.id") == "site--altitude"
    assert supply.input_value(ALTITUDE) == "120"


def test_a_refused_text_outlives_a_reload_and_goes_when_it_is_taken_back(supply):
    supply.fill(ALTITUDE, "90 psi")
    supply.press(ALTITUDE, "Tab")
    supply.wait_for_selector("#site--altitude--error")
    supply.watch.forget_refusals()
    supply.reload()

    assert supply.input_value(ALTITUDE) == "90 psi"
    assert "unit of a pressure" in supply.inner_text("#site--altitude--error")
    assert supply.get_attribute(ALTITUDE, "aria-invalid") == "true"

    supply.fill(ALTITUDE, "110")
    supply.press(ALTITUDE, "Tab")
    supply.wait_for_selector("#site--altitude--error", state="detached")
    supply.reload()
    assert supply.input_value(ALTITUDE) == "110"
    assert supply.locator("#site--altitude--error").count() == 0


def test_what_was_typed_since_is_never_overwritten_by_an_answer(supply, live, station):
    held: list[Any] = []
    supply.route("**/edits", lambda route: held.append(route))
    supply.fill(DATUM, "first")
    supply.press(DATUM, "Enter")
    supply.wait_for_timeout(100)
    supply.fill(DATUM, "second")
    held[0].continue_()
    supply.unroute("**/edits")
    revision(supply, 2)

    assert supply.input_value(DATUM) == "second"
    supply.press(DATUM, "Tab")
    revision(supply, 3)
    assert live.store.load(station).station.site.datum == "second"


def test_quick_edits_are_all_stored_in_order(supply, live, station):
    for path, text in (("datum", "A"), ("floor_level", "111"), ("eye_level", "111.6")):
        supply.fill(f"#site--{path}", text)
    supply.press("#site--eye_level", "Tab")
    revision(supply, 4)

    site = live.store.load(station).station.site
    assert (site.datum, site.floor_level.value, site.eye_level.value) == ("A", 111, 111.6)


def test_without_the_server_the_text_stays_and_is_sent_later(supply, live, station):
    supply.route("**/edits", lambda route: route.abort())
    supply.fill(DATUM, "kept")
    supply.press(DATUM, "Tab")
    supply.wait_for_selector("#site--datum--error")
    assert "Not saved" in supply.inner_text("#site--datum--error")
    supply.watch.console.clear()
    supply.reload()
    assert supply.input_value(DATUM) == "kept"

    supply.unroute("**/edits")
    supply.press(DATUM, "Enter")
    revision(supply, 2)
    assert live.store.load(station).station.site.datum == "kept"
    assert supply.locator("#site--datum--error").count() == 0


def test_a_new_item_takes_the_focus_and_other_typed_text_stays(supply):
    supply.click("text=Add a flow test")
    revision(supply, 2)
    supply.wait_for_function("() => document.activeElement.id.endsWith('--title')")

    assert supply.locator("table[data-list='/supply/flow_tests'] tbody tr").count() == 3


def test_rows_from_a_spreadsheet_land_in_cells_and_new_rows(supply, live, station):
    cell = "#supply--flow_tests--ft-b8w4kx--title"
    supply.focus(cell)
    supply.evaluate(PASTE, "B, again\t2026-01-01\nC\t2026-02-02")
    revision(supply, 2)

    titles = [test.title for test in live.store.load(station).station.supply.flow_tests]
    assert titles == ["Mill Lane, test A", "B, again", "C"]


def test_a_grid_takes_a_paste_marks_bad_cells_and_is_stored_when_mended(page, live, station):
    page.goto(f"/stations/{station}/pumps")
    grid = page.locator("form.grid").first
    grid.locator("input[name=cell]").first.focus()
    page.evaluate(PASTE, "0\t90\n10\tx9\n20\t70")
    page.wait_for_selector("form.grid .refusal >> text=Row 2")
    bad = grid.locator("input[aria-invalid=true]")
    assert bad.count() == 1
    page.watch.forget_refusals()

    bad.fill("80")
    page.keyboard.press("Tab")
    page.wait_for_selector("form.grid .refusal >> text=below the one before")
    page.watch.forget_refusals()
    grid.get_by_role("button", name="Sort the rows").click()
    revision(page, 2)
    rows = live.store.load(station).station.pumps[0].curves[0].table.rows
    assert rows[0][:2] == (0, 90)
    assert [row[0] for row in rows] == sorted(row[0] for row in rows)


def test_two_people_on_one_field_both_see_both_values(
    new_page: Callable[..., Any], live, station
):
    mine, theirs = new_page(), new_page()
    for each in (mine, theirs):
        each.goto(f"/stations/{station}/supply")
    theirs.fill(DATUM, "Theirs")
    theirs.press(DATUM, "Tab")
    revision(theirs, 2)
    mine.fill(DATUM, "Mine")
    mine.press(DATUM, "Tab")
    mine.wait_for_selector("text=Keep theirs: Theirs")
    mine.watch.forget_refusals()
    assert mine.input_value(DATUM) == "Mine"

    mine.click("text=Keep mine: Mine")
    revision(mine, 3)
    assert live.store.load(station).station.site.datum == "Mine"


def test_another_ones_change_on_the_sheet_comes_in_with_the_next_edit(
    new_page: Callable[..., Any], live, station
):
    mine, theirs = new_page(), new_page()
    for each in (mine, theirs):
        each.goto(f"/stations/{station}/supply")
    theirs.fill(DATUM, "Theirs")
    theirs.press(DATUM, "Tab")
    revision(theirs, 2)
    mine.fill(ALTITUDE, "120")
    mine.press(ALTITUDE, "Tab")
    revision(mine, 3)

    assert mine.input_value(DATUM) == "Theirs"
    stored = live.store.load(station).station.site
    assert (stored.datum, stored.altitude.value) == ("Theirs", 120)


def test_a_sheet_works_without_script(browser, live, station):
    context = browser.new_context(base_url=live.url, java_script_enabled=False)
    page = context.new_page()
    page.goto(f"/stations/{station}/supply")
    page.fill(DATUM, "Plain")
    page.press(DATUM, "Enter")
    page.wait_for_url("**/supply#site--datum")
    page.click("text=Add a flow test")
    page.wait_for_url("**#supply--flow_tests--**")

    loaded = live.store.load(station).station
    assert (loaded.site.datum, len(loaded.supply.flow_tests)) == ("Plain", 3)
    context.close()


def test_text_typed_over_another_ones_change_is_a_conflict_not_a_loss(
    new_page: Callable[..., Any], live, station
):
    mine, theirs = new_page(), new_page()
    for each in (mine, theirs):
        each.goto(f"/stations/{station}/supply")
    theirs.fill(DATUM, "Theirs")
    theirs.press(DATUM, "Tab")
    revision(theirs, 2)
    held: list[Any] = []
    mine.route("**/edits", lambda route: held.append(route))
    mine.fill(ALTITUDE, "120")
    mine.press(ALTITUDE, "Tab")
    mine.wait_for_timeout(100)
    mine.fill(DATUM, "Mine")
    held[0].continue_()
    mine.unroute("**/edits")
    revision(mine, 3)
    assert mine.input_value(DATUM) == "Mine"

    mine.press(DATUM, "Tab")
    mine.wait_for_selector("text=Keep theirs: Theirs")
    mine.watch.forget_refusals()
    assert live.store.load(station).station.site.datum == "Theirs"


def test_a_button_pressed_while_the_sheet_is_drawn_anew_still_counts(page, live, station):
    page.goto(f"/stations/{station}/demand")
    first = "#horizons--hz-0pn8ra--title"
    page.fill(first, "Opening year")
    page.click("text=Add a horizon")
    revision(page, 3)

    horizons = live.store.load(station).station.horizons
    assert [h.title for h in horizons] == ["Opening year", "Design", ""]


def test_a_link_followed_at_once_shows_the_edit_before_it(page, live, station):
    page.goto(f"/stations/{station}/supply")
    page.route("**/edits", lambda route: (page.wait_for_timeout(150), route.continue_()))
    page.fill("#supply--title", "Long Lane main")
    page.click(".spine >> text=History")
    page.wait_for_url("**/history")

    assert "Long Lane main" in page.inner_text("#content-slot")


def test_pasted_headings_put_each_column_of_a_curve_in_its_place_and_unit(page, live, station):
    page.goto(f"/stations/{station}/pumps")
    page.locator("form.grid input[name=cell]").first.focus()
    page.evaluate(
        PASTE, "Head (ft)\tFlow (gpm)\tNPSHr (ft)\n160\t0\t\n150\t100\t6\n120\t200\t9"
    )
    revision(page, 2)
    table = live.store.load(station).station.pumps[0].curves[0].table

    assert (table.units.flow, table.units.head, table.units.npsh_required) == (
        "gpm_us", "ft", "ft",
    )  # fmt: skip
    assert (table.units.efficiency, table.units.shaft_power) == (None, None)
    assert table.rows == ((0, 160, None), (100, 150, 6), (200, 120, 9))


@pytest.mark.parametrize("heading", ["Colour", "Head (kPa)"])
def test_a_pasted_heading_that_cannot_be_read_changes_no_cell(page, live, station, heading):
    page.goto(f"/stations/{station}/pumps")
    grid = page.locator("form.grid").first
    before = grid.locator("input[name=cell]").evaluate_all("all => all.map(c => c.value)")
    grid.locator("input[name=cell]").first.focus()
    page.evaluate(PASTE, f"Flow\t{heading}\n0\t160\n100\t150")

    assert heading.split(" (")[0] in grid.locator(".refusal").inner_text()
    assert before == grid.locator("input[name=cell]").evaluate_all(
        "all => all.map(c => c.value)"
    )
    assert live.store.load(station).number == 1


def test_a_grid_and_a_field_changed_in_turn_are_no_merge(page, live, station):
    page.goto(f"/stations/{station}/pumps")
    page.fill("#pumps--" + live.store.load(station).station.pumps[0].id + "--rating", "16 bar")
    page.keyboard.press("Tab")
    revision(page, 2)
    page.locator("form.grid input[name=cell]").nth(1).fill("95")
    page.keyboard.press("Tab")
    revision(page, 3)

    assert [row.kind for row in live.store.history(station)][:2] == ["edit", "edit"]
