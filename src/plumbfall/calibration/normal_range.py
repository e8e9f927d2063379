"""The range of a normal sample: its distribution and first moments, by integration."""

from __future__ import annotations

from functools import cache

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtr

__all__ = ["range_mean", "range_probability", "range_quantile", "range_sd"]

WIDEST = 20.0
"""Standard deviations beyond which the range of a normal sample does not reach."""


def range_probability(width: float, n: int) -> float:
    """Return the probability that the range of ``n`` normal values is below ``width`` of their sd.

    Integral over the smallest value x of n phi(x) [Phi(x + w) - Phi(x)]^(n - 1).

    Examples
    --------
    >>> f"{range_probability(2.772, 2):.4f}"
    '0.9500'
    """
    return float(_below(np.array([width]), n)[0])


@cache
def range_quantile(probability: float, n: int) -> float:
    """Return the width that the range of ``n`` normal values stays below with a probability.

    Examples
    --------
    >>> f"{range_quantile(0.95, 2):.3f}"
    '2.772'
    """
    from scipy.optimize import brentq  # a third of a second that most checks need not spend

    width = brentq(
        lambda w: range_probability(w, n) - probability, 1e-9, WIDEST, xtol=1e-13, rtol=1e-13
    )
    return float(width)


@cache
def range_mean(n: int) -> float:
    """Return the mean range of ``n`` normal values in standard deviations: integral of 1 - P(w)."""
    width, weight = _nodes(0.0, WIDEST)
    return float(weight @ (1.0 - _below(width, n)))


@cache
def range_sd(n: int) -> float:
    """Return the standard deviation of the range of ``n`` normal values, in theirs."""
    width, weight = _nodes(0.0, WIDEST)
    mean_square = 2.0 * float(weight @ (width * (1.0 - _below(width, n))))
    return float(np.sqrt(mean_square - range_mean(n) ** 2))


def _below(width: NDArray[np.float64], n: int) -> NDArray[np.float64]:
    least, weight = _nodes(-10.0, 10.0)
    density = np.exp(-(least**2) / 2) / np.sqrt(2 * np.pi)
    inside = ndtr(least + width[:, None]) - ndtr(least)
    return np.asarray(n * (inside ** (n - 1)) @ (weight * density))


@cache
def _nodes(low: float, high: float) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    nodes, weights = np.polynomial.legendre.leggauss(200)
    half = (high - low) / 2
    return low + half * (nodes + 1.0), half * weights
