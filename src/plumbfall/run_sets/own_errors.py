"""Errors that are not shared by a whole run set: what its drops and its balls each have alone."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy import sparse

from plumbfall.measurement.balance import Numbers
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.selection import Selection
from plumbfall.measurement.sensitivities import Sums

__all__ = ["OwnErrors", "own_errors"]


@dataclass(frozen=True, slots=True)
class OwnErrors:
    """Variances that declared errors give each run set's mean, shape (run sets,) [Pa2.s2].

    The first four are of errors that every drop has to itself; ``individual`` is of what the
    bench sheet says of single balls.
    """

    per_drop: Numbers
    resolution: Numbers
    per_reading: Numbers
    spread: Numbers
    individual: Numbers


def own_errors(selection: Selection, inputs: Inputs, sums: Sums) -> OwnErrors:
    """Work out what the declared errors of drops and of balls give each run set's mean.

    A clock reading's resolution d is rectangular, u = d/sqrt(12), and an interval has two.
    """
    cell_set, n_sets = selection.cells.run_set, len(selection.names)

    def by_set(per_cell: Numbers) -> Numbers:
        return np.asarray(np.bincount(cell_set, weights=per_cell, minlength=n_sets), dtype=float)

    return OwnErrors(
        per_drop=by_set(sums.timing * inputs.per_drop**2),
        resolution=by_set(sums.timing * inputs.resolution**2 / 6),
        per_reading=by_set(sums.reading * inputs.per_reading**2),
        spread=by_set(sums.lot * inputs.spread**2),
        individual=_individual(selection, inputs, sums),
    )


def _individual(selection: Selection, inputs: Inputs, sums: Sums) -> Numbers:
    rows, columns, values = [], [], []
    for role, sum_ in sums.first.items():
        entry = inputs.roles[role].entry
        here = entry >= 0
        here[here] = inputs.individual[entry[here]]
        rows.append(selection.cells.run_set[here])
        columns.append(entry[here])
        values.append(sum_[here])
    slopes = sparse.csr_array(
        (np.concatenate(values), (np.concatenate(rows), np.concatenate(columns))),
        shape=(len(selection.names), len(inputs.estimates)),
    )
    slopes.sum_duplicates()  # one ball's entry is one error, wherever the set uses it
    return np.asarray(slopes.power(2) @ inputs.u**2, dtype=float)
