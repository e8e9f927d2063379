"""The self-test: every figure agrees, its document has its names, and a wrong figure is told."""

from __future__ import annotations

import dataclasses
import json
import math
import re
from collections import Counter

import pytest

import plumbfall.published.selftest as module
from plumbfall.cli.program import build_parser, main
from plumbfall.published.figure import (
    DEFINITION,
    FROM_MEMORY,
    SEEN_IN_PRINT,
    Figure,
    called,
    figures,
)
from plumbfall.published.selftest import FIGURES, selftest
from plumbfall.report.selftest_result import AREAS, BASES
from plumbfall.report.selftest_text import selftest_text, totals_table

WATER = next(figure for figure in FIGURES if figure.id == "water.r12.298.15-998")


@pytest.fixture(scope="module")
def result():
    return selftest()


def test_every_figure_agrees(result):
    failing = [(item.id, item.difference, item.problem) for item in result.items if not item.passed]
    assert failing == []
    assert (result.passed, result.failed) == (len(FIGURES), 0)


def test_there_are_enough_figures_and_not_too_many_from_tables_of_statistics(result):
    printed = [item for item in result.items if item.basis != DEFINITION]
    assert len(printed) >= 200
    assert 2 * sum(item.area == "statistics" for item in printed) <= len(printed)
    assert {item.area for item in result.items} == set(AREAS)
    assert {item.basis for item in result.items} == set(BASES)


def test_names_are_unique_and_every_figure_has_a_source():
    assert max(Counter(figure.id for figure in FIGURES).values()) == 1
    for figure in FIGURES:
        assert re.fullmatch(r"[\w./-]+", figure.id), figure.id
        assert len(figure.source) > 12
        assert figure.tolerance > 0


def test_more_than_half_a_digit_is_said_in_the_source():
    for figure in FIGURES:
        if figure.allowance:
            said = ("allowed", "exact but for", "a tie", "is good to")
            assert any(words in figure.source for words in said), figure.id


def test_tolerance_is_half_of_the_last_digit_printed():
    def of(printed: str, **more: object) -> Figure:
        return Figure("x", "chain", FROM_MEMORY, "somewhere", printed, lambda: 0.0, **more)

    assert of("2.500").tolerance == 0.0005
    assert of("-1410").tolerance == 0.5
    assert of("1.745329e-2").tolerance == pytest.approx(5e-9, rel=1e-12)
    assert of("2.5", allowance=0.01).tolerance == pytest.approx(0.06, rel=1e-12)
    assert of("2.5", exact=True).tolerance < 1e-13
    (wide,) = figures("liquid", FROM_MEMORY, "table", [("y", "50", float)], within=0.02)
    assert wide.tolerance == pytest.approx(1.5, rel=1e-12)


def test_document_has_the_names_and_types_of_the_schema(result):
    document = json.loads(json.dumps(result.to_dict(), allow_nan=False))
    assert list(document) == ["schema", "items", "passed", "failed"]
    assert document["schema"] == "plumbfall/selftest/1"
    assert (type(document["passed"]), type(document["failed"])) == (int, int)
    assert document["passed"] + document["failed"] == len(document["items"])
    types = {
        "id": str,
        "area": str,
        "basis": str,
        "source": str,
        "published": float,
        "computed": float,
        "tolerance": float,
        "passed": bool,
    }
    for item in document["items"]:
        assert {name: type(value) for name, value in item.items()} == types
        assert item["area"] in AREAS
        assert item["basis"] in BASES


def test_published_points_of_iapws_are_marked_as_seen(result):
    items = [item for item in result.items if item.id.startswith("water.r12.")]
    assert [item.basis for item in items] == [SEEN_IN_PRINT] * 11
    assert items[0].published == 889.735100  # IAPWS R12-08, table 4
    assert items[0].tolerance == pytest.approx(5e-7)


def test_command_prints_the_document_and_exits_with_0(capsys):
    assert main(["selftest", "--json"]) == 0
    out, err = capsys.readouterr()
    document = json.loads(out)
    assert (document["failed"], err) == (0, "")
    assert document["passed"] == len(FIGURES)


def test_text_has_80_columns_and_every_figure(capsys, result):
    assert main(["selftest"]) == 0
    out = capsys.readouterr().out
    assert max(map(len, out.splitlines())) <= 80
    lines = out.split()
    assert all(item.id in lines for item in result.items)
    assert out.splitlines()[-1] == f"{len(FIGURES)} passed, 0 failed"
    # printed, computed, difference, tolerance
    assert re.search(r" 889\.735100 +889\.735\d+ [+-]\d\.\de-0\d of 5\.0e-07\n", out)


@pytest.fixture
def spoiled(monkeypatch):
    def raise_it() -> float:
        raise ZeroDivisionError("division by zero")

    wrong = dataclasses.replace(WATER, id="wrong", printed="889.736100")
    broken = dataclasses.replace(WATER, id="broken", compute=raise_it)
    endless = dataclasses.replace(WATER, id="endless", compute=lambda: math.inf)
    monkeypatch.setattr(module.selftest, "__defaults__", ((wrong, broken, endless, WATER),))


@pytest.mark.usefixtures("spoiled")
def test_a_wrong_figure_fails_the_command_and_stops_no_other(capsys):
    assert main(["selftest"]) == 1
    out = capsys.readouterr().out
    assert out.splitlines()[-4:] == [
        "1 passed, 3 failed",
        "  FAILED wrong",
        "  FAILED broken",
        "  FAILED endless",
    ]
    assert "ZeroDivisionError: division by zero" in out
    assert max(map(len, out.splitlines())) <= 80
    assert main(["selftest", "--json"]) == 1
    items = json.loads(capsys.readouterr().out)["items"]
    assert [item["passed"] for item in items] == [False, False, False, True]
    assert [item["computed"] is None for item in items] == [False, True, True, False]


def test_a_change_of_one_in_the_last_digit_of_any_figure_is_seen_where_nothing_more_is_allowed():
    # half a digit is the tolerance: a figure that is off by one unit of its last digit must fail
    exact = [figure for figure in FIGURES if not figure.allowance and not figure.exact]
    assert len(exact) > 200
    moved = []
    for figure in exact:
        step = 2 * figure.tolerance
        far = math.copysign(step, figure.published - figure.compute())
        moved.append(dataclasses.replace(figure, compute=_always(figure.published - far * 1.01)))
    assert selftest(moved).passed == 0


def _always(value):
    return lambda: value


def test_called_scales_an_si_value():
    assert called(lambda *, x: x, scale=1e3, x=0.002)() == 2.0


def test_totals_add_up(result):
    head, *rows = totals_table(result)
    assert head == ("area", *BASES, "all")
    numbers = [[int(cell) for cell in row[1:]] for row in rows]
    assert all(sum(row[:-1]) == row[-1] for row in numbers)
    assert [sum(column) for column in zip(*numbers[:-1], strict=True)] == numbers[-1]
    assert numbers[-1][-1] == len(FIGURES)


def test_help_lists_the_command(capsys):
    with pytest.raises(SystemExit) as stop:
        main(["--help"])
    assert stop.value.code == 0
    assert "selftest" in capsys.readouterr().out
    assert build_parser().parse_args(["selftest", "--json"]).json


def test_text_of_no_figures_has_its_totals():
    assert selftest_text(selftest(())).endswith("0 passed, 0 failed\n")
