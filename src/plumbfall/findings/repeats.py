"""How drops of one ball scatter among themselves, and how the instruments are said to."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.data import RunData
from plumbfall.uncertainty.type_a import group_scatter

__all__ = ["Repeats", "repeats"]


@dataclass(frozen=True, slots=True)
class Repeats:
    """Scatter of repeated drops, relative to the viscosity.

    ``deviation`` is each drop's from the mean of its cell (same ball, tube, marks and timer), in
    ln of the viscosity, shape (drops,). By run set: ``dof`` how many such deviations are free,
    ``sd`` the observed standard deviation of one drop (NaN without degrees of freedom),
    ``declared`` the one that timer, thermometer and lot are said to give (NaN where nothing is
    said), ``chi_squared`` the sum of squared deviations, each over its declared variance.
    """

    deviation: NDArray[np.float64]
    dof: NDArray[np.intp]
    sd: NDArray[np.float64]
    declared: NDArray[np.float64]
    chi_squared: NDArray[np.float64]


def repeats(data: RunData, keep: NDArray[np.bool_] | None = None) -> Repeats:
    """Compare the drops of every cell; ``keep`` of shape (drops,) leaves some of them out."""
    n_sets, n_cells = len(data.names), len(data.selection.cells)
    cell, run_set = data.selection.cell, data.selection.run_set
    at_set, weight = data.columns.at_set, data.weights.weight
    if keep is not None:
        cell, run_set, at_set, weight = cell[keep], run_set[keep], at_set[keep], weight[keep]
    with np.errstate(invalid="ignore", divide="ignore"):
        value = np.log(at_set)
        groups = group_scatter(value, cell, n_cells)
        deviation = value - groups.mean[cell]
        variance = _declared(data)
        squares = deviation**2
        chi_squared = np.bincount(run_set, weights=squares / variance[cell], minlength=n_sets)
        sum_squares = np.bincount(run_set, weights=squares, minlength=n_sets)
        dof = np.bincount(
            data.selection.cells.run_set, weights=np.maximum(groups.n - 1, 0), minlength=n_sets
        ).astype(np.intp)
        n = np.bincount(run_set, minlength=n_sets)
        declared = np.sqrt(np.bincount(run_set, weights=variance[cell], minlength=n_sets) / n)
        able = dof > 0
        return Repeats(
            deviation=deviation,
            dof=dof,
            sd=np.where(able, np.sqrt(sum_squares / np.maximum(dof, 1)), np.nan),
            declared=np.where(declared > 0, declared, np.nan),
            chi_squared=np.where(able, chi_squared, np.nan),
        )


def _declared(data: RunData) -> NDArray[np.float64]:
    """Relative variance of one drop by what its instruments are said to scatter, (cells,)."""
    inputs, sums, n_cells = data.inputs, data.sums, len(data.selection.cells)
    pull = data.weights.weight * data.columns.at_set
    squares = np.bincount(data.selection.cell, weights=pull**2, minlength=n_cells)
    own = (
        sums.timing * (inputs.per_drop**2 + inputs.resolution**2 / 6)
        + sums.reading * inputs.per_reading**2
        + sums.lot * inputs.spread**2
    )
    return np.asarray(own / squares)
