"""What each calibration set says of ln K, and by which named inputs it may be wrong."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.calibration.calibration_sets import UNIT_NAME, CalibrationSets, slope_name
from plumbfall.estimate import Estimate
from plumbfall.measurement.inputs import MODEL_INPUT
from plumbfall.uncertainty.coverage import effective_dof

__all__ = ["Observed", "observe"]

Numbers = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Observed:
    """ln K of every set: values, and derivatives by named inputs, shape (sets, inputs)."""

    log_value: Numbers
    slopes: Numbers
    estimates: tuple[Estimate, ...]
    own_u: Numbers
    own_dof: Numbers
    n_drops: Numbers
    time: Numbers
    reynolds: Numbers

    def covariance(self, rows: NDArray[np.intp]) -> Numbers:
        """Covariance of the logarithms of some sets, shape (rows, rows)."""
        return self._shared(rows) + np.diag(self.own_u[rows] ** 2)

    def weighing(self, rows: NDArray[np.intp]) -> Numbers:
        """Return the covariance that weighs sets: each drop's scatter is taken as the same in all.

        A set of few drops whose scatter happens to be small must not have all the weight.
        """
        if np.isinf(self.own_dof[rows]).any():  # declared, or known from long use
            return self.covariance(rows)
        dof = self.own_dof[rows]
        of_drop = float((dof * self.n_drops[rows] * self.own_u[rows] ** 2).sum() / dof.sum())
        return self._shared(rows) + np.diag(of_drop / self.n_drops[rows])

    def _shared(self, rows: NDArray[np.intp]) -> Numbers:
        parts = self.slopes[rows] * np.array([estimate.u for estimate in self.estimates])
        shared: Numbers = parts @ parts.T
        return shared


def observe(made: CalibrationSets) -> Observed:
    """Take the reduction with a constant of 1 to logarithms of the constant."""
    sets = made.reduction.sets
    jacobian, place = sets.jacobian, {name: n for n, name in enumerate(made.reduction.names)}
    rows = np.array([place[one.name] for one in made.sets])
    unit_value = sets.scatter.mean[rows]
    matrix = jacobian.matrix.toarray()[rows]
    n_inputs = jacobian.n_inputs

    with np.errstate(invalid="ignore", divide="ignore"):
        slopes = -matrix[:, :n_inputs] / unit_value[:, None]
        own = (matrix[:, n_inputs:] * jacobian.u[n_inputs:]) / unit_value[:, None]
        certified = np.array([one.certified.value for one in made.sets])
        log_value = np.log(certified) - np.log(unit_value)
    own_u = np.sqrt((own**2).sum(axis=1))
    own_dof = effective_dof(
        u=own_u, contributions_fourth=(own**4 / jacobian.dof[n_inputs:]).sum(axis=1)
    )
    stand_ins = {UNIT_NAME, MODEL_INPUT, *(slope_name(one.name) for one in made.sets)}
    by_name = {
        estimate.name: (estimate, slopes[:, column])
        for column, estimate in enumerate(sets.inputs.estimates)
        if estimate.name not in stand_ins
    }
    for row, one in enumerate(made.sets):
        for part in one.certified.parts:
            _, column = by_name.setdefault(part.input.name, (part.input, np.zeros(len(rows))))
            column[row] += part.sensitivity / one.certified.value
    times, reynolds = _conditions(made, rows)
    return Observed(
        log_value=log_value,
        slopes=np.column_stack([column for _, column in by_name.values()]),
        estimates=tuple(estimate for estimate, _ in by_name.values()),
        own_u=own_u,
        own_dof=own_dof,
        n_drops=sets.weights.n_drops[rows].astype(float),
        time=times,
        reynolds=reynolds,
    )


def _conditions(made: CalibrationSets, rows: NDArray[np.intp]) -> tuple[Numbers, Numbers]:
    """Mean time of each set, and its Reynolds number for a fall of 1 m, shape (sets,).

    The distance between the marks may not be known; the number is proportional to it.
    """
    sets = made.reduction.sets
    n = len(made.reduction.names)
    mean = np.bincount(sets.selection.run_set, weights=sets.selection.time, minlength=n)
    time = (mean / np.bincount(sets.selection.run_set, minlength=n))[rows]
    diameter = sets.columns.diameter[
        [int(np.flatnonzero(sets.selection.run_set == row)[0]) for row in rows]
    ]
    viscosity = np.array([one.certified.value for one in made.sets])
    return time, sets.liquid.density[rows] * diameter / (time * viscosity)
