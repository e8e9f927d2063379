"""The reduction: timed drops and a bench sheet to run-set results. It joins; it has no formula."""

from __future__ import annotations

import dataclasses
from collections.abc import Callable, Collection, Mapping
from dataclasses import dataclass, field
from functools import cached_property
from typing import TYPE_CHECKING, TypeAlias

import numpy as np

from plumbfall.bench.measured import unstated_uncertainties
from plumbfall.bench.records import Bench
from plumbfall.errors import InputError
from plumbfall.findings.data import RunData
from plumbfall.findings.limits import Limits, limits_from
from plumbfall.findings.linearity import linear_not_validated
from plumbfall.findings.reach import reach_of
from plumbfall.findings.registry import find
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
from plumbfall.results import Finding, RunSetResult, TemperatureFitResult
from plumbfall.run_sets.ball_scatter import ball_scatter
from plumbfall.run_sets.drawn import Drawn
from plumbfall.run_sets.fitted_slopes import SetValues, fit_slopes
from plumbfall.run_sets.jacobian import build_jacobian
from plumbfall.run_sets.joint import Joint, joint_results
from plumbfall.run_sets.monte_carlo import draw_run_set
from plumbfall.run_sets.outputs import compute_outputs, conditions
from plumbfall.run_sets.own_errors import own_errors
from plumbfall.run_sets.repeatability import repeatability
from plumbfall.run_sets.result import SetColumns, build_result, status_of
from plumbfall.run_sets.second_order import second_order_of
from plumbfall.run_sets.table import summary_table
from plumbfall.run_sets.temperature_fit import TemperatureFit
from plumbfall.run_sets.temperature_fit_result import fit_result
from plumbfall.timings.records import Timings
from plumbfall.uncertainty.draw_pool import DrawPool

if TYPE_CHECKING:
    import pandas as pd
    from numpy.typing import NDArray

__all__ = ["Progress", "Reduction", "reduce_drops", "reduce_numbers"]

Progress: TypeAlias = Callable[[int, int], None]
"""Told how many run sets are done, and of how many."""

OUTLIER_RULE = "grubbs-1-percent"


@dataclass(frozen=True)
class Reduction:
    """Every run set's results in columns; a run set's record is built when it is asked for.

    ``found`` holds the findings by run set, ``inputs`` the files with their hashes,
    ``drawn`` what Monte Carlo says of those that were drawn, by their place.
    """

    sets: SetColumns
    found: tuple[tuple[Finding, ...], ...]
    coverage: float
    seed: int
    inputs: tuple[tuple[str, str], ...]
    findings: tuple[Finding, ...] = ()
    drawn: Mapping[int, Drawn] = field(default_factory=dict)

    @property
    def bench(self) -> Bench:
        """The bench sheet."""
        return self.sets.bench

    @property
    def timings(self) -> Timings:
        """The drops as read, those excluded by a rule marked so."""
        return self.sets.timings

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the run sets, in order of first appearance."""
        return self.sets.selection.names

    @cached_property
    def rows(self) -> Mapping[str, int]:
        """Rows read, and how many of them were used, void and excluded."""
        status = self.timings.table["status"].astype(str)
        counts = {name: int((status == name).sum()) for name in ("used", "void", "excluded")}
        return {"read": len(status), **counts}

    def run_set(self, name: str) -> RunSetResult:
        """Return one run set's record, built once."""
        if name not in self._built:
            place = self._place[name]
            used = self._used_by_set[place]
            built = build_result(
                self.sets,
                place,
                used,
                self._rows_by_set[place],
                self.found[place],
                self.drawn.get(place),
            )
            terms = second_order_of(self.sets, place, used, built.budget)
            self._built[name] = dataclasses.replace(
                built, second_order=terms, reach=reach_of(self._data, place)
            )
        return self._built[name]

    def summary_table(self) -> pd.DataFrame:
        """Return one row a run set, numeric, units in the column names (INTERFACE section 6)."""
        return summary_table(self.sets, self.found, self.drawn)

    def covariance(self, quantity: str = "viscosity") -> NDArray[np.float64]:
        """Covariance of the run sets' values of a quantity; NaN where a set has none."""
        covariance = self.sets.outputs.covariance(quantity)
        missing = ~np.isfinite(self.sets.outputs.of(quantity).value)
        covariance[missing] = np.nan
        covariance[:, missing] = np.nan
        return covariance

    def correlation(self) -> NDArray[np.float64]:
        """Correlation of the run sets' viscosities; NaN where a set has none."""
        covariance = self.covariance()
        u = np.sqrt(np.diag(covariance))
        with np.errstate(invalid="ignore", divide="ignore"):
            correlation: NDArray[np.float64] = covariance / np.outer(u, u)
        np.fill_diagonal(correlation, np.where(np.isnan(u), np.nan, 1.0))
        return correlation

    @cached_property
    def joint(self) -> Joint:
        """All quantities of all run sets with what each input contributes to each."""
        return joint_results(
            self.sets.outputs,
            self.sets.jacobian,
            self.sets.inputs,
            self.names,
            self.bench.balls,
        )

    @cached_property
    def temperature_fits(self) -> tuple[TemperatureFitResult, ...]:
        """Temperature laws fitted to the run sets, one a liquid; empty where none was asked for."""
        return tuple(
            fit_result(fit, self.sets.jacobian, self.names, self.bench, self.coverage)
            for fit in self.sets.fits
        )

    @cached_property
    def _place(self) -> dict[str, int]:
        return {name: place for place, name in enumerate(self.names)}

    @cached_property
    def _data(self) -> RunData:
        return run_data(self.sets, limits_from(self.bench.limits, self.bench.path))

    @cached_property
    def _built(self) -> dict[str, RunSetResult]:
        return {}

    @cached_property
    def _used_by_set(self) -> list[NDArray[np.intp]]:
        return _grouped(self.sets.selection.run_set, len(self.names))

    @cached_property
    def _rows_by_set(self) -> list[NDArray[np.intp]]:
        return _grouped(self.sets.selection.row_set, len(self.names))


