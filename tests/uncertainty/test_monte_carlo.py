"""What the Monte Carlo engine must do whatever the model and the inputs are."""

from __future__ import annotations

import math
import tracemalloc

import numpy as np
import pytest

from plumbfall.errors import InputError
from plumbfall.estimate import Estimate
from plumbfall.uncertainty.linear import propagate
from plumbfall.uncertainty.monte_carlo import run_monte_carlo

ALL = [
    Estimate(3.0, name="exact"),
    Estimate(1.0, 0.1, "normal", name="normal"),
    Estimate(1.0, 0.1, "rectangular", name="rectangular"),
    Estimate(1.0, 0.1, "triangular", name="triangular"),
    Estimate(1.0, 0.1, "arcsine", name="arcsine"),
    Estimate(1.0, 0.1, "t", 4.0, name="t"),
    Estimate(1.0, 0.1, "rectangular", 2.0, name="inexact"),
    Estimate(1.0, 0.1, "triangular", 8.0, name="inexact triangle"),
    Estimate(1.0, 0.1, "arcsine", 8.0, name="inexact arcsine"),
    Estimate(5.0, 0.2, "normal"),
    Estimate(6.0, 0.3, "normal"),
]
CORRELATED = np.eye(len(ALL))
CORRELATED[-1, -2] = CORRELATED[-2, -1] = 0.7


def keep_all(drawn):
    return drawn


def test_block_size_does_not_change_results():
    def model(drawn):
        return np.stack([drawn[1] * drawn[5] / drawn[2], drawn[3] * drawn[4] * drawn[9]])

    one, other, third = (
        run_monte_carlo(model, ALL, draws=20_011, seed=8, correlation=CORRELATED, block=block)
        for block in (None, 777, 20_011)
    )
    for name in ("mean", "u", "covariance", "low", "high", "shortest_low", "shortest_high"):
        assert np.array_equal(getattr(one, name), getattr(other, name)), name
        assert np.array_equal(getattr(one, name), getattr(third, name)), name


def test_draws_do_not_depend_on_how_many_or_which_others():
    few = run_monte_carlo(keep_all, ALL, draws=1_000, keep=True).values
    many = run_monte_carlo(keep_all, ALL[::-1], draws=3_000, block=999, keep=True).values
    named = slice(0, 9)
    assert np.array_equal(few[named], many[::-1][named, :1_000])
    other = run_monte_carlo(keep_all, ALL, draws=1_000, seed=1, keep=True).values
    assert not (few[1:] == other[1:]).any()
    between = np.corrcoef(few[1:]) - np.eye(len(ALL) - 1)
    assert np.abs(between).max() < 4.5 / math.sqrt(1_000)


def test_one_name_is_one_random_variable():
    twice = [ALL[1], ALL[1]]
    found = run_monte_carlo(lambda x: x[0] - x[1], twice, draws=1_000)
    assert found.u[0] == 0.0
    assert (found.low[0], found.high[0]) == (0.0, 0.0)


def test_moments_are_those_of_numpy():
    # M - 1 in the divisor: JCGM 101:2008, 7.6
    found = run_monte_carlo(keep_all, ALL, draws=60, keep=True)
    np.testing.assert_allclose(found.mean, found.values.mean(axis=1), rtol=1e-14)
    np.testing.assert_allclose(found.covariance, np.cov(found.values), rtol=1e-12, atol=1e-16)
    theirs = np.corrcoef(found.values[1:])
    np.testing.assert_allclose(found.correlation[1:, 1:], theirs, atol=1e-12)
    assert np.array_equal(found.u**2 > 0, np.arange(len(ALL)) > 0)


