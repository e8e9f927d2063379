"""Ball means of every run set, and how far the bench sheet allows them to differ.

Two balls' viscosities differ not only by scatter: each ball's own diameter and mass are uncertain,
and what all balls share (bore, timer bias, drag law) acts on a small ball and a large one
differently. All of that is in the covariance of the ball means; what is beyond it is a fault.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from plumbfall.findings.drop_errors import DropErrors, pull_by_cell
from plumbfall.measurement.columns import DropColumns
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.selection import Selection
from plumbfall.measurement.sensitivities import Sums
from plumbfall.uncertainty.type_a import group_sums

__all__ = ["BallMeans", "Batch", "ball_means"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]

MOST_NUMBERS = 2_000_000
"""Sensitivities of so many (ball, input) pairs are worked on at once, to keep memory flat."""


@dataclass(frozen=True, slots=True)
class Batch:
    """Run sets of an equal number of balls k, shape (sets, k) and, the covariance, (sets, k, k).

    ``groups`` are places among the ball means; ``value`` ln of the ball's mean viscosity less the
    set's; ``covariance`` what the bench sheet and the drops' scatter allow, ``scatter`` the part
    of its diagonal that is the drops' own, with ``scatter_dof`` degrees of freedom, shape (sets,).
    """

    run_set: Codes
    groups: Codes
    value: Numbers
    covariance: Numbers
    scatter: Numbers
    scatter_dof: Numbers


@dataclass(frozen=True, slots=True)
class BallMeans:
    """Ball means, relative, in columns of shape (groups,), and their declared covariance.

    ``jacobian`` has the relative sensitivities to the bench's entries, times their standard
    uncertainties, shape (groups, inputs). ``diameter_ratio`` and ``shear_stress`` [Pa] are means
    over the ball's drops.
    """

    errors: DropErrors
    value: Numbers
    scatter: Numbers
    jacobian: sparse.csr_array
    diameter_ratio: Numbers
    shear_stress: Numbers

    def batches(self) -> Iterator[Batch]:
        """Yield the run sets of several balls, those of equal numbers together."""
        errors = self.errors
        order = np.argsort(errors.group_set, kind="stable")
        sets, start, count = np.unique(
            errors.group_set[order], return_index=True, return_counts=True
        )
        whole = np.ones(int(errors.group_set.max(initial=-1)) + 1, dtype=bool)
        whole[errors.group_set[errors.group[~errors.whole]]] = False
        used = np.flatnonzero(np.diff(self.jacobian.tocsc().indptr))
        for k in np.unique(count[count > 1]).tolist():
            at = np.flatnonzero((count == k) & whole[sets])
            step = max(1, MOST_NUMBERS // (k * max(len(used), 1)))
            for begin in range(0, len(at), step):
                part = at[begin : begin + step]
                groups = order[start[part][:, None] + np.arange(k)]
                slopes = self.jacobian[groups.ravel()][:, used].toarray()
                slopes = slopes.reshape(len(part), k, len(used))
                covariance = slopes @ slopes.transpose(0, 2, 1)
                scatter = self.scatter[groups]
                covariance[:, np.arange(k), np.arange(k)] += scatter
                value = self.value[groups]
                yield Batch(
                    run_set=sets[part],
                    groups=groups,
                    value=value - value.mean(axis=1, keepdims=True),
                    covariance=covariance,
                    scatter=scatter,
                    scatter_dof=errors.scatter_dof[sets[part]],
                )


def ball_means(
    selection: Selection,
    inputs: Inputs,
    columns: DropColumns,
    sums: Sums,
    weight: Numbers,
    errors: DropErrors,
) -> BallMeans:
    """Return the ball means of all run sets with what the bench sheet declares of them."""
    n = len(errors.group_set)

    def mean(values: Numbers) -> Numbers:
        total = group_sums(values, errors.group, n)
        return np.asarray(total / errors.group_n)

    cell_group = np.zeros(len(selection.cells), dtype=np.intp)
    cell_group[selection.cell] = errors.group
    pull, _ = pull_by_cell(selection, columns, weight)
    of_group = group_sums(np.nan_to_num(pull), cell_group, n)
    rows, entries, values = [], [], []
    u = inputs.u
    for role, summed in sums.first.items():
        entry = inputs.roles[role].entry
        here = np.flatnonzero((entry >= 0) & np.isfinite(summed) & (of_group[cell_group] > 0))
        rows.append(cell_group[here])
        entries.append(entry[here])
        values.append(summed[here] / of_group[cell_group[here]] * u[entry[here]])
    jacobian = sparse.csr_array(
        (np.concatenate(values), (np.concatenate(rows), np.concatenate(entries))),
        shape=(n, len(u)),
    )
    jacobian.sum_duplicates()
    return BallMeans(
        errors=errors,
        value=mean(errors.value),
        scatter=mean(errors.variance) / errors.group_n,
        jacobian=jacobian,
        diameter_ratio=mean(columns.diameter_ratio),
        shear_stress=mean(columns.shear_stress),
    )
