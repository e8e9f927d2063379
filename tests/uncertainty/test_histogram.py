"""Bins of draws: nothing is lost, and the interval holds the share it promises."""

from __future__ import annotations

import math

import numpy as np
import pytest

from plumbfall.estimate import Estimate
from plumbfall.uncertainty.histogram import BINS, histogram
from plumbfall.uncertainty.monte_carlo import run_monte_carlo


def test_every_draw_is_counted_once():
    draws = np.sort(np.random.default_rng(4).standard_t(2, size=20_000))
    draws = np.append(draws, [np.nan] * 7)
    found = histogram(draws, -4.3027, 4.3027)  # t of 2 dof at 95 %: GUM table G.2
    assert found is not None
    assert len(found.counts) == BINS
    assert sum(found.counts) + found.below + found.above == 20_000
    assert found.low == pytest.approx(-8.6054)
    inside = sum(found.counts[BINS // 4 : 3 * BINS // 4])  # the bins of the interval itself
    assert inside / 20_000 == pytest.approx(0.95, abs=0.006)  # four standard deviations


@pytest.mark.parametrize(("low", "high"), [(-math.inf, math.inf), (1.0, 1.0), (math.nan, 1.0)])
def test_no_bins_without_an_interval(low, high):
    assert histogram(np.array([1.0, 1.0]), low, high) is None


def test_keeping_the_draws_changes_no_count():
    inputs = [Estimate(1.0, 0.1, "normal", name="a"), Estimate(2.0, 0.1, "triangular", name="b")]
    kept, sorted_ = (
        run_monte_carlo(lambda drawn: drawn[0] * drawn[1], inputs, draws=2000, keep=keep)
        for keep in (True, False)
    )
    assert kept.histograms == sorted_.histograms
    assert kept.output(0).histogram is not None
