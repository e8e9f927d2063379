"""Worked examples of JCGM 101:2008 (supplement 1 to the GUM), clauses 7.9 and 9.

Printed figures are from memory of the supplement. Values said to be exact follow from the
distribution's own formula, worked here without any of our code. A bound of a Monte Carlo interval
has the standard error sqrt(P (1 - P)/M)/f of a quantile P, f being the density there; checks allow
four of them, and half the last printed digit where a figure is from print.
"""

from __future__ import annotations

import math
from functools import partial

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.integrate import quad
from scipy.optimize import brentq, minimize_scalar
from scipy.special import chndtr, chndtrix, ndtr

from plumbfall.estimate import Estimate
from plumbfall.uncertainty.coverage import coverage_factor
from plumbfall.uncertainty.intervals import tolerance_delta, validate
from plumbfall.uncertainty.linear import propagate
from plumbfall.uncertainty.monte_carlo import run_monte_carlo
from plumbfall.uncertainty.monte_carlo_result import MonteCarlo
from plumbfall.uncertainty.stopping import adaptive_block

Array = NDArray[np.float64]

M = 1_000_000
ROOT3 = math.sqrt(3.0)
SHORTEST = 2.7
"""Scatter of a shortest interval's ends over that of a symmetric one's, normal output, by
simulation; it falls slowly with M, and only widens what is allowed."""


def quantile_error(tail: float, density: float, draws: int = M) -> float:
    """Four standard errors of a quantile that leaves a probability beside it."""
    return 4 * math.sqrt(tail * (1 - tail) / draws) / density


def normal_density(u: float, k: float) -> float:
    return math.exp(-(k**2) / 2) / (math.sqrt(2 * math.pi) * u)


def total(drawn: Array) -> Array:
    return np.asarray(drawn.sum(axis=0))


# 9.2 additive model Y = X1 + X2 + X3 + X4


def test_9_2_2_four_normal_inputs():
    found = run_monte_carlo(total, [Estimate(0.0, 1.0, "normal")] * 4, draws=M, seed=1).output(0)
    allowed = quantile_error(0.025, normal_density(2.0, 1.959964))
    assert found.standard_uncertainty == pytest.approx(2.0, abs=4 * 2.0 / math.sqrt(2 * M))
    assert found.low == pytest.approx(-3.919928, abs=allowed)  # exact; printed -3.92
    assert found.high == pytest.approx(3.919928, abs=allowed)
    assert found.shortest_high == pytest.approx(3.92, abs=0.005 + SHORTEST * allowed)


def test_9_2_3_four_rectangular_inputs():
    found = run_monte_carlo(total, [Estimate(0.0, 1.0, "rectangular")] * 4, draws=M, seed=2)
    # exact: the tail beyond x is (4a - x)^4 / (24 (2a)^4), a = sqrt 3
    exact = 2 * ROOT3 * (2 - 0.6**0.25)
    assert exact == pytest.approx(3.879407, abs=5e-7)  # printed 3.88
    allowed = quantile_error(0.025, (4 * ROOT3 - exact) ** 3 / (6 * (2 * ROOT3) ** 4))
    assert found.output(0).low == pytest.approx(-exact, abs=allowed)
    assert found.output(0).high == pytest.approx(exact, abs=allowed)
    assert found.u[0] == pytest.approx(2.0, abs=4 * 2.0 / math.sqrt(2 * M))


