from __future__ import annotations

import pickle

import pytest

from plumbfall.errors import InputError, PlumbfallError, Problem, nearest_name


def test_a_problem_reads_place_what_remedy():
    problem = Problem("is missing", "add bore", path="b.toml", line=3, column=7, key="tube.A.bore")
    assert str(problem) == "b.toml:3:7: tube.A.bore: is missing; add bore"


@pytest.mark.parametrize(
    ("place", "shown"),
    [
        ({}, ""),
        ({"path": "b.toml"}, "b.toml"),
        ({"path": "b.toml", "column": 4}, "b.toml"),  # a column without its line says nothing
        ({"key": "bench.coverage"}, "bench.coverage"),
        ({"path": "b.toml", "line": 2, "key": "site"}, "b.toml:2: site"),
    ],
)
def test_a_place_shows_what_is_known_of_it(place, shown):
    assert Problem("wrong", **place).place == shown


def test_an_error_lists_every_problem_and_offers_the_first():
    error = InputError([Problem("one", "do a", key="k", line=2, path="f"), Problem("two")])
    assert str(error) == "f:2: k: one; do a\ntwo"
    assert (error.key, error.line, error.path, error.remedy, error.column) == (
        "k",
        2,
        "f",
        "do a",
        None,
    )


def test_an_error_made_from_words_has_their_place():
    error = InputError("is empty", path="f", remedy="fill it")
    assert error.problems == (Problem("is empty", "fill it", "f"),)


def test_an_error_is_a_value_error_and_ours():
    assert issubclass(InputError, PlumbfallError)
    assert issubclass(InputError, ValueError)


def test_an_error_survives_pickling():
    error = InputError([Problem("one", key="k"), Problem("two", severity="warning")])
    copy = pickle.loads(pickle.dumps(error))
    assert copy.problems == error.problems
    assert str(copy) == str(error)


@pytest.mark.parametrize(
    ("wrong", "near"),
    [("boer", "bore"), ("BORE", "bore"), ("mark", "marks"), ("xyzzy", None), ("", None)],
)
def test_nearest_name(wrong, near):
    assert nearest_name(wrong, ["bore", "marks", "surface_above"]) == near
