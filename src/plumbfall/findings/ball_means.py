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

from plumbfall.findings.declared import declared_batches, relative_slopes
from plumbfall.findings.drop_errors import DropErrors, pull_by_cell
from plumbfall.measurement.columns import DropColumns
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.selection import Selection
from plumbfall.measurement.sensitivities import Sums
from plumbfall.uncertainty.type_a import group_sums

__all__ = ["BallMeans", "Batch", "ball_means"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]


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

    ``slopes`` has the relative sensitivities to the bench's entries, times their standard
    uncertainties, shape (groups, inputs). ``diameter_ratio`` and ``shear_stress`` [Pa] are means
    over the ball's drops.
    """

    errors: DropErrors
    value: Numbers
    scatter: Numbers
    slopes: sparse.csr_array
    diameter_ratio: Numbers
    shear_stress: Numbers

    def batches(self) -> Iterator[Batch]:
        """Yield the run sets of several balls, those of equal numbers together."""
        errors = self.errors
        usable = np.ones(int(errors.group_set.max(initial=-1)) + 1, dtype=bool)
        usable[errors.group_set[errors.group[~errors.whole]]] = False
        for sets, groups, covariance in declared_batches(errors.group_set, self.slopes, usable):
            k = groups.shape[1]
            scatter, value = self.scatter[groups], self.value[groups]
            covariance[:, np.arange(k), np.arange(k)] += scatter
            yield Batch(
                run_set=sets,
                groups=groups,
                value=value - value.mean(axis=1, keepdims=True),
                covariance=covariance,
                scatter=scatter,
                scatter_dof=errors.scatter_dof[sets],
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
    return BallMeans(
        errors=errors,
        value=mean(errors.value),
        scatter=mean(errors.variance) / errors.group_n,
        slopes=relative_slopes(inputs, sums, pull, cell_group, n),
        diameter_ratio=mean(columns.diameter_ratio),
        shear_stress=mean(columns.shear_stress),
    )
