"""Precision of a method: repeatability limit, critical differences (ISO 5725-6), Cochran's test."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import fdtri

from plumbfall.calibration.normal_range import range_quantile

__all__ = [
    "cochran_critical",
    "cochran_statistic",
    "critical_difference",
    "critical_difference_from_reference",
    "critical_range",
    "pooled_sd",
    "repeatability_limit",
]

Numbers = NDArray[np.float64]


def repeatability_limit(sd: ArrayLike, probability: float = 0.95) -> Numbers:
    """Difference that two single values of one laboratory stay within.

    Parameters
    ----------
    sd : array
        Repeatability standard deviation.
    probability : float [1]
        With which the two stay within the limit.

    Returns
    -------
    array
        2.77 standard deviations at 95 %; the standard prints 2.8.

    References
    ----------
    ISO 5725-6, 4.1.4.

    Examples
    --------
    >>> f"{repeatability_limit(1.0):.3f}"
    '2.772'
    """
    return critical_range(sd, n=2, probability=probability)


def critical_range(sd: ArrayLike, *, n: int, probability: float = 0.95) -> Numbers:
    """Range that ``n`` single values of one laboratory stay within, f(n) standard deviations.

    Parameters
    ----------
    sd : array
        Repeatability standard deviation.
    n : int
        Number of values, 2 or more.
    probability : float [1]
        With which their range stays within the limit.

    Returns
    -------
    array
        Critical range.

    References
    ----------
    ISO 5725-6, 5.2.2, table 1.
    """
    return np.asarray(range_quantile(probability, n) * np.asarray(sd, dtype=float))


def critical_difference(
    sd: ArrayLike, *, n_first: ArrayLike, n_second: ArrayLike, probability: float = 0.95
) -> Numbers:
    """Difference that the means of two series of one laboratory stay within.

    Parameters
    ----------
    sd : array
        Repeatability standard deviation.
    n_first, n_second : array
        Number of values of each series.
    probability : float [1]
        With which the difference stays within the limit.

    Returns
    -------
    array
        Critical difference; that of single values is the repeatability limit.

    References
    ----------
    ISO 5725-6, 4.2.1.
    """
    shrunk = 1 / (2 * np.asarray(n_first, dtype=float)) + 1 / (
        2 * np.asarray(n_second, dtype=float)
    )
    return np.asarray(repeatability_limit(sd, probability) * np.sqrt(shrunk))


def critical_difference_from_reference(
    *, repeatability_sd: ArrayLike, reproducibility_sd: ArrayLike, n: ArrayLike
) -> Numbers:
    """Difference from a reference value that the mean of one laboratory stays within, at 95 %.

    Parameters
    ----------
    repeatability_sd, reproducibility_sd : array
        Standard deviations of the method; the second contains the first.
    n : array
        Number of values of the mean.

    Returns
    -------
    array
        Critical difference.

    References
    ----------
    ISO 5725-6, 4.2.3 (formula from memory).
    """
    within = np.asarray(repeatability_limit(repeatability_sd)) ** 2
    between = np.asarray(repeatability_limit(reproducibility_sd)) ** 2
    return np.asarray(
        np.sqrt((between - within * (1 - 1 / np.asarray(n, dtype=float))) / 2), dtype=float
    )


def pooled_sd(sd: ArrayLike, dof: ArrayLike) -> tuple[float, float]:
    """Pool standard deviations of groups; return the pooled one and its degrees of freedom.

    A group without degrees of freedom says nothing; NaN where none has any.
    """
    sd, dof = np.asarray(sd, dtype=float), np.asarray(dof, dtype=float)
    here = dof > 0
    total = float(dof[here].sum())
    if total == 0:
        return math.nan, 0.0
    return math.sqrt(float((sd[here] ** 2 * dof[here]).sum()) / total), total


def cochran_statistic(sd: ArrayLike) -> Numbers:
    """Largest variance over the sum of the variances, groups on the last axis.

    References
    ----------
    ISO 5725-2, 7.3.3.
    """
    variance = np.asarray(sd, dtype=float) ** 2
    return np.asarray(variance.max(axis=-1) / variance.sum(axis=-1))


def cochran_critical(*, groups: ArrayLike, n: ArrayLike, level: ArrayLike) -> Numbers:
    """Critical value of Cochran's test for one variance too large.

    Parameters
    ----------
    groups : array [1]
        Number of variances.
    n : array [1]
        Values behind each.
    level : array [1]
        Significance, such as 0.01 for an outlier and 0.05 for a straggler.

    Returns
    -------
    array [1]
        The statistic beyond which the largest variance stands out.

    References
    ----------
    ISO 5725-2, table 4: 1 / [1 + (p - 1) / F(1 - level/p; n - 1, (p - 1)(n - 1))].

    Examples
    --------
    >>> f"{cochran_critical(groups=10, n=2, level=0.01):.3f}"
    '0.717'
    """
    p, n = np.asarray(groups, dtype=float), np.asarray(n, dtype=float)
    f = fdtri(n - 1, (p - 1) * (n - 1), 1 - np.asarray(level, dtype=float) / p)
    return np.asarray(1 / (1 + (p - 1) / f))
