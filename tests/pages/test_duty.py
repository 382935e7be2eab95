"""The Duty sheet: a row a scenario, the worst of three states, the figure and its numbers.

Sources
    demo    values of the independent scalar calculator: design peak hour 36.0 L/s at
            50.3 m, three mains at 82.2 % of best efficiency; average day, design 98.4 % at
            normal and 103.3 % at high supply; design fire 119 kPa in the street main, set
            point not held.
"""

import csv
import io
import json
import re

import pytest
from fastapi.testclient import TestClient

from server.app import create_app
from server.demo import load_demo
from server.pages.duty import GROUPS
from server.settings import Settings


def table(answer, element="duty-table"):
    """Return the rows of a table of the sheet, by the words of their head cell."""
    text = answer.text
    part = text[text.index(f'id="{element}"') :]
    part = part[: part.index("</table>")]
    rows = {}
    for row in re.findall(r"<tr.*?</tr>", part, re.S)[1:]:
        cells = [
            " ".join(re.sub(r"<[^>]+>", " ", cell).replace("\u00a0", " ").split())
            for cell in re.findall(r"<t[hd].*?</t[hd]>", row, re.S)
        ]
        rows[cells[0]] = cells[1:]
    return rows


@pytest.fixture(scope="module")
def served(tmp_path_factory):
    """Return a client and the demo's id, for tests that change nothing."""
    app = create_app(Settings(tmp_path_factory.mktemp("duty")))
    headers = {"Sec-Fetch-Site": "same-origin"}
    with TestClient(app, base_url="http://127.0.0.1", headers=headers) as client:
        yield client, load_demo(app.state.store)[0]


@pytest.fixture(scope="module")
def ask(served):
    """Return the answer of an address of the demo station."""
    client, station = served
    return lambda address, **query: client.get(f"/stations/{station}/{address}", params=query)


@pytest.fixture(scope="module")
def duty(ask):
    answer = ask("duty")
    assert answer.status_code == 200
    return answer


def row(rows, start):
    return next(cells for head, cells in rows.items() if head.startswith(start))


def test_a_row_has_flow_head_running_speed_and_region(duty):
    cells = row(table(duty), "Peak hour, design")

    assert cells[0] == "36.0"
    assert cells[2] == "50.3"
    assert cells[3] == "P1 + P2 + P3"
    assert cells[4] == "82.7"
    assert cells[6].startswith("82 %, inside")


def test_the_worst_state_stands_under_the_own_one(duty):
    cells = row(table(duty), "Average day, design")

    assert "98 %, inside" in cells[6]
    assert "103 %, inside at high" in cells[6]


def test_a_set_point_that_is_not_held_is_told_in_words(duty):
    cells = row(table(duty), "Maximum day and fire, design")

    assert cells[5].startswith("no, top speed")
    assert cells[8] == "119"
    assert "supplying main too low" in cells[-1]


def test_all_three_states_of_every_scenario_are_there(duty):
    rows = table(duty, "states-table")

    assert len(rows) == 30


def test_a_judged_number_that_fails_is_marked_in_its_own_case_only(duty):
    text = duty.text
    part = text[text.index('id="duty-table"') : text.index('id="states-table"')]

    assert len(re.findall(r'class="num bad"', part)) == 2  # main and gauge in the design fire


def test_every_group_of_columns_can_be_chosen(duty):
    for group in GROUPS:
        assert f'value="{group.key}"' in duty.text
        assert f'data-group="{group.key}"' in duty.text


def test_the_figure_s_data_names_the_rows_points(duty):
    data = re.search(r'<pre hidden class="fig-data"[^>]*>(.*?)</pre>', duty.text, re.S).group(1)
    figure = json.loads(data.replace("&#34;", '"').replace("&quot;", '"').replace("&lt;", "<")
                        .replace("&gt;", ">").replace("&amp;", "&"))  # fmt: skip
    keys = {k for trace in figure["data"] for k in trace.get("customdata", ())}

    assert keys == set(re.findall(r'data-point="([^"]+)"', duty.text))


