"""A fitted temperature law as the strings that the page and the text both show."""

from __future__ import annotations

from plumbfall.report.rounding import NO_VALUE
from plumbfall.report.scales import CELSIUS, Scale, viscosity_scale
from plumbfall.report.summary import basis, counted
from plumbfall.report.views import Fact
from plumbfall.results import Quantity, TemperatureFitResult

__all__ = ["fit_facts", "fit_heading"]

_PLAIN = Scale("")


def fit_heading(fit: TemperatureFitResult) -> str:
    """Return which law was fitted to what."""
    return (
        f"Temperature slope of liquid {fit.liquid}, fitted to {counted(len(fit.sets), 'run set')}"
    )


def fit_facts(fit: TemperatureFitResult, viscosity_unit: str | None) -> list[Fact]:
    """Return everything about a fit that is a single figure."""
    low, high = min(fit.temperatures), max(fit.temperatures)
    shown = [
        Fact("Law", f"{fit.title}, {fit.equation} [{fit.source}]", term="temperature law"),
        Fact("Temperatures fitted", f"{_celsius(low)} to {_celsius(high)} degC", "degC"),
    ]
    for name, parameter in fit.parameters:
        shown.append(Fact(f"Parameter {name}", _parameter(parameter), parameter.unit))
    if fit.chi_squared is None:
        shown.append(Fact("Goodness of fit", "not known: the sets have no errors of their own"))
    elif fit.dof == 0:
        text = "not known: as many run sets as parameters, so the law goes through all of them"
        shown.append(Fact("Goodness of fit", text))
    else:
        text = f"{_PLAIN.alone(fit.chi_squared, 3)} at {fit.dof} degrees of freedom"
        if fit.p_value is not None:
            text += f", p-value {_PLAIN.alone(fit.p_value, 2)}"
        shown.append(Fact("Goodness of fit, chi-squared", text, term="chi-squared"))
        worst = max(fit.residuals, key=abs)
        name = fit.sets[fit.residuals.index(worst)]
        text = f"{Scale('%', 100.0).alone(worst, 2)} % of run set {name}"
        shown.append(Fact("Largest distance from the law", text))
    warm, cold = fit.slopes[fit.temperatures.index(high)], fit.slopes[fit.temperatures.index(low)]
    text = f"{_percent(cold)} at {_celsius(low)} degC to {_percent(warm)} at {_celsius(high)} degC"
    shown.append(Fact("Slope", text, "%/K"))
    if fit.viscosity_at_reference is not None:
        measured = fit.viscosity_at_reference
        scale = viscosity_scale(measured.value, viscosity_unit)
        pair = scale.pair(measured.value, measured.expanded)
        text = f"{pair.plus_minus} {scale.unit} ({basis(measured)})"
        at = _celsius(fit.reference_temperature)
        shown.append(Fact(f"The law at {at} degC, of all sets together", text, scale.unit))
    return shown


def _celsius(temperature: float | None) -> str:
    return NO_VALUE if temperature is None else CELSIUS.fixed(temperature, 2)


def _percent(slope: float) -> str:
    return f"{Scale('%/K', 100.0).alone(slope, 3)} %/K"


def _parameter(parameter: Quantity) -> str:
    return _PLAIN.pair(parameter.value, parameter.u).concise
