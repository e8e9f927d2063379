"""Second-order terms, against GUM H.1, JCGM 101 9.3, and by hand."""

from __future__ import annotations

import math

import numpy as np
import pytest

from plumbfall.uncertainty.second_order import second_order

ROOT3 = math.sqrt(3.0)


def end_gauge(x: np.ndarray) -> np.ndarray:
    standard, difference, d_alpha, theta, alpha, d_theta = x
    return np.asarray(standard + difference - standard * (d_alpha * theta + alpha * d_theta))


def test_end_gauge_of_the_gum():
    """JCGM 100:2008, H.1.7 (from memory): terms of 11.7 and 1.7 nm raise u from 32 to 34 nm."""
    values = [50_000_623.0, 215.0, 0.0, -0.1, 11.5e-6, 0.0]
    u = [25.0, 9.7, 0.58e-6, 0.41, 1.2e-6, 0.029]
    found = second_order(end_gauge, values, u)
    assert math.sqrt(found.first) == pytest.approx(32, abs=0.5)
    assert math.sqrt(found.second) == pytest.approx(math.hypot(11.7, 1.7), abs=0.3)
    assert math.sqrt(found.first + found.second) == pytest.approx(34, abs=0.5)


def test_weighing_in_air_of_the_supplement():
    """JCGM 101:2008, 9.3 (from memory): first order 0.0539 mg, with the second 0.0750 mg."""

    def mass(x: np.ndarray) -> np.ndarray:
        reference, added, air, weight, standard = x
        buoyancy = (air - 1.2) * (1 / weight - 1 / standard)
        return np.asarray((reference + added) * (1 + buoyancy) - 100_000.0)

    u = [0.050, 0.020, 0.10 / ROOT3, 1000.0 / ROOT3, 50.0 / ROOT3]
    found = second_order(mass, [100_000.0, 1.234, 1.20, 8000.0, 8000.0], u)
    assert math.sqrt(found.first) == pytest.approx(0.0539, abs=5e-5)
    # print takes derivatives, here are differences over two u of a density known to 7 %
    assert math.sqrt(found.first + found.second) == pytest.approx(0.0750, rel=0.02)


def test_a_quadratic_by_hand():
    """y = a + 2 b + 3 a^2 + 5 a b at 0: variances u^2, 4 v^2; 18 u^4, 25 u^2 v^2; shift 3 u^2."""
    u, v = 0.3, 0.7
    found = second_order(
        lambda x: x[0] + 2 * x[1] + 3 * x[0] ** 2 + 5 * x[0] * x[1], [0.0, 0.0], [u, v]
    )
    assert found.first == pytest.approx(u**2 + 4 * v**2, rel=1e-12)
    assert found.second == pytest.approx(18 * u**4 + 25 * u**2 * v**2, rel=1e-12)
    assert found.shift == pytest.approx(3 * u**2, rel=1e-12)


def test_a_cubic_by_hand():
    """y = a + a^3 + 4 b + a b^2 + 7 b a^2: f_a f_aaa = 6 u^4, f_a f_abb = 2 u^2 v^2, f_b f_baa =
    4 x 14 u^2 v^2."""
    u, v = 0.2, 0.1
    found = second_order(
        lambda x: x[0] + x[0] ** 3 + 4 * x[1] + x[0] * x[1] ** 2 + 7 * x[1] * x[0] ** 2,
        [0.0, 0.0],
        [u, v],
    )
    assert found.second == pytest.approx(6 * u**4 + (2 + 56) * u**2 * v**2, rel=1e-12)


def test_an_exponential_against_its_own_variance():
    """Lognormal, by definition: variance (e^(s^2) - 1) e^(s^2), shift e^(s^2/2) - 1."""
    s = 0.1
    found = second_order(lambda x: np.exp(x[0]), [0.0], [s])
    exact = (math.exp(s**2) - 1) * math.exp(s**2)
    assert found.first == pytest.approx(s**2, rel=1e-4)
    assert found.first + found.second == pytest.approx(exact, rel=3e-4)
    assert found.shift == pytest.approx(math.exp(s**2 / 2) - 1, rel=5e-3)


def test_where_there_is_no_value_nothing_is_claimed():
    assert second_order(lambda x: np.log(x[0]), [1.0], [0.6]) is None
