"""Ids of items: made by the server, unique, safe in an address and in HTML."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.station import fields
from server.station.ids import ALPHABET, LONGEST_ID, is_id, kind_letters, new_id
from server.station.paths import html_id, path_of


def test_an_id_has_two_letters_of_its_kind_and_six_signs_that_cannot_be_misread():
    made = new_id("/zone/points", set())

    assert made.startswith("pt-")
    assert len(made) == 9
    assert set(made[3:]) <= set(ALPHABET)
    assert not set(ALPHABET) & set("ilou")


def test_an_id_in_use_is_not_made_again():
    class AllButOne:
        """Every id but those that end in z is taken."""

        def __contains__(self, made: object) -> bool:
            return not str(made).endswith("z")

    assert new_id("/pumps", AllButOne()).endswith("z")


def test_every_list_makes_ids_that_may_stand_in_a_file():
    for node in fields.walk(fields.root()):
        if node.kind == "list":
            assert is_id(new_id(node.pattern, set()))


def test_what_is_no_list_has_no_ids():
    with pytest.raises(KeyError):
        kind_letters("/site/datum")


@pytest.mark.parametrize("good", ["ab", "pt-c6n2vh", "main-pump-1", "a" * LONGEST_ID])
def test_a_hand_written_id_may_be_plain_words(good):
    assert is_id(good)


@pytest.mark.parametrize(
    "bad", ["", "a", "A1", "1a", "-a", "a-", "a--b", "a_b", "a/b", "é1", "a" * 33, None, 7]
)
def test_an_id_that_would_break_an_address_is_none(bad):
    assert not is_id(bad)


@given(st.from_regex(r"[a-z](-?[a-z0-9]){1,9}", fullmatch=True))
def test_the_html_id_of_a_path_leads_back_to_it(key):
    path = f"/zone/points/{key}/elevation"

    assert path_of(html_id(path)) == path
