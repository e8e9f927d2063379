"""Worked examples of JCGM 101:2008, clause 9, run through the program's own Monte Carlo."""

from __future__ import annotations

import math
from collections.abc import Callable
from functools import cache

import numpy as np
from numpy.typing import NDArray

from plumbfall.estimate import Estimate
from plumbfall.published.figure import DEFINITION, FROM_MEMORY, Figure, figures
from plumbfall.uncertainty.monte_carlo import run_monte_carlo
from plumbfall.uncertainty.monte_carlo_result import MonteCarloOutput

__all__ = ["FIGURES"]

AREA = "uncertainty"
DRAWS = 1_000_000
ROOT3 = math.sqrt(3.0)

Numbers = NDArray[np.float64]


def _total(drawn: Numbers) -> Numbers:
    return np.asarray(drawn.sum(axis=0))


def _mass(drawn: Numbers) -> Numbers:
    """9.3: deviation of a weight from 100 g, mg, compared with a reference in air."""
    reference, added, air, weight, standard = drawn
    return np.asarray(
        (reference + added) * (1 + (air - 1.2) * (1 / weight - 1 / standard)) - 100_000.0
    )


def _loss(drawn: Numbers) -> Numbers:
    return np.asarray(1e6 * (drawn[0] ** 2 + drawn[1] ** 2))


def _gauge(drawn: Numbers) -> Numbers:
    """9.5: deviation of a gauge block from 50 mm, nm."""
    standard, difference, random, systematic, alpha_s, mean, cycle, d_alpha, d_theta = drawn
    theta = mean + cycle
    length = standard * (1 + alpha_s * (theta - d_theta)) + difference + random + systematic
    return np.asarray(length / (1 + (alpha_s + d_alpha) * theta) - 50e6)


def _rectangular(name: str, value: float, half_width: float, dof: float = math.inf) -> Estimate:
    return Estimate(value, half_width / ROOT3, "rectangular", dof, name)


_MASSES = (
    Estimate(100_000.0, 0.050, "normal", name="reference"),
    Estimate(1.234, 0.020, "normal", name="added"),
    _rectangular("air", 1.20, 0.10),
    _rectangular("weight", 8000.0, 1000.0),
    _rectangular("standard", 8000.0, 50.0),
)
_GAUGES = (
    Estimate(50_000_623.0, 25.0, "t", 18, "standard"),
    Estimate(215.0, 6.0, "t", 24, "difference"),
    Estimate(0.0, 4.0, "t", 5, "random"),
    Estimate(0.0, 7.0, "t", 8, "systematic"),
    _rectangular("alpha_s", 11.5e-6, 2.0e-6),
    Estimate(-0.1, 0.2, "normal", name="mean"),
    Estimate(0.0, 0.5 / math.sqrt(2), "arcsine", name="cycle"),
    # rectangular with inexact limits: CTrap(-1.0e-6, 1.0e-6, 0.1e-6), CTrap(-0.050, 0.050, 0.025)
    _rectangular("d_alpha", 0.0, 1.0e-6, 50),
    _rectangular("d_theta", 0.0, 0.050, 2),
)


@cache
def _sum(shape: str, last: float = 1.0) -> MonteCarloOutput:
    inputs = [Estimate(0.0, u, shape, name=f"x{i}") for i, u in enumerate((1.0, 1.0, 1.0, last))]
    return run_monte_carlo(_total, inputs, draws=DRAWS, seed=1).output(0)


@cache
def _weighing() -> MonteCarloOutput:
    return run_monte_carlo(_mass, _MASSES, draws=DRAWS, seed=1).output(0)


@cache
def _lost(first: float, r: float = 0.0) -> MonteCarloOutput:
    inputs = [
        Estimate(first, 0.005, "normal", name="x1"),
        Estimate(0.0, 0.005, "normal", name="x2"),
    ]
    correlation = [[1.0, r], [r, 1.0]]
    return run_monte_carlo(_loss, inputs, draws=DRAWS, seed=1, correlation=correlation).output(0)


@cache
def _block() -> MonteCarloOutput:
    return run_monte_carlo(_gauge, _GAUGES, draws=DRAWS, seed=1, coverage=0.99).output(0)


def _of(run: Callable[[], MonteCarloOutput], what: str) -> Callable[[], float]:
    return lambda: float(getattr(run(), what))


# What is allowed for chance is four standard errors: sqrt(p (1 - p)/M)/f for an end that leaves p
# outside, f being the density there, 2.7 times that for an end of a shortest interval (by
# simulation), and u sqrt((kurtosis - 1)/(4 M)) for a standard uncertainty.


def _drawn(
    basis: str, source: str, allowance: float, *rows: tuple[str, str, Callable[[], float]]
) -> tuple[Figure, ...]:
    said = f"JCGM 101:2008, {source}; allowed also {allowance:g}, four standard errors of {DRAWS} "
    return figures(AREA, basis, said + "draws", rows, allowance=allowance)


