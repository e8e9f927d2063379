"""Covariance that the bench sheet declares between groups of drops: balls, or intervals."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.sensitivities import Sums
from plumbfall.uncertainty.type_a import group_sums

__all__ = ["declared_batches", "relative_slopes"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]

MOST_NUMBERS = 2_000_000
"""Sensitivities of so many (group, input) pairs are worked on at once, to keep memory flat."""


def relative_slopes(
    inputs: Inputs, sums: Sums, pull: Numbers, cell_group: Codes, n_groups: int
) -> sparse.csr_array:
    """Relative sensitivities of groups of cells, times the entries' standard uncertainties.

    Parameters
    ----------
    inputs : Inputs
        Raw inputs by cell.
    sums : Sums
        Sensitivities by cell.
    pull : array, shape (cells,)
        Weight x viscosity, summed over each cell's drops.
    cell_group : array of int, shape (cells,)
        The group of each cell.
    n_groups : int
        How many groups there are.

    Returns
    -------
    sparse array, shape (groups, inputs)
        Its product with its transpose is the relative covariance of the groups' means.
    """
    of_group = group_sums(np.nan_to_num(pull), cell_group, n_groups)
    rows, entries, values = [], [], []
    u = inputs.u
    for role, summed in sums.first.items():
        entry = inputs.roles[role].entry
        here = np.flatnonzero((entry >= 0) & np.isfinite(summed) & (of_group[cell_group] > 0))
        rows.append(cell_group[here])
        entries.append(entry[here])
        values.append(summed[here] / of_group[cell_group[here]] * u[entry[here]])
    slopes = sparse.csr_array(
        (np.concatenate(values), (np.concatenate(rows), np.concatenate(entries))),
        shape=(n_groups, len(u)),
    )
    slopes.sum_duplicates()
    return slopes


def declared_batches(
    group_set: Codes, slopes: sparse.csr_array, usable: NDArray[np.bool_]
) -> Iterator[tuple[Codes, Codes, Numbers]]:
    """Yield sets of several groups, those of an equal number k together.

    Parameters
    ----------
    group_set : array of int, shape (groups,)
        The set of each group.
    slopes : sparse array, shape (groups, inputs)
        As :func:`relative_slopes` returns them.
    usable : array of bool, shape (sets,)
        Sets to yield.

    Yields
    ------
    tuple
        Sets, shape (sets,); their groups, shape (sets, k); declared covariances (sets, k, k).
    """
    order = np.argsort(group_set, kind="stable")
    sets, start, count = np.unique(group_set[order], return_index=True, return_counts=True)
    used = np.flatnonzero(np.diff(slopes.tocsc().indptr))
    for k in np.unique(count[count > 1]).tolist():
        at = np.flatnonzero((count == k) & usable[sets])
        step = max(1, MOST_NUMBERS // (k * max(len(used), 1)))
        for begin in range(0, len(at), step):
            part = at[begin : begin + step]
            groups = order[start[part][:, None] + np.arange(k)]
            dense = slopes[groups.ravel()][:, used].toarray().reshape(len(part), k, len(used))
            yield sets[part], groups, np.asarray(dense @ dense.transpose(0, 2, 1), dtype=float)
