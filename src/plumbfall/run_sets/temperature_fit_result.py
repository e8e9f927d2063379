"""A fitted temperature law as a record of results."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
from scipy import sparse

from plumbfall.bench.records import Bench
from plumbfall.results import Measured, Quantity, TemperatureFitResult
from plumbfall.run_sets.jacobian import Jacobian
from plumbfall.run_sets.temperature_fit import TemperatureFit
from plumbfall.uncertainty.coverage import coverage_factor
from plumbfall.uncertainty.linear import propagate

__all__ = ["fit_result"]


def fit_result(
    fit: TemperatureFit, jacobian: Jacobian, names: Sequence[str], bench: Bench, coverage: float
) -> TemperatureFitResult:
    """Return what a report says of a fit.

    Parameters
    ----------
    fit : TemperatureFit
        The fit.
    jacobian : Jacobian
        Whose columns the rows of the fit count.
    names : sequence of str
        Names of all run sets.
    bench : Bench
        For the reference temperature.
    coverage : float
        Coverage probability of the interval at the reference temperature.
    """
    found, reference = fit.found, bench.reference_temperature
    return TemperatureFitResult(
        liquid=fit.liquid,
        law=fit.law.name,
        title=fit.law.title,
        equation=fit.law.equation,
        source=fit.law.source,
        parameters=tuple(
            (name, Quantity(float(value), unit, float(u)))
            for (name, unit), value, u in zip(
                fit.law.parameters, found.parameters, found.u, strict=True
            )
        ),
        covariance=tuple(tuple(row) for row in found.covariance.tolist()),
        sets=tuple(names[place] for place in fit.sets.tolist()),
        temperatures=tuple(fit.temperature.tolist()),
        residuals=tuple(found.residuals.tolist()),
        slopes=tuple(fit.slope(fit.temperature).tolist()),
        chi_squared=None if math.isnan(fit.goodness.chi_squared) else fit.goodness.chi_squared,
        dof=found.dof,
        p_value=None if math.isnan(fit.goodness.p_value) else fit.goodness.p_value,
        reference_temperature=reference,
        viscosity_at_reference=None
        if reference is None
        else _at(fit, jacobian, reference, coverage),
    )


def _at(fit: TemperatureFit, jacobian: Jacobian, temperature: float, coverage: float) -> Measured:
    """Evaluate the curve itself at a temperature, as a row over the same columns as the sets'."""
    log_viscosity, by_parameters = fit.log_viscosity(np.array([temperature]))
    value = float(np.exp(log_viscosity[0]))
    row = sparse.csr_array(value * by_parameters) @ fit.rows
    spread = propagate(
        sensitivities=sparse.csr_array(row),
        u=jacobian.u,
        dof=jacobian.dof,
        sample=jacobian.shared_scatter,
        sample_dof=jacobian.scatter_dof[fit.sets].min(keepdims=True),
    )
    u, dof = float(spread.u[0]), float(spread.effective_dof[0])
    factor = float(coverage_factor(dof=dof, probability=coverage))
    return Measured(
        value=value,
        unit="Pa.s",
        u=u,
        effective_dof=dof,
        coverage_probability=coverage,
        coverage_factor=factor,
        expanded=factor * u,
        low=value - factor * u,
        high=value + factor * u,
    )
