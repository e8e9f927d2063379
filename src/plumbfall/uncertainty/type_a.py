"""Type A evaluation: what repeated values say of their own scatter (JCGM 100:2008, 4.2)."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

__all__ = ["GroupScatter", "Means", "group_scatter", "group_sums", "means_of_series"]


@dataclass(frozen=True, slots=True)
class GroupScatter:
    """Mean and standard deviation of grouped values, each of shape (groups,).

    ``sd`` is NaN for groups of fewer than two values.
    """

    n: NDArray[np.intp]
    mean: NDArray[np.float64]
    sd: NDArray[np.float64]


def group_sums(
    values: NDArray[np.float64] | NDArray[np.bool_], group: NDArray[np.intp], n_groups: int
) -> NDArray[np.float64]:
    """Sum of every group's values, shape (groups,).

    Values that stand group by group, as drops do by run set, are summed several times as fast.
    """
    if len(group) < 2 or (group[1:] < group[:-1]).any():
        return np.asarray(np.bincount(group, weights=values, minlength=n_groups), dtype=float)
    starts = np.concatenate([[0], np.flatnonzero(group[1:] != group[:-1]) + 1])
    sums = np.zeros(n_groups)
    sums[group[starts]] = np.add.reduceat(np.asarray(values, dtype=float), starts)
    return sums


def group_scatter(
    values: NDArray[np.float64], group: NDArray[np.intp], n_groups: int
) -> GroupScatter:
    """Experimental standard deviation of every group at once.

    Parameters
    ----------
    values : array, shape (values,)
        Any unit.
    group : array of int, shape (values,)
        The group of each value.
    n_groups : int
        How many groups there are; some may be empty.

    Returns
    -------
    GroupScatter
        In two passes, so that a large offset costs no digits.

    References
    ----------
    JCGM 100:2008, 4.2.2, formula (4).
    """
    n = np.bincount(group, minlength=n_groups)
    with np.errstate(invalid="ignore", divide="ignore"):
        mean = group_sums(values, group, n_groups) / n
        mean += group_sums(values - mean[group], group, n_groups) / n
        squares = group_sums((values - mean[group]) ** 2, group, n_groups)
        sd = np.where(n > 1, np.sqrt(squares / (n - 1)), np.nan)
    return GroupScatter(n=n, mean=mean, sd=sd)


@dataclass(frozen=True, slots=True)
class Means:
    """Means of quantities observed together, with the covariance of the means."""

    mean: NDArray[np.float64]
    u: NDArray[np.float64]
    correlation: NDArray[np.float64]
    dof: int


def means_of_series(observations: ArrayLike) -> Means:
    """Means, standard uncertainties and correlation of simultaneous observations.

    Parameters
    ----------
    observations : array, shape (quantities, repeats)
        Column j holds what was read at the same time.

    Returns
    -------
    Means
        u = s/sqrt(n); the correlation coefficients are those of the means; dof = n - 1.

    References
    ----------
    JCGM 100:2008, 4.2.3 and 5.2.3, formula (17).
    """
    observed = np.atleast_2d(np.asarray(observations, dtype=float))
    n = observed.shape[1]
    covariance = np.atleast_2d(np.cov(observed, ddof=1)) / n
    u = np.sqrt(np.diag(covariance))
    return Means(
        mean=observed.mean(axis=1), u=u, correlation=covariance / np.outer(u, u), dof=n - 1
    )
