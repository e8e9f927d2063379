from __future__ import annotations

from dataclasses import replace

import pytest

from plumbfall.errors import InputError
from plumbfall.report import summary_line
from plumbfall.report.scales import pretty_unit, scale_for, viscosity_scale
from plumbfall.report.summary import visible
from plumbfall.results import Finding
from report.invented_report import invalid_set, valid_set, warned_set


def test_the_line_of_the_interface() -> None:
    # The wording is that of the interface, word for word.
    assert summary_line(valid_set("batch 118")) == (
        "valid  batch 118  851.3 ± 4.2 mPa.s (k=2.0, 95 %) at 25.00 degC"
        "  8 of 8 drops, 4 balls  0 warnings"
    )


def test_warnings_and_monte_carlo() -> None:
    line = summary_line(warned_set("batch 119"))
    assert line.startswith("valid-with-warnings  batch 119  1.202 ± 0.025 Pa.s (Monte Carlo, 95 %)")
    assert line.endswith("6 of 8 drops, 4 balls  1 warning")


def test_no_viscosity_names_the_error() -> None:
    assert summary_line(invalid_set("batch 120")) == (
        "invalid  batch 120  no viscosity  0 of 3 drops, 0 balls  1 error (ball-not-denser)"
        "  0 warnings"
    )


def test_an_apparent_viscosity_is_called_so() -> None:
    finding = Finding("shear-dependence", "warning", "it thins", "state the shear rate")
    result = replace(valid_set("A"), findings=(finding,))
    assert "  apparent viscosity 851.3 ± 4.2 mPa.s " in summary_line(result)


def test_one_ball_is_singular() -> None:
    assert "1 of 1 drop, 1 ball " in summary_line(
        replace(valid_set("A"), n_drops=1, n_read=1, n_balls=1)
    )


def test_the_unit_that_the_bench_asks_for() -> None:
    assert " 0.8513 ± 0.0042 Pa.s " in summary_line(valid_set("A"), "Pa.s")
    assert " 8.513 ± 0.042 P " in summary_line(valid_set("A"), "P")


def test_an_unknown_unit_is_refused_with_the_known_ones() -> None:
    with pytest.raises(InputError, match=r"bench\.viscosity_unit: .*'cSt'.*one of Pa\.s, mPa\.s"):
        viscosity_scale(1.0, "cSt")


def test_the_unit_goes_by_size() -> None:
    assert viscosity_scale(0.99).unit == "mPa.s"
    assert viscosity_scale(1.0).unit == "Pa.s"
    assert scale_for("m", 0.05).pair(0.05, 2e-5).concise == "50.000(20)"
    assert scale_for("m", 5e-7).unit == "um"
    assert scale_for("K", 298.15).unit == "degC"
    assert scale_for("K", 0.05).unit == "K"


def test_units_as_print_has_them_leave_words_alone() -> None:
    assert pretty_unit("4.2 mPa.s at 25.00 degC") == "4.2 mPa·s at 25.00 °C"
    assert pretty_unit("degrees of freedom: 2.10") == "degrees of freedom: 2.10"
    assert pretty_unit("m2/s2") == "m²/s²"


def test_control_characters_are_spelled_out() -> None:
    assert visible("a\x1b[31m\r\nb\u202e") == "a\\x1b[31m\\r\\nb\\u202e"
    assert visible("Öl Nr. 3 µ ±") == "Öl Nr. 3 µ ±"
    assert "\x1b" not in summary_line(valid_set("\x1b[2J"))
