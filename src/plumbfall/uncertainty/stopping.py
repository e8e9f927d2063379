"""When the adaptive Monte Carlo procedure has drawn enough (JCGM 101:2008, 7.9.4)."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from plumbfall.uncertainty.coverage import coverage_factor
from plumbfall.uncertainty.intervals import symmetric_interval, tolerance_delta

__all__ = ["LEAST_BLOCK", "Stability", "adaptive_block"]

Numbers = NDArray[np.float64]

LEAST_BLOCK = 10_000
"""Draws of a block at least (JCGM 101:2008, 7.9.4 b)."""


def adaptive_block(coverage: float) -> int:
    """Draws of one block: J, or 10,000 if that is more.

    Parameters
    ----------
    coverage : float [1]
        p; J is the smallest integer not below 100/(1 - p).

    References
    ----------
    JCGM 101:2008, 7.9.4 b.

    Examples
    --------
    >>> adaptive_block(0.95), adaptive_block(0.999)
    (10000, 100000)
    """
    # the last digits of 1 - 0.999 are rounding, which must not add a draw
    return max(math.ceil(round(100.0 / (1.0 - coverage), 6)), LEAST_BLOCK)


class Stability:
    """Results of every block so far: value, u and both bounds of all outputs.

    Parameters
    ----------
    coverage : float [1]
        Coverage probability of the symmetric interval that is watched.
    digits : int
        Meaningful digits of u; they set the tolerance.
    part : float [1]
        How much of the tolerance to reach; 1/5 where a linear interval is to be validated
        (JCGM 101:2008, 8.2).
    has_mean, has_u : array of bool, shape (outputs,)
        Whether these moments exist. What does not exist is not watched; where u does not, the
        tolerance comes from the interval's half-width over the normal coverage factor.
    """

    def __init__(
        self,
        *,
        coverage: float,
        digits: int,
        part: float,
        has_mean: NDArray[np.bool_],
        has_u: NDArray[np.bool_],
    ) -> None:
        self._coverage, self._digits, self._part = coverage, digits, part
        self._has_mean, self._has_u = has_mean, has_u
        self._factor = float(coverage_factor(dof=np.inf, probability=coverage))
        self._blocks: list[Numbers] = []

    def add(self, values: Numbers) -> None:
        """Take in a block of outputs, shape (outputs, draws), NaN where there is no value."""
        ascending = np.sort(values, axis=-1)
        bounds = np.array([symmetric_interval(row, self._coverage) for row in ascending])
        mean = values.mean(axis=-1)
        self._blocks.append(np.stack([mean, values.std(axis=-1, ddof=1), *bounds.T]))

    @property
    def settled(self) -> bool:
        """Whether twice the standard deviation of every average is below its tolerance.

        References: JCGM 101:2008, 7.9.4 g to k. Never before two blocks.
        """
        h = len(self._blocks)
        if h < 2:
            return False
        blocks = np.array(self._blocks)  # (blocks, quantities, outputs)
        if not np.isfinite(blocks[:, 2:]).all():
            return False
        mean, u, low, high = blocks.mean(axis=0)
        # draws without a value leave no mean; the bounds allow for them and are watched still
        watch_u = self._has_u & np.isfinite(u)
        pooled = np.sqrt((blocks[:, 1] ** 2).mean(axis=0) + blocks[:, 0].var(axis=0))
        spread = np.where(watch_u, pooled, (high - low) / (2.0 * self._factor))
        delta = np.array([tolerance_delta(float(each), self._digits) for each in spread])
        twice = 2.0 * blocks.std(axis=0, ddof=1) / np.sqrt(h)
        twice[0] = np.where(self._has_mean & np.isfinite(mean), twice[0], 0.0)
        twice[1] = np.where(watch_u, twice[1], 0.0)
        return bool((twice <= self._part * delta).all())
