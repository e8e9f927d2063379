"""Intervals between successive marks as drops of their own, reduced as all drops are.

So run-in, ends, bias and marks are allowed for in each interval as they are in the whole fall, and
what is left between the intervals of a drop is neither of these. Ball, liquid and temperature are
the same in all of them.
"""

from __future__ import annotations

import dataclasses
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from plumbfall.bench.records import Bench
from plumbfall.findings.declared import relative_slopes
from plumbfall.findings.drop_errors import pull_by_cell
from plumbfall.measurement.columns import DropColumns
from plumbfall.measurement.drops import compute_drops
from plumbfall.measurement.ends import path_ends
from plumbfall.measurement.gather import gather
from plumbfall.measurement.law import model_estimate
from plumbfall.measurement.run_in import releases
from plumbfall.measurement.selection import Selection
from plumbfall.measurement.values import Weights
from plumbfall.physics.drag import DragLaw
from plumbfall.physics.laws import DEFAULTS

__all__ = ["FEWEST_MARKS", "IntervalDrops", "interval_drops"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]

FEWEST_MARKS = 3

LEAST_SD = 1e-6
"""Seconds; no reading of a mark is believed better."""


@dataclass(frozen=True, slots=True)
class IntervalDrops:
    """Every interval of every fully read drop, arrays of shape (intervals,) unless said.

    ``value`` is ln of the viscosity of the interval; ``drop`` the drop's place among those used,
    ``number`` that of the interval within it. ``by_time`` is d ln(viscosity)/d(time) [1/s];
    ``mark_sd`` the declared standard deviation of one reading of a mark [s], ``least_sd`` what its
    steps make it at least, and ``bias`` how far the timer's may be off for one interval against
    another [s]. ``group`` is the interval of a tube
    in a run set, counted by ``group_set`` (a run set and tube, ``set_run`` and ``set_tube``),
    and ``slopes``, of shape (groups, ...).
    """

    value: Numbers
    drop: Codes
    number: Codes
    by_time: Numbers
    mark_sd: Numbers
    bias: Numbers
    least_sd: Numbers
    group: Codes
    group_set: Codes
    slopes: sparse.csr_array
    set_run: Codes
    set_tube: Codes


def interval_drops(
    bench: Bench,
    selection: Selection,
    columns: DropColumns,
    law: DragLaw,
    marks: Numbers | None,
    step: Numbers,
) -> IntervalDrops | None:
    """Reduce the intervals between successive marks.

    Parameters
    ----------
    bench : Bench
        The bench sheet.
    selection : Selection
        The used drops.
    columns : DropColumns
        The drops' own viscosities and temperatures.
    law : DragLaw
        The drag law.
    marks : array, shape (rows, marks) [s], optional
        Clock readings at the marks, of all rows of the timing table.
    step : array, shape (run sets,) [s]
        The step in which the times were written down.

    Returns
    -------
    IntervalDrops or None
        ``None`` where no drop was read at three marks or more of a tube with a bore.
    """
    if marks is None or marks.shape[1] < FEWEST_MARKS:
        return None
    cells, tubes = selection.cells, list(bench.tubes.values())
    n_marks = np.array([0 if tube.bore is None else len(tube.marks) for tube in tubes])
    wanted = n_marks[cells.tube[selection.cell]]
    clock = marks[selection.row]
    place = np.arange(clock.shape[1])
    read = (~np.isnan(clock) | (place >= wanted[:, None])).all(axis=1)
    drops = np.flatnonzero(
        read & (wanted >= FEWEST_MARKS) & (wanted <= clock.shape[1])
        & np.isfinite(columns.at_set)
    )  # fmt: skip
    if not len(drops):
        return None
    at, number = np.nonzero(place[:-1] < wanted[drops, None] - 1)
    drop = drops[at]
    time = clock[drop, number + 1] - clock[drop, number]

    key = selection.cell[drop] * clock.shape[1] + number
    distinct, cell = np.unique(key, return_inverse=True)
    inner = cells.take(distinct // clock.shape[1])
    upper = distinct % clock.shape[1]
    inner = dataclasses.replace(inner, from_mark=upper, to_mark=upper + 1)
    run_set = selection.run_set[drop]
    chosen = dataclasses.replace(
        selection,
        row=selection.row[drop],
        run_set=run_set,
        cell=cell,
        cells=inner,
        time=time,
        temperature=selection.temperature[drop],
    )
    own = gather(inner, bench, selection.names, model_estimate(bench))
    ends = path_ends(own, inner, tubes, bench.methods.ends or DEFAULTS["ends"])
    released = None if bench.methods.run_in == "none" else releases(own)
    n_sets = len(selection.names)
    count = np.bincount(run_set, minlength=n_sets)
    weights = Weights(
        value=np.arange(len(drop)),
        value_set=run_set,
        value_drops=np.ones(len(drop), dtype=np.intp),
        n_values=count,
        n_drops=count,
        weight=1.0 / count[run_set],
    )
    warmth = columns.temperature[drop]
    found, sums = compute_drops(chosen, own, weights, law, warmth, ends, released)

    tube_set, of_cell = np.unique(inner.run_set * len(tubes) + inner.tube, return_inverse=True)
    group_key, group_of_cell = np.unique(of_cell * clock.shape[1] + upper, return_inverse=True)
    pull, squares = pull_by_cell(chosen, found, weights.weight)
    bias = own.roles["bias"]
    bias_u = np.append(own.u, 0.0)[bias.entry]
    with np.errstate(invalid="ignore", divide="ignore"):
        by_time = np.sqrt(sums.timing / squares)
        value = np.log(found.at_set)
    return IntervalDrops(
        value=value,
        drop=drop,
        number=number,
        by_time=by_time[cell],
        mark_sd=np.sqrt(own.per_drop**2 / 2 + own.resolution**2 / 12)[cell],
        least_sd=np.maximum(step[run_set] / np.sqrt(12), LEAST_SD),
        bias=np.hypot(bias.value, bias_u)[cell],
        group=group_of_cell[cell],
        group_set=group_key // clock.shape[1],
        slopes=relative_slopes(own, sums, pull, group_of_cell, len(group_key)),
        set_run=tube_set // len(tubes),
        set_tube=tube_set % len(tubes),
    )
