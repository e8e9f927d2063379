"""Equal readings: how often chance makes them, and where they are."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.clock_steps import clock_steps
from plumbfall.findings.data import RunData
from plumbfall.findings.repeats import repeats

__all__ = ["chance_of_temperature", "chance_of_time", "repeats_of", "row_keys", "ticks"]

TICK = 1e-6
"""Seconds and kelvin within which two readings are the same."""


def ticks(value: NDArray[np.float64]) -> NDArray[np.int64]:
    """Return readings as whole numbers, so that equal ones compare equal, and unknown ones."""
    return np.rint(np.nan_to_num(value, nan=-1.0) / TICK).astype(np.int64)


def row_keys(data: RunData) -> NDArray[np.intp]:
    """Code of each drop's cell, time and temperature, shape (drops,)."""
    time, temperature = ticks(data.selection.time), ticks(data.selection.temperature)
    return repeats_of(data.selection.cell, time, temperature)[0]


def repeats_of(*keys: NDArray[np.generic]) -> tuple[NDArray[np.intp], NDArray[np.bool_]]:
    """Return the group of each entry, and whether an equal one stands before it."""
    order = np.lexsort(keys[::-1])
    same = np.ones(max(len(order) - 1, 0), dtype=bool)
    for key in keys:
        same &= key[order[1:]] == key[order[:-1]]
    after = np.concatenate([[False], same]) if len(order) else np.zeros(0, dtype=bool)
    group = np.zeros(len(order), dtype=np.intp)
    group[order] = np.cumsum(~after) - 1
    repeated = np.zeros(len(order), dtype=bool)
    repeated[order] = after  # lexsort is stable: the first of each group is the earliest row
    return group, repeated


def chance_of_time(data: RunData) -> NDArray[np.float64]:
    """Probability that two drops of one ball have equal times, by run set; 1 where unknown.

    For a normal scatter s and steps d it is d / (2 sqrt(pi) s); the lesser of the observed and
    the declared scatter counts, so that it is rather too large than too small.
    """
    found = repeats(data)
    sd = np.fmin(np.where(found.dof > 1, found.sd, np.nan), found.declared)
    with np.errstate(invalid="ignore", divide="ignore"):
        chance = clock_steps(data).relative / (2 * np.sqrt(np.pi) * sd)
    return np.where(np.isfinite(chance), np.minimum(chance, 1.0), 1.0)


def chance_of_temperature(data: RunData) -> NDArray[np.float64]:
    """Part of the pairs of a run set's drops that have equal temperatures, (run sets,)."""
    n_sets, run_set = len(data.names), data.selection.run_set
    group, repeated = repeats_of(run_set, ticks(data.selection.temperature))
    size = np.bincount(group)
    equal = np.bincount(
        run_set[~repeated], weights=(size * (size - 1) / 2)[group[~repeated]], minlength=n_sets
    )
    n = np.bincount(run_set, minlength=n_sets)
    return np.asarray(equal / np.maximum(n * (n - 1) / 2, 1))
