"""Every run set's numbers in columns, and what detectors make their findings of."""

from __future__ import annotations

from collections.abc import Collection
from typing import TYPE_CHECKING

from plumbfall.bench.measured import unstated_uncertainties
from plumbfall.bench.records import Bench
from plumbfall.findings.data import RunData
from plumbfall.findings.limits import Limits
from plumbfall.measurement.balance import corrected_temperature
from plumbfall.measurement.drops import compute_drops
from plumbfall.measurement.ends import path_ends
from plumbfall.measurement.gather import gather
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.law import drag_law, model_estimate
from plumbfall.measurement.run_in import releases
from plumbfall.measurement.selection import check_temperatures, select
from plumbfall.measurement.values import value_weights
from plumbfall.physics.laws import DEFAULTS
from plumbfall.run_sets.ball_scatter import ball_scatter
from plumbfall.run_sets.fitted_slopes import SetValues, fit_slopes
from plumbfall.run_sets.jacobian import build_jacobian
from plumbfall.run_sets.outputs import compute_outputs, conditions
from plumbfall.run_sets.own_errors import own_errors
from plumbfall.run_sets.repeatability import repeatability
from plumbfall.run_sets.result import SetColumns
from plumbfall.run_sets.temperature_fit import TemperatureFit
from plumbfall.timings.records import Timings

if TYPE_CHECKING:
    pass


__all__ = ["reduce_numbers", "run_data"]


def reduce_numbers(
    timings: Timings, bench: Bench, coverage: float = 0.95, not_fitted: Collection[int] = ()
) -> SetColumns:
    """Compute every run set's numbers, in columns, without looking for findings.

    ``not_fitted`` are run sets that a fit of the temperature slope leaves out.
    """
    law = drag_law(bench)
    selection = select(timings, bench)
    inputs = gather(selection.cells, bench, selection.names, model_estimate(bench))
    readings = corrected_temperature(inputs, selection.cell, selection.temperature)
    check_temperatures(selection, readings, timings)
    weights = value_weights(selection, inputs)
    tubes = list(bench.tubes.values())
    ends = path_ends(
        inputs,
        selection.cells,
        tubes,
        bench.methods.ends or DEFAULTS["ends"],
    )
    released = None if bench.methods.run_in == "none" else releases(inputs)

    def values_by(inputs: Inputs) -> SetValues:
        columns, sums = compute_drops(selection, inputs, weights, law, readings, ends, released)
        own = own_errors(selection, inputs, sums)
        scatter = repeatability(selection, columns, weights, own, bench.scatter)
        of_balls = ball_scatter(selection, inputs, weights, scatter)
        jacobian = build_jacobian(selection, inputs, sums, own, scatter, of_balls)
        return SetValues(columns, sums, scatter, jacobian)

    if bench.methods.slope is None:
        fits: tuple[TemperatureFit, ...] = ()
        values = values_by(inputs)
    else:
        inputs, values, fits = fit_slopes(bench, selection, inputs, values_by, not_fitted)
    liquid = conditions(selection, inputs, values.columns)
    outputs = compute_outputs(
        values.jacobian,
        values.scatter.mean,
        liquid,
        inputs,
        values.columns.set_temperature,
        bench.reference_temperature,
        coverage,
        fits,
    )
    return SetColumns(
        bench, timings, selection, inputs, values.columns, values.sums, weights, values.scatter,
        values.jacobian, liquid, outputs, law, ends, fits,
    )  # fmt: skip


def run_data(sets: SetColumns, limits: Limits) -> RunData:
    """Return what detectors look at."""
    return RunData(
        bench=sets.bench,
        timings=sets.timings,
        selection=sets.selection,
        inputs=sets.inputs,
        columns=sets.columns,
        sums=sets.sums,
        weights=sets.weights,
        scatter=sets.scatter,
        jacobian=sets.jacobian,
        outputs=sets.outputs,
        law=sets.law,
        limits=limits,
        ends=sets.ends,
        fits=sets.fits,
        unstated=unstated_uncertainties(sets.bench),
    )
