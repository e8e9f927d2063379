"""Grubbs' test on the drops of every run set at once."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import stdtr, stdtrit

from plumbfall.findings.data import Found, RunData
from plumbfall.results import Finding
from plumbfall.uncertainty.type_a import group_scatter

__all__ = ["Suspects", "grubbs_critical", "grubbs_p_value", "outlier", "suspects"]

FEWEST = 4
"""With three drops no outlier can be told: the largest possible statistic is the limit."""


def grubbs_critical(*, n: ArrayLike, level: float) -> NDArray[np.float64]:
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
    critical: NDArray[np.float64] = (n - 1) / np.sqrt(n) * np.sqrt(t**2 / (n - 2 + t**2))
    return critical


def grubbs_p_value(*, statistic: ArrayLike, n: ArrayLike) -> NDArray[np.float64]:
    """Two-sided probability of a Grubbs statistic as large, by Bonferroni's bound."""
    g, n = np.asarray(statistic, dtype=float), np.asarray(n, dtype=float)
    share = np.minimum(g**2 * n / (n - 1) ** 2, 1.0)
    with np.errstate(divide="ignore"):
        t = np.sqrt(share * (n - 2) / (1 - share))
    p_value: NDArray[np.float64] = np.minimum(2 * n * stdtr(n - 2, -t), 1.0)
    return p_value


@dataclass(frozen=True, slots=True)
class Suspects:
    """The drop farthest from its run set's mean, arrays of shape (run sets,).

    ``drop`` is its place among the used drops; ``statistic`` is Grubbs'; ``p_value`` is 1 where
    nothing can be tested.
    """

    drop: NDArray[np.intp]
    statistic: NDArray[np.float64]
    p_value: NDArray[np.float64]
    n: NDArray[np.intp]


def suspects(data: RunData) -> Suspects:
    """Find each run set's farthest drop, in ln of the viscosity at the set's temperature."""
    run_set, n_sets = data.selection.run_set, len(data.names)
    with np.errstate(invalid="ignore", divide="ignore"):
        log_viscosity = np.log(data.columns.at_set)
    groups = group_scatter(log_viscosity, run_set, n_sets)
    distance = np.abs(log_viscosity - groups.mean[run_set])
    farthest = np.zeros(n_sets)
    with np.errstate(invalid="ignore"):
        np.maximum.at(farthest, run_set, distance)  # NaN stays, and then nothing is tested
    drop = np.zeros(n_sets, dtype=np.intp)
    at_farthest = np.flatnonzero(distance == farthest[run_set])
    drop[run_set[at_farthest]] = at_farthest
    with np.errstate(invalid="ignore", divide="ignore"):
        statistic = farthest / groups.sd
    testable = (groups.n >= FEWEST) & (groups.sd > 0)
    p_value = np.ones(n_sets)
    p_value[testable] = grubbs_p_value(statistic=statistic[testable], n=groups.n[testable])
    return Suspects(drop=drop, statistic=statistic, p_value=p_value, n=groups.n)


def outlier(data: RunData) -> Iterator[Found]:
    """Find the one drop that does not belong with the others; it is kept, and named."""
    found = suspects(data)
    for run_set in np.flatnonzero(found.p_value < data.limits.outlier_level):
        drop = found.drop[run_set]
        n = int(found.n[run_set])
        weight = data.weights.weight[drop]
        mean = data.scatter.mean[run_set]
        own = data.columns.at_set[drop]
        value = data.weights.value[drop]
        mates = int(data.weights.value_drops[value])
        if mates > 1:  # the ball's other drops make its mean
            without = mean - weight * (own - _mean_of_mates(data, drop))
        else:
            values = int(data.weights.n_values[run_set])
            without = mean + (mean - own) / max(values - 1, 1)
        effect = float(without / mean - 1)
        number = data.numbers(np.array([drop]))[0]
        level = f"{100 * data.limits.outlier_level:g} %"
        critical = float(grubbs_critical(n=n, level=data.limits.outlier_level))
        yield (
            int(run_set),
            Finding(
                code="outlier",
                severity="warning",
                drops=(number,),
                statistic=float(found.statistic[run_set]),
                p_value=float(found.p_value[run_set]),
                effect=effect,
                message=f"drop {number} ({data.selection.time[drop]:.2f} s) is "
                f"{100 * abs(own / mean - 1):.1f} % {'above' if own > mean else 'below'} the mean "
                f"(Grubbs {found.statistic[run_set]:.2f}, {level} limit {critical:.2f} for {n} "
                f"drops); it is kept; without it the viscosity would be {100 * abs(effect):.2f} % "
                f"{'higher' if effect > 0 else 'lower'}",
                remedy="look for a bubble, a wrong ball, or a mistimed mark; if there was one, "
                "mark the drop void and note the reason",
            ),
        )


def _mean_of_mates(data: RunData, drop: int) -> float:
    mates = np.flatnonzero(data.weights.value == data.weights.value[drop])
    return float(data.columns.at_set[mates[mates != drop]].mean())
