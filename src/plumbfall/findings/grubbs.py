"""Grubbs' tests for one outlier and for two on the same side: critical values and p-values.

Critical values are computed, never copied: one popular open table has two wrong entries.
"""

from __future__ import annotations

from functools import lru_cache

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import betaln, stdtr, stdtrit

__all__ = [
    "grubbs_critical",
    "grubbs_p_value",
    "grubbs_pair_bound",
    "grubbs_pair_critical",
    "grubbs_pair_p_value",
]

Numbers = NDArray[np.float64]


def grubbs_critical(*, n: ArrayLike, level: float) -> Numbers:
    """Critical value of Grubbs' two-sided test for one outlier.

    Parameters
    ----------
    n : array of int
        Number of values, at least 3.
    level : float
        Significance, such as 0.05 or 0.01.

    Returns
    -------
    array
        Largest |x - mean|/s to be expected.

    References
    ----------
    Grubbs 1950, Ann. Math. Stat. 21, 27; ISO 5725-2, table 5 (which is two-sided).

    Examples
    --------
    >>> f"{grubbs_critical(n=10, level=0.05):.3f}"
    '2.290'
    """
    n = np.asarray(n, dtype=float)
    t = stdtrit(n - 2, 1 - level / (2 * n))
    critical: Numbers = (n - 1) / np.sqrt(n) * np.sqrt(t**2 / (n - 2 + t**2))
    return critical


def grubbs_p_value(*, statistic: ArrayLike, n: ArrayLike) -> Numbers:
    """Two-sided probability of a Grubbs statistic as large, by Bonferroni's bound."""
    g, n = np.asarray(statistic, dtype=float), np.asarray(n, dtype=float)
    share = np.minimum(g**2 * n / (n - 1) ** 2, 1.0)
    with np.errstate(divide="ignore"):
        t = np.sqrt(share * (n - 2) / (1 - share))
    p_value: Numbers = np.minimum(2 * n * stdtr(n - 2, -t), 1.0)
    return p_value


def grubbs_pair_p_value(*, statistic: float, n: int) -> float:
    """Two-sided probability of Grubbs' statistic for two outliers on the same side.

    Parameters
    ----------
    statistic : float
        Sum of squares about the mean without the two largest (or smallest) values, over that with
        them; small where they do not belong.
    n : int
        Number of values, at least 4.

    Returns
    -------
    float
        Chance of a ratio as small at the one end or the other, at most 1. Exact to 1e-3 of itself
        up to 40 values, where the table of the standard ends; beyond them an upper bound.

    Notes
    -----
    A given pair's ratio R has the distribution R^((n-3)/2), independent of the direction of the
    pair in its plane (its mean against the others', its difference) and of how the others lie
    among themselves; the pair must lie beyond the largest of the others, whose distribution
    follows from that of one value fewer.

    References
    ----------
    Grubbs 1950, Ann. Math. Stat. 21, 27; ISO 5725-2, 7.3.4.2 and table 5.
    """
    if n > _MOST or statistic <= 0:
        return float(grubbs_pair_bound(statistic=statistic, n=n))
    chance = min(statistic, 1.0) ** ((n - 3) / 2)
    part = (_NODES[:, None] * chance) ** (2 / (n - 3))
    angle = _NODES * np.pi / 2
    apart = np.cos(angle) * np.sqrt(n / (2 * (n - 2))) - np.sin(angle) / np.sqrt(2)
    with np.errstate(divide="ignore", over="ignore", invalid="ignore"):
        place = np.nan_to_num(np.sqrt((1 - part) / part * (n - 2) / (n - 3)) * apart)
    beyond = _WEIGHTS @ _largest_below(n - 2, place) @ _WEIGHTS / 2
    return float(min(n * (n - 1) * chance * beyond, 1.0))


def grubbs_pair_bound(*, statistic: ArrayLike, n: ArrayLike) -> Numbers:
    """Upper bound of :func:`grubbs_pair_p_value`, quick and for arrays.

    The pair must at least lie beyond the mean of the others.
    """
    n = np.asarray(n, dtype=float)
    ratio = np.clip(np.asarray(statistic, dtype=float), 0.0, 1.0)
    beyond = np.arctan(np.sqrt(n / (n - 2))) / np.pi
    bound: Numbers = np.minimum(n * (n - 1) * ratio ** ((n - 3) / 2) * beyond, 1.0)
    return bound


def grubbs_pair_critical(*, n: int, level: float) -> float:
    """Lower critical value of Grubbs' two-sided test for two outliers on the same side.

    Examples
    --------
    >>> f"{grubbs_pair_critical(n=10, level=0.01):.4f}"
    '0.1150'
    """
    low, high = 0.0, 1.0
    for _ in range(50):
        middle = (low + high) / 2
        if grubbs_pair_p_value(statistic=middle, n=n) < level:
            low = middle
        else:
            high = middle
    return (low + high) / 2


_MOST = 40
_POINTS = 2001
_half, _weights = np.polynomial.legendre.leggauss(120)
_NODES, _WEIGHTS = (_half + 1) / 2, _weights / 2  # of the interval from 0 to 1


def _largest_below(n: int, place: Numbers) -> Numbers:
    """Chance that the largest of n values lies below a place, in units of the root of squares.

    Places are (x - mean) sqrt(n/(n-1)) over the square root of the sum of squares.
    """
    if n == 2:
        return np.asarray(place >= 1, dtype=float)
    angles, chance = _largest(n)
    return np.interp(np.arcsin(np.clip(place, -1, 1)), angles, chance)


@lru_cache(maxsize=_MOST)
def _largest(n: int) -> tuple[Numbers, Numbers]:
    """Angles whose sines are places, and the chance that the largest lies below, for n > 2."""
    least = 1.0 if n == 3 else float(np.sin(_largest(n - 1)[0][0]))
    angle = np.linspace(np.arctan(least * np.sqrt((n - 2) / n)), np.pi / 2, _POINTS)
    with np.errstate(over="ignore"):
        others = np.tan(angle) * np.sqrt(n / (n - 2))
    others[0] = least
    density = np.cos(angle) ** (n - 3) * _largest_below(n - 1, others)
    density *= n / np.exp(betaln(0.5, (n - 2) / 2))
    steps = np.diff(angle) * (density[1:] + density[:-1]) / 2
    chance = np.concatenate([[0.0], np.cumsum(steps)])
    return angle, chance / chance[-1]
