"""The bias of a measured viscosity against a certified one, with its uncertainty."""

from __future__ import annotations

import math
from dataclasses import dataclass

from plumbfall.calibration.certified import CertifiedValue
from plumbfall.reduction.reduced import Reduction
from plumbfall.results import Measured, RunSetResult
from plumbfall.uncertainty.coverage import coverage_factor, effective_dof

__all__ = ["Bias", "bias_of", "certified_at"]


@dataclass(frozen=True, slots=True)
class Bias:
    """Measured over certified, less 1, with standard uncertainty and degrees of freedom."""

    value: float
    u: float
    dof: float


def certified_at(reduction: Reduction, result: RunSetResult, known: CertifiedValue) -> Measured:
    """Return a certified value with its bounds, as it is known at the run set's temperature.

    What the temperature is uncertain by is added where the liquid has no temperature slope of its
    own; where it has one the measured value carries that already.
    """
    u = math.hypot(known.u, _loose(reduction, result, known))
    fourth = (known.u**4 / known.dof) if known.u > 0 else 0.0
    dof = float(effective_dof(u=u, contributions_fourth=fourth))
    factor = float(coverage_factor(dof=dof, probability=reduction.coverage))
    return Measured(
        value=known.value,
        unit="Pa.s",
        u=u,
        effective_dof=dof,
        coverage_probability=reduction.coverage,
        coverage_factor=factor,
        expanded=factor * u,
        low=known.value - factor * u,
        high=known.value + factor * u,
    )


def _loose(reduction: Reduction, result: RunSetResult, known: CertifiedValue) -> float:
    sets = reduction.sets
    cell = int(sets.liquid.cell[reduction.names.index(result.name)])
    if result.temperature is None or bool(sets.inputs.slope_known[cell]):
        return 0.0
    return 0.0 if math.isnan(known.slope) else known.slope * result.temperature.u


def bias_of(
    reduction: Reduction, name: str, measured: Measured, known: CertifiedValue, certified: Measured
) -> Bias:
    """Propagate both values to the bias; an input of the same name acts on both."""
    sets = reduction.sets
    ratio = measured.value / known.value
    columns, contributions = sets.outputs.propagation.row(reduction.names.index(name))
    inputs = {
        (entry.name, entry.value, entry.u): float(contribution)
        for column, contribution in zip(columns.tolist(), contributions.tolist(), strict=True)
        if column < sets.jacobian.n_inputs
        for entry in (sets.inputs.estimates[column],)
    }
    both = sum(
        inputs.get((part.input.name, part.input.value, part.input.u), 0.0) * part.contribution
        for part in known.parts
    )
    own, theirs = measured.u / known.value, ratio * certified.u / known.value
    variance = own**2 + theirs**2 - 2 * ratio * both / known.value**2
    u = math.sqrt(max(variance, 0.0))
    fourth = own**4 / _dof(measured) + theirs**4 / _dof(certified)
    return Bias(ratio - 1.0, u, float(effective_dof(u=u, contributions_fourth=fourth)))


def _dof(measured: Measured) -> float:
    return math.inf if measured.effective_dof is None else measured.effective_dof
