"""Rows pasted into lists, the grid of a curve, the usual scenarios, the way from empty on."""

import pytest

from server.pages.curve_grid import table_from_cells
from server.pages.default_scenarios import default_scenarios
from server.station import fields
from server.station.edits import apply_edits
from server.station.faults import BadStation
from tests.pages.page_reader import ReadPage

TESTS = "/supply/flow_tests"
TABLE = "/pumps/pu-m5x8qd/curves/cu-m1a2bc/table"
UNITS = ("L/s", "m", "%", "kW", "m")


def test_pasted_rows_fill_cells_from_an_item_on_and_make_new_items(send, now):
    head = f"{fields.label(f'{TESTS}/*/title')}\t{fields.label(f'{TESTS}/*/made_at')}"
    rows = f"{head}\nMill C\t2026-01-02\nMill D\t2026-01-03\n"
    send(
        TESTS,
        base="1",
        op="paste",
        item=f"{TESTS}/ft-b8w4kx",
        columns="title made_at",
        rows=rows,
    )
    tests = now().supply.flow_tests

    assert [test.title for test in tests] == ["Mill Lane, test A", "Mill C", "Mill D"]
    assert [test.id for test in tests][:2] == ["ft-a5t2rv", "ft-b8w4kx"]
    assert tests[1].static_pressure.value == 346


def test_pasted_numbers_take_the_unit_in_the_columns_head_or_their_own(send, now):
    send(TESTS, base="1", op="paste", columns="static_pressure", rows="50\n400 kPa",
         sheet="supply?units=us")  # fmt: skip
    pressures = [test.static_pressure for test in now().supply.flow_tests[2:]]

    assert [(p.value, p.unit) for p in pressures] == [(50, "psi"), (400, "kPa")]


def test_pasted_words_stand_for_choices_and_items(send, now):
    columns = "title horizon demand fire on"
    send("/scenarios", base="1", op="paste", columns=columns, sheet="demand",
         rows="Fire day\tDesign\tmaximum day\tFold Crescent\tleft out")  # fmt: skip
    made = now().scenarios[-1]

    assert (made.horizon, made.demand, made.fire, made.on) == (
        "hz-d8gn4k", "maximum_day", "fr-f6c1rs", False,
    )  # fmt: skip


def test_a_paste_with_one_bad_cell_stores_nothing_and_names_the_cell(send, now):
    answer = send(
        TESTS, base="1", op="paste", columns="title test_flow", rows="A\t10\nB\tforty"
    )
    page = ReadPage(answer.text)

    assert answer.status_code == 422
    assert "Row 2: Test flow of B: " in page.words
    assert page.oob == ["supply--flow_tests--rows-said"]
    assert len(now().supply.flow_tests) == 2


def test_a_refused_paste_without_script_keeps_the_rows_in_its_box(send):
    answer = send(TESTS, base="1", op="paste", columns="test_flow", rows="forty", htmx=False)

    assert answer.status_code == 422
    assert ReadPage(answer.text).form_of(TESTS, "paste").values["rows"].strip() == "forty"


@pytest.mark.parametrize("rows", ["", "\n\n", "x\n" * 501])
def test_a_paste_of_nothing_or_far_too_much_is_refused(send, rows):
    assert send(TESTS, base="1", op="paste", columns="title", rows=rows).status_code == 422


def test_a_grid_is_stored_whole_without_its_empty_rows_and_columns(send, now):
    grid = "0\t80\t\t\t\n\t\t\t\t\n10\t70\t\t\t\n20\t164.042 ft\t\t\t"
    answer = send(TABLE, base="1", look="grid", units=list(UNITS), grid=grid, sheet="pumps")
    table = now().pumps[0].curves[0].table

    assert answer.status_code == 200
    assert ReadPage(answer.text).paths == set()
    assert table.units.efficiency is None
    assert table.rows[:2] == ((0, 80), (10, 70))
    assert table.rows[2][1] == pytest.approx(50.0, abs=1e-3)


def test_a_grid_sent_cell_by_cell_without_script_is_the_same(send, now):
    cells = ["0", "80", "", "", "1.5", "10", "70", "", "", "2.0", "", "", "", "", ""]
    answer = send(
        TABLE, base="1", look="grid", units=list(UNITS), cell=cells, htmx=False, sheet="pumps"
    )

    assert answer.status_code == 303
    assert now().pumps[0].curves[0].table.rows == ((0, 80, 1.5), (10, 70, 2.0))


