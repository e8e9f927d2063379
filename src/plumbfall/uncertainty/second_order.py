"""Whether second-order terms matter beside the law of propagation (JCGM 100:2008, 5.1.2, note)."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from itertools import combinations

import numpy as np
from numpy.typing import ArrayLike, NDArray

__all__ = ["SecondOrder", "second_order"]

Numbers = NDArray[np.float64]
Function = Callable[[Numbers], Numbers]
"""From inputs, shape (inputs, points), to values, shape (points,)."""


@dataclass(frozen=True, slots=True)
class SecondOrder:
    """Second-order terms of a function of independent inputs with normal errors.

    ``first`` and ``second`` are variances: the sum of squared contributions, and what the terms of
    the next order add to it, which may be below 0. ``shift`` is that of the mean, the sum of f''
    u^2/2; it is told, not applied.
    """

    first: float
    second: float
    shift: float


def second_order(function: Function, values: ArrayLike, u: ArrayLike) -> SecondOrder | None:
    r"""Evaluate the second-order terms of a function by differences of its own.

    .. math:: \sum_i \sum_j \left[ \tfrac12 f_{ij}^2 + f_i f_{ijj} \right] u_i^2 u_j^2

    Parameters
    ----------
    function : callable
        From inputs, shape (inputs, points), to values, shape (points,); NaN where there is none.
    values, u : arrays, shape (inputs,)
        Estimates and standard uncertainties. Steps are one and two u, so that what is found is
        the function's bend over the range in which its inputs lie.

    Returns
    -------
    SecondOrder or None
        ``None`` where the function has no value at one of the points.

    References
    ----------
    JCGM 100:2008, 5.1.2, note, for normal errors.
    """
    estimate, step = np.asarray(values, dtype=float), np.asarray(u, dtype=float)
    n = len(estimate)
    couples = list(combinations(range(n), 2))
    deviations = [np.zeros((n, 1))]
    for i in range(n):
        alone = np.zeros((n, 4))
        alone[i] = (-2, -1, 1, 2)
        deviations.append(alone)
    for i, j in couples:
        both = np.zeros((n, 4))
        both[i], both[j] = (-1, -1, 1, 1), (-1, 1, -1, 1)
        deviations.append(both)
    points = estimate[:, None] + step[:, None] * np.concatenate(deviations, axis=1)
    with np.errstate(all="ignore"):
        found = np.asarray(function(points), dtype=float)
    if not np.isfinite(found).all():
        return None
    _, alone, both = np.split(found - found[0], [1, 1 + 4 * n])
    lowest, low, high, highest = alone.reshape(n, 4).T
    # derivatives times as many u, the first two through five points
    f_i = (8 * (high - low) - (highest - lowest)) / 12
    f_ii = (16 * (high + low) - (highest + lowest)) / 12
    f_iii = (highest - lowest - 2 * (high - low)) / 2
    second = float(np.sum(f_ii**2 / 2 + f_i * f_iii))
    for (i, j), (down_down, down_up, up_down, up_up) in zip(
        couples, both.reshape(-1, 4), strict=True
    ):
        f_ij = (up_up - up_down - down_up + down_down) / 4
        # the bend in one input, above less below in the other
        f_ijj = ((up_up + up_down - 2 * high[i]) - (down_up + down_down - 2 * low[i])) / 2
        f_jii = ((up_up + down_up - 2 * high[j]) - (up_down + down_down - 2 * low[j])) / 2
        second += float(f_ij**2 + f_i[i] * f_ijj + f_i[j] * f_jii)
    return SecondOrder(first=float(np.sum(f_i**2)), second=second, shift=float(np.sum(f_ii) / 2))
