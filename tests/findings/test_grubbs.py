"""Grubbs' critical values against print.

Sources: ISO 5725-2:1994, table 5 (two-sided); Grubbs 1969, Technometrics 11, 1 (ten copper
wires); NIST/SEMATECH e-Handbook, 1.3.5.17.1 (eight mass-spectrometer values); data from memory.
"""

from __future__ import annotations

import numpy as np
import pytest

from plumbfall.findings.outliers import grubbs_critical, grubbs_p_value

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
