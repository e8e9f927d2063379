"""Coverage intervals of draws, and whether a linear one agrees (JCGM 101:2008, 7.7 and 8).

A draw may have no value, where the model has none for its inputs. Such draws are taken to lie
outside an interval, on whichever side is worse, so that intervals still hold what they promise.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from plumbfall.errors import InputError

__all__ = [
    "Interval",
    "Validation",
    "interval_ranks",
    "shortest_interval",
    "symmetric_interval",
    "tolerance_delta",
    "validate",
]

Numbers = NDArray[np.float64]

ARITHMETIC = 1e-12
"""Relative difference of two bounds that is rounding of the arithmetic alone."""


class Interval(NamedTuple):
    """Bounds of a coverage interval; infinite where too many draws have no value."""

    low: float
    high: float


def interval_ranks(draws: int, coverage: float) -> tuple[int, int]:
    """Ranks of a coverage interval's ends among sorted draws.

    Parameters
    ----------
    draws : int
        M, how many there are.
    coverage : float [1]
        p, between 0 and 1.

    Returns
    -------
    tuple of int
        q = floor(p M + 1/2), the difference of the two ends' ranks, and r, the lower end's rank
        from 1 in the probabilistically symmetric interval: (M - q)/2, or (M - q + 1)/2 where
        that is not whole.

    Raises
    ------
    InputError
        Where so few draws have no such interval.

    References
    ----------
    JCGM 101:2008, 7.7.1 and 7.7.2.

    Examples
    --------
    >>> interval_ranks(200_000, 0.95)
    (190000, 5000)
    """
    if not 0.0 < coverage < 1.0:
        raise InputError(f"coverage = {coverage} is not between 0 and 1", remedy="write 0.95")
    q = math.floor(coverage * draws + 0.5)
    if draws - q < 1 or q < 1:
        least = math.ceil(max(1.0 / (1.0 - coverage), 1.0 / coverage))
        raise InputError(
            f"{draws} draws are too few for a coverage of {coverage:g}",
            remedy=f"take at least {100 * least}",
        )
    return q, (draws - q + 1) // 2


def _defined(ascending: Numbers) -> int:
    """How many sorted draws have a value; NaN sorts last."""
    return int(np.searchsorted(ascending, np.inf, side="right"))


def symmetric_interval(ascending: Numbers, coverage: float) -> Interval:
    """Probabilistically symmetric coverage interval.

    Parameters
    ----------
    ascending : array, shape (draws,)
        Sorted, NaN last for draws without a value.
    coverage : float [1]
        Coverage probability, between 0 and 1.

    Returns
    -------
    Interval
        From rank r to rank r + q.

    References
    ----------
    JCGM 101:2008, 7.7.2.
    """
    q, r = interval_ranks(len(ascending), coverage)
    defined = _defined(ascending)
    undefined = len(ascending) - defined
    return Interval(
        low=float(ascending[r - 1 - undefined]) if r > undefined else -math.inf,
        high=float(ascending[r + q - 1]) if r + q <= defined else math.inf,
    )


def shortest_interval(ascending: Numbers, coverage: float) -> Interval:
    """Shortest coverage interval; parameters as :func:`symmetric_interval`.

    Its ends scatter more from seed to seed than those of the symmetric one.

    References
    ----------
    JCGM 101:2008, 7.7.1 and 5.3.4: the r with the least y(r + q) - y(r).
    """
    q, _ = interval_ranks(len(ascending), coverage)
    defined = _defined(ascending)
    if defined <= q:
        return Interval(-math.inf, math.inf)
    r = int(np.argmin(ascending[q:defined] - ascending[: defined - q]))
    return Interval(float(ascending[r]), float(ascending[r + q]))


def tolerance_delta(u: float, digits: int = 1) -> float:
    """Numerical tolerance of a standard uncertainty of so many meaningful digits.

    Parameters
    ----------
    u : float
        Standard uncertainty, in the output's unit.
    digits : int
        How many digits of it are meaningful, 1 or 2 as a rule.

    Returns
    -------
    float
        Half of 10^l, u being c times 10^l with c an integer of so many digits; 0 for u = 0.

    References
    ----------
    JCGM 101:2008, 7.9.2.

    Examples
    --------
    >>> f"{tolerance_delta(0.00035, digits=2):.1e}"
    '5.0e-06'
    """
    if digits < 1 or not 0.0 <= u < math.inf:
        raise InputError(
            f"a standard uncertainty of {u} to {digits} digits has no tolerance",
            remedy="give a finite u, not below zero, and one digit or more",
        )
    if u == 0.0:
        return 0.0
    exponent = int(f"{u:.{digits - 1}e}".partition("e")[2]) - (digits - 1)
    return float(f"5e{exponent - 1}")


@dataclass(frozen=True, slots=True)
class Validation:
    """How far a linear interval's ends are from those of a Monte Carlo interval.

    ``validated`` where neither end differs by more than ``delta``.
    """

    delta: float
    d_low: float
    d_high: float
    validated: bool


def validate(
    *,
    linear_low: float,
    linear_high: float,
    low: float,
    high: float,
    u: float,
    digits: int = 1,
) -> Validation:
    """Compare a linear coverage interval with a Monte Carlo one of the same coverage.

    Parameters
    ----------
    linear_low, linear_high : float
        Ends of the interval by the law of propagation.
    low, high : float
        Ends of the Monte Carlo interval, whose own error should be below a fifth of the
        tolerance.
    u : float
        Standard uncertainty that sets the tolerance; where the Monte Carlo one does not exist,
        the linear one.
    digits : int
        Meaningful digits of ``u``.

    Returns
    -------
    Validation
        Not validated where an end is infinite or missing.

    References
    ----------
    JCGM 101:2008, 8.1.
    """
    delta = tolerance_delta(u, digits)
    d_low, d_high = abs(linear_low - low), abs(linear_high - high)
    allowed = delta + ARITHMETIC * max(abs(linear_low), abs(linear_high))
    agree = all(math.isfinite(d) and d <= allowed for d in (d_low, d_high))
    return Validation(delta=delta, d_low=d_low, d_high=d_high, validated=agree)