def test_bad_cells_of_a_grid_are_marked_and_nothing_is_stored(send, now):
    before = now().pumps[0].curves[0].table
    grid = "0\t80\tx\t\t\n10\t\t\t\t"
    answer = send(TABLE, base="1", look="grid", units=list(UNITS), grid=grid, sheet="pumps")

    assert answer.status_code == 422
    assert '"cells": [[0, 2], [1, 1]]' in answer.headers["HX-Trigger"]
    assert "Row 2 has no head" in answer.text
    assert now().pumps[0].curves[0].table == before


def test_rows_out_of_order_are_refused_with_an_offer_to_sort_that_sorts(send, now):
    form = {
        "look": "grid",
        "units": list(UNITS),
        "grid": "10\t70\t\t\t\n0\t80\t\t\t",
        "sheet": "pumps",
    }
    answer = send(TABLE, base="1", **form)
    assert answer.status_code == 422
    assert "sort the rows" in answer.text

    answer = send(TABLE, base="1", op="sort", **form)
    assert "content-slot" in ReadPage(answer.text).oob
    assert now().pumps[0].curves[0].table.rows == ((0, 80), (10, 70))


def test_a_grid_of_nothing_is_an_empty_table(demo):
    assert table_from_cells(demo, TABLE, [["", ""]], UNITS)["rows"] == []


def test_an_unknown_unit_of_a_column_falls_back_to_the_usual_one(demo):
    table = table_from_cells(demo, TABLE, [["1", "2"]], ["furlong", "m"])

    assert table["units"] == {"flow": "L/s", "head": "m"}


def test_the_usual_scenarios_are_made_once_for_each_horizon_and_fire(demo):
    without = demo.model_copy(update={"scenarios": ()})
    station = apply_edits(without, default_scenarios(without))
    made = station.scenarios

    assert len(made) == 14
    first = next(s for s in made if s.demand == "peak_hour")
    assert (first.title, first.supply, first.out) == ("Peak hour, opening", "low", "largest")
    fire = next(s for s in made if s.fire)
    assert (fire.demand, fire.supply, fire.out) == ("maximum_day", "low", "largest")
    assert {s.pipes for s in made if s.demand == "minimum_night"} == {"new"}
    assert sum(s.demand == "none" and s.supply == "high" for s in made) == 2
    with pytest.raises(BadStation, match="there already"):
        default_scenarios(station)


def test_the_usual_scenarios_wait_for_a_horizon(demo):
    with pytest.raises(BadStation, match="Add a horizon"):
        default_scenarios(demo.model_copy(update={"horizons": (), "scenarios": ()}))


def test_an_empty_station_leads_from_sheet_to_sheet(client):
    made = client.post("/stations", data={"title": "Empty"})
    station = made.headers["location"].split("/")[-2]
    page = ReadPage(client.get(f"/stations/{station}/supply").text)
    assert "Still missing here" in page.words

    history = ReadPage(client.get(f"/stations/{station}/history").text)
    assert "the work goes on at 2 Site and supply" in history.words
    assert any("/supply#" in link for link in history.links)


def test_every_link_to_a_missing_field_leads_to_an_id_on_its_sheet(client):
    made = client.post("/stations", data={"title": "Empty"})
    station = made.headers["location"].split("/")[-2]
    for sheet in ("supply", "main-and-zone", "demand", "pumps", "sets"):
        page = ReadPage(client.get(f"/stations/{station}/{sheet}").text)
        wanted = {link.partition("#")[2] for link in page.links if f"/{sheet}#" in link}

        assert wanted, sheet
        assert wanted <= set(page.ids), sheet


def test_a_solved_station_is_not_told_what_is_missing(opened):
    assert "Still missing" not in opened("supply").words
    assert "goes on at" not in opened("pumps").words


def test_a_kind_that_is_not_computed_yet_says_so_beside_it_and_in_the_way_on(send, opened):
    send("/sets/st-v3a7pe/control/running_rule", "least_power", base="1", look="choice")
    page = opened("sets")

    assert "Kept, but not computed in this version" in page.words
    assert "running rule: what is chosen is kept, but not computed" in page.words


def test_the_way_on_asks_for_the_rows_of_a_pump_before_there_is_a_set(client):
    made = client.post("/stations", data={"title": "Empty"})
    station = made.headers["location"].split("/")[-2]
    client.post(
        f"/stations/{station}/edits", data={"path": "/pumps", "op": "insert", "base": "1"}
    )
    page = ReadPage(client.get(f"/stations/{station}/pumps").text)

    assert "tested rows" in page.words.partition("Still missing here")[2][:200]


