"""The step in which times were written down, found as the largest one that all are multiples of."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.selection import Selection

if TYPE_CHECKING:
    from plumbfall.findings.data import RunData

__all__ = ["STEPS", "ClockSteps", "clock_steps", "steps_of"]

UNIT = 1e-4
"""Seconds; finer steps are of no account beside a fall."""

STEPS = np.array(
    [1, 2, 5, 10, 20, 50, 100, 200, 250, 500, 1000, 2000, 2500, 5000, 10000], dtype=np.int64
)
"""Steps of clocks and of habits, in units of 0.1 ms: 0.1 ms to 1 s."""


@dataclass(frozen=True, slots=True)
class ClockSteps:
    """Steps by run set in seconds, arrays of shape (run sets,).

    ``found`` is the largest step of :data:`STEPS` that all times are multiples of, 0 where none
    is; ``declared`` the coarsest resolution of the timers used; ``relative`` the larger of both
    over the mean time.
    """

    found: NDArray[np.float64]
    declared: NDArray[np.float64]
    relative: NDArray[np.float64]


def clock_steps(data: RunData) -> ClockSteps:
    """Find the step of every run set's times by their greatest common divisor."""
    return data.steps


def steps_of(selection: Selection, inputs: Inputs) -> ClockSteps:
    """Find the step of every run set's times, from the drops and their timers alone."""
    n_sets, time, run_set = len(selection.names), selection.time, selection.run_set
    n = np.bincount(run_set, minlength=n_sets)
    ticks = np.rint(time / UNIT).astype(np.int64)
    off = np.abs(time - ticks * UNIT) > 1e-3 * UNIT
    uneven = np.bincount(run_set[off], minlength=n_sets) > 0
    order = np.argsort(run_set, kind="stable")
    here = np.flatnonzero(n)
    divisor = np.ones(n_sets, dtype=np.int64)
    starts = np.concatenate([[0], np.cumsum(n[here])[:-1]]).astype(np.intp)
    if len(here):
        divisor[here] = np.gcd.reduceat(ticks[order], starts)
    divides = divisor[:, None] % STEPS == 0
    step = UNIT * np.where(divides, STEPS, 0).max(axis=1)
    step[uneven | (n == 0)] = 0.0
    declared = np.zeros(n_sets)
    np.maximum.at(declared, selection.cells.run_set, inputs.resolution)
    with np.errstate(invalid="ignore", divide="ignore"):
        mean = np.bincount(run_set, weights=time, minlength=n_sets) / n
        relative = np.maximum(step, declared) / mean
    return ClockSteps(found=step, declared=declared, relative=np.nan_to_num(relative, nan=0.0))
