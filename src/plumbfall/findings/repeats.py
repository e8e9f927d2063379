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

    Drops are compared with those of the same ball, tube, marks and timer. By run set: ``dof`` how
    many deviations are free, ``sd`` the observed standard deviation of one drop (NaN without
    degrees of freedom), ``declared`` the one that timer, thermometer and lot are said to give
    (NaN where nothing is said), ``chi_squared`` the sum of squared deviations, each over its
    declared variance.
    """

    dof: NDArray[np.intp]
    sd: NDArray[np.float64]
    declared: NDArray[np.float64]
    chi_squared: NDArray[np.float64]


def repeats(data: RunData, keep: NDArray[np.bool_] | None = None) -> Repeats:
    """Compare the drops of every cell; ``keep`` of shape (drops,) leaves some of them out."""
    n_sets, n_cells = len(data.names), len(data.selection.cells)
    at = data.errors.whole if keep is None else data.errors.whole & keep
    cell, run_set = data.selection.cell[at], data.selection.run_set[at]
    declared = data.errors.declared[at]
    groups = group_scatter(data.errors.value[at], cell, n_cells)
    squares = (data.errors.value[at] - groups.mean[cell]) ** 2
    free = np.maximum(groups.n - 1, 0)
    dof = np.bincount(data.selection.cells.run_set, weights=free, minlength=n_sets).astype(np.intp)
    able = dof > 0
    with np.errstate(invalid="ignore", divide="ignore"):
        # each cell's declared variance counts as often as it has free deviations
        share = free[cell] / groups.n[cell]
        mean = np.bincount(run_set, weights=share * declared, minlength=n_sets) / dof
        alone = np.bincount(run_set, weights=declared, minlength=n_sets) / np.bincount(
            run_set, minlength=n_sets
        )
        variance = np.where(able, mean, alone)
        observed = np.bincount(run_set, weights=squares, minlength=n_sets) / dof
        chi_squared = np.bincount(run_set, weights=squares / declared, minlength=n_sets)
    return Repeats(
        dof=dof,
        sd=np.where(able, np.sqrt(observed), np.nan),
        declared=np.where(variance > 0, np.sqrt(variance), np.nan),
        chi_squared=np.where(able & np.isfinite(chi_squared), chi_squared, np.nan),
    )