@pytest.mark.parametrize("seed", range(6))
def test_linear_model_of_normal_inputs_agrees_with_linear_propagation(seed):
    rng = np.random.default_rng(seed)
    n_inputs, n_outputs, draws = 7, 3, 50_000
    sensitivities = rng.standard_normal((n_outputs, n_inputs))
    u = 10.0 ** rng.uniform(-2, 1, n_inputs)
    values = rng.standard_normal(n_inputs)
    a = rng.standard_normal((3, 5))
    correlation = np.eye(n_inputs)
    correlation[2:5, 2:5] = np.corrcoef(a)
    theirs = propagate(sensitivities=sensitivities, u=u, correlation=correlation)
    inputs = [Estimate(v, s, "normal") for v, s in zip(values, u, strict=True)]
    ours = run_monte_carlo(
        lambda x: sensitivities @ x, inputs, draws=draws, seed=seed, correlation=correlation
    )
    assert ours.u == pytest.approx(theirs.u, rel=4.5 / math.sqrt(2 * draws))
    middle = sensitivities @ values
    np.testing.assert_array_less(np.abs(ours.mean - middle), 4.5 * theirs.u / math.sqrt(draws))
    # covariance of normal outputs: standard error sqrt((v_i v_j + c_ij^2)/M)
    exact = theirs.covariance()
    allowed = 4.5 * np.sqrt((np.outer(theirs.variance, theirs.variance) + exact**2) / draws)
    np.testing.assert_array_less(np.abs(ours.covariance - exact), allowed)
    near = 4.5 * math.sqrt(0.025 * 0.975 / draws) / 0.05845 * theirs.u  # normal density at 1.96
    np.testing.assert_array_less(np.abs(ours.low - (middle - 1.959964 * theirs.u)), near)
    np.testing.assert_array_less(np.abs(ours.high - (middle + 1.959964 * theirs.u)), near)


@pytest.mark.parametrize("estimate", ALL[1:9], ids=lambda estimate: estimate.name)
def test_symmetric_input_gives_a_symmetric_interval(estimate):
    draws = 100_000
    found = run_monte_carlo(keep_all, [estimate], draws=draws, seed=2, keep=True)
    width = found.high[0] - found.low[0]
    assert (found.low[0] + found.high[0]) / 2 == pytest.approx(1.0, abs=0.02 * width)
    assert found.shortest_high[0] - found.shortest_low[0] <= width
    inside = (found.values[0] >= found.low[0]) & (found.values[0] <= found.high[0])
    assert inside.sum() == 0.95 * draws + 1


def test_moments_that_do_not_exist_are_none():
    inputs = [
        Estimate(1.0, 0.1, "normal", name="a"),
        Estimate(1.0, 0.1, "t", 2.0, name="b"),
        Estimate(1.0, 0.1, "t", 1.0, name="c"),
        Estimate(0.0, 0.1, "t", 1.0, name="d"),
    ]

    def model(x):
        # the last enters with sensitivity 0 at the estimates
        return np.stack([x[0], x[0] + x[1], x[0] * x[2], x[0] * x[3] ** 2])

    found = run_monte_carlo(model, inputs, draws=20_000)
    first, second, third, last = (found.output(k) for k in range(4))
    assert first.standard_uncertainty == pytest.approx(0.1, rel=0.03)
    assert second.standard_uncertainty is None
    assert second.mean == pytest.approx(2.0, abs=0.05)
    assert third.mean is third.standard_uncertainty is None
    assert last.mean is last.standard_uncertainty is None
    # the interval is there all the same: t of 1 dof has 12.706 at 97.5 %, GUM table G.2
    assert third.high == pytest.approx(1 + 12.706 * 0.1, rel=0.1)
    assert np.isnan(found.covariance[0, 1])
    assert found.covariance[0, 0] > 0


def test_draws_without_a_value_are_counted_and_stay_outside():
    inputs = [Estimate(1.0, 0.5, "normal")]  # 2.28 % below zero
    found = run_monte_carlo(lambda x: np.sqrt(x), inputs, draws=100_000, coverage=0.9)
    one = found.output(0)
    assert one.undefined == pytest.approx(2275, abs=4 * math.sqrt(2275))
    assert one.mean is one.standard_uncertainty is None
    # by definition: 5 % below as they lie, lost ones included; above, 5 % less the lost 2.275 %,
    # normal quantiles -1.645 and 1.924
    assert one.low == pytest.approx(math.sqrt(1 - 0.5 * 1.6449), rel=0.02)
    assert one.high == pytest.approx(math.sqrt(1 + 0.5 * 1.9237), rel=0.01)
    wide = run_monte_carlo(lambda x: 1 / (x > 0.0), inputs, draws=10_000, coverage=0.99).output(0)
    assert (wide.low, wide.high) == (-math.inf, math.inf)


