"""The run sets' Jacobian: rows are outputs, columns the inputs of the bench sheet.

After the bench's own entries come columns that belong to one run set each: what its scatter,
its clock readings or its fresh balls add; then one for each ball whose residuals several run sets
share. The same list of columns serves every output.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from plumbfall.measurement.balance import Numbers
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.selection import Selection
from plumbfall.measurement.sensitivities import Sums
from plumbfall.run_sets.ball_scatter import BallScatter
from plumbfall.run_sets.own_errors import OwnErrors
from plumbfall.run_sets.repeatability import DECLARED, KNOWN, OF_VALUES, Repeatability

__all__ = ["Jacobian", "build_jacobian"]

OWN_KINDS = ("scatter", "per_drop", "resolution", "per_reading", "spread")
"""Errors of one run set alone, in the order of their columns."""


@dataclass(frozen=True, slots=True)
class Jacobian:
    """Sensitivities of the run sets' viscosities, shape (run sets, columns).

    The first columns are ``Inputs.estimates`` in order, then the second-order ones (their input
    in ``squared``), then one column a run set for each of ``OWN_KINDS``, then one a ball for the
    scatter that run sets share; such a set has nothing in its own column of scatter, whose ``u``
    and ``dof`` are still those of its scatter. ``scatter_dof`` has shape (run sets,).
    """

    matrix: sparse.csr_array
    u: Numbers
    dof: Numbers
    squared: NDArray[np.intp]
    n_inputs: int
    n_sets: int
    n_balls: int
    scatter_dof: Numbers

    def input_of(self, column: int) -> int:
        """Which estimate a column belongs to; -1 for a run set's own columns."""
        if column < self.n_inputs:
            return column
        place = column - self.n_inputs
        return int(self.squared[place]) if place < len(self.squared) else -1

    def own_columns(self, kind: str) -> NDArray[np.intp]:
        """Columns of one kind of the run sets' own errors, shape (run sets,)."""
        first = self.n_inputs + len(self.squared) + OWN_KINDS.index(kind) * self.n_sets
        return first + np.arange(self.n_sets)

    def own_kind(self, column: int) -> str:
        """Say what a run set's own column stands for; nothing for one of shared scatter."""
        place = column - self.n_inputs - len(self.squared)
        return (*OWN_KINDS, "")[min(place // self.n_sets, len(OWN_KINDS))]

    @property
    def shared_scatter(self) -> NDArray[np.bool_]:
        """Columns of the balls' residuals: together they are one sample, shape (columns,)."""
        return np.arange(len(self.u)) >= len(self.u) - self.n_balls

    @property
    def observed_scatter(self) -> NDArray[np.bool_]:
        """Columns of all observed scatter, shape (columns,)."""
        mask = self.shared_scatter
        mask[self.own_columns("scatter")] = True
        return mask


def _through_constants(
    inputs: Inputs, sums: Sums
) -> Iterator[tuple[Numbers, NDArray[np.intp], int]]:
    """Yield what each input of a tube constant does to the results through the constant."""
    for place, constant in enumerate(inputs.constants):
        cells = np.flatnonzero(inputs.constant_of == place)
        for entry, slope in zip(constant.entries.tolist(), constant.slopes.tolist(), strict=True):
            yield sums.first["constant"] * slope, cells, entry


def build_jacobian(
    selection: Selection,
    inputs: Inputs,
    sums: Sums,
    own: OwnErrors,
    scatter: Repeatability,
    of_balls: BallScatter,
) -> Jacobian:
    """Stack the sums over cells into one sparse Jacobian.

    What a run set's observed scatter contains is left out of its row: every drop's own errors,
    and, where balls were compared, what is individual to a ball.
    """
    cell_set, n_sets = selection.cells.run_set, len(selection.names)
    n_inputs = len(inputs.estimates)
    rows, columns, values = [], [], []
    contained = scatter.basis == OF_VALUES
    for role, sum_ in sums.first.items():
        entry = inputs.roles[role].entry
        here = entry >= 0
        here[here] = ~(contained[cell_set[here]] & inputs.individual[entry[here]])
        rows.append(cell_set[here])
        columns.append(entry[here])
        values.append(sum_[here])

    for sum_, cells, shared in _through_constants(inputs, sums):
        felt = cells[~(contained[cell_set[cells]] & inputs.individual[shared])]
        rows.append(cell_set[felt])
        columns.append(np.full(len(felt), shared, dtype=np.intp))
        values.append(sum_[felt])

    u, dof = [inputs.u], [inputs.dof]
    squared: list[int] = []
    for role, sum_ in sums.second.items():
        entry = inputs.roles[role].entry
        for code in np.unique(entry[entry >= 0]):
            here = entry == code
            rows.append(cell_set[here])
            columns.append(np.full(here.sum(), n_inputs + len(squared), dtype=np.intp))
            # variance f''^2 u^4 / 2 of a squared normal input: JCGM 100:2008, note to 5.1.2
            values.append(sum_[here] / np.sqrt(2))
            squared.append(int(code))
    u.append(inputs.u[squared] ** 2)
    dof.append(inputs.dof[squared])

    offset = n_inputs + len(squared)
    declared = scatter.basis == DECLARED
    spread_counts = declared | (scatter.basis == KNOWN)
    for kind in OWN_KINDS:
        if kind == "scatter":
            own_u, own_dof = scatter.u, scatter.dof
        else:
            counts = spread_counts if kind == "spread" else declared
            own_u = np.where(counts, np.sqrt(getattr(own, kind)), 0.0)
            own_dof = np.full(n_sets, np.inf)
        rows.append(np.arange(n_sets))
        columns.append(offset + np.arange(n_sets))
        values.append(np.where((kind == "scatter") & of_balls.shared, 0.0, 1.0))
        u.append(own_u)
        dof.append(own_dof)
        offset += n_sets
    rows.append(of_balls.run_set)
    columns.append(offset + of_balls.ball)
    values.append(of_balls.contribution)
    n_balls = int(of_balls.ball.max(initial=-1)) + 1
    u.append(np.ones(n_balls))
    dof.append(np.full(n_balls, np.inf))
    offset += n_balls

    matrix = sparse.csr_array(
        (np.concatenate(values), (np.concatenate(rows), np.concatenate(columns))),
        shape=(n_sets, offset),
    )
    matrix.sum_duplicates()
    return Jacobian(
        matrix=matrix,
        u=np.concatenate(u),
        dof=np.concatenate(dof),
        squared=np.array(squared, dtype=np.intp),
        n_inputs=n_inputs,
        n_sets=n_sets,
        n_balls=n_balls,
        scatter_dof=scatter.dof,
    )