def reduce_drops(
    timings: Timings,
    bench: Bench,
    *,
    coverage: float | None = None,
    draws: int | str = 0,
    seed: int = 0,
    inputs: tuple[tuple[str, str], ...] = (),
    progress: Progress | None = None,
) -> Reduction:
    """Reduce timed drops to viscosities with bounds.

    Parameters
    ----------
    timings : Timings
        The drops as read.
    bench : Bench
        The bench sheet.
    coverage : float, optional
        Coverage probability of the intervals; that of the bench sheet where not given.
    draws : int or "auto"
        Monte Carlo draws of every run set that is not invalid; 0 for none.
    seed : int
        Of the draws; recorded in the report.
    inputs : tuple of (path, sha256)
        The input files, recorded in the report.
    progress : callable, optional
        Called with the run sets drawn so far and how many there are.

    Returns
    -------
    Reduction
        Results of every run set.

    Raises
    ------
    InputError
        Where the bench sheet does not describe what the drops need.
    """
    if not len(timings):
        raise InputError("there is no drop to reduce", remedy="give a timing file with drops")
    probability = bench.coverage if coverage is None else coverage
    if not 0 < probability < 1:
        raise InputError(
            f"a coverage probability of {probability:g} is not between 0 and 1",
            key="coverage",
            remedy="write 0.95 for 95 %",
        )
    limits = limits_from(bench.limits, bench.path)
    reduced = reduce_numbers(timings, bench, probability)
    while limits.exclude_outliers:
        found = run_data(reduced, limits).suspects
        beyond = found.p_value < limits.outlier_level
        if not beyond.any():
            break
        rows = reduced.selection.row[found.drop[beyond]]
        reduced = reduce_numbers(_exclude(reduced.timings, rows), bench, probability)
    findings = find(run_data(reduced, limits))
    not_fitted: frozenset[int] = frozenset()
    while spoilt := _invalid_but_fitted(reduced, findings) - not_fitted:
        not_fitted |= spoilt
        reduced = reduce_numbers(reduced.timings, bench, probability, not_fitted)
        findings = find(run_data(reduced, limits))
    drawn = _drawn(reduced, findings, draws, seed, progress) if draws else {}
    for place, of_set in drawn.items():
        note = linear_not_validated(reduced.outputs, of_set, place)
        findings = (*findings[:place], findings[place] + note, *findings[place + 1 :])
    return Reduction(
        sets=reduced,
        found=findings,
        coverage=probability,
        seed=seed,
        inputs=(*inputs, *_constant_files(reduced)),
        drawn=drawn,
    )


def _constant_files(sets: SetColumns) -> tuple[tuple[str, str], ...]:
    """Files of the tube constants in use, with their hashes."""
    files = [constant.chosen.file for constant in sets.inputs.constants]
    return tuple(dict.fromkeys((file.path, file.sha256) for file in files if file is not None))


def _invalid_but_fitted(
    sets: SetColumns, findings: tuple[tuple[Finding, ...], ...]
) -> frozenset[int]:
    """Run sets that a fitted temperature law was made from, though their data are invalid."""
    fitted = {place for fit in sets.fits for place in fit.sets.tolist()}
    return frozenset(place for place in fitted if status_of(findings[place]) == "invalid")


def _drawn(
    sets: SetColumns,
    findings: tuple[tuple[Finding, ...], ...],
    draws: int | str,
    seed: int,
    progress: Progress | None,
) -> dict[int, Drawn]:
    """Draw every run set that has a viscosity and is not invalid."""
    used = _grouped(sets.selection.run_set, len(sets.selection.names))
    has_value = np.isfinite(sets.outputs.of("viscosity").value)
    places = [
        place
        for place in np.flatnonzero(has_value).tolist()
        if status_of(findings[place]) != "invalid"
    ]
    pool = DrawPool(draws=draws, seed=seed) if isinstance(draws, int) else None
    drawn = {}
    for done, place in enumerate(places, start=1):
        drawn[place] = draw_run_set(sets, place, used[place], draws=draws, seed=seed, pool=pool)
        if progress is not None:
            progress(done, len(places))
    return drawn


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


def _exclude(timings: Timings, rows: NDArray[np.intp]) -> Timings:
    """Mark rows as excluded by the outlier rule, keeping whatever their note said."""
    table = timings.table.copy()
    status, note = table["status"].astype(str).to_numpy(), table["note"].astype(str).to_numpy()
    status, note = status.astype(object), note.astype(object)
    status[rows] = "excluded"
    note[rows] = [f"{OUTLIER_RULE}: {text}" if text else OUTLIER_RULE for text in note[rows]]
    table["status"], table["note"] = status, note
    return dataclasses.replace(
        timings, table=table.astype({"status": "category", "note": "category"})
    )


def _grouped(codes: NDArray[np.intp], n_groups: int) -> list[NDArray[np.intp]]:
    order = np.argsort(codes, kind="stable")
    return np.split(order, np.cumsum(np.bincount(codes, minlength=n_groups))[:-1])
