"""The Mann-Kendall test of a trend, for the drops of each ball of every run set at once."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtr

from plumbfall.uncertainty.type_a import group_sums

__all__ = ["mann_kendall"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]

LONGEST = 1000
"""Groups of more values are left out: their pairs are too many, and a t-test sees all there is."""


def mann_kendall(
    values: Numbers, order: Numbers, group: Codes, group_set: Codes, n_sets: int
) -> Numbers:
    """Two-sided probability of no trend in any group of each set.

    Parameters
    ----------
    values : array, shape (values,)
        What may rise or fall.
    order : array, shape (values,)
        What it may rise or fall with.
    group : array of int, shape (values,)
        Only values of one group are compared.
    group_set : array of int, shape (groups,)
        The set of each group; the groups' counts are added, as those of seasons are.
    n_sets : int
        How many sets there are.

    Returns
    -------
    array, shape (sets,)
        By the normal approximation with continuity correction and correction for ties, which is
        on the safe side in the tails of short groups; 1 where there is no pair.

    References
    ----------
    Mann 1945, Econometrica 13, 245; Kendall 1975, Rank correlation methods; groups as seasons:
    Hirsch, Slack and Smith 1982, Water Resour. Res. 18, 107 (all from memory).
    """
    n_groups = len(group_set)
    sorted_ = np.lexsort((order, group))
    values, group = values[sorted_], group[sorted_]
    n = np.bincount(group, minlength=n_groups)
    short = n <= LONGEST
    score = np.zeros(n_groups)
    for lag in range(1, int(n[short].max(initial=0))):
        same = (group[lag:] == group[:-lag]) & short[group[lag:]]
        if not same.any():
            break
        risen = np.sign(values[lag:] - values[:-lag])[same]
        score += group_sums(risen, group[lag:][same], n_groups)
    variance = np.where(short, n * (n - 1) * (2 * n + 5) / 18.0, 0.0)
    variance -= np.where(short, _ties(values, group, n_groups), 0.0)
    total = np.abs(group_sums(score, group_set, n_sets))
    spread = np.sqrt(np.maximum(group_sums(variance, group_set, n_sets), 0.0))
    with np.errstate(invalid="ignore", divide="ignore"):
        z = np.where(spread > 0, np.maximum(total - 1, 0.0) / spread, 0.0)
    return np.asarray(2 * ndtr(-z), dtype=float)


def _ties(values: Numbers, group: Codes, n_groups: int) -> Numbers:
    """Return what runs of equal values take off the variance, shape (groups,)."""
    order = np.lexsort((values, group))
    values, group = values[order], group[order]
    new = np.ones(len(values), dtype=bool)
    new[1:] = (values[1:] != values[:-1]) | (group[1:] != group[:-1])
    length = np.diff(np.append(np.flatnonzero(new), len(values)))
    return group_sums(length * (length - 1) * (2 * length + 5) / 18.0, group[new], n_groups)