def test_exact_inputs_give_their_own_value():
    found = run_monte_carlo(lambda x: x[0] * 0.1, [Estimate(3.0)], draws=1_000)
    assert found.mean[0] == found.low[0] == found.high[0] == 3.0 * 0.1
    assert found.u[0] == 0.0
    adaptive = run_monte_carlo(lambda x: x[0] * 0.1, [Estimate(3.0)], draws="auto")
    assert (adaptive.draws, adaptive.converged) == (20_000, True)


def test_adaptive_procedure_draws_more_for_more_digits_and_gives_up_in_time():
    inputs = [Estimate(1.0, 0.3, "t", 3.0), Estimate(1.0, 0.3, "rectangular")]

    def run(**options):
        return run_monte_carlo(lambda x: x[0] * x[1], inputs, draws="auto", **options)

    coarse, fine = run(digits=1), run(digits=2)
    assert coarse.converged
    assert fine.draws > 3 * coarse.draws
    stopped = run(digits=3, most_draws=45_000)
    assert (stopped.draws, stopped.converged) == (40_000, False)
    # the same draws as where their number is given
    same = run_monte_carlo(lambda x: x[0] * x[1], inputs, draws=40_000)
    assert np.array_equal(same.low, stopped.low)
    assert same.converged is None
    # where no u exists, the bounds are watched
    heavy = run_monte_carlo(lambda x: x[0], [Estimate(1.0, 0.1, "t", 2.0)], draws="auto")
    assert heavy.converged
    assert heavy.output(0).standard_uncertainty is None


@pytest.mark.parametrize(
    ("options", "message"),
    [
        ({"draws": 0}, "draws = 0"),
        ({"draws": "many"}, "or auto"),
        ({"draws": 20, "coverage": 0.999}, "too few"),
        ({"draws": "auto", "coverage": 1.5}, "between 0 and 1"),
        ({"block": 0}, "block = 0"),
        ({"seed": 1.5}, "seed"),
        ({"draws": "auto", "tolerance_part": 0.0}, "tolerance_part"),
    ],
)
def test_wrong_options_are_refused(options, message):
    with pytest.raises(InputError, match=message):
        run_monte_carlo(keep_all, ALL[:2], **options)


def test_a_model_of_the_wrong_shape_is_refused():
    with pytest.raises(InputError, match="shape"):
        run_monte_carlo(lambda x: x[:, :-1], ALL[:2], draws=1_000)


def test_memory_is_the_outputs_alone():
    inputs = [Estimate(1.0, 0.1, "normal", name=f"{i}") for i in range(40)]

    def model(x):
        return np.stack([x[:10].sum(axis=0), x[0] * x[1], x[2] / x[3]])

    def peak(draws: int) -> int:
        tracemalloc.start()
        run_monte_carlo(model, inputs, draws=draws)
        most = tracemalloc.get_traced_memory()[1]
        tracemalloc.stop()
        return most

    few, many = peak(200_000), peak(800_000)
    a_draw = (many - few) / 600_000
    assert a_draw < 8 * 3 + 2  # three outputs, and what their intervals need
    assert few + a_draw * 9.8e6 < 500e6  # 1e7 draws


def test_adaptive_memory_is_bounded_too():
    def peak(most: int) -> int:
        tracemalloc.start()
        run_monte_carlo(
            lambda x: x[0], [ALL[5]], draws="auto", digits=4, most_draws=most, block=10_000
        )
        most_bytes = tracemalloc.get_traced_memory()[1]
        tracemalloc.stop()
        return most_bytes

    assert (peak(800_000) - peak(200_000)) / 600_000 < 2 * 8 + 2