FIGURES = (
    *_drawn(
        FROM_MEMORY,
        "9.2.2: four normal inputs, upper end at 95 %",
        0.022,
        ("s1.9.2.2.drawn.high", "3.92", _of(lambda: _sum("normal"), "high")),
    ),
    *_drawn(
        FROM_MEMORY,
        "9.2.2: four normal inputs, u",
        0.006,
        ("s1.9.2.2.drawn.u", "2.00", _of(lambda: _sum("normal"), "standard_uncertainty")),
    ),
    *_drawn(
        DEFINITION,
        "9.2.3: four rectangular inputs, exact end at 95 %, 2 sqrt 3 (2 - 0.6^(1/4))",
        0.020,
        ("s1.9.2.3.drawn.high", "3.879407", _of(lambda: _sum("rectangular"), "high")),
        ("s1.9.2.3.drawn.low", "-3.879407", _of(lambda: _sum("rectangular"), "low")),
    ),
    *_drawn(
        FROM_MEMORY,
        "9.2.4: four rectangular inputs, one with u = 10; end at 95 %",
        0.038,
        ("s1.9.2.4.drawn.high", "17.0", _of(lambda: _sum("rectangular", 10.0), "high")),
    ),
    *_drawn(
        FROM_MEMORY,
        "9.3: weight of 100 g compared in air, ends at 95 %, mg, print's own draws being as few",
        0.0016,
        ("s1.9.3.drawn.low", "1.0834", _of(_weighing, "low")),
        ("s1.9.3.drawn.high", "1.3825", _of(_weighing, "high")),
    ),
    *_drawn(
        FROM_MEMORY,
        "9.3: the same, u, mg",
        2.2e-4,
        ("s1.9.3.drawn.u", "0.0754", _of(_weighing, "standard_uncertainty")),
    ),
    *_drawn(
        DEFINITION,
        "9.4.2.2: x1 = 0, exact upper end of the shortest interval, 50 ln 20, in 1e-6",
        0.87,
        ("s1.9.4.0.drawn.high", "149.78661", _of(lambda: _lost(0.0), "shortest_high")),
    ),
    *_drawn(
        DEFINITION,
        "9.4: x1 = 0, exact mean and u, 2 x 25 both, in 1e-6",
        0.29,
        ("s1.9.4.0.drawn.mean", "50.000", _of(lambda: _lost(0.0), "mean")),
        ("s1.9.4.0.drawn.u", "50.000", _of(lambda: _lost(0.0), "standard_uncertainty")),
    ),
    *_drawn(
        DEFINITION,
        "9.4: x1 = 0.010, exact mean 25 (2 + 4) and u 25 sqrt 20, in 1e-6",
        0.46,
        ("s1.9.4.0.010.drawn.mean", "150.000", _of(lambda: _lost(0.010), "mean")),
        ("s1.9.4.0.010.drawn.u", "111.8034", _of(lambda: _lost(0.010), "standard_uncertainty")),
    ),
    *_drawn(
        FROM_MEMORY,
        "9.4: x1 = 0.010, upper end of the shortest interval, in 1e-6",
        4.3,
        ("s1.9.4.0.010.drawn.high", "367", _of(lambda: _lost(0.010), "shortest_high")),
    ),
    *_drawn(
        DEFINITION,
        "9.4: x1 = 0.050, exact u 25 sqrt 404, in 1e-6",
        1.5,
        ("s1.9.4.0.050.drawn.u", "502.4938", _of(lambda: _lost(0.050), "standard_uncertainty")),
    ),
    *_drawn(
        FROM_MEMORY,
        "9.4: x1 = 0.050, mean, in 1e-6, print being drawn too",
        2.1,
        ("s1.9.4.0.050.drawn.mean", "2551", _of(lambda: _lost(0.050), "mean")),
    ),
    *_drawn(
        FROM_MEMORY,
        "9.4: x1 = 0.050, ends of the shortest interval, in 1e-6",
        16.0,
        ("s1.9.4.0.050.drawn.low", "1590", _of(lambda: _lost(0.050), "shortest_low")),
        ("s1.9.4.0.050.drawn.high", "3543", _of(lambda: _lost(0.050), "shortest_high")),
    ),
    *_drawn(
        DEFINITION,
        "9.4: x1 = 0, correlation 0.9, exact u 50 sqrt 1.81, in 1e-6",
        0.40,
        ("s1.9.4.0.r9.drawn.u", "67.26812", _of(lambda: _lost(0.0, 0.9), "standard_uncertainty")),
    ),
    *_drawn(
        FROM_MEMORY,
        "9.4: x1 = 0, correlation 0.9, upper end of the shortest interval, in 1e-6",
        3.3,
        ("s1.9.4.0.r9.drawn.high", "185", _of(lambda: _lost(0.0, 0.9), "shortest_high")),
    ),
    *_drawn(
        FROM_MEMORY,
        "9.4: x1 = 0.010, correlation 0.9, u, in 1e-6",
        0.55,
        ("s1.9.4.0.010.r9.drawn.u", "121", _of(lambda: _lost(0.01, 0.9), "standard_uncertainty")),
    ),
    *_drawn(
        FROM_MEMORY,
        "9.5: gauge block of 50 mm, u, nm",
        0.11,
        ("s1.9.5.drawn.u", "36", _of(_block, "standard_uncertainty")),
    ),
    *_drawn(
        FROM_MEMORY,
        "9.5: gauge block, mean and ends at 99 %, nm, print's own draws being as few",
        1.0,
        ("s1.9.5.drawn.mean", "838", _of(_block, "mean")),
        ("s1.9.5.drawn.low", "745", _of(_block, "low")),
        ("s1.9.5.drawn.high", "932", _of(_block, "high")),
    ),
)
