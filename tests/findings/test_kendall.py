"""The Mann-Kendall test against a reference library, and groups as seasons."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from plumbfall.findings.kendall import mann_kendall

ONE = np.zeros(1, dtype=int)


def p_value(values, group=None):
    values = np.asarray(values, dtype=float)
    group = np.zeros(len(values), dtype=int) if group is None else np.asarray(group)
    group_set = np.zeros(group.max() + 1, dtype=int)
    return float(mann_kendall(values, np.arange(len(values)), group, group_set, 1)[0])


@pytest.mark.parametrize("seed", range(5))
def test_a_trend_is_as_likely_as_by_kendalls_tau(seed):
    # scipy's asymptotic p-value has no continuity correction: |S| - 1 instead of |S|
    values = np.random.default_rng(seed).normal(size=30) + 0.03 * np.arange(30)
    found = stats.kendalltau(np.arange(30), values, method="asymptotic")
    n = 30
    score = found.statistic * n * (n - 1) / 2
    z = (abs(score) - 1) / np.sqrt(n * (n - 1) * (2 * n + 5) / 18)
    assert p_value(values) == pytest.approx(2 * stats.norm.sf(z), rel=1e-9)


def test_ties_count_as_in_the_reference_library():
    values = np.array([1, 1, 2, 2, 2, 3, 4, 4, 5, 5, 6, 7.0])
    found = stats.kendalltau(np.arange(12), values, method="asymptotic")
    s = sum(np.sign(values[j] - values[i]) for i in range(12) for j in range(i + 1, 12))
    spread = s / stats.norm.isf(found.pvalue / 2)  # of the score, by the library
    assert p_value(values) == pytest.approx(2 * stats.norm.sf((s - 1) / spread), rel=1e-9)


def test_groups_are_not_compared_with_each_other():
    rising = [1, 2, 3, 4, 5, 6, 7, 8.0]
    assert p_value(rising) < 0.01
    assert p_value(rising, group=range(8)) == 1.0
    # two balls of their own level, both rising
    both = np.array([1, 11, 2, 12, 3, 13, 4, 14, 5, 15.0])
    assert p_value(both, group=[0, 1] * 5) < 0.01


def test_a_set_of_equal_values_has_no_trend():
    assert p_value([3.0, 3.0, 3.0, 3.0]) == 1.0
