"""Run sets' results in columns: viscosity, viscosity at a reference temperature, kinematic.

All three are rows of one stacked Jacobian, so that their joint covariance comes with them.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from plumbfall.measurement.balance import Numbers
from plumbfall.measurement.columns import DropColumns
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.selection import Selection
from plumbfall.physics.thermal import liquid_density
from plumbfall.run_sets.jacobian import Jacobian
from plumbfall.run_sets.temperature_fit import TemperatureFit
from plumbfall.uncertainty.coverage import coverage_factor
from plumbfall.uncertainty.few_values import dof_with_few_values
from plumbfall.uncertainty.linear import Propagation, propagate

__all__ = [
    "QUANTITIES",
    "UNITS",
    "Output",
    "Outputs",
    "SetConditions",
    "compute_outputs",
    "conditions",
]

QUANTITIES = ("viscosity", "viscosity_at_reference", "kinematic_viscosity")
"""Outputs of a run set, in the order of their rows."""

UNITS = {
    "viscosity": "Pa.s",
    "viscosity_at_reference": "Pa.s",
    "kinematic_viscosity": "m2/s",
}
"""SI units of the outputs."""


@dataclass(frozen=True, slots=True)
class SetConditions:
    """What each run set's liquid is like at the set's temperature, arrays of shape (run sets,).

    ``cell`` is one of the set's cells (-1 where no drop was used); ``slope_known`` whether
    d ln(viscosity)/dT is given; ``density`` in kg/m3, ``cold_density`` that of the bench sheet,
    ``offset`` the set's temperature less that of the latter. NaN where no drop was used.
    """

    cell: NDArray[np.intp]
    slope: Numbers
    slope_known: NDArray[np.bool_]
    cold_density: Numbers
    density: Numbers
    expansion: Numbers
    offset: Numbers


@dataclass(frozen=True, slots=True)
class Output:
    """One quantity of every run set with its coverage interval, arrays of shape (run sets,)."""

    value: Numbers
    u: Numbers
    dof: Numbers
    factor: Numbers
    expanded: Numbers

    @property
    def low(self) -> Numbers:
        """Lower bound."""
        return self.value - self.expanded

    @property
    def high(self) -> Numbers:
        """Upper bound."""
        return self.value + self.expanded


@dataclass(frozen=True)
class Outputs:
    """All quantities of all run sets, and the propagation they share.

    ``scatter`` marks the columns of observed scatter.
    """

    values: Numbers
    propagation: Propagation
    coverage: float
    n_sets: int
    scatter: NDArray[np.bool_]

    def of(self, quantity: str) -> Output:
        """Return one quantity in columns."""
        return self._columns[quantity]

    def rows(self, quantity: str) -> slice:
        """Rows of the stacked Jacobian that belong to a quantity."""
        place = QUANTITIES.index(quantity)
        return slice(place * self.n_sets, (place + 1) * self.n_sets)

    def covariance(self, quantity: str) -> Numbers:
        """Covariance of the run sets' values of one quantity, shape (run sets, run sets)."""
        return self.propagation.covariance(self.rows(quantity))

    def combination(self, rows: Sequence[int], weights: Numbers) -> tuple[float, float]:
        """Return u and effective degrees of freedom of a weighted sum of values, by their rows."""
        mixed = self.propagation.combine(rows, weights)
        return float(mixed.u[0]), float(self._dof(mixed)[0])

    def _dof(self, propagation: Propagation) -> Numbers:
        seen = propagation.part(self.scatter)
        return dof_with_few_values(
            u=propagation.u,
            dof=propagation.effective_dof,
            scatter_u=seen.u,
            scatter_dof=seen.effective_dof,
            probability=self.coverage,
        )

    @cached_property
    def _columns(self) -> dict[str, Output]:
        u, dof = self.propagation.u, self._dof(self.propagation)
        factor = coverage_factor(dof=dof, probability=self.coverage)
        factor = np.where(np.isfinite(self.values), factor, np.nan)
        return {
            name: Output(
                value=self.values[rows],
                u=u[rows],
                dof=dof[rows],
                factor=factor[rows],
                expanded=(factor * u)[rows],
            )
            for name in QUANTITIES
            for rows in (self.rows(name),)
        }


def conditions(selection: Selection, inputs: Inputs, columns: DropColumns) -> SetConditions:
    """Look up each run set's liquid; a run set has one liquid."""
    cell = np.full(len(selection.names), -1, dtype=np.intp)
    cell[selection.cells.run_set] = np.arange(len(selection.cells))

    def of_set(values: Numbers) -> Numbers:
        return np.append(values, np.nan)[cell]  # -1 reads the last: a set without drops

    offset = columns.set_temperature - of_set(inputs.liquid_density_at)
    offset = np.nan_to_num(offset, nan=0.0)
    expansion = of_set(inputs.roles["liquid_expansion"].value)
    density = liquid_density(
        density=of_set(inputs.roles["liquid_density"].value),
        expansion=expansion,
        temperature=offset,
        reference_temperature=0.0,
    )
    return SetConditions(
        cell=cell,
        slope=of_set(inputs.roles["slope"].value),
        slope_known=of_set(inputs.slope_known.astype(float)) == 1,
        cold_density=of_set(inputs.roles["liquid_density"].value),
        density=np.asarray(density),
        expansion=expansion,
        offset=offset,
    )


