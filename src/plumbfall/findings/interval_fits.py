"""Whether the intervals of the drops agree, and what would explain it if they do not."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.declared import declared_batches
from plumbfall.findings.interval_drops import IntervalDrops
from plumbfall.findings.least_squares import weighted_squares
from plumbfall.findings.significance import FEW, f_p_value
from plumbfall.uncertainty.type_a import group_sums

__all__ = ["IntervalFit", "IntervalFits", "interval_fits"]

Numbers = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class IntervalFit:
    """Mean viscosities of the intervals of one tube in one run set, shape (intervals,).

    ``value`` is ln of the viscosity, less the mean of all; ``covariance`` what scatter and bench
    sheet allow.
    """

    value: Numbers
    covariance: Numbers


@dataclass(frozen=True, slots=True)
class IntervalFits:
    """Agreement of intervals, arrays of shape (run sets and tubes,), and the fits behind it."""

    f: Numbers
    p_value: Numbers
    dof: NDArray[np.intp]
    scatter_dof: Numbers
    fits: dict[int, IntervalFit]


def interval_fits(drops: IntervalDrops) -> IntervalFits:
    """Compare the intervals of every run set.

    Intervals that share a mark share its reading's error, with opposite signs. Where drops scatter
    more between their intervals than the timer explains, their own scatter is used.
    """
    n = len(drops.set_run)
    f, p_value = np.full(n, np.nan), np.ones(n)
    dof, scatter_dof = np.zeros(n, dtype=np.intp), np.zeros(n)
    fits: dict[int, IntervalFit] = {}
    n_groups = len(drops.group_set)
    count = np.bincount(drops.group, minlength=n_groups)
    mean = group_sums(drops.value, drops.group, n_groups) / count
    sd = drops.by_time * np.where(drops.mark_sd > 0, np.maximum(drops.mark_sd, drops.least_sd), 0.0)
    least = group_sums(drops.least_sd**2, drops.group, n_groups) / count
    timed = group_sums(sd, drops.group, n_groups) / count
    biased = group_sums(drops.by_time * drops.bias, drops.group, n_groups) / count
    by_time = group_sums(drops.by_time, drops.group, n_groups) / count
    finite = np.ones(n, dtype=bool)
    finite[drops.group_set[~np.isfinite(mean + timed)]] = False
    for sets, groups, declared in declared_batches(drops.group_set, drops.slopes, finite):
        k, n_drops = groups.shape[1], count[groups[:, 0]]
        # without a timer the pattern of the marks stands, and the drops give its size
        known = np.asarray(np.all(timed[groups] > 0, axis=1))
        reading = np.where(known[:, None], timed[groups], by_time[groups])
        shape = _of_marks(reading)
        value = mean[groups]
        apart = _scatter(drops, groups, shape)
        inner_dof = (n_drops - 1) * (k - 1)
        with np.errstate(invalid="ignore", divide="ignore"):
            scale = np.where(inner_dof > 0, apart / inner_dof, np.inf)
        smallest = np.where(known, 1.0, least[groups].mean(axis=1))
        scale = np.maximum(scale, smallest)
        able = inner_dof > 0
        scatter = shape * np.where(able, scale / n_drops, 1.0)[:, None, None]
        covariance = declared + scatter
        covariance[:, np.arange(k), np.arange(k)] += biased[groups] ** 2
        centre = np.eye(k) - 1 / k
        own = np.trace(centre @ scatter, axis1=1, axis2=2)
        whole = np.trace(centre @ covariance, axis1=1, axis2=2)
        within = np.where(inner_dof >= FEW, inner_dof * (whole / own) ** 2, inner_dof)
        inverse: Numbers = np.asarray(np.linalg.inv(covariance), dtype=float)
        centred = value - value.mean(axis=1, keepdims=True)
        rest = weighted_squares(inverse, centred, [np.ones_like(centred)])[0]
        f[sets], dof[sets], scatter_dof[sets] = rest / (k - 1), k - 1, within
        p_value[sets] = f_p_value(f=f[sets], dof=k - 1, dof_within=within)
        for place, run in enumerate(sets.tolist()):
            fits[run] = IntervalFit(centred[place], covariance[place])
    return IntervalFits(f=f, p_value=p_value, dof=dof, scatter_dof=scatter_dof, fits=fits)


def _of_marks(reading: Numbers) -> Numbers:
    """Covariance of intervals from independent readings of marks, shape (sets, k, k)."""
    k = reading.shape[1]
    joint = 2 * np.eye(k) - np.eye(k, k=1) - np.eye(k, k=-1)
    return np.asarray(reading[:, :, None] * reading[:, None, :] * joint)


def _scatter(drops: IntervalDrops, groups: NDArray[np.intp], shape: Numbers) -> Numbers:
    """Weighted squares of the drops' intervals about their means, each drop's own mean free."""
    k = groups.shape[1]
    place = np.full(len(drops.group_set), -1, dtype=np.intp)
    place[groups.ravel()] = np.repeat(np.arange(len(groups)), k)
    at = np.flatnonzero(place[drops.group] >= 0)
    of_set = place[drops.group[at]].reshape(-1, k)[:, 0]
    value = drops.value[at].reshape(-1, k)
    mean = (
        np.stack([group_sums(value[:, j], of_set, len(groups)) for j in range(k)], axis=1)
        / np.bincount(of_set, minlength=len(groups))[:, None]
    )
    inverse: Numbers = np.asarray(np.linalg.inv(shape), dtype=float)
    ones = np.ones((len(of_set), k))
    rest = weighted_squares(inverse[of_set], value - mean[of_set], [ones])[0]
    return group_sums(rest, of_set, len(groups))
