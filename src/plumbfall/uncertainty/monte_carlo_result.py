"""What Monte Carlo draws say of their outputs (JCGM 101:2008, 7.6 and 7.7; JCGM 102:2011)."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.results import Histogram
from plumbfall.uncertainty.histogram import histogram
from plumbfall.uncertainty.intervals import shortest_interval, symmetric_interval

__all__ = ["MonteCarlo", "MonteCarloOutput", "summarise"]

Numbers = NDArray[np.float64]

PART_VALUES = 100_000
"""Values that are summed at a time: their deviations stay small beside the draws."""


@dataclass(frozen=True, slots=True)
class MonteCarloOutput:
    """One output; ``None`` for a mean or standard uncertainty that does not exist."""

    mean: float | None
    standard_uncertainty: float | None
    low: float
    high: float
    shortest_low: float
    shortest_high: float
    undefined: int
    histogram: Histogram | None = None


@dataclass(frozen=True, slots=True)
class MonteCarlo:
    """What the draws say of all outputs, arrays of shape (outputs,).

    ``low`` and ``high`` bound the probabilistically symmetric interval. ``mean``, ``u`` and
    ``covariance`` (outputs, outputs) are NaN where they do not exist: no variance where an input
    of a t distribution of 2 dof or fewer enters, no mean at 1 or fewer, and neither where the
    model had no value for some draws, which ``undefined`` counts. ``converged`` says whether the
    adaptive procedure ended by itself; ``None`` where the number of draws was given. ``values``
    holds the draws themselves in order, shape (outputs, draws), where they were to be kept;
    ``histograms`` count them about the symmetric interval of each output.
    """

    draws: int
    seed: int
    coverage: float
    mean: Numbers
    u: Numbers
    covariance: Numbers
    low: Numbers
    high: Numbers
    shortest_low: Numbers
    shortest_high: Numbers
    undefined: NDArray[np.intp]
    converged: bool | None = None
    values: Numbers | None = None
    histograms: tuple[Histogram | None, ...] = ()

    @property
    def correlation(self) -> Numbers:
        """Correlation coefficients of the outputs, NaN where they do not exist."""
        with np.errstate(invalid="ignore", divide="ignore"):
            return self.covariance / np.outer(self.u, self.u)

    def output(self, place: int) -> MonteCarloOutput:
        """Return one output's results."""
        mean, u = float(self.mean[place]), float(self.u[place])
        return MonteCarloOutput(
            mean=None if math.isnan(mean) else mean,
            standard_uncertainty=None if math.isnan(u) else u,
            low=float(self.low[place]),
            high=float(self.high[place]),
            shortest_low=float(self.shortest_low[place]),
            shortest_high=float(self.shortest_high[place]),
            undefined=int(self.undefined[place]),
            histogram=self.histograms[place] if self.histograms else None,
        )


def _mean(values: Numbers) -> Numbers:
    """Mean of every output; taken off the first draw, so that equal draws have their own value."""
    first = values[:, :1]
    total = np.zeros(len(values))
    for part in _parts(values):
        total += (part - first).sum(axis=1)
    return np.asarray(first[:, 0] + total / values.shape[1])


def _covariance(values: Numbers, mean: Numbers) -> Numbers:
    """Covariance with M - 1 in the divisor (JCGM 101:2008, 7.6)."""
    total = np.zeros((len(values), len(values)))
    for part in _parts(values):
        deviation = part - mean[:, None]
        total += deviation @ deviation.T
    return np.asarray(total / (values.shape[1] - 1))


def _parts(values: Numbers) -> Iterator[Numbers]:
    """Cut draws into parts whose size does not depend on how they were made."""
    step = max(PART_VALUES // len(values), 1)
    return (values[:, start : start + step] for start in range(0, values.shape[1], step))


def summarise(
    values: Numbers,
    *,
    has_mean: NDArray[np.bool_],
    has_u: NDArray[np.bool_],
    seed: int,
    coverage: float,
    converged: bool | None,
    keep: bool,
) -> MonteCarlo:
    """Reduce the outputs' draws to moments and intervals.

    Parameters
    ----------
    values : array, shape (outputs, draws)
        NaN where the model has no value. They are sorted in place, unless ``keep``.
    has_mean, has_u : array of bool, shape (outputs,)
        Whether these moments exist.
    seed, coverage, converged, keep
        As :class:`MonteCarlo` records them.

    Returns
    -------
    MonteCarlo
        Moments by JCGM 101:2008, 7.6, intervals by 7.7.
    """
    undefined = np.array([np.count_nonzero(np.isnan(row)) for row in values], dtype=np.intp)
    with np.errstate(over="ignore", invalid="ignore"):  # draws without moments may be huge
        mean = _mean(values)
        covariance = _covariance(values, mean)
    covariance[~has_u, :] = np.nan
    covariance[:, ~has_u] = np.nan
    mean[~has_mean] = np.nan
    symmetric, shortest, histograms = [], [], []
    for row in values:
        ascending = row.copy() if keep else row
        ascending.sort()
        symmetric.append(symmetric_interval(ascending, coverage))
        shortest.append(shortest_interval(ascending, coverage))
        histograms.append(histogram(ascending, *symmetric[-1]))
    low, high = np.array(symmetric).T
    shortest_low, shortest_high = np.array(shortest).T
    return MonteCarlo(
        draws=values.shape[1],
        seed=seed,
        coverage=coverage,
        mean=mean,
        u=np.sqrt(np.diag(covariance)),
        covariance=covariance,
        low=low,
        high=high,
        shortest_low=shortest_low,
        shortest_high=shortest_high,
        undefined=undefined,
        converged=converged,
        values=values if keep else None,
        histograms=tuple(histograms),
    )
