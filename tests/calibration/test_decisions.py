"""Scores, conformity and limits of precision, against print, definitions and scipy.stats."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import stats

from plumbfall.calibration.decisions import (
    acceptance_interval,
    conformance_probability,
    consumers_risk_at_limit,
    guard_factor,
    is_capable,
)
from plumbfall.calibration.normal_range import range_mean, range_probability, range_quantile
from plumbfall.calibration.precision import (
    cochran_critical,
    cochran_statistic,
    critical_difference,
    critical_difference_from_reference,
    critical_range,
    pooled_sd,
    repeatability_limit,
)
from plumbfall.calibration.scores import e_n, z_prime_score, z_score, zeta_score


def test_scores_by_their_definitions():
    # ISO 13528: 1.012 (U 0.010) against 1.000 (U 0.003), k = 2: 0.012 / sqrt(0.010^2 + 0.003^2)
    given = {"value": [1.012, 0.988], "reference_value": 1.0}
    found = e_n(**given, expanded=0.010, reference_expanded=0.003)
    assert found == pytest.approx([1.1494, -1.1494], abs=5e-5)
    assert zeta_score(**given, u=0.005, reference_u=0.0015) == pytest.approx(2 * found)
    assert z_score(value=1.03, assigned=1.0, sd=0.01) == pytest.approx(3)
    assert z_prime_score(value=1.05, assigned=1.0, sd=0.03, assigned_u=0.04) == pytest.approx(1)


def test_guard_factors_of_jcgm_106_table_1():
    # from memory: 0.84, 1.28, 1.64, 2.33, 3.09
    printed = [0.84, 1.28, 1.64, 2.33, 3.09]
    assert guard_factor([0.80, 0.90, 0.95, 0.99, 0.999]) == pytest.approx(printed, abs=5.1e-3)


def test_conformance_probability_of_the_worked_example():
    # JCGM 106, breakdown voltage (from memory): z = 1.4 and 0.92
    assert conformance_probability(value=-5.47, u=0.05, high=-5.40) == pytest.approx(0.92, abs=5e-3)


def test_conformance_probability_with_few_degrees_of_freedom_is_students():
    found = conformance_probability(value=[9.8, 10.1], u=0.1, low=9.7, high=10.2, dof=[4, 9])
    expected = [
        stats.t.cdf((10.2 - x) / 0.1, dof) - stats.t.cdf((9.7 - x) / 0.1, dof)
        for x, dof in ((9.8, 4), (10.1, 9))
    ]
    assert found == pytest.approx(expected, rel=1e-12)
    one_sided = conformance_probability(value=9.8, u=0.1, low=9.7, dof=4)
    assert one_sided == pytest.approx(stats.t.sf(-1, 4), rel=1e-12)


def test_an_exact_value_conforms_or_does_not():
    found = conformance_probability(value=[1.0, 1.5, 2.0, 2.1], u=0.0, low=1.0, high=2.0)
    assert found.tolist() == [1, 1, 1, 0]


def test_guard_band_of_u_leaves_a_risk_of_2_3_percent():
    # JCGM 106, 8.3 (from memory): r = 1, w = U = 2u; none: up to 50 %
    assert consumers_risk_at_limit(2.0) == pytest.approx(0.023, abs=5e-4)
    assert consumers_risk_at_limit(0.0) == 0.5
    assert acceptance_interval(low=1.0, high=2.0, u=0.1, guard=2.0) == pytest.approx((1.2, 1.8))


def test_a_measurement_wider_than_its_limits_is_not_capable():
    # two-sided: 95 % between limits 2 x 1.96 u apart
    assert is_capable(low=-1.97, high=1.97, u=1.0)
    assert not is_capable(low=-1.95, high=1.95, u=1.0)
    assert is_capable(low=-math.inf, high=0.0, u=100.0)


@pytest.mark.parametrize("n", range(2, 11))
def test_range_of_normal_values_against_the_studentized_range_of_scipy(n):
    # with as good as unlimited degrees of freedom the studentized range is the range
    width = range_quantile(0.95, n)
    assert stats.studentized_range.cdf(width, n, np.inf) == pytest.approx(0.95, abs=1e-7)
    assert range_probability(width, n) == pytest.approx(0.95, abs=1e-12)


def test_moments_of_the_range_in_closed_form():
    # means of the range of 2 and 3 normal values: 2/sqrt(pi), 3/sqrt(pi)
    assert range_mean(2) == pytest.approx(2 / math.sqrt(math.pi), rel=1e-13)
    assert range_mean(3) == pytest.approx(3 / math.sqrt(math.pi), rel=1e-13)


def test_critical_ranges_of_iso_5725_6():
    # table 1, from memory
    printed = [2.8, 3.3, 3.6, 3.9, 4.0, 4.2, 4.3, 4.4, 4.5]
    found = [float(critical_range(1.0, n=n)) for n in range(2, 11)]
    assert found == pytest.approx(printed, abs=0.0501)
    assert repeatability_limit(1.0) == pytest.approx(1.959964 * math.sqrt(2), abs=2e-6)


def test_critical_difference_of_two_means():
    # with the standard's 2.8: 2.8 x 0.5 % x sqrt(1/10 + 1/10) = 0.626 %
    found = critical_difference(0.5, n_first=5, n_second=5)
    assert found * 2.8 / 2.771808 == pytest.approx(0.626, abs=5e-4)
    assert critical_difference(0.5, n_first=1, n_second=1) == pytest.approx(
        repeatability_limit(0.5)
    )


def test_critical_difference_from_a_reference():
    # one value: (1/sqrt 2) of the reproducibility limit, whatever the repeatability
    found = critical_difference_from_reference(
        repeatability_sd=0.3, reproducibility_sd=0.5, n=[1, 1000000]
    )
    assert found[0] == pytest.approx(1.959964 * 0.5, rel=1e-6)
    assert found[1] == pytest.approx(1.959964 * 0.4, rel=1e-5)


@pytest.mark.parametrize(
    ("groups", "n", "percent", "printed"),
    # ISO 5725-2 table 4, from memory; its last digit is known to be off by one in places
    [(10, 2, 1, 0.718), (10, 2, 5, 0.602), (5, 3, 1, 0.788), (5, 3, 5, 0.684)],
)
def test_cochran_against_print_and_scipy(groups, n, percent, printed):
    found = float(cochran_critical(groups=groups, n=n, level=percent / 100))
    assert found == pytest.approx(printed, abs=1e-3)
    f = stats.f.ppf(1 - percent / 100 / groups, n - 1, (groups - 1) * (n - 1))
    assert found == pytest.approx(1 / (1 + (groups - 1) / f), rel=1e-10)


def test_cochran_statistic_and_pooled_standard_deviation():
    assert cochran_statistic([1.0, 2.0, 3.0]) == pytest.approx(9 / 14)
    sd, dof = pooled_sd([1.0, 2.0, 99.0], [3, 1, 0])
    assert (sd, dof) == (pytest.approx(math.sqrt(7 / 4)), 4)
    assert math.isnan(pooled_sd([99.0], [0])[0])
