"""Run sets that dropped the same balls: their scatter is correlated as they show it."""

from __future__ import annotations

import math

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from plumbfall.calibration.compare import compare_run_sets
from support.benches import bench_dict, drops_table

BALLS = ("B1", "B2", "B3", "B4")
TIME = {"B1": 15.05, "B2": 9.81, "B3": 6.935, "B4": 4.137}
"""Times that give all balls one viscosity, within 0.1 %."""


def reduced(first: list[float], second: list[float], **names: list[str]) -> pf.Report:
    """Reduce two sets whose balls are off by the given parts of their times."""
    tables = []
    for run_set, parts in (("A", first), ("B", second)):
        balls = names.get(run_set, list(BALLS))
        times = {ball: [TIME[ball] * (1 + part)] for ball, part in zip(balls, parts, strict=True)}
        tables.append(drops_table(times, run_set=run_set))
    return pf.reduce(pd.concat(tables), bench_dict(), draws=0)


def ball_means(report: pf.Report, name: str) -> np.ndarray:
    return np.array([ball.viscosity.value for ball in report[name].result.balls])


def scatter_covariance(report: pf.Report) -> float:
    """Covariance of the two sets' scatter: what the balls' own columns add."""
    joint = report.reduced.joint
    columns = [i for i, name in enumerate(joint.inputs) if name.endswith(".scatter")]
    rows = [joint.places[(name, "viscosity")] for name in "AB"]
    a, b = np.asarray(joint.contributions.todense())[np.ix_(rows, columns)]
    return float(a @ b)


def test_it_is_the_covariance_of_means_observed_together():
    """JCGM 100:2008, 5.2.3, formula (17), here by numpy's covariance."""
    report = reduced([0.004, -0.002, 0.001, -0.003], [0.003, -0.001, -0.001, -0.002])
    a, b = ball_means(report, "A"), ball_means(report, "B")
    expected = np.cov(a, b, ddof=1) / 4
    assert scatter_covariance(report) == pytest.approx(expected[0, 1], rel=1e-9)
    for name, variance in zip("AB", np.diag(expected), strict=True):
        (line,) = (x for x in report[name].result.budget if x.input == f"set.{name}.scatter")
        assert line.contribution == pytest.approx(math.sqrt(variance), rel=1e-9)
        assert line.dof == 3


def test_the_ratio_is_that_of_a_paired_comparison():
    """Student's paired interval of the balls' own ratios, where scatter is the larger part."""
    report = reduced([0.02, -0.01, 0.005, -0.015], [0.017, -0.006, 0.002, -0.013])
    a, b = ball_means(report, "A"), ball_means(report, "B")
    paired = np.log(a / b).std(ddof=1) / 2
    ratio = report["A"].viscosity / report["B"].viscosity
    assert ratio.s / ratio.n == pytest.approx(paired, rel=0.02)
    found = compare_run_sets(report.reduced, ("A", "B")).ratio
    assert found.effective_dof == pytest.approx(3, rel=0.05)
    assert found.u == pytest.approx(ratio.s, rel=1e-9)


def test_balls_that_only_one_set_has_leave_the_scatter_alone():
    report = reduced([0.004, -0.002], [0.003, -0.001], A=["B1", "B2"], B=["B3", "B4"])
    assert scatter_covariance(report) == 0


def test_two_common_balls_are_too_few_to_compare_residuals():
    report = reduced([0.004, -0.002], [0.003, -0.001], A=["B1", "B2"], B=["B1", "B2"])
    assert scatter_covariance(report) == 0


def test_one_sets_bounds_do_not_depend_on_the_company():
    table = drops_table({ball: [time] for ball, time in TIME.items()})
    alone = pf.reduce(table, bench_dict(), draws=0)["A"].result.viscosity
    second = {ball: [time * 1.01] for ball, time in TIME.items()}
    both = pf.reduce(pd.concat([table, drops_table(second, run_set="B")]), bench_dict(), draws=0)[
        "A"
    ].result.viscosity
    assert both.u == pytest.approx(alone.u, rel=1e-9)
    assert both.effective_dof == pytest.approx(alone.effective_dof, rel=1e-9)