def compute_outputs(
    jacobian: Jacobian,
    viscosity: Numbers,
    liquid: SetConditions,
    inputs: Inputs,
    set_temperature: Numbers,
    reference_temperature: float | None,
    coverage: float,
    fits: Sequence[TemperatureFit] = (),
) -> Outputs:
    """Stack the outputs of every run set and propagate the inputs' uncertainties to them.

    Parameters
    ----------
    jacobian : Jacobian
        Sensitivities of the viscosities.
    viscosity : array, shape (run sets,) [Pa.s]
        Each set's value at its own temperature.
    liquid : SetConditions
        Density and temperature slope by run set.
    inputs : Inputs
        Raw inputs, to know which entry is which.
    set_temperature : array, shape (run sets,) [K]
        Mean temperature of each set's values.
    reference_temperature : float, optional [K]
        Where the second output holds; NaN results without it.
    coverage : float
        Coverage probability of the intervals.
    fits : sequence of TemperatureFit
        Fitted temperature laws; they carry their liquids' sets to the reference temperature.

    Returns
    -------
    Outputs
        Values with uncertainties; NaN where there is none.
    """
    n = jacobian.n_sets
    reference = np.nan if reference_temperature is None else reference_temperature
    distance = np.where(liquid.slope_known, reference - set_temperature, np.nan)
    log_ratio = liquid.slope * distance
    by_fit = _carried_by_fits(fits, jacobian, viscosity, set_temperature, reference, log_ratio)
    to_reference = np.exp(log_ratio)
    values = np.concatenate([viscosity, viscosity * to_reference, viscosity / liquid.density])

    def entries(role: str, amounts: Numbers) -> sparse.csr_array:
        entry = np.append(inputs.roles[role].entry, -1)[liquid.cell]
        here = (liquid.cell >= 0) & (entry >= 0)
        return sparse.csr_array(
            (amounts[here], (np.flatnonzero(here), entry[here])), shape=jacobian.matrix.shape
        )

    # A row that does not exist must be NaN in its result, but 0 in the sparse sums.
    scale = np.nan_to_num(to_reference, nan=0.0)
    at_reference = sparse.diags_array(scale) @ (
        jacobian.matrix + entries("slope", viscosity * np.nan_to_num(distance, nan=0.0)) + by_fit
    )
    by_expansion = viscosity * liquid.offset / (1 + liquid.expansion * liquid.offset)
    kinematic = sparse.diags_array(np.nan_to_num(1 / liquid.density, nan=0.0)) @ (
        jacobian.matrix
        - entries("liquid_density", viscosity / liquid.cold_density)
        + entries("liquid_expansion", by_expansion)
    )
    stacked = sparse.vstack([jacobian.matrix, at_reference, kinematic], format="csr")
    propagation = propagate(
        sensitivities=stacked,
        u=jacobian.u,
        dof=jacobian.dof,
        sample=jacobian.shared_scatter,
        sample_dof=np.tile(jacobian.scatter_dof, len(QUANTITIES)),
    )
    return Outputs(
        values=values,
        propagation=propagation,
        coverage=coverage,
        n_sets=n,
        scatter=jacobian.observed_scatter,
    )


def _carried_by_fits(
    fits: Sequence[TemperatureFit],
    jacobian: Jacobian,
    viscosity: Numbers,
    set_temperature: Numbers,
    reference: float,
    log_ratio: Numbers,
) -> sparse.csr_array:
    """Return what the fitted laws add to the rows at the reference temperature, before their scale.

    ``log_ratio`` is filled with the laws' own, where a law was fitted.
    """
    added = sparse.csr_array(jacobian.matrix.shape)
    if math.isnan(reference):
        return added
    for fit in fits:
        there, by_there = fit.log_viscosity(np.array([reference]))
        here, by_here = fit.log_viscosity(set_temperature[fit.members])
        log_ratio[fit.members] = there - here
        place = (np.ones(len(fit.members)), (fit.members, np.arange(len(fit.members))))
        spread = sparse.csr_array(place, shape=(jacobian.n_sets, len(fit.members)))
        moved = viscosity[fit.members, None] * (by_there - by_here)
        added = added + spread @ (sparse.csr_array(np.nan_to_num(moved)) @ fit.rows)
    return sparse.csr_array(added)
