"""A run set's uncertainty budget: one line an input, the shares adding up to 1."""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.keys import key_path
from plumbfall.bench.records import Bench
from plumbfall.measurement.inputs import MODEL_INPUT, Inputs
from plumbfall.measurement.selection import Selection
from plumbfall.measurement.sensitivities import Sums
from plumbfall.results import BudgetLine
from plumbfall.run_sets.jacobian import Jacobian
from plumbfall.run_sets.repeatability import KNOWN, OF_VALUES, Repeatability

__all__ = ["budget_lines"]


def budget_lines(
    jacobian: Jacobian,
    inputs: Inputs,
    sums: Sums,
    selection: Selection,
    scatter: Repeatability,
    bench: Bench,
    run_set: int,
) -> tuple[BudgetLine, ...]:
    """Return the budget of one run set's viscosity, the largest contribution first.

    Inputs without uncertainty, or without effect, have no line. Empty where the set has no value.
    """
    start, stop = jacobian.matrix.indptr[run_set : run_set + 2]
    columns = jacobian.matrix.indices[start:stop]
    sensitivities = jacobian.matrix.data[start:stop]
    if not np.isfinite(sensitivities).all():
        return ()
    cells = np.flatnonzero(selection.cells.run_set == run_set)
    lines: dict[str, BudgetLine] = {}
    for column, sensitivity in zip(columns.tolist(), sensitivities.tolist(), strict=True):
        u, entry = float(jacobian.u[column]), jacobian.input_of(column)
        # the scatter stands in its own column whole, also where other sets have a part in it
        contribution = abs(sensitivity) * u if entry >= 0 else u
        if contribution == 0 or (entry < 0 and not jacobian.own_kind(column)):
            continue
        if entry >= 0:
            line = _input_line(inputs, sums, cells, entry, sensitivity, contribution)
        else:
            line = _own_line(jacobian, scatter, selection, bench, cells, run_set, column)
        known = lines.get(line.input)
        if known is not None:  # the first- and second-order parts of one input
            total = math.hypot(known.contribution, contribution)
            line = dataclasses.replace(known, contribution=total)
        lines[line.input] = line
    variance = math.fsum(line.contribution**2 for line in lines.values())
    return tuple(
        dataclasses.replace(line, share=line.contribution**2 / variance)
        for line in sorted(lines.values(), key=lambda line: (-line.contribution, line.input))
    )


def _input_line(
    inputs: Inputs,
    sums: Sums,
    cells: NDArray[np.intp],
    entry: int,
    sensitivity: float,
    contribution: float,
) -> BudgetLine:
    estimate = inputs.estimates[entry]
    u, value = estimate.u, estimate.value
    if estimate.name == MODEL_INPUT:
        # The law's bound differs from drop to drop: shown is what it amounts to in this set.
        sensitivity = float(sums.model_plain[cells].sum())
        u = contribution / abs(sensitivity)
    return BudgetLine(
        input=estimate.name,
        value=value,
        unit=estimate.unit,
        u=u,
        distribution=estimate.distribution,
        dof=estimate.dof,
        sensitivity=sensitivity,
        contribution=contribution,
        share=0.0,
        scope="ball" if inputs.individual[entry] else "shared",
    )


def _own_line(
    jacobian: Jacobian,
    scatter: Repeatability,
    selection: Selection,
    bench: Bench,
    cells: NDArray[np.intp],
    run_set: int,
    column: int,
) -> BudgetLine:
    kind = jacobian.own_kind(column)
    contribution = float(jacobian.u[column])
    dof = float(jacobian.dof[column])
    if kind != "scatter":
        return _declared_line(kind, contribution, selection, bench, cells)
    basis = scatter.basis[run_set]
    if basis == KNOWN and bench.scatter is not None:
        relative = bench.scatter.relative.value
        return BudgetLine(
            input="scatter.relative", value=relative, unit="1", u=relative, distribution="normal",
            dof=dof, sensitivity=contribution / relative, contribution=contribution, share=0.0,
            scope="drop",
        )  # fmt: skip
    return BudgetLine(
        input=key_path("set", selection.names[run_set], "scatter"),
        value=0.0,
        unit="Pa.s",
        u=contribution,
        distribution="rectangular" if scatter.floored[run_set] else "t",
        dof=dof,
        sensitivity=1.0,
        contribution=contribution,
        share=0.0,
        scope="ball" if basis == OF_VALUES else "drop",
    )


def _declared_line(
    kind: str,
    contribution: float,
    selection: Selection,
    bench: Bench,
    cells: NDArray[np.intp],
) -> BudgetLine:
    """Describe a standard deviation that every drop has to itself, by what it does to the mean."""
    name, value, unit, shape = next(_declared(kind, selection, bench, cells))
    u = value / math.sqrt(6) if kind == "resolution" else value  # two readings, d/sqrt(12) each
    return BudgetLine(
        input=name,
        value=0.0,
        unit=unit,
        u=u,
        distribution=shape,
        dof=math.inf,
        sensitivity=contribution / u,
        contribution=contribution,
        share=0.0,
        scope="drop",
    )


def _declared(
    kind: str, selection: Selection, bench: Bench, cells: NDArray[np.intp]
) -> Iterator[tuple[str, float, str, str]]:
    """Entries of the bench that declare a standard deviation of the kind, in this set's cells."""
    holders = {
        "per_drop": (bench.timers, selection.cells.timer, "s", "normal"),
        "resolution": (bench.timers, selection.cells.timer, "s", "triangular"),
        "per_reading": (bench.thermometers, selection.cells.thermometer, "K", "normal"),
        "spread": (bench.balls, selection.cells.ball, "m", "normal"),
    }
    records, codes, unit, shape = holders[kind]
    known = list(records.values())
    for code in np.unique(codes[cells]):
        estimate = getattr(known[code], kind) if code >= 0 else None
        if estimate is not None and estimate.value > 0:
            yield estimate.name, estimate.value, unit, shape