def test_9_2_4_one_rectangular_input_outweighs_the_others():
    inputs = [Estimate(0.0, u, "rectangular") for u in (1.0, 1.0, 1.0, 10.0)]
    found = run_monte_carlo(total, inputs, draws=M, seed=3)

    # exact: the three have the Irwin-Hall distribution, the fourth averages it over its width
    def three(x: float) -> float:
        t = x / (2 * ROOT3) + 1.5
        return sum(
            (-1) ** k * math.comb(3, k) * max(t - k, 0.0) ** 4 for k in range(4)
        ) / 24 * (2 * ROOT3)  # fmt: skip

    def beyond(x: float) -> float:
        half = 10 * ROOT3
        return 0.975 - (three(x + half) - three(x - half)) / (2 * half)

    exact = float(brentq(beyond, 10.0, 20.0))
    assert exact == pytest.approx(17.0, abs=0.05)  # printed 17.0
    density = (beyond(exact - 1e-3) - beyond(exact + 1e-3)) / 2e-3
    allowed = quantile_error(0.025, density)
    assert found.output(0).low == pytest.approx(-exact, abs=allowed)
    assert found.output(0).high == pytest.approx(exact, abs=allowed)
    linear = propagate(sensitivities=np.ones((1, 4)), u=np.array([1.0, 1.0, 1.0, 10.0])).u[0]
    expanded = float(coverage_factor(dof=np.inf, probability=0.95)) * linear
    assert linear == pytest.approx(10.1, abs=0.05)  # printed
    assert expanded == pytest.approx(19.9, abs=0.05)  # printed
    agrees = validate(
        linear_low=-expanded, linear_high=expanded, low=-exact, high=exact, u=linear, digits=2
    )
    assert agrees.delta == 0.5
    assert not agrees.validated


# 9.3 mass calibration


def mass_difference(drawn: Array) -> Array:
    reference, added, air, weight, standard = drawn
    return np.asarray(
        (reference + added) * (1 + (air - 1.2) * (1 / weight - 1 / standard)) - 100_000.0
    )


MASSES = [
    Estimate(100_000.0, 0.050, "normal", name="reference", unit="mg"),
    Estimate(1.234, 0.020, "normal", name="added", unit="mg"),
    Estimate(1.20, 0.10 / ROOT3, "rectangular", name="air", unit="kg/m3"),
    Estimate(8000.0, 1000.0 / ROOT3, "rectangular", name="weight", unit="kg/m3"),
    Estimate(8000.0, 50.0 / ROOT3, "rectangular", name="standard", unit="kg/m3"),
]


def exact_mass_u() -> float:
    """Variance of a product of independent factors, from the moments of 1/density."""

    def moments(low: float, high: float) -> tuple[float, float]:
        return math.log(high / low) / (high - low), 1 / (low * high)

    (w1, w2), (r1, r2) = moments(7000.0, 9000.0), moments(7950.0, 8050.0)
    difference_squared = w2 - 2 * w1 * r1 + r2
    buoyancy = 0.10**2 / 3 * difference_squared
    own = 0.050**2 + 0.020**2
    return math.sqrt(own * (1 + buoyancy) + 100_001.234**2 * buoyancy)


def test_9_3_mass_calibration():
    found = run_monte_carlo(mass_difference, MASSES, draws=M, seed=4)
    one = found.output(0)
    assert exact_mass_u() == pytest.approx(0.0754, abs=1.5e-4)  # printed 0.0754, itself drawn
    assert one.standard_uncertainty == pytest.approx(exact_mass_u(), rel=4 / math.sqrt(2 * M))
    assert one.mean == pytest.approx(1.234, abs=4 * 0.0755 / math.sqrt(M))
    near = quantile_error(0.025, normal_density(0.0755, 1.96))
    for ends in ((one.low, one.high), (one.shortest_low, one.shortest_high)):
        # printed from fewer draws, as a shortest interval
        assert ends == pytest.approx((1.0834, 1.3825), abs=1.5 * SHORTEST * near)


