"""Temperature: how far the drops' differ, and whether what depends on it is known."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from plumbfall.findings.data import Found, RunData
from plumbfall.findings.significance import level_of_each
from plumbfall.measurement.inputs import cold_ball_density
from plumbfall.results import Finding
from plumbfall.run_sets.temperature_fit import TemperatureFit

__all__ = [
    "density_temperature",
    "fitted_slope",
    "slope_sign",
    "slope_unknown",
    "temperature_spread",
]

USUAL_EXPANSION = 7e-4
"""Volumetric expansion of common liquids, 1/K, to judge what an unknown one may cost.

Mineral oils 6e-4 to 8e-4, silicone fluids 9e-4, glycerol 5e-4: from memory.
"""


def slope_unknown(data: RunData) -> Iterator[Found]:
    """Find liquids without a temperature slope, which bounds and reduction would need."""
    known = np.zeros(len(data.names), bool)
    known[data.selection.cells.run_set[data.inputs.slope_known]] = True
    ranges = data.temperature_range
    asked = data.bench.reference_temperature is not None
    liquid_of = np.zeros(len(data.names), dtype=np.intp)
    liquid_of[data.selection.cells.run_set] = data.selection.cells.liquid
    for run_set in np.flatnonzero(~known & (data.weights.n_drops > 0)):
        liquid = data.liquids[liquid_of[run_set]].name
        span = ranges[run_set]
        small = bool(span <= data.limits.temperature_agreement)
        if np.isnan(span):
            message = "no temperature was recorded, so the viscosity holds at an unknown one"
            remedy = "add a temperature column to the timing file, or temperature to the run set"
        else:
            message = f"liquid {liquid} has no viscosity_slope: the bounds leave out temperature"
            if data.bench.methods.slope is not None:
                message = (
                    f"the slope of liquid {liquid} cannot be fitted, its run sets being at too "
                    "few temperatures: the bounds leave out temperature"
                )
            if not small:
                message += f", and drops {span:.2f} K apart are averaged as they are"
            if asked:
                message += ", and nothing is reduced to the reference temperature"
            remedy = f'add viscosity_slope = "… %/K" to [liquid.{liquid}]'
        yield (
            int(run_set),
            Finding(
                code="slope-unknown",
                severity="note" if small and not asked else "warning",
                statistic=None if np.isnan(span) else float(span),
                message=message,
                remedy=remedy,
            ),
        )


def fitted_slope(data: RunData) -> Iterator[Found]:
    """Find run sets that the law fitted to them does not describe, or not where it is asked to."""
    for fit in data.fits:
        if fit.goodness.p_value < level_of_each(data.limits):
            yield from _misfit(data, fit)
        reference = data.bench.reference_temperature
        if reference is None:
            continue
        low, high = fit.fitted_range
        beyond = max(low - reference, reference - high)
        if beyond > data.limits.slope_extrapolation:
            for run_set in fit.members.tolist():
                yield (
                    run_set,
                    Finding(
                        code="slope-unknown",
                        severity="warning",
                        statistic=beyond,
                        message=f"the reference temperature lies {beyond:.1f} K outside the "
                        f"temperatures that {fit.law.title} was fitted to, where its bounds do not "
                        "hold what they promise",
                        remedy="add a run set beyond the reference temperature",
                    ),
                )


def _misfit(data: RunData, fit: TemperatureFit) -> Iterator[Found]:
    worst = int(np.argmax(np.abs(fit.found.residuals)))
    effect = float(fit.found.residuals[worst])
    name = data.names[fit.sets[worst]]
    yield from (
        (
            run_set,
            Finding(
                code="slope-unknown",
                severity="warning",
                statistic=fit.goodness.chi_squared,
                p_value=fit.goodness.p_value,
                effect=effect,
                message=f"the run sets of {fit.liquid} do not follow {fit.law.title}: set "
                f"'{name}' lies {100 * effect:.2g} % off it, more than their uncertainties allow",
                remedy=('try slope = "vogel", which bends, ' if fit.law.name == "andrade" else "")
                + "and check that set's temperature, ball and liquid",
            ),
        )
        for run_set in fit.sets.tolist()
    )


def slope_sign(data: RunData) -> Iterator[Found]:
    """Find liquids that are said to thicken as they warm; most often the minus is missing."""
    for run_set, code in data.pairs("liquid"):
        liquid = data.liquids[code]
        slope = liquid.viscosity_slope
        if slope is None or slope.value <= 0:
            continue
        yield (
            int(run_set),
            Finding(
                code="unit-slip-suspected",
                severity="warning",
                statistic=slope.value,
                message=f"the viscosity of {liquid.name} is said to rise by "
                f"{100 * slope.value:.2g} %/K as it warms; nearly every liquid thins",
                remedy=f"check the sign of [liquid.{liquid.name}] viscosity_slope; "
                "it is negative where the liquid thins",
            ),
        )


def temperature_spread(data: RunData) -> Iterator[Found]:
    """Find sets whose drops were made at widely differing temperatures."""
    ranges = data.temperature_range
    slope = np.zeros(len(data.names))
    slope[data.selection.cells.run_set] = data.inputs.roles["slope"].value
    for run_set in np.flatnonzero(ranges > data.limits.temperature_spread):
        span = float(ranges[run_set])
        effect = abs(float(slope[run_set])) * span
        cost = f", {100 * effect:.1f} % of viscosity by the slope given" if effect else ""
        yield (
            int(run_set),
            Finding(
                code="temperature-spread",
                severity="warning",
                statistic=span,
                effect=effect or None,
                message=f"the drops' temperatures differ by {span:.2f} K{cost}",
                remedy="let the bath settle, or split the drops into run sets of one temperature",
            ),
        )


def density_temperature(data: RunData) -> Iterator[Found]:
    """Find densities that cannot be brought to the drops' temperature, or that at none."""
    yield from _temperature_missing(data)
    cells = data.selection.cells
    unknown = np.array([liquid.expansion is None for liquid in data.liquids], bool)[cells.liquid]
    offset = data.columns.set_temperature[cells.run_set] - data.inputs.liquid_density_at
    ratio = data.inputs.roles["liquid_density"].value / cold_ball_density(data.inputs)
    with np.errstate(divide="ignore", invalid="ignore"):
        effect = USUAL_EXPANSION * np.abs(offset) * ratio / (1 - ratio)
        far = unknown & (np.abs(offset) > data.limits.density_temperature)
        costly = np.flatnonzero(far & (effect > data.limits.density_effect))
    for run_set in np.unique(cells.run_set[costly]):
        cell = costly[cells.run_set[costly] == run_set]
        worst = cell[np.argmax(effect[cell])]
        liquid = data.liquids[cells.liquid[worst]].name
        yield (
            int(run_set),
            Finding(
                code="density-temperature",
                severity="warning",
                statistic=float(offset[worst]),
                effect=float(effect[worst]),
                message=f"the density of {liquid} holds {abs(offset[worst]):.1f} K away from the "
                "drops' temperature and its expansion is not given; with a usual one that is "
                f"about {100 * effect[worst]:.2f} % of viscosity",
                remedy=f'add expansion = "… /K" to [liquid.{liquid}], or the density at '
                "the drops' temperature",
            ),
        )


def _temperature_missing(data: RunData) -> Iterator[Found]:
    """Find sets without temperature whose liquid is said to change with it."""
    lost = np.isnan(data.temperature_range)[data.selection.cells.run_set] & data.inputs.slope_known
    for run_set in np.unique(data.selection.cells.run_set[lost]):
        asked = data.bench.reference_temperature is not None
        yield (
            int(run_set),
            Finding(
                code="density-temperature",
                severity="warning",
                message="no temperature was recorded, so the viscosity holds at an unknown one, "
                "and the liquid's density is taken as it stands in the bench sheet"
                + ("; nothing is reduced to the reference temperature" if asked else ""),
                remedy="add a temperature column to the timing file, or temperature to the run set",
            ),
        )
