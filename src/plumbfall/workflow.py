"""From whatever names the inputs (paths, dicts, tables, records) to a report."""

from __future__ import annotations

import datetime as dt
import os
from collections.abc import Iterable, Mapping, Sequence
from numbers import Integral
from pathlib import Path
from typing import TYPE_CHECKING, Any, TypeAlias

import pandas as pd

from plumbfall.bench.reader import read_bench
from plumbfall.bench.records import Bench
from plumbfall.errors import InputError
from plumbfall.reduction.drops import Progress, reduce_drops
from plumbfall.report.report import Report
from plumbfall.timings.reader import collect, read_timings
from plumbfall.timings.records import Timings
from plumbfall.uncertainty.monte_carlo import DRAWS

if TYPE_CHECKING:
    from plumbfall.report.calibrate_result import CalibrationReport

__all__ = [
    "BenchSource",
    "TimingSource",
    "calibrate",
    "find_bench",
    "inspect_inputs",
    "read_inputs",
    "reduce",
]

FilePath: TypeAlias = str | os.PathLike[str]
BenchSource: TypeAlias = FilePath | Mapping[str, Any] | Bench
TimingSource: TypeAlias = (
    FilePath | pd.DataFrame | Mapping[str, Any] | Timings | Iterable[FilePath | pd.DataFrame]
)

DEFAULT_BENCH = "bench.toml"


def find_bench(timings: object) -> Path:
    """Return the ``bench.toml`` beside the (first) timing file.

    Raises
    ------
    InputError
        Where there is none, or the timings are not a file.
    """
    if isinstance(timings, (list, tuple)) and timings:
        timings = timings[0]
    if isinstance(timings, (str, os.PathLike)):
        beside = Path(timings).parent / DEFAULT_BENCH
        if beside.is_file():
            return beside
        missing = f"there is no {DEFAULT_BENCH} beside {os.fspath(timings)}"
    else:
        missing = "no bench sheet is given"
    raise InputError(missing, remedy="name the bench sheet (--bench FILE, or the second argument)")


def reduce(
    timings: TimingSource,
    bench: BenchSource | None = None,
    *,
    draws: int | str = DRAWS,
    seed: int = 0,
    coverage: float | None = None,
    encoding: str | None = None,
    progress: Progress | None = None,
    date: dt.date | str | None = None,
) -> Report:
    """Reduce timed drops to viscosities with confidence bounds.

    Parameters
    ----------
    timings : path, list of paths, DataFrame, dict of columns or Timings
        Timed drops, one row a drop.
    bench : path, dict or Bench, optional
        The bench sheet; ``bench.toml`` beside the timing file where not given.
    draws : int or "auto"
        Monte Carlo draws of every run set, or as many as it takes to validate the linear bounds;
        0 for none. Where the linear bounds are not validated those of Monte Carlo are quoted.
    seed : int
        Seed of the draws, not below zero; recorded in the report.
    coverage : float, optional
        Coverage probability of the bounds; that of the bench sheet (default 0.95) where not given.
    encoding : str, optional
        Encoding of the timing files where they are not UTF-8.
    progress : callable, optional
        Called with the run sets drawn so far and how many there are.
    date : date or str, optional
        Day that the report bears, such as ``2026-03-02``; it is never taken from the clock.

    Returns
    -------
    Report
        Viscosity with bounds of every run set, budget, findings, corrections.

    Raises
    ------
    InputError
        With everything wrong with the inputs, each with its place and a remedy.
    """
    timings, bench, inputs = read_inputs(timings, bench, encoding=encoding)
    return Report(
        reduce_drops(
            timings,
            bench,
            coverage=coverage,
            draws=_checked_draws(draws),
            seed=seed,
            inputs=inputs,
            progress=progress,
        ),
        date=_checked_date(date),
    )


