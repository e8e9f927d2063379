"""Decisions on conformity under uncertainty (JCGM 106): probability, guard bands, rule."""

from __future__ import annotations

import math
from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import ndtr, ndtri, stdtr

__all__ = [
    "ACCEPT",
    "REJECT",
    "Acceptance",
    "acceptance_interval",
    "chance",
    "conformance_probability",
    "consumers_risk_at_limit",
    "guard_factor",
    "is_capable",
]

Numbers = NDArray[np.float64]

ACCEPT, REJECT = 0.95, 0.05
"""Conformance probabilities from which on, and up to which, a decision is made."""


def conformance_probability(
    *,
    value: ArrayLike,
    u: ArrayLike,
    low: ArrayLike = -math.inf,
    high: ArrayLike = math.inf,
    dof: ArrayLike = math.inf,
) -> Numbers:
    """Probability that the true value lies within the limits.

    Parameters
    ----------
    value, u : array
        Measured values and their standard uncertainties; an uncertainty of 0 decides outright.
    low, high : array
        Limits of tolerance; infinite where there is none.
    dof : array [1]
        Effective degrees of freedom: with few of them Student's t takes the place of the normal
        distribution.

    Returns
    -------
    array [1]
        Between 0 and 1.

    References
    ----------
    JCGM 106:2012, 7.2 to 7.4.

    Examples
    --------
    >>> f"{conformance_probability(value=-5.47, u=0.05, high=-5.40):.3f}"
    '0.919'
    """
    value, u, dof = (np.asarray(given, dtype=float) for given in (value, u, dof))

    def below(limit: ArrayLike) -> Numbers:
        distance = np.asarray(limit, dtype=float) - value
        with np.errstate(divide="ignore", invalid="ignore"):
            scaled = np.where(u > 0, distance / u, np.where(distance == 0, 0.0, distance * np.inf))
        few = np.where(np.isfinite(dof), dof, 1.0)
        # Student's t is not defined at the infinities, where it ends
        bounded = np.clip(scaled, -1e300, 1e300)
        return np.asarray(np.where(np.isfinite(dof), stdtr(few, bounded), ndtr(scaled)))

    inside = below(high) - below(low)
    exact = (value >= np.asarray(low)) & (value <= np.asarray(high))
    return np.asarray(np.where(u > 0, np.clip(inside, 0.0, 1.0), exact.astype(float)))


def chance(probability: float) -> str:
    """Return a probability in percent to a tenth; what rounds to all or nothing says so.

    Examples
    --------
    >>> chance(0.9731), chance(0.99999), chance(0.0002)
    ('97.3 %', 'more than 99.9 %', 'less than 0.1 %')
    """
    if probability < 0.0005:
        return "less than 0.1 %"
    if probability > 0.9995:
        return "more than 99.9 %"
    return f"{100.0 * probability:.1f} %"


def guard_factor(probability: ArrayLike) -> Numbers:
    """Return how many standard uncertainties a guard band takes for a one-sided probability.

    References
    ----------
    JCGM 106:2012, table 1.

    Examples
    --------
    >>> f"{guard_factor(0.95):.3f}"
    '1.645'
    """
    return np.asarray(ndtri(np.asarray(probability, dtype=float)))


def consumers_risk_at_limit(guard: ArrayLike) -> Numbers:
    """Return the largest risk of a wrong acceptance, with a guard band of so many ``u``.

    It is met where the measured value stands at the acceptance limit; 0.5 without a guard band.

    References
    ----------
    JCGM 106:2012, 8.3.2 (clause from memory).

    Examples
    --------
    >>> f"{100 * consumers_risk_at_limit(2.0):.1f} %"
    '2.3 %'
    """
    return np.asarray(ndtr(-np.asarray(guard, dtype=float)))


class Acceptance(NamedTuple):
    """Interval in which measured values are accepted; empty where ``low`` is above ``high``."""

    low: float
    high: float


def acceptance_interval(*, low: float, high: float, u: float, guard: float) -> Acceptance:
    """Return the limits drawn in by a guard band of ``guard`` standard uncertainties.

    Parameters
    ----------
    low, high : float
        Limits of tolerance; infinite where there is none.
    u : float
        Standard uncertainty of the measured value.
    guard : float [1]
        Width of the guard band over ``u``; 0 is simple acceptance, below 0 guarded rejection.

    Returns
    -------
    Acceptance
        Empty where the measurement is not capable.

    References
    ----------
    JCGM 106:2012, 8.3.
    """
    return Acceptance(low + guard * u, high - guard * u)


def is_capable(*, low: float, high: float, u: float, dof: float = math.inf) -> bool:
    """Whether some measured value would be accepted: the best is half-way between the limits."""
    if not (math.isfinite(low) and math.isfinite(high)):
        return True
    best = conformance_probability(value=(low + high) / 2, u=u, low=low, high=high, dof=dof)
    return bool(best >= ACCEPT)