def test_headings_of_pasted_rows_say_their_column_and_their_unit(send, now):
    rows = "Static (bar)\tPlace\tFlow (gpm)\n3.5\tMill C\t900\n"
    send(TESTS, base="1", op="paste", columns="title static_pressure test_flow", rows=rows)
    made = now().supply.flow_tests[-1]

    assert made.title == "Mill C"
    assert (made.static_pressure.value, made.static_pressure.unit) == (3.5, "bar")
    assert (made.test_flow.value, made.test_flow.unit) == (900, "gpm_us")


@pytest.mark.parametrize(
    ("heading", "told"),
    [("Colour", "names no one column"), ("Static (ft)", "a unit of a head")],
)
def test_a_heading_that_cannot_be_read_is_refused_and_never_guessed(send, now, heading, told):
    rows = f"Place\t{heading}\nMill C\t3.5\n"
    answer = send(
        TESTS, base="1", op="paste", columns="title static_pressure test_flow", rows=rows
    )

    assert answer.status_code == 422
    assert told in answer.text
    assert len(now().supply.flow_tests) == 2


def test_rows_changed_by_two_people_offer_both_and_theirs_can_be_kept(send, now):
    form = {"look": "grid", "units": list(UNITS), "sheet": "pumps"}
    send(TABLE, base="1", grid="0\t80\t\t\t\n10\t70\t\t\t", **form)
    mine = send(TABLE, base="1", grid="0\t90\t\t\t\n10\t60\t\t\t", **form)
    assert mine.status_code == 409
    assert "Keep my rows" in mine.text
    assert "Keep theirs: 2 rows" in mine.text

    theirs = send(TABLE, base="1", keep="theirs", grid="0\t90\t\t\t", **form)
    assert "content-slot" in ReadPage(theirs.text).oob
    assert now().pumps[0].curves[0].table.rows == ((0, 80), (10, 70))

    send(TABLE, base="1", keep="mine", grid="0\t90\t\t\t\n10\t60\t\t\t", **form)
    assert now().pumps[0].curves[0].table.rows == ((0, 90), (10, 60))


@pytest.mark.parametrize(
    ("headings", "law"),
    [("C new\tC aged", "hazen_williams"), ("Roughness, new (mm)\tRoughness aged", "colebrook")],
)
def test_pasted_reaches_bring_their_wall_and_its_law(client, send, now, headings, law):
    new = client.post("/stations", data={"title": "New"}).headers["location"].split("/")[2]
    walls = ["140\t120", "0.1\t0.5"][law == "colebrook"]
    rows = (
        f"Reach\tLength\tBore\t{headings}\nTrunk\t600\t250\t{walls}\nSpur\t90\t200\t{walls}\n"
    )
    names = "title length bore barrels roughness/new roughness/aged roughness/coefficient_new"
    answer = send(
        "/discharge_main/reaches", base="1", op="paste", sheet="main-and-zone", station=new,
        columns=f"{names} roughness/coefficient_aged", rows=rows,
    )  # fmt: skip
    assert answer.status_code == 200
    walls_read = [reach.roughness for reach in now(new).discharge_main.reaches]

    assert [wall.law for wall in walls_read] == [law, law]
    if law == "hazen_williams":
        assert [wall.coefficient_aged for wall in walls_read] == [120, 120]
    else:
        assert [(wall.aged.value, wall.aged.unit) for wall in walls_read] == [(0.5, "mm")] * 2


def test_the_box_for_pasted_reaches_names_the_columns_of_the_wall(opened):
    page = opened("main-and-zone")
    form = next(
        form for form in page.forms
        if form.values.get("op") == "paste"
        and form.values["path"] == "/discharge_main/reaches"
    )  # fmt: skip

    assert "roughness/aged" in form.values["columns"]
    assert "C, aged" in page.words


def test_a_new_name_of_a_reach_is_put_in_every_heading_that_tells_it(send, demo):
    reach = f"/discharge_main/reaches/{demo.discharge_main.reaches[0].id}"
    answer = send(f"{reach}/title", "Kiln <main>", base="1", sheet="main-and-zone")
    place = reach[1:].replace("/", "--")

    assert f"innerHTML:[data-names='{place}']\">Kiln &lt;main&gt;</span>" in answer.text
    assert f"{place}--title--field" in ReadPage(answer.text).ids