def test_9_3_validates_the_second_order_interval_only():
    monte_carlo = run_monte_carlo(mass_difference, MASSES, draws=M, seed=4).output(0)
    k = float(coverage_factor(dof=np.inf, probability=0.95))
    first = math.hypot(0.050, 0.020)  # the densities' sensitivities vanish at the estimates
    # second order, JCGM 100:2008 5.1.2 note: mixed derivatives by air and each density
    mixed = 100_001.234 / 8000.0**2 * 0.10 / ROOT3
    second = math.sqrt(first**2 + (mixed * 1000.0 / ROOT3) ** 2 + (mixed * 50.0 / ROOT3) ** 2)
    assert (first, second) == pytest.approx((0.0539, 0.0750), abs=5e-5)  # printed
    assert 1.234 - k * first == pytest.approx(1.1285, abs=6e-5)  # printed
    assert 1.234 + k * second == pytest.approx(1.3810, abs=1.1e-4)  # printed
    compare = partial(validate, low=monte_carlo.low, high=monte_carlo.high, u=0.0755, digits=1)
    by_first = compare(linear_low=1.234 - k * first, linear_high=1.234 + k * first)
    by_second = compare(linear_low=1.234 - k * second, linear_high=1.234 + k * second)
    assert by_first.delta == by_second.delta == pytest.approx(0.005)  # printed
    assert by_first.d_low == pytest.approx(0.0451, abs=0.003)  # printed, of a shortest interval
    assert by_first.d_high == pytest.approx(0.0430, abs=0.003)
    assert not by_first.validated
    assert by_second.validated


# 9.4 comparison loss in microwave power meter calibration, all in 1e-6


def loss(drawn: Array) -> Array:
    return np.asarray(1e6 * (drawn[0] ** 2 + drawn[1] ** 2))


def run_loss(first: float, r: float = 0.0, seed: int = 5) -> MonteCarlo:
    inputs = [Estimate(first, 0.005, "normal"), Estimate(0.0, 0.005, "normal")]
    return run_monte_carlo(loss, inputs, draws=M, seed=seed, correlation=[[1.0, r], [r, 1.0]])


def shortest_loss(first: float) -> tuple[float, float]:
    """Return the exact shortest interval: 25 times noncentral chi-squared of 2 dof, by scipy."""
    squares = (first / 0.005) ** 2

    def high(below: float) -> float:
        return 25 * float(chndtrix(below + 0.95, 2, squares))

    def low(below: float) -> float:
        return 25 * float(chndtrix(below, 2, squares)) if below > 0 else 0.0

    best = minimize_scalar(
        lambda below: high(below) - low(below), bounds=(0.0, 0.0499), method="bounded"
    )
    below = 0.0 if high(0.0) <= best.fun else float(best.x)
    return low(below), high(below)


@pytest.mark.parametrize(
    ("first", "mean", "u", "printed"),
    [
        (0.0, 50, 50, (0, 150)),
        (0.010, 150, 112, (0, 367)),
        (0.050, 2551, 502, (1590, 3543)),
    ],
)
def test_9_4_loss_of_independent_inputs(first, mean, u, printed):
    found = run_loss(first).output(0)
    squares = (first / 0.005) ** 2
    exact_mean, exact_u = 25 * (2 + squares), 25 * math.sqrt(4 + 4 * squares)
    assert mean == pytest.approx(exact_mean, abs=1.1)  # printed, itself drawn
    assert u == pytest.approx(exact_u, abs=0.51)
    assert found.mean == pytest.approx(exact_mean, abs=4 * exact_u / math.sqrt(M))
    # kurtosis 3 + 12 (k + 4 nc)/(k + 2 nc)^2 of noncentral chi-squared
    kurtosis = 3 + 12 * (2 + 4 * squares) / (2 + 2 * squares) ** 2
    allowed = 4 * math.sqrt((kurtosis - 1) / (4 * M))
    assert found.standard_uncertainty == pytest.approx(exact_u, rel=allowed)

    def below(y: float) -> float:
        return float(chndtr(y / 25, 2, squares))

    exact = shortest_loss(first)
    for end, ours in ((0.025, found.low), (0.975, found.high)):
        assert below(ours) == pytest.approx(end, abs=4 * math.sqrt(0.025 * 0.975 / M))
    density = (below(exact[1] + 0.1) - below(exact[1] - 0.1)) / 0.2
    near = quantile_error(1 - below(exact[1]), density)
    held = below(found.shortest_high) - below(found.shortest_low)
    assert held == pytest.approx(0.95, abs=4 * math.sqrt(0.05 * 0.95 / M))
    # as short as the exact one; the ends themselves are printed from draws
    length = found.shortest_high - found.shortest_low
    assert length == pytest.approx(exact[1] - exact[0], abs=2 * near)
    assert (found.shortest_low, found.shortest_high) == pytest.approx(
        printed, abs=0.5 + SHORTEST * near
    )


