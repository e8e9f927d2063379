"""Run sets whose temperature slope is fitted to themselves: values and slope together.

A set's drops are brought to its temperature by the slope, and its thermometer's error acts by it;
the slope comes from the sets' values. A few rounds of the two settle both.
"""

from __future__ import annotations

from collections.abc import Callable, Collection
from dataclasses import dataclass

import numpy as np

from plumbfall.bench.records import Bench
from plumbfall.errors import InputError
from plumbfall.measurement.columns import DropColumns
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.selection import Selection
from plumbfall.measurement.sensitivities import Sums
from plumbfall.run_sets.jacobian import Jacobian
from plumbfall.run_sets.repeatability import Repeatability
from plumbfall.run_sets.temperature_fit import (
    TemperatureFit,
    fit_temperatures,
    slopes_of,
    with_fitted_slopes,
)

__all__ = ["SetValues", "fit_slopes"]

MOST_ROUNDS = 30
SETTLED = 1e-10
"""Rounds stop once no slope changes by more than this, in 1/K: 1e-9 of viscosity over 10 K."""


@dataclass(frozen=True, slots=True)
class SetValues:
    """Every run set's value with its sensitivities, for one temperature slope of each liquid."""

    columns: DropColumns
    sums: Sums
    scatter: Repeatability
    jacobian: Jacobian


def fit_slopes(
    bench: Bench,
    selection: Selection,
    inputs: Inputs,
    values_by: Callable[[Inputs], SetValues],
    not_fitted: Collection[int] = (),
) -> tuple[Inputs, SetValues, tuple[TemperatureFit, ...]]:
    """Fit temperature laws to the run sets, and reduce the sets by them, until both agree.

    Parameters
    ----------
    bench : Bench
        Its ``methods.slope`` names the law.
    selection : Selection
        The used drops.
    inputs : Inputs
        Raw inputs by cell; a slope that they have is the first guess.
    values_by : callable
        From inputs to the run sets' values.
    not_fitted : places of run sets
        Sets that are left out of the fits; the fitted slope still serves them.

    Returns
    -------
    Inputs, SetValues, tuple of TemperatureFit
        The inputs with the fitted slopes, the values by them, and the fits.

    Raises
    ------
    InputError
        Where no law can be fitted, or rounds do not settle.
    """
    values = values_by(inputs)
    for _ in range(MOST_ROUNDS):
        temperature = values.columns.set_temperature
        fits = fit_temperatures(
            bench, selection, values.jacobian, values.scatter, temperature, not_fitted
        )
        slope = slopes_of(fits, temperature)
        before = inputs.roles["slope"].value
        inputs = with_fitted_slopes(inputs, selection.cells.run_set, slope)
        if np.max(np.abs(inputs.roles["slope"].value - before), initial=0.0) < SETTLED:
            return inputs, values, fits
        values = values_by(inputs)
    raise InputError(
        "the fitted temperature slope and the run sets' values do not settle",
        path=bench.path,
        key="methods.slope",
        remedy="split the drops into run sets of one temperature each, or give the liquid's "
        "viscosity_slope instead",
    )
