"""The drop farthest out, as detectors find it, against figures in print (data from memory).

Sources: Grubbs 1969, Technometrics 11, 1 (copper wires; residuals of Venus observations, also in
ASTM E178); NIST/SEMATECH e-Handbook, 1.3.5.17.1 (mass-spectrometer values).
"""

from __future__ import annotations

import numpy as np
import pytest

from plumbfall.findings.drop_errors import DropErrors
from plumbfall.findings.residuals import Residuals, residuals
from plumbfall.findings.suspects import pairs, suspects

WIRES = [568, 570, 570, 570, 572, 572, 572, 578, 584, 596]
SPECTROMETER = [199.31, 199.53, 200.19, 200.82, 201.92, 201.95, 202.18, 245.57]
VENUS = [-1.40, -0.44, -0.30, -0.24, -0.22, -0.13, -0.05, 0.06, 0.10, 0.18, 0.20, 0.39, 0.48, 0.63,
         1.01]  # fmt: skip


def of(values, variance=None, group=None, group_variance=None, by_ball=False) -> Residuals:
    """Return the residuals of one set of values."""
    values = np.asarray(values, dtype=float)
    n = len(values)
    group = np.zeros(n, dtype=np.intp) if group is None else np.asarray(group, dtype=np.intp)
    k = int(group.max()) + 1
    one = np.zeros(1)
    errors = DropErrors(
        value=values - values.mean(),
        whole=np.ones(n, dtype=bool),
        group=group,
        group_set=np.zeros(k, dtype=np.intp),
        group_ball=np.arange(k),
        group_n=np.bincount(group),
        declared=np.zeros(n),
        variance=np.ones(n) if variance is None else np.asarray(variance, dtype=float),
        within_sd=one,
        within_dof=np.array([n - k]),
        undeclared=one,
        rounding=np.full(n, 1e-18),
        scatter_dof=one,
    )
    shared = np.zeros(k) if group_variance is None else np.full(k, group_variance)
    return residuals(np.zeros(n, dtype=np.intp), errors, shared, np.array([by_ball]))


@pytest.mark.parametrize(
    ("values", "printed", "tolerance", "farthest"),
    [(WIRES, 2.39, 0.005, 9), (SPECTROMETER, 2.4687, 1e-4, 7), (VENUS, 2.574, 0.0011, 0)],
)
def test_the_farthest_value_has_the_statistic_in_print(values, printed, tolerance, farthest):
    found = suspects(of(values))
    assert found.statistic[0] == pytest.approx(printed, abs=tolerance)
    assert found.drop[0] == farthest
    assert found.n[0] == len(values)


def test_the_pair_is_the_two_values_whose_loss_takes_off_most():
    found = pairs(of(WIRES), suspects(of(WIRES)))
    values = np.array(WIRES, dtype=float)
    without = values[:8].var() * 8 / (values.var() * 10)
    assert found.statistic[0] == pytest.approx(without, rel=1e-9)
    assert sorted(found.drops[0]) == [8, 9]


def test_residuals_are_those_of_generalised_least_squares():
    # the textbook formula with the whole matrix, against what is done in columns
    rng = np.random.default_rng(5)
    group, variance = np.repeat([0, 1, 2], [4, 3, 5]), rng.uniform(0.5, 2.0, 12)
    values, x = rng.normal(size=12), rng.normal(size=12)
    matrix = np.diag(variance) + 0.7 * (group[:, None] == group)
    inverse = np.linalg.inv(matrix)
    one = np.ones(12)
    project = inverse - np.outer(inverse @ one, one @ inverse) / (one @ inverse @ one)
    found = of(values, variance, group, 0.7)
    assert found.left == pytest.approx(project @ values, abs=1e-12)
    assert found.diagonal == pytest.approx(np.diag(project), abs=1e-12)
    assert found.between(np.array([0]), np.array([2]))[0] == pytest.approx(project[0, 2], abs=1e-12)
    assert found.between(np.array([0]), np.array([9]))[0] == pytest.approx(project[0, 9], abs=1e-12)
    slope = found.slope(x)
    assert slope.value[0] == pytest.approx((x @ project @ values) / (x @ project @ x), rel=1e-9)


def test_a_bad_drop_is_the_same_whatever_its_ball_where_balls_have_means_of_their_own():
    group = np.repeat([0, 1], 6)
    values = np.array([0.1, -0.1, 0.0, 0.05, -0.05, 2.0, 9.1, 8.9, 9.0, 9.05, 8.95, 9.0])
    assert suspects(of(values, group=group, by_ball=True)).drop[0] == 5
    assert suspects(of(values, group=group, by_ball=True)).p_value[0] < 0.01