def test_9_4_upper_end_at_the_physical_limit():
    found = run_loss(0.0).output(0)
    exact = 50 * math.log(20.0)
    assert exact == pytest.approx(149.78661, abs=5e-6)
    assert found.shortest_high == pytest.approx(exact, abs=quantile_error(0.05, 0.05 / 50))
    assert 0.0 <= found.shortest_low < 0.5  # printed 0
    # the linear interval has no width there: both sensitivities vanish
    assert not validate(
        linear_low=0.0, linear_high=0.0, low=found.low, high=found.high, u=50.0
    ).validated


@pytest.mark.parametrize(("first", "u", "printed"), [(0.0, 67, (0, 185)), (0.010, 121, (13, 398))])
def test_9_4_loss_of_correlated_inputs(first, u, printed):
    found = run_loss(first, r=0.9, seed=6).output(0)
    # exact: variance of a quadratic form, 2 tr V^2 + 4 x' V x
    exact_u = math.sqrt(2 * 25**2 * (2 + 2 * 0.9**2) + 4 * 25 * (1000 * first) ** 2)
    if first == 0.0:
        assert exact_u == pytest.approx(67.26812, abs=5e-6)
    assert u == pytest.approx(exact_u, abs=0.51)  # printed
    assert found.standard_uncertainty == pytest.approx(exact_u, rel=0.006)
    # exact distribution by quadrature over the eigenvector of the smaller eigenvalue
    wide, narrow, shift = 5 * math.sqrt(1.9), 5 * math.sqrt(0.1), 1000 * first / math.sqrt(2)

    def below(y: float) -> float:
        def along(v: float) -> float:
            half = math.sqrt(max(y - v * v, 0.0))
            part = ndtr((half - shift) / wide) - ndtr((-half - shift) / wide)
            return float(part) * normal_density(narrow, (v - shift) / narrow)

        root = math.sqrt(y)
        low, high = max(-root, shift - 9 * narrow), min(root, shift + 9 * narrow)
        return float(quad(along, low, high, epsabs=1e-10)[0]) if low < high else 0.0

    for end, ours in ((0.025, found.low), (0.975, found.high)):
        assert below(ours) == pytest.approx(end, abs=4 * math.sqrt(0.025 * 0.975 / M))
    held = below(found.shortest_high) - below(found.shortest_low)
    assert held == pytest.approx(0.95, abs=4 * math.sqrt(0.05 * 0.95 / M))
    density = (below(printed[1] + 0.5) - below(printed[1] - 0.5)) / 1.0
    near = quantile_error(0.05, density)
    assert (found.shortest_low, found.shortest_high) == pytest.approx(
        printed, abs=0.5 + SHORTEST * near
    )


# 9.5 gauge block calibration, in nm


def gauge_deviation(drawn: Array) -> Array:
    standard, difference, random, systematic, alpha_s, mean, cycle, d_alpha, d_theta = drawn
    theta = mean + cycle
    length = standard * (1 + alpha_s * (theta - d_theta)) + difference + random + systematic
    return np.asarray(length / (1 + (alpha_s + d_alpha) * theta) - 50e6)


GAUGES = [
    Estimate(50_000_623.0, 25.0, "t", 18, "standard"),
    Estimate(215.0, 6.0, "t", 24, "difference"),
    Estimate(0.0, 4.0, "t", 5, "random"),
    Estimate(0.0, 7.0, "t", 8, "systematic"),
    Estimate(11.5e-6, 2.0e-6 / ROOT3, "rectangular", name="alpha_s"),
    Estimate(-0.1, 0.2, "normal", name="mean"),
    Estimate(0.0, 0.5 / math.sqrt(2), "arcsine", name="cycle"),
    # CTrap(-1.0e-6, 1.0e-6, 0.1e-6) and CTrap(-0.050, 0.050, 0.025)
    Estimate(0.0, 1.0e-6 / ROOT3, "rectangular", 50, "d_alpha"),
    Estimate(0.0, 0.050 / ROOT3, "rectangular", 2, "d_theta"),
]


