"""Constants of control charts for a normal process, by integration and from their definitions."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cache

from scipy.special import gammaln

from plumbfall.calibration.normal_range import range_mean, range_sd

__all__ = ["ChartConstants", "chart_constants"]


@dataclass(frozen=True, slots=True)
class ChartConstants:
    """Constants for samples of one size.

    ``d2`` and ``d3`` are mean and standard deviation of the range over the process's standard
    deviation, ``c4`` the mean of the sample standard deviation over it. ``A2``, ``A3`` give limits
    of means from ranges and standard deviations, ``D3``, ``D4`` those of ranges and ``B3``,
    ``B4`` those of standard deviations.
    """

    d2: float
    d3: float
    c4: float
    A2: float
    A3: float
    D3: float
    D4: float
    B3: float
    B4: float


@cache
def chart_constants(n: int) -> ChartConstants:
    """Return the constants for samples of ``n`` values, 2 or more.

    References
    ----------
    ISO 7870-2, table of factors for computing control limits.

    Examples
    --------
    >>> constants = chart_constants(5)
    >>> f"{constants.d2:.3f} {constants.c4:.4f} {constants.A2:.3f}"
    '2.326 0.9400 0.577'
    """
    d2, d3 = range_mean(n), range_sd(n)
    c4 = math.sqrt(2 / (n - 1)) * math.exp(gammaln(n / 2) - gammaln((n - 1) / 2))
    of_range, of_sd = 3 * d3 / d2, 3 * math.sqrt(1 - c4**2) / c4
    return ChartConstants(
        d2=d2,
        d3=d3,
        c4=c4,
        A2=3 / (d2 * math.sqrt(n)),
        A3=3 / (c4 * math.sqrt(n)),
        D3=max(0.0, 1 - of_range),
        D4=1 + of_range,
        B3=max(0.0, 1 - of_sd),
        B4=1 + of_sd,
    )
