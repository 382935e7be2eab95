"""Older files: each step is a pure function on raw JSON, run one after another."""

import pytest

from server.station.station import VERSION
from server.station.upgrades import STEPS, upgraded


def test_there_is_a_step_from_every_version_before_the_newest():
    assert sorted(STEPS) == list(range(1, VERSION))


def test_a_file_of_the_newest_version_is_left_alone():
    tree = {"version": VERSION, "site": {}}

    assert upgraded(tree, VERSION) is tree


def test_steps_run_one_after_another_and_leave_the_given_tree_alone():
    def renamed(tree):
        tree["place"] = tree.pop("site")
        return tree

    def counted(tree):
        return tree | {"steps": tree["version"]}

    old = {"version": 1, "site": {"datum": "town"}}
    new = upgraded(old, 1, steps={1: renamed, 2: counted}, newest=3)

    assert new == {"version": 3, "place": {"datum": "town"}, "steps": 2}
    assert old == {"version": 1, "site": {"datum": "town"}}


def test_a_missing_step_is_an_error_of_the_program():
    with pytest.raises(KeyError):
        upgraded({"version": 1}, 1, steps={}, newest=2)
