"""The registry of fields: every place of the document has its words, range, kind and sheet."""

import typing
from pathlib import Path

import pytest

from server.station import fields
from server.station.entry import Quantity
from server.station.ids import kind_letters
from server.station.wellformed import inside
from server.units import Dimension, symbols

GOLDEN = Path(__file__).parent / "golden" / "field_paths.txt"
NODES = [node for node in fields.walk(fields.root()) if node.is_field]


def test_the_addresses_of_the_fields_are_those_that_stored_edits_and_links_hold():
    """A golden list: an address that goes or changes needs an upgrade step and a decision."""
    assert list(fields.patterns()) == GOLDEN.read_text(encoding="utf-8").split()


def test_every_field_has_an_entry_with_a_title_and_a_sheet():
    for node in NODES:
        assert node.entry is not None, node.pattern
        assert node.entry.title.strip() == node.entry.title != "", node.pattern
        assert node.sheet in fields.SHEET_TITLES, node.pattern
        assert fields.sheet_of(node.pattern) == node.sheet
        assert fields.label(node.pattern) == node.entry.title
        assert fields.kind_of(node.pattern) == node.kind


def test_every_member_of_every_model_has_a_place_but_format_version_and_id():
    for node in [fields.root(), *fields.walk(fields.root())]:
        if node.model is not None:
            left_out = set(node.model.model_fields) - set(node.children)
            assert left_out <= {"id", "format", "version"}


def test_the_range_of_a_number_is_a_range_and_holds_its_default():
    for node in NODES:
        entry = node.entry
        if node.kind in ("quantity", "number", "integer"):
            assert entry.low is not None or node.pattern == "/criteria/rows/*/limit"
            assert entry.low is None or entry.low < entry.high, node.pattern
            if isinstance(node.default, int | float):
                assert inside(entry, node.default), node.pattern


def test_a_quantity_has_a_dimension_and_nothing_else_has_a_unit():
    for node in NODES:
        if node.kind == "quantity":
            known = node.entry.dimension is not None
            assert known or node.pattern == "/criteria/rows/*/limit"
        else:
            assert node.entry.dimension in (None, Dimension.NUMBER), node.pattern


def test_no_quantity_has_a_default_number():
    assert not any(isinstance(node.default, Quantity) for node in NODES)


def test_the_choices_of_a_field_are_those_of_its_model():
    for node in NODES:
        choices = [key for key, _ in node.entry.choices]
        if node.kind == "choice":
            inner = next(
                a
                for a in (node.annotation, *typing.get_args(node.annotation))
                if typing.get_origin(a) is typing.Literal
            )
            assert sorted(choices) == sorted(typing.get_args(inner)), node.pattern
        else:
            expected = ["true", "false"] if node.kind == "flag" else []
            assert choices == expected, node.pattern


def test_a_reference_names_a_list_of_items():
    references = [node for node in NODES if node.kind == "reference"]
    assert {fields.kind_of(node.entry.refers_to) for node in references} == {"list"}


def test_every_list_has_a_word_for_an_item_and_letters_for_its_ids():
    for node in fields.walk(fields.root()):
        if node.kind == "list":
            assert fields.part_for(f"{node.pattern}/*").item
            assert len(kind_letters(node.pattern)) == 2


def test_two_fields_of_one_item_are_never_told_by_the_same_words():
    seen: dict[tuple[str, str, str], str] = {}
    for node in NODES:
        group = node.group_title if node.with_group else ""
        key = (node.pattern.rpartition("*")[0], group, node.title)
        assert key not in seen or node.sheet != fields.sheet_of(seen[key]), (
            node.pattern,
            seen[key],
        )
        seen[key] = node.pattern


def test_the_suction_line_is_shown_with_the_supply():
    assert fields.sheet_of("/suction_line/reaches/rc-2vd81n/bore") == "supply"
    assert fields.sheet_of("/discharge_main/reaches/rc-2vd81n/bore") == "main-and-zone"


def test_a_path_and_its_pattern_have_one_entry():
    entry = fields.entry_for("/zone/points/pt-t3r8nw/elevation")
    assert entry is fields.entry_for("/zone/points/*/elevation")
    assert entry.title == "Elevation"
    assert "m" in symbols(entry.dimension)


@pytest.mark.parametrize(
    "path",
    [
        "/zon",
        "zone",
        "/",
        "//",
        "/zone/",
        "/zone/points/a/b",
        "/site/datum/x",
        "/" + "a" * 9999,
    ],
)
def test_a_place_that_no_station_has_is_not_found(path):
    assert fields.find(path) is None
    with pytest.raises(KeyError):
        fields.entry_for(path)


def test_an_item_is_a_part_and_not_an_entry():
    assert fields.part_for("/legs/lg-m2n6wd").title == "Legs"
    with pytest.raises(KeyError):
        fields.entry_for("/legs/lg-m2n6wd")
    with pytest.raises(KeyError):
        fields.part_for("/site/datum")