def test_9_5_gauge_block():
    found = run_monte_carlo(gauge_deviation, GAUGES, draws=M, coverage=0.99, seed=7).output(0)
    assert found.mean == pytest.approx(838, abs=0.5 + 4 * 36 / math.sqrt(M))  # printed
    assert found.standard_uncertainty == pytest.approx(36, abs=0.5)  # printed
    near = quantile_error(0.005, normal_density(36.0, 2.576))
    for ends in ((found.low, found.high), (found.shortest_low, found.shortest_high)):
        assert ends == pytest.approx((745, 932), abs=0.5 + 1.5 * near)  # printed
    # the linear interval, printed 745 and 931, of U = 93 nm
    agrees = validate(linear_low=745, linear_high=931, low=found.low, high=found.high, u=36)
    assert agrees.delta == 5
    assert agrees.validated


def test_9_5_variance_is_the_sum_of_its_parts():
    # variance of each distribution by its formula in table 1 and 6.4, first and second order
    def t(s: float, dof: int) -> float:
        return s**2 * dof / (dof - 2)

    def trapezoid(half: float, inexact: float) -> float:
        return half**2 / 3 + inexact**2 / 9

    length = 50_000_623.0
    theta_squared = 0.1**2 + 0.2**2 + 0.5**2 / 2
    variance = (
        t(25, 18) + t(6, 24) + t(4, 5) + t(7, 8)
        + length**2 * theta_squared * trapezoid(1.0e-6, 0.1e-6)
        + length**2 * (11.5e-6**2 + 2.0e-6**2 / 3) * trapezoid(0.050, 0.025)
    )  # fmt: skip
    found = run_monte_carlo(gauge_deviation, GAUGES, draws=M, coverage=0.99, seed=8)
    # higher orders, 1e-6 relative; t of 5 dof leaves a kurtosis of the sum near 3.3
    assert found.u[0] == pytest.approx(math.sqrt(variance), rel=4 * math.sqrt(2.5 / (4 * M)))


# 7.9 numerical tolerance and the adaptive procedure


def test_7_9_2_numerical_tolerance():
    assert tolerance_delta(0.00035, digits=2) == pytest.approx(0.000005)  # printed, 0.35 mg
    assert tolerance_delta(2.0, digits=1) == pytest.approx(0.5)  # printed, 2 K
    assert tolerance_delta(0.0996, digits=1) == pytest.approx(0.05)  # rounds to 0.1, by definition
    assert tolerance_delta(0.0, digits=1) == 0.0


def test_7_9_4_draws_of_a_block():
    # by definition: the larger of 10,000 and the smallest integer not below 100/(1 - p)
    assert [adaptive_block(p) for p in (0.95, 0.99, 0.995, 0.999)] == [
        10_000,
        10_000,
        20_000,
        100_000,
    ]


@pytest.mark.parametrize(("digits", "part"), [(1, 1.0), (2, 1.0), (1, 0.2)])
def test_7_9_4_adaptive_procedure_reaches_its_tolerance(digits, part):
    found = run_monte_carlo(
        mass_difference, MASSES, draws="auto", seed=9, digits=digits, tolerance_part=part
    )
    assert found.converged
    assert found.draws % 10_000 == 0
    assert found.draws >= 20_000
    delta = part * tolerance_delta(exact_mass_u(), digits)
    # two standard errors are below it, as estimated from few blocks: allow half as much again
    assert found.u[0] == pytest.approx(exact_mass_u(), abs=1.5 * delta)
    near = 0.5 * quantile_error(0.025, normal_density(0.0755, 1.96), found.draws)
    assert near < 1.5 * delta
