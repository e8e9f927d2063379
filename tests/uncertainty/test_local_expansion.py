"""The local expansion against the functions it stands for."""

from __future__ import annotations

import math

import numpy as np
import pytest

from plumbfall.estimate import Estimate
from plumbfall.uncertainty.joint_draws import JointDraws
from plumbfall.uncertainty.local_expansion import BEYOND, ERROR, REACH, expand


def fall(x: np.ndarray) -> np.ndarray:
    """Logarithm of Stokes' law with a tenth of the diameter for a wall."""
    diameter, density, liquid, time, distance = x
    with np.errstate(all="ignore"):
        wall = 1 - 2.104 * diameter / 0.05 + 2.09 * (diameter / 0.05) ** 3
        return np.log((density - liquid) * 9.81 * diameter**2 * wall * time / (18 * distance))


FALL = [
    Estimate(2e-3, 1e-5, "normal", name="ball.diameter"),
    Estimate(7700.0, 30.0, "rectangular", name="ball.density"),
    Estimate(970.0, 2.0, "normal", 4.0, name="liquid.density"),
    Estimate(12.0, 0.1, "triangular", name="time"),
    Estimate(0.2, 5e-4, "arcsine", name="distance"),
]


def draws_of(inputs: list[Estimate], n: int = 20_000) -> np.ndarray:
    drawn = np.empty((len(inputs), n))
    JointDraws(inputs, seed=8).fill(drawn)
    return drawn


def test_a_polynomial_of_its_own_kind_is_met_exactly():
    inputs = [Estimate(1.0, 0.1, "normal"), Estimate(-2.0, 0.3, "normal")]

    def quartic(x: np.ndarray) -> np.ndarray:
        a, b = x
        return 1 + a - 2 * b**2 + 0.3 * a**4 + (a - 1.0) * (b + 2.0)

    expansion = expand(quartic, inputs, seed=0)
    assert expansion is not None
    drawn = draws_of(inputs)
    np.testing.assert_allclose(expansion(drawn), quartic(drawn), rtol=1e-11)


def test_it_agrees_at_every_draw_within_reach():
    expansion = expand(fall, FALL, seed=0)
    assert expansion is not None
    drawn = draws_of(FALL)
    drawn = np.delete(drawn, expansion.beyond(drawn), axis=1)
    exact = fall(drawn)
    assert np.abs(expansion(drawn) - exact).max() < ERROR * exact.std()


def test_only_draws_of_heavy_tails_are_too_far_out():
    expansion = expand(fall, FALL, seed=0)
    assert expansion is not None
    drawn = draws_of(FALL)
    assert set(expansion.watched) == {2}
    far = expansion.beyond(drawn)
    limit = expansion.limit[2]
    assert limit >= BEYOND * REACH * 2.0
    expected = np.flatnonzero(np.abs(drawn[2] - 970.0) > limit)
    np.testing.assert_array_equal(far, expected)


def test_the_result_does_not_depend_on_how_many_draws_come_at_once():
    expansion = expand(fall, FALL, seed=0)
    assert expansion is not None
    drawn = draws_of(FALL, 1000)
    parts = [expansion(np.ascontiguousarray(drawn[:, i : i + 7])) for i in range(0, 1000, 7)]
    np.testing.assert_array_equal(np.concatenate(parts), expansion(drawn))


@pytest.mark.parametrize(
    "function",
    [
        lambda x: np.abs(x[0] - 1.0),  # a kink
        lambda x: np.sin(100 * x[0]),  # faster than its nodes
        lambda x: np.where(x[0] > 1.01, np.nan, x[0]),  # no value within reach
        lambda x: (x[0] - 1) ** 2 * (x[1] - 1) * 100,  # a product of three
    ],
    ids=["kink", "fast", "hole", "triple"],
)
def test_what_cannot_be_expanded_is_not(function):
    inputs = [Estimate(1.0, 0.1, "normal"), Estimate(1.0, 0.1, "normal")]
    with np.errstate(invalid="ignore"):
        assert expand(function, inputs, seed=0) is None


def test_draws_beyond_a_hole_are_left_to_the_function():
    inputs = [Estimate(1.0, 0.1, "normal"), Estimate(2.0, 0.1, "normal")]

    def holed(x: np.ndarray) -> np.ndarray:
        return np.where(x[0] > 1.3, np.nan, np.exp(x[0]) + x[0] * x[1])

    expansion = expand(holed, inputs, seed=0)
    assert expansion is not None
    drawn = draws_of(inputs)
    far = set(expansion.beyond(drawn).tolist())
    assert set(np.flatnonzero(drawn[0] > 1.3).tolist()) <= far
    assert len(far) < 0.1 * drawn.shape[1]


def test_errors_are_measured_beside_what_is_added_elsewhere():
    inputs = [Estimate(1.0, 0.1, "normal"), Estimate(1.0, 0.1, "normal")]

    def function(x: np.ndarray) -> np.ndarray:
        return x[0] + 0.05 * np.sin(30 * x[1])

    assert expand(function, inputs, seed=0) is None
    assert expand(function, inputs, seed=0, beside=math.inf) is not None


def test_without_uncertainty_it_is_the_value():
    expansion = expand(fall, [Estimate(e.value, name=e.name) for e in FALL], seed=0)
    assert expansion is not None
    drawn = np.array([[e.value] * 3 for e in FALL])
    np.testing.assert_allclose(expansion(drawn), fall(drawn), rtol=1e-14)
