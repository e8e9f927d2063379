"""Reading timing files: from paths or a table in memory to drops in SI units."""

from __future__ import annotations

import os
from collections.abc import Iterable, Mapping
from dataclasses import replace
from typing import Any, TypeAlias

import pandas as pd

from plumbfall.bench.records import Bench, TimingHints
from plumbfall.errors import InputError, Problem
from plumbfall.timings.files import expand
from plumbfall.timings.headings import read_heading
from plumbfall.timings.joining import join_drops
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.reading import Reading
from plumbfall.timings.records import Timings
from plumbfall.timings.vocabulary import Vocabulary

__all__ = ["Source", "collect", "read_timings"]

Path: TypeAlias = str | os.PathLike[str]
Source: TypeAlias = Path | pd.DataFrame | Mapping[str, Any] | Iterable[Path | pd.DataFrame]


def read_timings(
    source: Source,
    bench: Bench | None = None,
    *,
    encoding: str | None = None,
    sheet: str | None = None,
) -> Timings:
    """Read timed drops from files or from a table in memory.

    Parameters
    ----------
    source : path, DataFrame, dict, or list of paths and DataFrames
        CSV, TSV, text or XLSX files; wildcards are expanded. A DataFrame, or a dict of columns,
        has the headings of a file, units included; its drops come from the file ``<table>``,
        lines counted from 1.
    bench : Bench, optional
        Names of balls, tubes, liquids and instruments, and the tubes' marks, are checked against
        it, and its ``timings`` entry helps to read the files.
    encoding : str, optional
        Encoding of the files; otherwise ``bench.timings.encoding``, a byte order mark, or UTF-8.
    sheet : str, optional
        Sheet of a workbook; otherwise ``bench.timings.sheet`` or the first.

    Returns
    -------
    Timings
        Every drop that was read, used or not; what was repaired is listed in ``repairs``, and
        ``problems`` holds warnings only.

    Raises
    ------
    InputError
        With everything that is wrong with the files, each with its file, line and column.
    """
    timings = collect(source, bench, encoding=encoding, sheet=sheet)
    errors = [problem for problem in timings.problems if problem.severity == "error"]
    if errors:
        raise InputError(errors)
    return timings


def collect(
    source: Source,
    bench: Bench | None = None,
    *,
    encoding: str | None = None,
    sheet: str | None = None,
) -> Timings:
    """Read as :func:`read_timings` does, but list all problems instead of raising them.

    Rows whose time cannot be read are ``excluded`` with a note that begins with ``refused``.
    """
    hints = bench.timings if bench is not None else TimingHints()
    hints = replace(
        hints,
        encoding=encoding or hints.encoding,
        sheet=sheet if sheet is not None else hints.sheet,
    )
    general = Notices("")
    vocabulary = Vocabulary(hints.columns, bench.balls if bench is not None else ())
    vocabulary.note_meanings(general)
    reading = Reading(bench, hints, vocabulary)
    for item in _sources(source, general):
        reading.read(item)
    _note_unused_declarations(reading, general)
    table, marks = join_drops(reading.drops, general)
    notices = [general, *reading.notices]
    problems: list[Problem] = [problem for one in notices for problem in one.problems]
    if not len(table) and not any(problem.severity == "error" for problem in problems):
        problems.append(Problem("no timing file was named", "name one or more files"))
    repairs = [repair for one in notices for repair in one.repairs]
    offers: dict[str, str] = {}
    for one in notices:
        offers = one.offers | offers
    lines = tuple(f"{key} = {value}" for key, value in offers.items())
    return Timings(table, marks, tuple(reading.files), tuple(repairs), tuple(problems), lines)


def _sources(source: Source, notices: Notices) -> list[str | pd.DataFrame]:
    """Return every table and every path, wildcards expanded."""
    if isinstance(source, (str, os.PathLike)):
        return list(expand([source], notices))
    if isinstance(source, Mapping):
        source = pd.DataFrame(source)
    if isinstance(source, pd.DataFrame):
        return [source]
    if not isinstance(source, Iterable):
        raise TypeError(f"a source of timings is a path or a DataFrame, not {source!r:.40}")
    found: list[str | pd.DataFrame] = []
    paths: list[Path] = []
    for item in source:
        if isinstance(item, pd.DataFrame):
            found.append(item)
        elif isinstance(item, (str, os.PathLike)):
            paths.append(item)
        else:
            raise TypeError(
                f"a source of timings is a path or a DataFrame, not {type(item).__name__}"
            )
    return [*expand(paths, notices), *found]


def _note_unused_declarations(reading: Reading, notices: Notices) -> None:
    """Warn of columns that the bench sheet declares and no file has."""
    path = reading.bench.path if reading.bench is not None else ""
    for name in reading.hints.columns:
        if name not in reading.vocabulary.used and reading.drops:
            notices.error(
                f"no timing file has a column headed {quoted(name)}",
                "correct the heading, or leave the line out",
                key=f"timings.columns.{name}",
                severity="warning",
                path=path,
            )
    for name in reading.hints.units:
        if not read_heading(name, 1).meaning and name not in reading.hints.columns:
            notices.error(
                f"{quoted(name)} is not a column whose unit can be declared",
                "write time or temperature, or the heading itself",
                key=f"timings.units.{name}",
                severity="warning",
                path=path,
            )
