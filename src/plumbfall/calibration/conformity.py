"""Whether a run set's viscosity conforms with the limits of its liquid's specification."""

from __future__ import annotations

import math
from collections.abc import Sequence

from plumbfall.bench.keys import key_path
from plumbfall.bench.records import Liquid, Specification
from plumbfall.calibration.decisions import ACCEPT, REJECT, conformance_probability
from plumbfall.results import BudgetLine, Conformity, Measured, RunSetResult
from plumbfall.uncertainty.coverage import coverage_factor

__all__ = ["CONFORMS", "DOES_NOT_CONFORM", "UNDECIDED", "conformity"]

CONFORMS, DOES_NOT_CONFORM, UNDECIDED = "conforms", "does-not-conform", "undecided"

SAME_TEMPERATURE = 0.1
"""Kelvin within which no slope is needed (common practice, no source)."""

RULE = (
    f"conforms where the value lies within the limits with a probability of at least "
    f"{100 * ACCEPT:g} %, does not conform where of at most {100 * REJECT:g} %, undecided between "
    "(JCGM 106)"
)


def conformity(result: RunSetResult, liquid: Liquid | None) -> Conformity | None:
    """Judge a run set by its liquid's specification; it says nothing of the data.

    Parameters
    ----------
    result : RunSetResult
        The run set.
    liquid : Liquid, optional
        Its liquid.

    Returns
    -------
    Conformity or None
        ``None`` where there is no specification, or no viscosity. Undecided without a probability
        where the data are invalid, or nothing brings them to the temperature of the limits.

    References
    ----------
    JCGM 106:2012, 7 and 8.
    """
    limits = None if liquid is None else liquid.specification
    if liquid is None or limits is None or result.viscosity is None or result.temperature is None:
        return None
    written = _written(limits)
    low, high = (None if one is None else one.value for one in (limits.low, limits.high))
    numbers = (low, high, limits.temperature)
    if result.status == "invalid":
        told = "not judged, as the data are invalid"
        return Conformity(None, told, UNDECIDED, written, *numbers)
    brought = _brought(result, result.viscosity, liquid, limits)
    if brought is None:
        told = (
            f"not judged, as the drops fell at {result.temperature.value - 273.15:.2f} degC, and "
            f"{liquid.name} has no viscosity_slope to bring them to the limits"
        )
        return Conformity(None, told, UNDECIDED, written, *numbers)
    value, u, dof = brought
    probability = float(
        conformance_probability(
            value=value,
            u=u,
            low=-math.inf if low is None else low,
            high=math.inf if high is None else high,
            dof=math.inf if dof is None else dof,
        )
    )
    if probability >= ACCEPT:
        decision = CONFORMS
    else:
        decision = DOES_NOT_CONFORM if probability <= REJECT else UNDECIDED
    return Conformity(probability, RULE, decision, written, *numbers)


def _written(limits: Specification) -> str:
    at = f"at {limits.temperature - 273.15:g} degC"
    if limits.low is None:
        return f"at most {limits.high.text if limits.high else ''} {at}"
    if limits.high is None:
        return f"at least {limits.low.text} {at}"
    return f"{limits.low.text} to {limits.high.text} {at}"


def _brought(
    result: RunSetResult, measured: Measured, liquid: Liquid, limits: Specification
) -> tuple[float, float, float | None] | None:
    """Return value, standard uncertainty and degrees of freedom at the temperature of the limits.

    That is the reference temperature's own result where they are the same; otherwise slope's
    own error acts on the value through its drops and through the way to the limits.
    """
    assert result.temperature is not None
    away = limits.temperature - result.temperature.value
    at_reference = result.viscosity_at_reference
    if at_reference is not None and result.reference_temperature == limits.temperature:
        return at_reference.value, *_spread(at_reference, result.linear)
    slope, (u, dof) = liquid.viscosity_slope, _spread(measured, result.linear)
    if slope is None:
        return (measured.value, u, dof) if abs(away) <= SAME_TEMPERATURE else None
    factor = math.exp(slope.value * away)
    before = _sensitivity(result.budget, key_path("liquid", liquid.name, "viscosity_slope"))
    further = measured.value * away
    variance = u**2 + (2 * before * further + further**2) * slope.u**2
    return measured.value * factor, factor * math.sqrt(max(variance, 0.0)), dof


def _spread(measured: Measured, linear: Measured | None) -> tuple[float, float | None]:
    """Return standard uncertainty and degrees of freedom of the Student's t that is judged by.

    Where Monte Carlo is quoted, it is the one with the linear degrees of freedom whose coverage
    interval is as wide as the quoted one: few values have far tails, which no normal has.
    """
    if measured.effective_dof is not None or linear is None or linear.effective_dof is None:
        return measured.u, measured.effective_dof
    dof = linear.effective_dof
    factor = float(coverage_factor(dof=dof, probability=measured.coverage_probability))
    return measured.expanded / factor, dof


def _sensitivity(budget: Sequence[BudgetLine], name: str) -> float:
    return next((line.sensitivity for line in budget if line.input == name), 0.0)
