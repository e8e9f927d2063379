"""Sums by group, whatever order the values stand in."""

from __future__ import annotations

import numpy as np
import pytest

from plumbfall.uncertainty.type_a import group_scatter, group_sums

VALUES = np.array([1.5, -2.0, 4.0, 0.25, 8.0])


@pytest.mark.parametrize(
    ("group", "expected"),
    [
        ([0, 0, 2, 2, 2], [-0.5, 0.0, 12.25, 0.0]),
        ([2, 0, 2, 0, 2], [-1.75, 0.0, 13.5, 0.0]),
        ([3, 3, 3, 3, 3], [0.0, 0.0, 0.0, 11.75]),
    ],
)
def test_sums_of_standing_and_of_mixed_groups(group, expected):
    np.testing.assert_array_equal(group_sums(VALUES, np.array(group), 4), expected)


def test_flags_are_counted_and_nothing_sums_to_nothing():
    group = np.array([0, 0, 0, 1])
    np.testing.assert_array_equal(group_sums(np.array([True, True, False, True]), group, 2), [2, 1])
    np.testing.assert_array_equal(group_sums(np.zeros(0), np.zeros(0, dtype=np.intp), 2), [0, 0])
    np.testing.assert_array_equal(group_sums(np.ones(1), np.array([1]), 2), [0, 1])


def test_scatter_is_the_same_in_any_order():
    rng = np.random.default_rng(0)
    values, group = 1e6 + rng.standard_normal(300), np.repeat(np.arange(3), 100)
    mixed = rng.permutation(300)
    one, other = group_scatter(values, group, 3), group_scatter(values[mixed], group[mixed], 3)
    np.testing.assert_allclose(one.sd, other.sd, rtol=1e-12)
    np.testing.assert_allclose(one.sd, [values[group == g].std(ddof=1) for g in range(3)])
