"""Grubbs' critical values against print.

Sources: ISO 5725-2:1994, table 5 (two-sided); Grubbs 1969, Technometrics 11, 1 (ten copper
wires); NIST/SEMATECH e-Handbook, 1.3.5.17.1 (eight mass-spectrometer values); data from memory.
"""

from __future__ import annotations

import numpy as np
import pytest

from plumbfall.findings.grubbs import (
    grubbs_critical,
    grubbs_p_value,
    grubbs_pair_bound,
    grubbs_pair_critical,
    grubbs_pair_p_value,
)

# n: (1 %, 5 %) as printed; n = 3, 8, 15 and 20 differ from exact values by one last digit.
ISO_5725_2 = {
    3: (1.155, 1.155),
    4: (1.496, 1.481),
    5: (1.764, 1.715),
    6: (1.973, 1.887),
    7: (2.139, 2.020),
    8: (2.274, 2.126),
    10: (2.482, 2.290),
    15: (2.806, 2.549),
    20: (3.001, 2.709),
}


@pytest.mark.parametrize(("n", "printed"), ISO_5725_2.items())
def test_iso_5725_2_table_5(n, printed):
    assert grubbs_critical(n=n, level=0.01) == pytest.approx(printed[0], abs=0.0011)
    assert grubbs_critical(n=n, level=0.05) == pytest.approx(printed[1], abs=0.0011)


# One-sided, n: (5 %, 1 %), Grubbs 1969 and ASTM E178, from memory; a last digit may be off by one.
ONE_SIDED = {
    4: (1.463, 1.492),
    5: (1.672, 1.749),
    6: (1.822, 1.944),
    7: (1.938, 2.097),
    8: (2.032, 2.221),
    10: (2.176, 2.410),
    15: (2.409, 2.705),
    20: (2.557, 2.884),
}


@pytest.mark.parametrize(("n", "printed"), ONE_SIDED.items())
def test_the_one_sided_table(n, printed):
    assert grubbs_critical(n=n, level=0.10) == pytest.approx(printed[0], abs=0.0011)
    assert grubbs_critical(n=n, level=0.02) == pytest.approx(printed[1], abs=0.0011)


def test_an_open_table_misprints_two_entries():
    # One widely used open table prints 2.202 for n = 7 at 5 % and 2.755 for n = 15 at 1 %.
    assert grubbs_critical(n=7, level=0.05) < 2.03
    assert grubbs_critical(n=15, level=0.01) > 2.79


def statistic(values):
    values = np.asarray(values)
    return np.abs(values - values.mean()).max() / values.std(ddof=1)


def test_copper_wires_have_a_straggler_but_no_outlier():
    wires = [568, 570, 570, 570, 572, 572, 572, 578, 584, 596]
    assert statistic(wires) == pytest.approx(2.39, abs=0.005)  # printed
    p = grubbs_p_value(statistic=statistic(wires), n=10)
    assert 0.01 < p < 0.05


def test_mass_spectrometer_values_have_an_outlier():
    values = [199.31, 199.53, 200.19, 200.82, 201.92, 201.95, 202.18, 245.57]
    assert statistic(values) == pytest.approx(2.4687, abs=1e-4)  # printed
    assert grubbs_critical(n=8, level=0.10) == pytest.approx(
        2.032, abs=5e-4
    )  # printed, one-sided 5 %
    assert grubbs_p_value(statistic=statistic(values), n=8) < 1e-4


@pytest.mark.parametrize("n", [4, 8, 30])
@pytest.mark.parametrize("level", [0.05, 0.01])
def test_p_value_at_the_critical_value_is_the_level(n, level):
    critical = grubbs_critical(n=n, level=level)
    assert grubbs_p_value(statistic=critical, n=n) == pytest.approx(level, rel=1e-9)


# Lower critical values of the test for two on one side, (1 %, 5 %) as printed.
ISO_5725_2_PAIRS = {
    4: (0.0000, 0.0002),
    5: (0.0018, 0.0090),
    6: (0.0116, 0.0349),
    7: (0.0308, 0.0708),
    8: (0.0563, 0.1101),
    10: (0.1150, 0.1864),
}


@pytest.mark.parametrize(("n", "printed"), ISO_5725_2_PAIRS.items())
def test_iso_5725_2_table_5_for_two(n, printed):
    assert grubbs_pair_critical(n=n, level=0.01) == pytest.approx(printed[0], abs=6e-5)
    assert grubbs_pair_critical(n=n, level=0.05) == pytest.approx(printed[1], abs=6e-5)


@pytest.mark.parametrize("n", [5, 12, 40])
def test_pairs_of_normal_values_are_found_as_often_as_said(n):
    values = np.sort(np.random.default_rng(7).normal(size=(40_000, n)), axis=1)
    squares = values.var(axis=1) * n
    rest = np.minimum(values[:, 2:].var(axis=1), values[:, :-2].var(axis=1)) * (n - 2)
    share = (rest / squares < grubbs_pair_critical(n=n, level=0.05)).mean()
    assert share == pytest.approx(0.05, abs=4 * (0.05 * 0.95 / 40_000) ** 0.5)


@pytest.mark.parametrize(("n", "statistic"), [(4, 1e-5), (10, 0.12), (40, 0.6), (60, 0.7)])
def test_the_quick_bound_is_above_the_exact_p_value(n, statistic):
    bound = float(grubbs_pair_bound(statistic=statistic, n=n))
    assert bound >= grubbs_pair_p_value(statistic=statistic, n=n) > 0


def test_a_perfect_pair_has_no_chance():
    assert grubbs_pair_p_value(statistic=0.0, n=8) == 0.0
