"""What is known of the error that each drop has to itself, before any test is made of it.

Drops of one run set differ in how well they are timed: 0.1 s is much of a fast ball's time and
little of a slow one's. So that a fast ball's scatter is not taken for a fault, each drop has a
variance of its own: what the bench sheet declares of timer, thermometer and lot, and the set's
undeclared scatter, as far as its repeated drops show more.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.records import Scatter
from plumbfall.measurement.columns import DropColumns
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.selection import Selection
from plumbfall.measurement.sensitivities import Sums
from plumbfall.uncertainty.anova import one_way
from plumbfall.uncertainty.type_a import group_sums

__all__ = ["DropErrors", "drop_errors", "pull_by_cell"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]


DECIMALS = 9
LEAST = 1e-9
"""Differences of viscosity below 1e-9 are rounding, and no finding is made of them."""


@dataclass(frozen=True, slots=True)
class DropErrors:
    """Logarithms of the drops' viscosities and their variances, relative, shape (drops,).

    ``value`` is ln of the viscosity at the set's temperature, less the set's mean; ``whole`` says
    that the drop's run set has a viscosity for every drop (elsewhere ``value`` is 0 and nothing is
    tested). ``group`` is the ball within its run set, counted by ``group_set``, ``group_ball`` and
    ``group_n`` of shape (groups,). ``declared`` and ``variance`` are of shape (drops,);
    ``within_sd`` and ``within_dof``, of shape (run sets,), are what drops of equal equipment say
    of their scatter; ``undeclared`` is how much variance they show beyond what is declared,
    ``rounding``, of shape (drops,), what the clock's steps may hide, and
    ``scatter_dof`` how well the variances are known, 0 where no drop is repeated and the bench has
    no known repeatability, so that a bad drop and a bad ball are one.
    """

    value: Numbers
    whole: NDArray[np.bool_]
    group: Codes
    group_set: Codes
    group_ball: Codes
    group_n: NDArray[np.intp]
    declared: Numbers
    variance: Numbers
    within_sd: Numbers
    within_dof: NDArray[np.intp]
    undeclared: Numbers
    rounding: Numbers
    scatter_dof: Numbers


def pull_by_cell(
    selection: Selection, columns: DropColumns, weight: Numbers
) -> tuple[Numbers, Numbers]:
    """Return sums over each cell's drops of weight x viscosity, and of its square, (cells,)."""
    pull = weight * columns.at_set
    n = len(selection.cells)
    return (
        group_sums(pull, selection.cell, n),
        group_sums(pull**2, selection.cell, n),
    )


def drop_errors(
    selection: Selection,
    inputs: Inputs,
    columns: DropColumns,
    sums: Sums,
    weight: Numbers,
    known: Scatter | None,
    step: Numbers,
) -> DropErrors:
    """Return what is known of every drop's own error.

    Parameters
    ----------
    selection : Selection
        The used drops.
    inputs : Inputs
        Raw inputs by cell.
    columns : DropColumns
        The drops' viscosities.
    sums : Sums
        Sensitivities by cell.
    weight : array, shape (drops,)
        Each drop's weight in its run set's mean.
    known : Scatter, optional
        The bench's known repeatability, for sets whose drops do not repeat.
    step : array, shape (run sets,) [s]
        The step in which the times were written down.

    Returns
    -------
    DropErrors
        Relative, in columns over all drops.
    """
    run_set, cell, n_sets = selection.run_set, selection.cell, len(selection.names)
    with np.errstate(invalid="ignore", divide="ignore"):
        value = np.log(columns.at_set)
    broken = group_sums(~np.isfinite(value), run_set, n_sets) > 0
    whole = ~broken[run_set]
    value = np.where(whole, value, 0.0)
    n_drops = np.bincount(run_set, minlength=n_sets)
    value = value - _means(value, run_set, n_sets)[run_set]  # an offset costs no digits
    value = np.asarray(np.round(value, DECIMALS), dtype=float)
    pair = selection.cells.run_set * (selection.cells.ball.max(initial=0) + 1)
    pair = pair + selection.cells.ball
    _, first, of_cell = np.unique(pair, return_index=True, return_inverse=True)
    group = of_cell[cell]

    _, squares = pull_by_cell(selection, columns, weight)
    with np.errstate(invalid="ignore", divide="ignore"):
        declared_by_cell = (
            sums.timing * (inputs.per_drop**2 + inputs.resolution**2 / 6)
            + sums.reading * inputs.per_reading**2
            + sums.lot * inputs.spread**2
        ) / squares
    declared = np.nan_to_num(declared_by_cell)[cell]

    repeated = one_way(value, cell, selection.cells.run_set, n_sets)
    within_dof = np.where(broken, 0, repeated.within_dof)
    share = 1 - 1 / np.bincount(cell, minlength=len(selection.cells))[cell]
    with np.errstate(invalid="ignore", divide="ignore"):
        expected = group_sums(share * declared, run_set, n_sets) / within_dof
        within = repeated.within_sd**2
    undeclared = np.where(within_dof > 0, np.maximum(within - expected, 0.0), 0.0)
    if known is not None:
        mean = group_sums(declared, run_set, n_sets) / np.maximum(n_drops, 1)
        more = np.maximum(known.relative.value**2 - mean, 0.0)
        undeclared = np.where(within_dof > 0, undeclared, more)
    alone = 0.0 if known is None else known.dof
    with np.errstate(invalid="ignore", divide="ignore"):
        by_time = np.nan_to_num(sums.timing / squares)[cell]
    rounding = np.maximum(by_time * step[run_set] ** 2 / 6, LEAST**2)
    variance = np.maximum(declared + undeclared[run_set], rounding)
    return DropErrors(
        value=value,
        whole=whole,
        group=group,
        group_set=selection.cells.run_set[first],
        group_ball=selection.cells.ball[first],
        group_n=np.bincount(group, minlength=len(first)),
        declared=declared,
        # where nothing is declared and nothing repeats, all drops count alike
        variance=np.where(declared + undeclared[run_set] > 0, variance, 1.0),
        rounding=rounding,
        within_sd=np.where(within_dof > 0, repeated.within_sd, np.nan),
        within_dof=within_dof,
        undeclared=undeclared,
        scatter_dof=np.where(within_dof > 0, within_dof, alone),
    )


def _means(values: Numbers, code: Codes, n: int) -> Numbers:
    with np.errstate(invalid="ignore", divide="ignore"):
        return group_sums(values, code, n) / np.bincount(code, minlength=n)