def test_an_unsolved_set_lists_what_is_missing_with_links(client, demo_id, send):
    assert send("/discharge_main/reaches/rc-d1f5my/bore", "", base="1", was="300",
                unit="mm", sheet="main-and-zone").status_code == 200  # fmt: skip
    answer = client.get(f"/stations/{demo_id}/duty")

    assert "The duty is not solved yet" in answer.text
    assert "main-and-zone#discharge_main--reaches--rc-d1f5my--bore" in answer.text
    assert 'id="duty-table"' not in answer.text


def test_the_table_comes_as_csv_with_units_in_its_heads(ask):
    answer = ask("tables/duty.csv", units="us")
    rows = list(csv.DictReader(io.StringIO(answer.text.lstrip("\ufeff"))))

    assert answer.headers["content-type"].startswith("text/csv")
    assert len(rows) == 30
    peak = next(
        r for r in rows if r["Scenario"] == "Peak hour, design" and r["Supply state"] == "low"
    )
    assert peak["Flow [gpm]"] == "571"
    assert peak["Preferred region"] == "inside"


def test_a_name_that_looks_like_a_formula_stays_a_name(client, demo_id, send):
    assert send("/scenarios/sc-n1gh7a/title", "=1+1", base="1", was="Minimum night, opening",
                sheet="demand").status_code == 200  # fmt: skip
    answer = client.get(f"/stations/{demo_id}/tables/duty.csv")

    assert "'=1+1" in answer.text


@pytest.mark.parametrize("chart", ["duty", "head", "supply", "strip"])
def test_each_chart_has_its_own_address(ask, chart):
    answer = ask(f"charts/{chart}.svg")

    assert answer.status_code == 200
    assert answer.headers["content-type"].startswith("image/svg+xml")
    assert "var(--" not in answer.text


def test_a_chart_comes_as_data(ask):
    answer = ask("charts/head.json")

    assert answer.json()["layout"]["yaxis"]["range"][0] == 0


@pytest.mark.parametrize("address", ["charts/no.svg", "charts/no.json", "tables/no.csv"])
def test_a_chart_or_table_that_is_not_one_is_told(ask, address):
    answer = ask(address)

    assert answer.status_code == 404
    assert "There are" in answer.text


@pytest.mark.browser
def test_a_row_picks_out_its_point_and_the_figure_follows_the_dark_page(new_page, live):
    page = new_page(viewport={"width": 1440, "height": 900}, color_scheme="dark")
    page.goto(f"/stations/{live.demo_copy()}/duty")
    page.wait_for_function("() => document.documentElement.dataset.figures === '1'")
    page.click("#duty-table tbody tr:nth-child(8) td:nth-child(2)")
    sizes = page.evaluate(
        "() => document.querySelector('.fig').data.find((t) => t.customdata).marker.size"
    )
    line = page.evaluate(
        "() => document.querySelector('.fig').data.find((t) => t.fill !== 'toself').line.color"
    )

    assert sizes[7] > max(size for i, size in enumerate(sizes) if i != 7)
    assert page.locator("tr.picked").count() == 1
    assert line.startswith("#")
    assert page.locator(".fig-still").is_hidden()


@pytest.mark.browser
def test_columns_are_fewer_on_a_narrow_page_and_can_be_chosen(new_page, live):
    page = new_page(viewport={"width": 1024, "height": 900})
    page.goto(f"/stations/{live.demo_copy()}/duty")
    power = page.locator('#duty-table thead th[data-group="power"]').first

    assert power.is_hidden()
    page.get_by_label("power and energy").check()
    assert power.is_visible()
    page.reload()
    assert power.is_visible()
    assert page.evaluate("() => document.documentElement.scrollWidth <= innerWidth")


def test_a_case_without_water_says_so_in_its_cells(client, demo_bytes):
    station = json.loads(demo_bytes)
    station["fires"][0]["flow"]["value"] = 45
    for test in station["supply"]["flow_tests"]:
        test["residual_pressure"]["value"] = 170
    made = client.post("/api/stations", json=station).headers["Location"]
    page = client.get(f"/stations/{made.rsplit('/', 1)[-1]}/duty")

    cells = [cell for row in table(page).values() for cell in row]

    assert any(cell.startswith("no water") or "no water at low" in cell for cell in cells)
    assert not any(re.search(r"[-−]\d{3,}", cell) for cell in cells)