def read_inputs(
    timings: TimingSource, bench: BenchSource | None = None, *, encoding: str | None = None
) -> tuple[Timings, Bench, tuple[tuple[str, str], ...]]:
    """Read timings and bench sheet, and say which files they are.

    Returns
    -------
    Timings, Bench, tuple of (path, sha256)
        What was read; the files with their hashes.

    Raises
    ------
    InputError
        With everything wrong with the inputs, each with its place and a remedy.
    """
    if not isinstance(bench, Bench):
        bench = read_bench(find_bench(timings) if bench is None else bench)
    if not isinstance(timings, Timings):
        timings = read_timings(timings, bench, encoding=encoding)
    inputs = [(file.path, file.sha256) for file in timings.files]
    if bench.path:
        inputs.append((bench.path, bench.sha256))
    return timings, bench, tuple(inputs)


def calibrate(
    timings: TimingSource,
    bench: BenchSource | None = None,
    *,
    reference: str | Sequence[str],
    date: dt.date | str | None = None,
    encoding: str | None = None,
) -> CalibrationReport:
    """Find the constant of each ball and tube from timings in certified liquids.

    Parameters
    ----------
    timings : path, list of paths, DataFrame, dict of columns or Timings
        Timed drops in certified liquids, one row a drop.
    bench : path, dict or Bench, optional
        The bench sheet; ``bench.toml`` beside the timing file where not given.
    reference : str or sequence of str
        Names of the certified liquids, each a ``[reference.NAME]`` of the bench sheet.
    date : date, optional
        Of the calibration; that of the last drop where the timings say when it started.
    encoding : str, optional
        Encoding of the timing files where they are not UTF-8.

    Returns
    -------
    CalibrationReport
        Constants with uncertainty, sensitivities, domain, and tests of their constancy.

    Raises
    ------
    InputError
        With everything wrong with the inputs, each with its place and a remedy.
    """
    from plumbfall.calibration.constant import calibrate_tubes
    from plumbfall.report.calibrate_result import CalibrationReport

    names = (reference,) if isinstance(reference, str) else tuple(reference)
    timings, bench, inputs = read_inputs(timings, bench, encoding=encoding)
    return CalibrationReport(
        calibrate_tubes(timings, bench, names, date=_checked_date(date), inputs=inputs)
    )


def _checked_date(date: dt.date | str | None) -> dt.date | None:
    if date is None:
        return None
    try:
        return dt.date.fromisoformat(str(date))
    except ValueError:
        raise InputError(
            f"{date!r} is no day", key="date", remedy='write it as "2026-03-02"'
        ) from None


def _checked_draws(draws: int | str) -> int | str:
    if draws == "auto":
        return draws
    if isinstance(draws, bool) or not isinstance(draws, Integral) or draws < 0:
        raise InputError(
            f"draws = {draws!r} is no number of draws",
            key="draws",
            remedy='give 200_000, or "auto", or 0 for none',
        )
    return int(draws)


def inspect_inputs(
    timings: TimingSource | None,
    bench: BenchSource | None = None,
    *,
    encoding: str | None = None,
) -> tuple[Timings, Bench | None]:
    """Read the inputs without computing anything; problems of the timings are listed, not raised.

    Parameters
    ----------
    timings : path, list of paths, DataFrame or Timings, optional
        Timed drops.
    bench : path, dict or Bench, optional
        The bench sheet; ``bench.toml`` beside the timing file if there is one.
    encoding : str, optional
        Encoding of the timing files where they are not UTF-8.

    Returns
    -------
    Timings, Bench or None
        What was understood; no rows where no timings were given.

    Raises
    ------
    InputError
        Where neither is given, or the bench sheet itself cannot be read.
    """
    if isinstance(timings, (list, tuple)) and not timings:
        timings = None
    if timings is None and bench is None:
        raise InputError("nothing to inspect", remedy="name a timing file, or --bench FILE")
    if bench is None:
        try:
            bench = find_bench(timings)
        except InputError:
            bench = None  # a timing file can be looked at without one
    if bench is not None and not isinstance(bench, Bench):
        bench = read_bench(bench)
    if timings is None:
        return Timings.empty(), bench
    if not isinstance(timings, Timings):
        timings = collect(timings, bench, encoding=encoding)
    return timings, bench
