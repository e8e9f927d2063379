"""Coverage intervals by rank, worked by hand, and the comparison of two intervals."""

from __future__ import annotations

import math

import numpy as np
import pytest

from plumbfall.errors import InputError
from plumbfall.uncertainty.intervals import (
    interval_ranks,
    shortest_interval,
    symmetric_interval,
    validate,
)


def test_ranks_by_definition():
    # JCGM 101:2008, 7.7: q = floor(pM + 1/2), r = (M - q)/2 or (M - q + 1)/2
    assert interval_ranks(200, 0.95) == (190, 5)
    assert interval_ranks(100, 0.95) == (95, 3)
    assert interval_ranks(10, 0.87) == (9, 1)


def test_symmetric_interval_of_counted_draws():
    assert symmetric_interval(np.arange(1.0, 201.0), 0.95) == (5.0, 195.0)
    assert symmetric_interval(np.arange(1.0, 101.0), 0.95) == (3.0, 98.0)


def test_shortest_interval_leaves_the_long_tail():
    draws = np.concatenate([np.arange(96.0), [200.0, 300.0, 400.0, 500.0]])
    assert shortest_interval(draws, 0.95) == (0.0, 95.0)
    assert shortest_interval(-draws[::-1], 0.95) == (-95.0, 0.0)


def test_draws_without_value_lie_outside_on_the_worse_side():
    draws = np.append(np.arange(1.0, 200.0), np.nan)  # 199 of 200 have a value
    # were the lost one the least, rank 5 would be value 4; were it the greatest, rank 195 is 195
    assert symmetric_interval(draws, 0.95) == (4.0, 195.0)
    low, high = shortest_interval(draws, 0.95)
    assert high - low == 190.0
    many = np.append(np.arange(1.0, 195.0), np.full(6, np.nan))
    assert symmetric_interval(many, 0.95) == (-math.inf, math.inf)
    assert shortest_interval(many, 0.95)[1] < math.inf  # 194 values can hold 191
    lost = np.append(np.arange(1.0, 190.0), np.full(11, np.nan))
    assert shortest_interval(lost, 0.95) == (-math.inf, math.inf)


@pytest.mark.parametrize(("draws", "coverage"), [(10, 0.99), (1, 0.5), (100, 1.0), (100, 0.0)])
def test_too_few_draws_are_refused(draws, coverage):
    with pytest.raises(InputError):
        interval_ranks(draws, coverage)


def test_linear_interval_is_validated_within_the_tolerance():
    def compare(low: float, high: float, u: float, digits: int):
        return validate(linear_low=low, linear_high=high, low=8.0, high=12.0, u=u, digits=digits)

    inside = compare(8.4, 11.6, 1.0, 1)
    assert (inside.delta, inside.d_low, inside.d_high) == pytest.approx((0.5, 0.4, 0.4))
    assert inside.validated
    assert not compare(8.4, 11.6, 1.0, 2).validated
    assert not compare(8.0, 12.6, 1.0, 1).validated
    assert compare(7.9, 12.0, 9.0, 1).delta == 0.5
    assert compare(7.9, 12.0, 10.0, 1).delta == 5.0


@pytest.mark.parametrize("missing", [math.nan, math.inf])
def test_no_interval_is_not_validated(missing):
    assert not validate(linear_low=1, linear_high=2, low=-missing, high=2, u=1).validated
    assert not validate(linear_low=1, linear_high=missing, low=1, high=2, u=1).validated


def test_an_exact_result_is_validated_to_rounding():
    found = validate(linear_low=0.1 + 0.2, linear_high=0.3, low=0.3, high=0.3, u=0.0)
    assert found.delta == 0.0
    assert found.validated
    with pytest.raises(InputError):
        validate(linear_low=1, linear_high=2, low=1, high=2, u=math.nan)
