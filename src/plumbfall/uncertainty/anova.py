"""One-way analysis of variance of many data sets at once (JCGM 100:2008, H.5)."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.uncertainty.type_a import group_scatter, group_sums

__all__ = ["OneWay", "one_way"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]


@dataclass(frozen=True, slots=True)
class OneWay:
    """Scatter between and within groups, arrays of shape (sets,).

    ``f`` is the ratio of the mean squares and ``within_sd`` the square root of the inner one; both
    NaN where there are no degrees of freedom.
    """

    between: Numbers
    within: Numbers
    between_dof: NDArray[np.intp]
    within_dof: NDArray[np.intp]
    f: Numbers
    within_sd: Numbers


def one_way(values: Numbers, group: Codes, group_set: Codes, n_sets: int) -> OneWay:
    """Split the scatter of grouped values of every set into that between and within its groups.

    Parameters
    ----------
    values : array, shape (values,)
        Any unit.
    group : array of int, shape (values,)
        The group of each value; every group belongs to one set.
    group_set : array of int, shape (groups,)
        The set of each group.
    n_sets : int
        How many sets there are.

    Returns
    -------
    OneWay
        Sums of squares, degrees of freedom and F. Means are taken in two passes from values less
        their set's first mean, so that a large offset costs no more than the values' own rounding.

    References
    ----------
    JCGM 100:2008, H.5.2; certified values to test against: NIST StRD, analysis of variance.
    """
    of_set = group_set[group]
    values = values - group_scatter(values, of_set, n_sets).mean[of_set]
    groups = group_scatter(values, group, len(group_set))
    n_values = np.bincount(of_set, minlength=n_sets)
    n_groups = np.bincount(group_set[groups.n > 0], minlength=n_sets)
    apart = values - groups.mean[group]
    within = group_sums(apart**2, of_set, n_sets)
    means = np.where(groups.n > 0, groups.mean, 0.0)
    with np.errstate(invalid="ignore", divide="ignore"):
        grand = group_sums(values, of_set, n_sets) / n_values
        between = group_sums(groups.n * (means - grand[group_set]) ** 2, group_set, n_sets)
        between_dof = np.maximum(n_groups - 1, 0)
        within_dof = np.maximum(n_values - n_groups, 0)
        inner = within / within_dof
        f = between / between_dof / inner
    return OneWay(
        between=between,
        within=within,
        between_dof=between_dof,
        within_dof=within_dof,
        f=np.where((between_dof > 0) & (within_dof > 0), f, np.nan),
        within_sd=np.sqrt(np.where(within_dof > 0, inner, np.nan)),
    )
