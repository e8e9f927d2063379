"""One-way analysis of variance against certified values.

Sources: NIST StRD, analysis of variance (SiRstv, SmLs01, SmLs04, SmLs07), certified values seen in
print; JCGM 100:2008, H.5 (from memory).
"""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest

from plumbfall.published.statistics_anova import SIRSTV, analysed, small_less
from plumbfall.uncertainty.anova import one_way


def test_sirstv_is_certified():
    found = analysed(SIRSTV)
    assert found.between[0] == pytest.approx(5.11462616e-02, rel=1e-12)
    assert found.within[0] == pytest.approx(2.1663656e-01, rel=1e-12)
    assert found.f[0] == pytest.approx(1.18046237440255, rel=1e-12)
    assert found.within_sd[0] == pytest.approx(0.104076068334656, rel=1e-12)
    assert (found.between_dof[0], found.within_dof[0]) == (4, 20)


def exact_f(groups):
    """F of the floats as they are, in rational numbers."""
    groups = [[Fraction(value) for value in group] for group in groups]
    values = [value for group in groups for value in group]
    grand = sum(values) / len(values)
    means = [sum(group) / len(group) for group in groups]
    between = sum(
        len(group) * (mean - grand) ** 2 for group, mean in zip(groups, means, strict=True)
    )
    within = sum(
        (value - mean) ** 2 for group, mean in zip(groups, means, strict=True) for value in group
    )
    dof = len(groups) - 1
    return float(between / dof / (within / (len(values) - len(groups))))


@pytest.mark.parametrize(
    ("offset", "rounding"), [(1.0, 1e-12), (1e6, 1e-7), (1e12, 0.041)], ids=["01", "04", "07"]
)
def test_an_offset_costs_no_more_than_the_rounding_of_the_data(offset, rounding):
    groups = small_less(offset)
    assert analysed(groups).f[0] == pytest.approx(21.0, abs=rounding)  # certified
    assert analysed(groups).f[0] == pytest.approx(exact_f(groups), rel=1e-12)


def test_zener_voltages_of_ten_days():
    # JCGM 100:2008, H.5: day means (uV above 10 V) and standard deviations of five readings each.
    means = np.array([172, 116, 13, 144, 106, 31, 60, 125, 163, 41.0])
    sds = np.array([60, 77, 111, 101, 67, 93, 80, 73, 88, 86.0])
    pattern = np.array([-1, -1, 0, 1, 1]) / 1.0  # five values of standard deviation 1
    values = (means[:, None] + sds[:, None] * pattern).ravel()
    found = one_way(values, np.repeat(np.arange(10), 5), np.zeros(10, dtype=int), 1)
    assert found.f[0] == pytest.approx(2.25, abs=0.02)  # printed, from rounded 57 and 85
    assert found.within_sd[0] == pytest.approx(85, abs=0.5)


def test_many_sets_are_analysed_at_once():
    rng = np.random.default_rng(3)
    values, group = rng.normal(size=60), np.arange(60) // 5
    group_set = np.arange(12) // 4
    together = one_way(values, group, group_set, 3)
    for at in range(3):
        here = group_set[group] == at
        alone = one_way(values[here], group[here] - 4 * at, np.zeros(4, dtype=int), 1)
        assert together.f[at] == pytest.approx(alone.f[0], rel=1e-12)
    single = one_way(np.array([1.0, 2.0]), np.array([0, 1]), np.array([0, 0]), 1)
    assert np.isnan(single.f[0])
