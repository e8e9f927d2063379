"""The rule for scatter of two values, against its coverage worked out by integration."""

from __future__ import annotations

import math

import numpy as np
import pytest
from numpy.typing import ArrayLike
from scipy import integrate, special, stats

from plumbfall.uncertainty.coverage import coverage_factor
from plumbfall.uncertainty.few_values import dof_with_few_values

RATIOS = (0.05, 0.1, 0.2, 0.5, 1.0, 2.0, 3.0, 5.0, 10.0, 30.0)


def half_width(part: ArrayLike, scatter_dof: float, probability: float) -> np.ndarray:
    """Intervals where everything but the scatter is 1, exactly known."""
    part = np.atleast_1d(np.asarray(part, dtype=float))
    u = np.hypot(1.0, part)
    with np.errstate(divide="ignore"):
        welch = u**4 * scatter_dof / part**4
    dof = dof_with_few_values(
        u=u, dof=welch, scatter_u=part, scatter_dof=scatter_dof, probability=probability
    )
    return coverage_factor(dof=dof, probability=probability) * u


def coverage(true: float, scatter_dof: int, probability: float) -> tuple[float, float]:
    """Coverage, and mean half-width over that of one who knows the true scatter."""
    q = (np.arange(4000) + 0.5) / 4000
    observed = true * np.sqrt(stats.chi2.ppf(q, scatter_dof) / scatter_dof)
    sigma = math.hypot(1.0, true)
    widths = half_width(observed, scatter_dof, probability)
    covered = 2 * special.ndtr(widths / sigma) - 1
    oracle = special.ndtri((1 + probability) / 2) * sigma
    return float(covered.mean()), float(widths.mean() / oracle)


@pytest.mark.parametrize("ratio", RATIOS)
@pytest.mark.parametrize(("dof", "low", "high"), [(1, 0.93, 0.97), (2, 0.92, 0.951)])
def test_intervals_cover_what_they_promise_whatever_the_proportion(dof, low, high, ratio):
    """Two values by the rule; three by Welch and Satterthwaite, who are not far off there."""
    covered, width = coverage(ratio, dof, 0.95)
    assert low < covered < high
    # never wider than Student's t on the scatter alone, in quadrature with the rest
    student = special.stdtrit(dof, 0.975) / special.ndtri(0.975)
    assert width < student * 1.01
    if ratio <= 0.2:
        assert width < 1.1


def test_welch_and_satterthwaite_alone_hold_too_little():
    """What the rule is for: the same integral with their formula."""

    def covered(z: float) -> float:
        part = 3.0 * abs(z)
        u = math.hypot(1.0, part)
        k = float(coverage_factor(dof=u**4 / part**4, probability=0.95))
        return (2 * special.ndtr(k * u / math.hypot(1, 3)) - 1) * stats.norm.pdf(z)

    value, _ = integrate.quad(covered, 1e-6, 8)
    assert 2 * value < 0.88


@pytest.mark.parametrize("probability", [0.68, 0.9, 0.99])
def test_other_probabilities(probability):
    for ratio in RATIOS:
        covered, _ = coverage(ratio, 1, probability)
        assert (1 - covered) / (1 - probability) == pytest.approx(1, abs=1.4)
        assert covered > probability - 0.02


def test_limits():
    """Student's t where scatter is everything; the rest's own factor where it is nothing."""
    student = special.stdtrit(1, 0.975)
    assert half_width(1e6, 1, 0.95)[0] == pytest.approx(1e6 * student, rel=1e-9)
    assert half_width(0.0, 1, 0.95)[0] == pytest.approx(special.ndtri(0.975), rel=1e-12)
    alone = dof_with_few_values(
        u=[2.0], dof=[1.0], scatter_u=[2.0], scatter_dof=[1.0], probability=0.95
    )
    assert alone[0] == pytest.approx(1.0, rel=1e-6)


def test_enough_values_are_left_to_welch_and_satterthwaite():
    dof = dof_with_few_values(
        u=[2.0, np.nan], dof=[7.5, np.nan], scatter_u=[1.5, 0.1], scatter_dof=[2.0, 9.0],
        probability=0.95,
    )  # fmt: skip
    assert dof[0] == 7.5
    assert np.isnan(dof[1])
