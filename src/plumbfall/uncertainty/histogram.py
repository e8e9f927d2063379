"""How often draws fall where: equal bins about a coverage interval."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from plumbfall.results import Histogram

__all__ = ["BINS", "histogram"]

BINS = 48
MARGIN = 0.5
"""The bins reach beyond the interval on either side by this part of its width."""


def histogram(ascending: NDArray[np.float64], low: float, high: float) -> Histogram | None:
    """Count draws in equal bins that reach beyond an interval by half its width.

    Parameters
    ----------
    ascending : array, shape (draws,)
        Sorted, NaN at the end where a draw has no value.
    low, high : float
        The interval's bounds, in the unit of the draws.

    Returns
    -------
    Histogram or None
        ``None`` where the interval has no bounds, or no width.

    Examples
    --------
    >>> import numpy as np
    >>> found = histogram(np.arange(1000.0), 250.0, 750.0)
    >>> found.low, found.high, sum(found.counts), found.below, found.above
    (0.0, 1000.0, 1000, 0, 0)
    """
    width = high - low
    if not (math.isfinite(width) and width > 0):
        return None
    edges = np.linspace(low - MARGIN * width, high + MARGIN * width, BINS + 1)
    valued = len(ascending) - int(np.count_nonzero(np.isnan(ascending)))
    ranks = np.searchsorted(ascending[:valued], edges)
    return Histogram(
        low=float(edges[0]),
        high=float(edges[-1]),
        counts=tuple(np.diff(ranks).tolist()),
        below=int(ranks[0]),
        above=int(valued - ranks[-1]),
    )
