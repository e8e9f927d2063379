"""The drops that stand farthest from the others of their run set, alone or as a pair.

Drops are judged by what is left of them once the set's mean, and what their ball may differ by, is
taken off; for one ball, or balls without uncertainty, that is Grubbs' test as it stands in print.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.grubbs import grubbs_p_value, grubbs_pair_bound, grubbs_pair_p_value
from plumbfall.findings.residuals import Residuals
from plumbfall.uncertainty.type_a import group_sums

__all__ = ["FEWEST", "Pairs", "Suspects", "pairs", "suspects"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]

FEWEST = 4
"""With three drops no outlier can be told: the largest possible statistic is the limit."""

WORTH_A_LOOK = 0.1
"""Pairs whose p-value is below this by a quick bound get an exact one."""


@dataclass(frozen=True, slots=True)
class Suspects:
    """The drop farthest from its run set's mean, arrays of shape (run sets,).

    ``drop`` is its place among the used drops; ``statistic`` is Grubbs' and ``n`` its number of
    values; ``p_value`` is 1 where nothing can be tested. ``distance``, of shape (drops,), is each
    drop's residual over its standard deviation, 0 where it has none to itself.
    """

    drop: Codes
    statistic: Numbers
    p_value: Numbers
    n: NDArray[np.intp]
    distance: Numbers


@dataclass(frozen=True, slots=True)
class Pairs:
    """The two drops farthest out on the same side, arrays of shape (run sets,).

    ``drops`` are their places, shape (run sets, 2); ``statistic`` is the sum of squares without
    them over that with them; ``p_value`` is 1 where nothing can be tested.
    """

    drops: Codes
    statistic: Numbers
    p_value: Numbers


def suspects(residuals: Residuals) -> Suspects:
    """Find each run set's farthest drop, in ln of the viscosity at the set's temperature."""
    run_set, dof, squares = residuals.run_set, residuals.dof, residuals.squares
    n_sets, n = len(dof), dof + 1
    own = residuals.diagonal * residuals.errors.variance > 1e-9  # not a ball's only drop
    n_own = group_sums(own, run_set, n_sets)
    with np.errstate(invalid="ignore", divide="ignore"):
        scale = np.sqrt(np.maximum(squares / dof, residuals.least))
        distance = residuals.left / np.sqrt(residuals.diagonal) / scale[run_set]
    distance = np.where(own & np.isfinite(distance), distance, 0.0)
    farthest = np.zeros(n_sets)
    np.maximum.at(farthest, run_set, np.abs(distance))
    drop = np.zeros(n_sets, dtype=np.intp)
    at_farthest = np.flatnonzero(np.abs(distance) == farthest[run_set])
    drop[run_set[at_farthest]] = at_farthest
    statistic = farthest * np.sqrt((n - 1) / n)
    testable = (n >= FEWEST) & (squares > 0)
    p_value = np.ones(n_sets)
    p_value[testable] = grubbs_p_value(statistic=statistic[testable], n=n[testable])
    # where balls have means of their own, more drops are tried than there are degrees of freedom
    p_value = np.minimum(p_value * np.maximum(n_own / n, 1.0), 1.0)
    return Suspects(drop=drop, statistic=statistic, p_value=p_value, n=n, distance=distance)


def pairs(residuals: Residuals, single: Suspects) -> Pairs:
    """Find each run set's farthest two drops on one side; balls that disagree are not tried."""
    run_set, n_sets = residuals.run_set, len(residuals.dof)
    order = np.lexsort((single.distance, run_set))
    n_drops = np.bincount(run_set, minlength=n_sets)
    last = np.cumsum(n_drops) - 1
    first = last + 1 - n_drops
    drops = np.zeros((n_sets, 2), dtype=np.intp)
    statistic, p_value = np.full(n_sets, np.nan), np.ones(n_sets)
    able = (single.n > FEWEST) & ~residuals.by_ball & (residuals.squares > 0)
    able &= n_drops == single.n
    for ends in ((first, first + 1), (last, last - 1)):
        at = np.flatnonzero(able)
        one, other = (order[end[at]] for end in ends)
        a, b = residuals.left[one], residuals.left[other]
        aa, bb = residuals.diagonal[one], residuals.diagonal[other]
        ab = residuals.between(one, other)
        with np.errstate(invalid="ignore", divide="ignore"):
            taken = (bb * a**2 - 2 * ab * a * b + aa * b**2) / (aa * bb - ab**2)
        least = (residuals.dof[at] - 2) * residuals.least[at]
        rest = np.maximum(residuals.squares[at] - taken, least)
        ratio = rest / np.maximum(residuals.squares[at], rest)
        better = ~(ratio >= statistic[at])
        place = at[better]
        statistic[place] = ratio[better]
        drops[place] = np.stack([one, other], axis=1)[better]
    bound = np.where(able, grubbs_pair_bound(statistic=statistic, n=np.maximum(single.n, 4)), 1.0)
    for place in np.flatnonzero(bound < WORTH_A_LOOK).tolist():
        p_value[place] = grubbs_pair_p_value(statistic=statistic[place], n=int(single.n[place]))
    return Pairs(drops=drops, statistic=statistic, p_value=p_value)
