"""From timed drops to a reduction: numbers, outliers, findings, Monte Carlo."""

from __future__ import annotations

import dataclasses
from collections.abc import Callable
from typing import TYPE_CHECKING, TypeAlias

import numpy as np

from plumbfall.bench.records import Bench
from plumbfall.errors import InputError
from plumbfall.findings.limits import limits_from
from plumbfall.findings.linearity import linear_not_validated
from plumbfall.findings.registry import find
from plumbfall.results import Finding
from plumbfall.run_sets.drawn import Drawn
from plumbfall.run_sets.monte_carlo import draw_run_set
from plumbfall.run_sets.result import SetColumns, status_of
from plumbfall.timings.records import Timings
from plumbfall.uncertainty.draw_pool import DrawPool

if TYPE_CHECKING:
    from numpy.typing import NDArray

from plumbfall.reduction.groups import grouped
from plumbfall.reduction.numbers import reduce_numbers, run_data
from plumbfall.reduction.reduced import Reduction

__all__ = ["Progress", "reduce_drops"]

Progress: TypeAlias = Callable[[int, int], None]
"""Told how many run sets are done, and of how many."""

OUTLIER_RULE = "grubbs-1-percent"


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
    with_notes = list(findings)
    for place, of_set in drawn.items():
        with_notes[place] += linear_not_validated(reduced.outputs, of_set, place)
    return Reduction(
        sets=reduced,
        found=tuple(with_notes),
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
    used = grouped(sets.selection.run_set, len(sets.selection.names))
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
