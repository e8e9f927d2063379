"""Draws of every distribution against its own formula, and of correlated inputs."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.special import ndtri, stdtrit

from plumbfall.errors import InputError
from plumbfall.estimate import Estimate
from plumbfall.uncertainty.distributions import open_stream
from plumbfall.uncertainty.joint_draws import JointDraws, lower_factor

N = 400_000
AT = np.array([0.005, 0.025, 0.1, 0.3, 0.5, 0.7, 0.9, 0.975, 0.995])


def draw(estimate: Estimate, n: int = N, seed: int = 11) -> np.ndarray:
    out = np.empty(n)
    open_stream(estimate, seed=seed, place=0).fill(out)
    return out


def triangle(p):
    return np.where(p < 0.5, np.sqrt(2 * p) - 1, 1 - np.sqrt(2 * (1 - p)))


# quantiles of a distribution of value 0 and u = 1: JCGM 101:2008, 6.4, in closed form
QUANTILES = {
    ("normal", math.inf): ndtri,
    ("t", math.inf): ndtri,
    ("t", 3.0): lambda p: stdtrit(3.0, p),
    ("t", 1.0): lambda p: np.tan(math.pi * (p - 0.5)),
    ("normal", 6.5): lambda p: stdtrit(6.5, p),
    ("rectangular", math.inf): lambda p: math.sqrt(3) * (2 * p - 1),
    ("triangular", math.inf): lambda p: math.sqrt(6) * triangle(p),
    ("arcsine", math.inf): lambda p: -math.sqrt(2) * np.cos(math.pi * p),
}


@pytest.mark.parametrize(("shape", "dof"), QUANTILES)
def test_quantiles_are_those_of_the_distribution(shape, dof):
    quantiles = QUANTILES[shape, dof](AT)
    drawn = draw(Estimate(5.0, 0.2, shape, dof))
    below = np.array([(drawn <= 5.0 + 0.2 * q).mean() for q in quantiles])
    assert np.abs(below - AT).max() < 4 * 0.5 / math.sqrt(N)
    assert (np.abs(below - AT) < 4 * np.sqrt(AT * (1 - AT) / N)).all()


def test_t_has_more_than_its_u():
    # JCGM 101:2008, 6.4.9.4: variance s^2/n times dof/(dof - 2)
    drawn = draw(Estimate(1.0, 0.5, "t", 9.0))
    assert drawn.std() == pytest.approx(0.5 * math.sqrt(9 / 7), rel=4 * math.sqrt(3.2 / (4 * N)))


@pytest.mark.parametrize("dof", [2.0, 50.0])
def test_bounds_of_finite_dof_are_a_curvilinear_trapezoid(dof):
    # density by JCGM 101:2008, 6.4.3.2, half-width 1 and inexactness d, here as its integral:
    # P(|X| <= x) = x ln((1 + d)/(1 - d))/(2 d) within 1 - d
    d = 1 / math.sqrt(2 * dof)
    drawn = draw(Estimate(0.0, 1 / math.sqrt(3), "rectangular", dof))
    assert np.abs(drawn).max() <= 1 + d
    assert np.abs(drawn).max() > 1 + 0.8 * d
    variance = 1 / 3 + d**2 / 9  # 6.4.3.3
    assert drawn.var() == pytest.approx(variance, rel=4 / math.sqrt(N))
    for x in (0.2 * (1 - d), 1 - d):
        inside = x * math.log((1 + d) / (1 - d)) / (2 * d)
        assert (np.abs(drawn) <= x).mean() == pytest.approx(
            inside, abs=4 * math.sqrt(inside * (1 - inside) / N)
        )


@pytest.mark.parametrize(("shape", "variance"), [("triangular", 1 / 6), ("arcsine", 1 / 2)])
def test_other_bounds_of_finite_dof_scale_by_the_half_width(shape, variance):
    # by definition: the variance of a product with an independent half-width, mean 1, var d^2/3
    dof = 3.0
    drawn = draw(Estimate(0.0, math.sqrt(variance), shape, dof))
    assert drawn.var() == pytest.approx(variance * (1 + 1 / (6 * dof)), rel=6 / math.sqrt(N))
    assert drawn.mean() == pytest.approx(0.0, abs=4 * math.sqrt(variance / N))


def test_exact_is_its_value():
    assert (draw(Estimate(9.81), 10) == 9.81).all()
    assert (draw(Estimate(9.81, 0.0, "t", 1.0), 10) == 9.81).all()  # equal readings


@pytest.mark.parametrize("r", [-1.0, -0.6, 0.9, 1.0])
def test_correlated_normal_inputs(r):
    pair = [Estimate(1.0, 0.1, "normal"), Estimate(-2.0, 3.0, "normal")]
    out = np.empty((2, N))
    JointDraws(pair, seed=3, correlation=[[1.0, r], [r, 1.0]]).fill(out)
    se = max((1 - r**2) / math.sqrt(N), 1e-12)
    assert np.corrcoef(out)[0, 1] == pytest.approx(r, abs=4 * se)
    assert out.mean(axis=1) == pytest.approx([1.0, -2.0], abs=4 * 3.0 / math.sqrt(N))
    assert out.std(axis=1) == pytest.approx([0.1, 3.0], rel=4 / math.sqrt(2 * N))


def test_factor_is_that_of_cholesky():
    rng = np.random.default_rng(5)
    a = rng.standard_normal((6, 9))
    matrix = np.corrcoef(a)
    np.testing.assert_allclose(lower_factor(matrix), np.linalg.cholesky(matrix), atol=1e-12)
    singular = np.corrcoef(np.vstack([a[:2], a[0] - 2 * a[1], a[2]]))
    factor = lower_factor(singular)
    np.testing.assert_allclose(factor @ factor.T, singular, atol=1e-7)


NORMAL = Estimate(1.0, 0.1, "normal", name="a")


@pytest.mark.parametrize(
    ("inputs", "correlation", "message"),
    [
        ([], None, "no inputs"),
        ([Estimate(1.0, 0.1, "normla", name="tube.A.bore")], None, "did you mean 'normal'"),
        ([Estimate(1.0, 0.1, "exact", name="x")], None, "x: it is exact"),
        ([Estimate(1.0, -0.1, "normal")], None, "uncertainty is -0.1"),
        ([Estimate(math.nan, 0.1, "normal")], None, "value is nan"),
        ([Estimate(1.0, 0.1, "t", 0.0)], None, "degrees of freedom are 0"),
        ([Estimate(1.0, 0.1, "arcsine", 0.4)], None, "at least 0.5"),
        ([NORMAL, Estimate(1.0, 0.2, "normal", name="a")], None, "given twice"),
        ([NORMAL], [[1.0, 0.0]], "shape"),
        ([NORMAL, NORMAL], [[1.0, 0.5], [0.4, 1.0]], "symmetric"),
        ([NORMAL, NORMAL], [[1.0, 0.5], [0.5, 1.0]], "give it once"),
        ([NORMAL, Estimate(0.0, 1.0, "t", 4.0)], [[1.0, 0.5], [0.5, 1.0]], "input 2: it is t"),
        (
            [Estimate(0.0, 1.0, "normal")] * 3,
            [[1.0, 0.9, -0.9], [0.9, 1.0, 0.9], [-0.9, 0.9, 1.0]],
            "positive semidefinite",
        ),
        (
            [Estimate(0.0, 1.0, "normal")] * 3,
            [[1.0, 1.0, 0.0], [1.0, 1.0, 0.5], [0.0, 0.5, 1.0]],
            "positive semidefinite",
        ),
    ],
)
def test_what_cannot_be_drawn_is_refused(inputs, correlation, message):
    with pytest.raises(InputError, match=message):
        JointDraws(inputs, seed=0, correlation=correlation)


def test_all_problems_come_at_once():
    with pytest.raises(InputError) as refused:
        JointDraws([Estimate(1.0, -1.0, "normal"), Estimate(1.0, 1.0, "round")], seed=0)
    assert len(refused.value.problems) == 2
    with pytest.raises(InputError, match="seed"):
        JointDraws([NORMAL], seed=-1)
