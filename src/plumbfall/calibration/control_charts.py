"""Control charts of single values in order: limits, moving averages, sums, runs and drift."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import stdtr, stdtrit

from plumbfall.calibration.chart_constants import chart_constants

__all__ = [
    "ACTION",
    "ROUNDING",
    "WARNING",
    "Cusum",
    "Drift",
    "Individuals",
    "cusum",
    "drift",
    "ewma",
    "ewma_limits",
    "individuals",
    "moving_ranges",
    "run_signals",
]

Numbers = NDArray[np.float64]

WARNING, ACTION = 2.0, 3.0
"""Distance of the limits from the centre line, in standard deviations (ISO 7870-2)."""

RUN, TREND = 9, 6
"""Points on one side, and points rising or falling, that are a signal (ISO 7870-2, from memory)."""

ROUNDING = 1e-12
"""Relative distance that is rounding of floats: equal values have limits of no width."""

DETECTED = 0.8
"""Power at which the detectable drift is stated."""


@dataclass(frozen=True, slots=True)
class Individuals:
    """Limits of single values from their moving range.

    ``mean_range`` is the mean of the moving ranges, ``sd`` the standard deviation it stands for:
    it holds what changes from one value to the next, within and between sets alike.
    """

    centre: float
    mean_range: float
    sd: float

    def limits(self, distance: float = ACTION) -> tuple[float, float]:
        """Return the limits so many standard deviations from the centre."""
        return self.centre - distance * self.sd, self.centre + distance * self.sd

    @property
    def highest_range(self) -> float:
        """Action limit of the moving range."""
        return chart_constants(2).D4 * self.mean_range


def moving_ranges(values: ArrayLike) -> Numbers:
    """Return the difference of each value from the one before, unsigned, one shorter."""
    return np.abs(np.diff(np.asarray(values, dtype=float)))


def individuals(values: ArrayLike) -> Individuals:
    """Return centre and standard deviation of single values by their moving range.

    Parameters
    ----------
    values : array, shape (points,)
        Two values or more, in order of time.

    Returns
    -------
    Individuals
        Limits of action at the mean moving range over 1.128 times 3.

    References
    ----------
    ISO 7870-2, charts for individuals and moving ranges.

    Examples
    --------
    >>> found = individuals([49.6, 47.6, 49.9, 51.3, 47.8, 51.2, 52.6, 52.4, 53.6, 52.1])
    >>> " ".join(f"{limit:.2f}" for limit in found.limits())
    '45.82 55.80'
    """
    values = np.asarray(values, dtype=float)
    mean_range = float(moving_ranges(values).mean())
    return Individuals(float(values.mean()), mean_range, mean_range / chart_constants(2).d2)


def ewma(values: ArrayLike, *, weight: float, start: float) -> Numbers:
    """Exponentially weighted moving average: weight times the value, and the rest the last one.

    Parameters
    ----------
    values : array, shape (points,)
        Values in order.
    weight : float [1]
        Between 0 and 1.
    start : float
        Average before the first value.

    Returns
    -------
    array, shape (points,)
        One average a value.

    References
    ----------
    ISO 7870-6.
    """
    averages = np.empty(len(np.asarray(values)))
    last = start
    for place, value in enumerate(np.asarray(values, dtype=float).tolist()):
        last = weight * value + (1 - weight) * last
        averages[place] = last
    return averages


def ewma_limits(
    *, centre: float, sd: float, weight: float, count: int, distance: float = ACTION
) -> tuple[Numbers, Numbers]:
    """Return lower and upper limits of each average, shape (points,); they widen to the last.

    References
    ----------
    ISO 7870-6: sd sqrt[w / (2 - w) (1 - (1 - w)^(2 i))].
    """
    place = np.arange(1, count + 1)
    width = distance * sd * np.sqrt(weight / (2 - weight) * (1 - (1 - weight) ** (2 * place)))
    return centre - width, centre + width


@dataclass(frozen=True, slots=True)
class Cusum:
    """Sums of what exceeds the target upwards and downwards, shape (points,)."""

    high: Numbers
    low: Numbers

    def alarms(self, decision: float) -> NDArray[np.bool_]:
        """Points at which either sum is beyond the decision interval."""
        return (self.high > decision) | (self.low > decision)


def cusum(values: ArrayLike, *, target: float, slack: float) -> Cusum:
    """Return one-sided cumulative sums, each never below 0.

    Parameters
    ----------
    values : array, shape (points,)
        Values in order.
    target : float
        What they should be.
    slack : float
        Allowance that is taken off every deviation, half of the shift worth noticing.

    Returns
    -------
    Cusum
        Upward and downward sums.

    References
    ----------
    ISO 7870-4.
    """
    deviations = np.asarray(values, dtype=float) - target
    high, low = np.empty(len(deviations)), np.empty(len(deviations))
    up = down = 0.0
    for place, deviation in enumerate(deviations.tolist()):
        up, down = max(0.0, up + deviation - slack), max(0.0, down - deviation - slack)
        high[place], low[place] = up, down
    return Cusum(high, low)


def run_signals(values: ArrayLike, *, centre: float, sd: float) -> list[tuple[str, ...]]:
    """Name the signals at every point; empty where the process is as it was.

    ``beyond-action``: outside three standard deviations. ``two-of-three-beyond-warning``: this and
    one of the two before it outside two, on the same side. ``nine-on-one-side`` of the centre, and
    ``six-rising`` or ``six-falling``, end at this point.

    Parameters
    ----------
    values : array, shape (points,)
        Values in order.
    centre, sd : float
        Of the process in control.

    Returns
    -------
    list of tuple of str
        One a point.

    References
    ----------
    ISO 7870-2, tests for special causes (numbers of points from memory).
    """
    values = np.asarray(values, dtype=float)
    away = values - centre
    away[np.abs(away) <= ROUNDING * np.abs(values)] = 0.0
    steps = np.sign(np.diff(values))
    found: list[tuple[str, ...]] = []
    for place in range(len(values)):
        signals = []
        if abs(away[place]) > ACTION * sd:
            signals.append("beyond-action")
        for side in (1.0, -1.0):
            beyond = side * away[max(0, place - 2) : place + 1] > WARNING * sd
            if beyond[-1] and beyond.sum() >= 2:
                signals.append("two-of-three-beyond-warning")
            if place >= RUN - 1 and (side * away[place - RUN + 1 : place + 1] > 0).all():
                signals.append("nine-on-one-side")
            if place >= TREND - 1 and (side * steps[place - TREND + 1 : place] > 0).all():
                signals.append("six-rising" if side > 0 else "six-falling")
        found.append(tuple(signals))
    return found


@dataclass(frozen=True, slots=True)
class Drift:
    """Straight line through values: its slope, per unit of the abscissa.

    ``detectable`` is the slope that would be found significant at 5 % with a power of 80 %.
    """

    slope: float
    u: float
    dof: int
    p_value: float
    detectable: float


def drift(abscissa: ArrayLike, values: ArrayLike) -> Drift | None:
    """Fit a straight line by least squares; ``None`` where fewer than three places are known.

    Parameters
    ----------
    abscissa : array, shape (points,)
        Time, or the order.
    values : array, shape (points,)
        What may drift.

    Returns
    -------
    Drift or None
        Slope with standard uncertainty and two-sided p-value.
    """
    x, y = np.asarray(abscissa, dtype=float), np.asarray(values, dtype=float)
    if len(np.unique(x)) < 3:
        return None
    away = x - x.mean()
    squares = float(away @ away)
    slope = float(away @ y) / squares
    dof = len(x) - 2
    residuals = y - y.mean() - slope * away
    u = math.sqrt(float(residuals @ residuals) / dof / squares)
    p_value = 2 * float(stdtr(dof, -abs(slope) / u)) if u > 0 else float(slope == 0)
    factor = float(stdtrit(dof, 0.975) + stdtrit(dof, DETECTED))
    return Drift(slope, u, dof, p_value, factor * u)
