"""Whether drops drift: with their order, with temperature, or as a bath settles.

Drops are compared as :mod:`plumbfall.findings.residuals` weighs them. What the bench sheet declares
of the temperature slope counts as an error of a trend: a slope known to 10 % leaves a tenth of the
temperature's own effect in the drops.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.kendall import mann_kendall
from plumbfall.findings.residuals import Residuals, Slope
from plumbfall.findings.significance import FEW, t_p_value
from plumbfall.uncertainty.type_a import group_sums

__all__ = ["SETTLING_DROPS", "Trends", "Warmth", "change_of", "trends"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]

SETTLING_DROPS = 2.0
"""An approach to equilibrium is looked for as exp(-order / 2): the first five drops, say."""

LEAST_READING = 0.01
"""Scatter of a temperature reading, K, where none is declared (common practice, no source)."""

CLEAR = 3.0
"""Temperatures must scatter by so many times the scatter of a reading to show a slope."""


@dataclass(frozen=True, slots=True)
class Trends:
    """Trends of ln(viscosity) in every run set, arrays of shape (run sets,).

    ``drift`` is per drop and ``drift_p_value`` the joint one of its t-test and of Mann and
    Kendall; ``drift_beside`` is the p-value of the drift once temperature is taken off.
    ``warming`` is per kelvin, beyond the slope that the bench sheet gives, with ``warming_error``,
    ``warming_dof`` and ``warming_p_value``; ``warming_beside`` is its p-value next to the drift.
    ``lag`` is per kelvin that the temperature changes from drop to drop, with its p-value.
    ``settling`` is the change of an exponential approach, with its p-value, and
    ``settling_beside`` that without the first drop.
    """

    drift: Slope
    drift_error: Numbers
    drift_p_value: Numbers
    drift_beside: Numbers
    warming: Numbers
    warming_error: Numbers
    warming_dof: Numbers
    warming_p_value: Numbers
    warming_beside: Numbers
    lag: Slope
    lag_p_value: Numbers
    settling: Slope
    settling_p_value: Numbers
    settling_beside: Numbers


@dataclass(frozen=True, slots=True)
class Warmth:
    """What is known of temperature: of the drops, (drops,), and of their run sets, (run sets,).

    ``reading`` is the scatter of one reading [K]; ``slope`` d ln(viscosity)/dT as the bench sheet
    gives it [1/K], 0 where it does not, and ``slope_u`` its standard uncertainty.
    """

    temperature: Numbers
    reading: Numbers
    slope: Numbers
    slope_u: Numbers


def trends(residuals: Residuals, order: Numbers, warmth: Warmth) -> Trends:
    """Regress the drops of every run set on order, temperature and an approach to equilibrium.

    Parameters
    ----------
    residuals : Residuals
        The drops less their means.
    order : array, shape (drops,)
        Place of each drop in its run set, from 0.
    warmth : Warmth
        Temperatures and the slope used.

    Returns
    -------
    Trends
        In columns over the run sets.
    """
    n, errors = len(residuals.dof), residuals.errors
    temperature = np.where(np.isnan(warmth.temperature), 0.0, warmth.temperature)
    drift = residuals.slope(order)
    along = residuals.slope(order, of=temperature).value
    by_slope = warmth.slope_u * np.nan_to_num(along)  # drift that an error of the slope makes
    drift_error, drift_dof = _with_known(drift.error, drift.dof, by_slope)
    by_t = _t(drift.value, drift_error, drift_dof)
    by_rank = mann_kendall(errors.value, order, errors.group, errors.group_set, n)
    # ranks know nothing of the slope's error: they count only where that is the smaller part
    by_rank = np.where(np.abs(by_slope) < 0.3 * drift.error, by_rank, 1.0)

    raw = residuals.slope(temperature)
    spread = _variance(temperature, residuals.run_set, n)
    noise = np.maximum(warmth.reading, LEAST_READING) ** 2
    with np.errstate(invalid="ignore", divide="ignore"):
        share = noise / spread
        clear = share < CLEAR**-2
        # readings scatter, and the correction carries that into the drops
        warming = np.where(clear, raw.value + warmth.slope * share, np.nan)
        scatter = np.abs(warmth.slope) * share * np.sqrt(2 / np.maximum(raw.dof, 1))
    warming_error, warming_dof = _with_known(raw.error, raw.dof, np.hypot(warmth.slope_u, scatter))
    beside = residuals.slope(temperature, beside=order)
    beside_error, beside_dof = _with_known(beside.error, beside.dof, warmth.slope_u)
    drift_beside = residuals.slope(order, beside=temperature)

    change = change_of(temperature, order, residuals.run_set)
    lag = residuals.slope(change, beside=temperature)
    moves = _variance(change, residuals.run_set, n) > CLEAR**2 * noise
    approach = np.exp(-order / SETTLING_DROPS)
    settling = residuals.slope(approach)
    without_first = residuals.slope(approach, beside=(order == 0).astype(float))
    return Trends(
        drift=drift,
        drift_error=drift_error,
        drift_p_value=np.minimum(2 * np.minimum(by_t, by_rank), 1.0),
        drift_beside=_p_value(drift_beside),
        warming=warming,
        warming_error=warming_error,
        warming_dof=warming_dof,
        warming_p_value=_t(warming, warming_error, warming_dof),
        warming_beside=_t(beside.value, beside_error, beside_dof),
        lag=lag,
        lag_p_value=np.where(moves, _p_value(lag), 1.0),
        settling=settling,
        settling_p_value=_p_value(settling),
        settling_beside=_p_value(without_first),
    )


def _with_known(error: Numbers, dof: NDArray[np.intp], known: Numbers) -> tuple[Numbers, Numbers]:
    """Join a standard error with a known one (Welch and Satterthwaite).

    With few degrees of freedom the formula trusts a scatter that is small by chance; they stay.
    """
    joined = np.hypot(error, known)
    with np.errstate(invalid="ignore", divide="ignore"):
        dof_joined = np.where(dof >= FEW, dof * (joined / error) ** 4, dof)
    return joined, dof_joined


def _p_value(slope: Slope) -> Numbers:
    return _t(slope.value, slope.error, slope.dof)


def _t(value: Numbers, error: Numbers, dof: Numbers | NDArray[np.intp]) -> Numbers:
    with np.errstate(invalid="ignore", divide="ignore"):
        return t_p_value(t=value / error, dof=dof)


def _variance(values: Numbers, run_set: Codes, n: int) -> Numbers:
    count = np.bincount(run_set, minlength=n)
    with np.errstate(invalid="ignore", divide="ignore"):
        mean = group_sums(values, run_set, n) / count
        return group_sums((values - mean[run_set]) ** 2, run_set, n) / (count - 1)


def change_of(values: Numbers, order: Numbers, run_set: Codes) -> Numbers:
    """Return the mean change from the drop before and to the drop after, shape (drops,)."""
    sorted_ = np.lexsort((order, run_set))
    along, of_set = values[sorted_], run_set[sorted_]
    step = np.diff(along)
    inside = of_set[1:] == of_set[:-1]
    before = np.concatenate([[np.nan], np.where(inside, step, np.nan)])
    after = np.concatenate([np.where(inside, step, np.nan), [np.nan]])
    both = np.stack([before, after])
    known = np.isfinite(both)
    mean = np.where(known, both, 0.0).sum(axis=0) / np.maximum(known.sum(axis=0), 1)
    change = np.empty(len(values))
    change[sorted_] = mean
    return change
