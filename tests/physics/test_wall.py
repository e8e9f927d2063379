from __future__ import annotations

import numpy as np
import pytest

from physics.formula_book import EXACT_WALL_FACTOR, half_digit
from plumbfall.physics import wall, wall_factor
from plumbfall.physics.laws import laws_of

# Errors in percent against the exact solution as printed in the formula book (computed there)
ERRORS = {
    "ladenburg": {0.05: "0.24", 0.1: "-1.8", 0.2: "-11.9"},
    "faxen-linear": {0.05: "0.03", 0.1: "0.26", 0.2: "2.8"},
    "faxen-cubic": {0.05: "-0.003", 0.1: "-0.007", 0.2: "-0.08", 0.3: "-0.78", 0.4: "-4.7"},
    "faxen": {
        0.05: "-0.003",
        0.1: "-0.006",
        0.2: "-0.03",
        0.3: "-0.24",
        0.4: "-1.4",
        0.5: "-6.4",
    },
    "bohlin": {
        0.1: "-0.000",
        0.2: "-0.003",
        0.3: "-0.016",
        0.4: "-0.08",
        0.5: "-0.41",
        0.6: "-0.32",
    },
    "francis": {
        0.05: "-0.19",
        0.1: "-0.69",
        0.2: "-2.5",
        0.3: "-5.0",
        0.4: "-7.5",
        0.5: "-9.1",
        0.6: "-8.0",
    },
    "haberman-sayre": {
        0.05: "0.003",
        0.1: "0.007",
        0.2: "0.014",
        0.3: "-0.017",
        0.4: "-0.27",
        0.5: "-1.3",
        0.6: "-4.5",
    },
}
PRINTED = [(name, ratio, printed) for name, row in ERRORS.items() for ratio, printed in row.items()]


@pytest.mark.parametrize(("name", "ratio", "printed"), PRINTED)
def test_error_of_each_law_against_the_exact_solution(name, ratio, printed):
    error = wall_factor(diameter_ratio=ratio, method=name) / EXACT_WALL_FACTOR[ratio] - 1.0
    assert 100.0 * error == pytest.approx(float(printed), abs=half_digit(printed) * 1.0001)


# Errors beyond the range that the registry allows, from the single laws, which check nothing
@pytest.mark.parametrize(
    ("function", "ratio", "printed"),
    [
        (wall.wall_factor_ladenburg, 0.3, "-27"),
        (wall.wall_factor_ladenburg, 0.4, "-45"),
        (wall.wall_factor_faxen_linear, 0.3, "14"),
        (wall.wall_factor_faxen_linear, 0.4, "76"),
        (wall.wall_factor_faxen_cubic, 0.5, "-20"),
        (wall.wall_factor_faxen_cubic, 0.6, "-52"),
        (wall.wall_factor_faxen, 0.6, "-22"),
        (wall.wall_factor_bohlin, 0.7, "48"),
        (wall.wall_factor_haberman_sayre, 0.7, "-13"),
        (wall.wall_factor_haberman_sayre, 0.8, "-34"),
    ],
)
def test_error_beyond_the_range(function, ratio, printed):
    error = function(diameter_ratio=ratio) / EXACT_WALL_FACTOR[ratio] - 1.0
    assert 100.0 * error == pytest.approx(float(printed), abs=half_digit(printed) * 1.0001)


def test_two_series_turn_negative_where_they_are_said_to():
    assert wall.wall_factor_faxen_linear(diameter_ratio=0.476) < 0.0
    assert wall.wall_factor_bohlin(diameter_ratio=0.8) < 0.0


@pytest.mark.parametrize(("ratio", "factor"), EXACT_WALL_FACTOR.items())
def test_exact_factor(ratio, factor):
    # to 1e-6, and to the nine printed digits where only those are printed
    assert wall_factor(diameter_ratio=ratio) == pytest.approx(factor, rel=1e-6)


def test_exact_factor_tends_to_faxens_coefficient():
    # Faxén 1922/23: K = 1 + 2.10444 lambda + ... (Happel and Brenner 1965, chapter 7: 2.10444)
    ratio = 1e-4
    slope = (wall_factor(diameter_ratio=ratio) - 1.0) / ratio
    assert slope - 2.10444**2 * ratio == pytest.approx(2.10444, abs=1e-5)


# Haberman and Sayre 1958, printed table (from memory), and its error in percent by the formula
# book: the table solves a truncated system, so its last digits are wrong from 0.4 on
@pytest.mark.parametrize(
    ("ratio", "printed", "percent"),
    [
        (0.1, "1.263", -0.02),
        (0.2, "1.680", 0.03),
        (0.3, "2.371", 0.04),
        (0.4, "3.596", 0.13),
        (0.5, "5.970", 0.38),
        (0.6, "11.135", 0.39),
        (0.7, "24.955", 1.13),
        (0.8, "73.555", -1.49),
    ],
)
def test_printed_table_of_haberman_and_sayre(ratio, printed, percent):
    exact = wall_factor(diameter_ratio=ratio)
    assert 100.0 * (float(printed) / exact - 1.0) == pytest.approx(percent, abs=0.005001)


def test_bohlin_agrees_with_the_exact_factor_in_his_range():
    ratio = np.linspace(0.0, 0.2, 41)
    bohlin = wall_factor(diameter_ratio=ratio, method="bohlin")
    assert bohlin == pytest.approx(wall_factor(diameter_ratio=ratio), rel=4e-5)


def test_the_misprinted_coefficient_of_bohlin_would_show():
    # 6.94813 in place of 0.94813 gives +0.32 % at 0.2 (formula book)
    ratio = 0.2
    misprint = 1.0 / (1.0 / wall.wall_factor_bohlin(diameter_ratio=ratio) - 6.0 * ratio**5)
    assert 100.0 * (misprint / EXACT_WALL_FACTOR[ratio] - 1.0) == pytest.approx(0.32, abs=0.005)


@pytest.mark.parametrize("name", laws_of("walls"))
def test_every_law_starts_at_one_and_grows_over_its_whole_range(name):
    law = laws_of("walls")[name]
    factor = wall_factor(diameter_ratio=np.linspace(law.low, law.high, 500), method=name)
    assert factor[0] == 1.0
    assert np.all(np.diff(factor) > 0.0)


@pytest.mark.parametrize("name", laws_of("walls"))
def test_no_law_is_an_eighth_out_in_its_range(name):
    law = laws_of("walls")[name]
    ratio = np.linspace(law.low, law.high, 200)
    error = wall_factor(diameter_ratio=ratio, method=name) / wall_factor(diameter_ratio=ratio) - 1
    assert np.abs(error).max() < 0.125
