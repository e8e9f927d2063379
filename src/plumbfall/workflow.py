"""From whatever names the inputs (paths, dicts, tables, records) to a report."""

from __future__ import annotations

import os
import warnings
from collections.abc import Iterable, Mapping
from pathlib import Path
from typing import Any, TypeAlias

import pandas as pd

from plumbfall.bench.reader import read_bench
from plumbfall.bench.records import Bench
from plumbfall.errors import InputError, PlumbfallWarning
from plumbfall.reduction import reduce_drops
from plumbfall.report.report import Report
from plumbfall.timings.reader import collect, read_timings
from plumbfall.timings.records import Timings

__all__ = ["BenchSource", "TimingSource", "find_bench", "inspect_inputs", "reduce"]

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
    draws: int | None = None,
    seed: int = 0,
    coverage: float | None = None,
    encoding: str | None = None,
) -> Report:
    """Reduce timed drops to viscosities with confidence bounds.

    Parameters
    ----------
    timings : path, list of paths, DataFrame, dict of columns or Timings
        Timed drops, one row a drop.
    bench : path, dict or Bench, optional
        The bench sheet; ``bench.toml`` beside the timing file where not given.
    draws : int, optional
        Monte Carlo draws. This version propagates linearly only, so that any number but 0 is
        answered with a warning.
    seed : int
        Recorded in the report.
    coverage : float, optional
        Coverage probability of the bounds; that of the bench sheet (default 0.95) where not given.
    encoding : str, optional
        Encoding of the timing files where they are not UTF-8.

    Returns
    -------
    Report
        Viscosity with bounds of every run set, budget, findings, corrections.

    Raises
    ------
    InputError
        With everything wrong with the inputs, each with its place and a remedy.
    """
    if not isinstance(bench, Bench):
        bench = read_bench(find_bench(timings) if bench is None else bench)
    if not isinstance(timings, Timings):
        timings = read_timings(timings, bench, encoding=encoding)
    if draws:
        warnings.warn(
            "this version has no Monte Carlo: the bounds are linear (GUM)",
            PlumbfallWarning,
            stacklevel=2,
        )
    inputs = [(file.path, file.sha256) for file in timings.files]
    if bench.path:
        inputs.append((bench.path, bench.sha256))
    return Report(reduce_drops(timings, bench, coverage=coverage, seed=seed, inputs=tuple(inputs)))


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
