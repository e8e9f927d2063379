"""The scatter of run sets that dropped the same balls, which is no independent scatter.

A ball that is a little too large falls a little too fast in every set it is dropped in. Where the
scatter of ball means stands for the balls' own errors, two sets with the same balls scatter
alike, and their ratio less than either. How far they do the sets themselves show: the covariance
of the means of quantities observed together is (JCGM 100:2008, 5.2.3, formula (17))

    cov(mean A, mean B) = sum over balls (a_b - mean A)(b_b - mean B) / (n (n - 1))

so that the residual of each ball, over sqrt(n (n - 1)), is a contribution that all sets share.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.measurement.balance import Numbers
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.selection import Selection
from plumbfall.measurement.values import Weights
from plumbfall.run_sets.repeatability import OF_VALUES, Repeatability

__all__ = ["FEWEST_SHARED", "BallScatter", "ball_scatter"]

FEWEST_SHARED = 3
"""Balls that a set has in common with others before their residuals are compared.

Two residuals about their mean are equal and opposite, and always seem perfectly correlated."""


@dataclass(frozen=True, slots=True)
class BallScatter:
    """Contributions of balls to the means of the run sets that share them.

    ``shared``, shape (run sets,), marks those sets; ``run_set``, ``ball`` and ``contribution`` list
    the rest, [Pa.s]. The squares of a set's contributions add up to that of its scatter.
    """

    shared: NDArray[np.bool_]
    run_set: NDArray[np.intp]
    ball: NDArray[np.intp]
    contribution: Numbers


def ball_scatter(
    selection: Selection, inputs: Inputs, weights: Weights, scatter: Repeatability
) -> BallScatter:
    """Find the run sets whose balls are dropped in others too, and their balls' residuals."""
    n_sets = len(selection.names)
    value_ball = np.zeros(len(weights.value_set), dtype=np.intp)
    value_ball[weights.value] = selection.cells.ball[selection.cell]
    by_balls = (scatter.basis == OF_VALUES) & ~scatter.floored
    fresh = np.bincount(selection.run_set, weights=inputs.lot[selection.cell], minlength=n_sets)
    by_balls &= fresh == 0
    of_balls = by_balls[weights.value_set]
    uses = np.bincount(value_ball[of_balls], minlength=value_ball.max(initial=0) + 1)
    again = of_balls & (uses[value_ball] > 1)
    shared = np.bincount(weights.value_set[again], minlength=n_sets) >= FEWEST_SHARED
    listed = np.flatnonzero(shared[weights.value_set])
    run_set = weights.value_set[listed]
    n = weights.n_values[run_set]
    residual = scatter.value_mean[listed] - scatter.mean[run_set]
    return BallScatter(shared, run_set, value_ball[listed], residual / np.sqrt(n * (n - 1)))
