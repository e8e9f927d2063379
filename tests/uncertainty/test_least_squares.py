"""Generalised least squares, against GUM H.3, a reference library, and by hand."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.optimize import curve_fit
from scipy.stats import f, ttest_ind_from_stats

from plumbfall.run_sets.temperature_laws import LAWS
from plumbfall.uncertainty.least_squares import Evaluated, NoFitError, fit, fit_linear

TEMPERATURE = np.array([10.0, 20.0, 30.0, 40.0, 60.0]) + 273.15


def correlated(n: int, seed: int) -> tuple[np.ndarray, np.ndarray]:
    """A covariance with shared and own parts, and errors drawn from it."""
    rng = np.random.default_rng(seed)
    shared = rng.normal(0.002, 0.001, n)
    covariance = np.diag(rng.uniform(0.001, 0.003, n) ** 2) + np.outer(shared, shared)
    return covariance, rng.multivariate_normal(np.zeros(n), covariance)


def test_thermometer_line_of_the_gum():
    """JCGM 100:2008, H.3 (from memory): y1 -0.1712(29), y2 0.00218(67), r -0.930, s 0.0035."""
    readings = [21.521, 22.012, 22.512, 23.003, 23.507, 23.999, 24.513, 25.002, 25.503, 26.010,
                26.511]  # fmt: skip
    corrections = [-0.171, -0.169, -0.166, -0.159, -0.164, -0.165, -0.156, -0.157, -0.159, -0.161,
                   -0.160]  # fmt: skip
    design = np.stack([np.ones(11), np.array(readings) - 20.0], axis=1)
    line = fit_linear(design, corrections, np.eye(11))
    assert math.sqrt(line.chi_squared / line.dof) == pytest.approx(0.0035, abs=5e-5)
    line = line.scaled()
    assert line.parameters == pytest.approx([-0.1712, 0.00218], abs=5e-5)
    assert line.u == pytest.approx([0.0029, 0.00067], abs=5e-5)
    assert line.covariance[0, 1] / np.prod(line.u) == pytest.approx(-0.930, abs=5e-4)
    at_30 = np.array([1.0, 10.0])
    assert at_30 @ line.parameters == pytest.approx(-0.1494, abs=5e-5)
    assert math.sqrt(at_30 @ line.covariance @ at_30) == pytest.approx(0.0041, abs=5e-5)


@pytest.mark.parametrize("seed", range(5))
def test_a_line_with_correlated_errors_is_scipys(seed):
    covariance, errors = correlated(6, seed)
    x = np.linspace(-1.0, 2.0, 6)
    y = 0.7 - 0.2 * x + errors
    ours = fit_linear(np.stack([np.ones(6), x], axis=1), y, covariance)
    theirs, spread = curve_fit(
        lambda x, a, b: a + b * x, x, y, p0=(0.0, 0.0), sigma=covariance, absolute_sigma=True
    )
    assert ours.parameters == pytest.approx(theirs, rel=1e-6)
    assert ours.covariance == pytest.approx(spread, rel=1e-5)


@pytest.mark.parametrize("seed", range(5))
def test_vogels_law_with_correlated_errors_is_scipys(seed):
    law = LAWS["vogel"]
    covariance, errors = correlated(5, seed)
    y = -7.0 + 1050.0 / (TEMPERATURE - 150.0) + 0.1 * errors
    covariance = 0.01 * covariance
    ours = fit(lambda p: law.evaluate(p, TEMPERATURE), law.start(TEMPERATURE, y), y, covariance)
    theirs, spread = curve_fit(
        lambda t, a, b, t0: a + b / (t - t0), TEMPERATURE, y, p0=(-7.0, 1050.0, 150.0),
        sigma=covariance, absolute_sigma=True, xtol=1e-14, ftol=1e-14, gtol=1e-14,
    )  # fmt: skip
    # scipy's derivatives are differences, and its covariance leaves the law's curvature out
    assert ours.parameters == pytest.approx(theirs, rel=1e-4)
    assert np.sqrt(np.diag(ours.covariance)) == pytest.approx(np.sqrt(np.diag(spread)), rel=0.02)


@pytest.mark.parametrize("name", ["andrade", "vogel"])
def test_sensitivities_are_the_fits_own_slopes(name):
    law = LAWS[name]
    covariance, errors = correlated(5, 7)
    y = -7.0 + 1050.0 / (TEMPERATURE - 150.0) + errors

    def parameters(values: np.ndarray) -> np.ndarray:
        start = law.start(TEMPERATURE, values)
        return fit(lambda p: law.evaluate(p, TEMPERATURE), start, values, covariance).parameters

    start = law.start(TEMPERATURE, y)
    found = fit(lambda p: law.evaluate(p, TEMPERATURE), start, y, covariance)
    for place in range(5):
        step = np.zeros(5)
        step[place] = 1e-4
        slope = (parameters(y + step) - parameters(y - step)) / 2e-4
        assert found.sensitivities[:, place] == pytest.approx(slope, rel=2e-5)


def test_as_many_values_as_parameters_leave_nothing_to_judge_by():
    found = fit_linear([[1.0, 0.0], [1.0, 1.0]], [2.0, 5.0], np.diag([0.1, 0.2]) ** 2)
    assert found.parameters == pytest.approx([2.0, 3.0], rel=1e-12)
    assert found.u == pytest.approx([0.1, math.hypot(0.1, 0.2)], rel=1e-12)
    assert math.isnan(found.p_value(np.zeros(2), np.full(2, np.inf)))
    assert math.isnan(found.goodness(np.zeros(2), np.full(2, np.inf)).p_value)
    with pytest.raises(NoFitError):
        found.scaled()


def test_what_cannot_be_determined_is_refused():
    with pytest.raises(NoFitError):
        fit_linear([[1.0, 2.0]], [1.0], [[1.0]])
    with pytest.raises(NoFitError):
        fit_linear([[1.0, 2.0]] * 3, [1.0, 1.1, 0.9], np.eye(3))


def test_exact_values_weigh_the_same_and_give_no_chi_squared():
    found = fit_linear(np.ones((3, 1)), [1.0, 2.0, 6.0], np.zeros((3, 3)))
    assert found.parameters == pytest.approx([3.0])
    assert found.u == pytest.approx([0.0])
    assert math.isnan(found.chi_squared)


def test_other_weights_change_the_fit_but_keep_its_uncertainty_true():
    """By hand: the mean of two values of u 1 and 3 is 2 with u sqrt(1 + 9)/2, whatever is best."""
    equal = fit(
        lambda p: Evaluated(np.ones(2) * p[0], np.ones((2, 1))),
        [0.0],
        [1.0, 3.0],
        np.diag([1.0, 9.0]),
        np.eye(2),
    )
    assert equal.parameters == pytest.approx([2.0])
    assert equal.u == pytest.approx([math.sqrt(10) / 2])
    best = fit_linear(np.ones((2, 1)), [1.0, 3.0], np.diag([1.0, 9.0]))
    assert best.parameters == pytest.approx([1.2])
    assert best.u == pytest.approx([math.sqrt(0.9)])


def test_misfit_of_means_is_welchs_test():
    """Welch 1951 for three means; the statistic written out as in the paper (from memory)."""
    means, u, dof = np.array([10.0, 10.4, 11.1]), np.array([0.2, 0.3, 0.25]), np.array([4, 6, 9])
    found = fit_linear(np.ones((3, 1)), means, np.diag(u**2))
    weight = 1 / u**2
    centre = np.sum(weight * means) / weight.sum()
    spread = np.sum(weight * (means - centre) ** 2) / 2
    lost = np.sum((1 - weight / weight.sum()) ** 2 / dof)
    statistic = spread / (1 + 2 * 1 * lost / 8)
    assert found.p_value(u**2, dof) == pytest.approx(f.sf(statistic, 2, 8 / (3 * lost)), rel=1e-9)


def test_misfit_of_exactly_known_errors_is_chi_squared():
    """chi-squared 5.9915 at two degrees of freedom has 5 % (tables; JCGM 102: 2.448 squared)."""
    design, u = np.ones((3, 1)), 1.0
    distance = math.sqrt(5.9915 / 2)
    found = fit_linear(design, [-distance, 0.0, distance], np.eye(3) * u)
    known = np.zeros(3), np.full(3, np.inf)
    assert found.p_value(*known) == pytest.approx(0.05, abs=1e-5)
    goodness = found.goodness(*known)
    assert goodness.chi_squared == pytest.approx(5.9915)
    assert goodness.p_value == pytest.approx(0.05, abs=1e-5)


def test_goodness_of_two_means_is_welchs_t_test():
    theirs = ttest_ind_from_stats(10.0, 2.0, 5, 12.5, 0.7, 9, equal_var=False)
    variance = np.array([2.0**2 / 5, 0.7**2 / 9])
    found = fit(
        lambda p: Evaluated(np.ones(2) * p[0], np.ones((2, 1))),
        [0.0], [10.0, 12.5], np.diag(variance), np.eye(2),
    )  # fmt: skip
    ours = found.goodness(variance, np.array([4.0, 8.0]))
    assert ours.p_value == pytest.approx(theirs.pvalue, rel=1e-6)


@pytest.mark.parametrize("spread", [0.0, 1.0])
@pytest.mark.parametrize(("sets", "drops"), [(3, 3), (5, 2), (10, 3), (30, 3)])
def test_goodness_finds_no_more_than_its_level_in_what_follows_the_law(sets, drops, spread):
    """Own scatter seen in few drops, alike or from 0.4 to 2.7 times as large, by simulation."""
    rng = np.random.default_rng(4)
    x = np.linspace(-1.0, 1.0, sets)
    design, dof = np.stack([np.ones(sets), x], axis=1), np.full(sets, drops - 1.0)
    found = []
    for _ in range(400):
        values = np.exp(spread * x)[:, None] * rng.standard_normal((sets, drops))
        variance = values.var(axis=1, ddof=1) / drops
        made = fit(
            lambda p: Evaluated(design @ p, design),
            [0.0, 0.0], values.mean(axis=1), np.diag(variance), np.eye(sets) * variance.mean(),
        )  # fmt: skip
        found.append(made.goodness(variance, dof).p_value)
    # two standard deviations of 400 trials are 2.2 %
    assert np.mean(np.array(found) < 0.05) <= 0.072
    assert np.mean(np.array(found) < 0.0023) <= 0.012
