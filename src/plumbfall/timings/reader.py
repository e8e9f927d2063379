"""Reading timing files: from paths or a table in memory to drops in SI units."""

from __future__ import annotations

import os
from collections.abc import Iterable, Mapping
from dataclasses import replace
from pathlib import PurePath
from typing import Any, TypeAlias

import pandas as pd

from plumbfall.bench.records import Bench, TimingHints
from plumbfall.errors import InputError, Problem
from plumbfall.timings.cells import read_cells
from plumbfall.timings.dialect import (
    find_delimiter,
    find_headings,
    first_lines,
    note_lower_headings,
)
from plumbfall.timings.drops import FileDrops, read_drops
from plumbfall.timings.files import RawFile, decode, expand, load
from plumbfall.timings.frames import FRAME_NAME, FRAME_STEM, frame_grid, frame_sha256
from plumbfall.timings.grid import Grid
from plumbfall.timings.headings import has_times, read_heading
from plumbfall.timings.joining import join_drops
from plumbfall.timings.layout import columns_read, find_layout, read_headings
from plumbfall.timings.matching import match_bench
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.records import TimingFile, Timings
from plumbfall.timings.spreadsheets import spreadsheet_grid

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
    reading = _Reading(bench, hints)
    for item in _sources(source, general):
        reading.read(item)
    _note_unused_declarations(reading, general)
    table, marks = join_drops(reading.drops, general)
    notices = [general, *reading.notices]
    problems: list[Problem] = [problem for one in notices for problem in one.problems]
    if not len(table) and not any(problem.severity == "error" for problem in problems):
        problems.append(Problem("no timing file was named", "name one or more files"))
    repairs = [repair for one in notices for repair in one.repairs]
    return Timings(table, marks, tuple(reading.files), tuple(repairs), tuple(problems))


class _Reading:
    """Reads one file or table after another and keeps what comes of each."""

    def __init__(self, bench: Bench | None, hints: TimingHints) -> None:
        self.bench = bench
        self.hints = hints
        self.files: list[TimingFile] = []
        self.drops: list[FileDrops] = []
        self.notices: list[Notices] = []
        self.declared_used: set[str] = set()

    def read(self, item: str | pd.DataFrame) -> None:
        """Read one file or table; what is wrong with it goes to its notices."""
        grid: Grid | None
        notices = Notices(FRAME_NAME if isinstance(item, pd.DataFrame) else item)
        self.notices.append(notices)
        if isinstance(item, pd.DataFrame):
            stem = FRAME_STEM
            file = TimingFile(FRAME_NAME, frame_sha256(item), "", "", ".")
            grid = frame_grid(item, notices)
        else:
            stem = PurePath(item).stem
            raw = load(item, notices)
            if raw is None:
                return
            self._mind_twin(raw, notices)
            grid, file = _file_grid(raw, self.hints, notices)
        self.files.append(file)
        if grid is None:
            return
        headings = read_headings(grid.headings, self.hints.columns, notices, self.declared_used)
        layout = find_layout(headings, grid.heading_line, notices)
        if layout is None:
            _note_lower_headings(grid, self.hints, notices)
            return
        if not grid.lines.size:
            notices.error(
                "there are headings but no rows under them",
                "write one row for each drop",
                grid.heading_line,
            )
            return
        drops, decimal = read_drops(grid, layout, self.hints, notices.path, stem, notices)
        self.files[-1] = replace(
            file,
            decimal=decimal.mark,
            heading_line=grid.heading_line,
            columns=columns_read(headings, layout, self.hints.units),
        )
        if self.bench is not None:
            match_bench(drops, self.bench, notices)
        self.drops.append(drops)

    def _mind_twin(self, raw: RawFile, notices: Notices) -> None:
        twin = next((other for other in self.files if other.sha256 == raw.sha256), None)
        if twin:
            notices.error(
                f"the file is the same, byte for byte, as {twin.path}",
                "leave one of them out; a drop counts once",
            )


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


def _file_grid(
    raw: RawFile, hints: TimingHints, notices: Notices
) -> tuple[Grid | None, TimingFile]:
    """Cut a file into cells; also say which dialect it was found to be written in."""
    file = TimingFile(raw.path, raw.sha256, "", "", hints.decimal or ".")
    if raw.is_spreadsheet:
        return spreadsheet_grid(raw, hints.sheet, hints.header_row, notices), file
    decoded = decode(raw, hints.encoding, notices)
    if decoded is None:
        return None, file
    data, encoding = decoded
    file = replace(file, encoding=encoding)
    lines = first_lines(data)
    heading_line = find_headings(lines, hints.header_row, notices, known=not hints.columns)
    if heading_line is None:
        return None, file
    delimiter = find_delimiter(lines[heading_line - 1], hints.delimiter, heading_line, notices)
    if delimiter is None:
        return None, file
    return read_cells(data, delimiter, heading_line, notices), replace(file, delimiter=delimiter)


def _note_lower_headings(grid: Grid, hints: TimingHints, notices: Notices) -> None:
    """Point to a row of a sheet that reads like the headings."""
    if hints.header_row is not None or grid.heading_line is None:
        return
    for row in range(min(grid.lines.size, 50)):
        if has_times(column.text(row) for column in grid.columns):
            note_lower_headings(grid.heading_line, int(grid.lines[row]), notices)
            return


def _note_unused_declarations(reading: _Reading, notices: Notices) -> None:
    """Warn of columns that the bench sheet declares and no file has."""
    path = reading.bench.path if reading.bench is not None else ""
    for name in reading.hints.columns:
        if name not in reading.declared_used and reading.drops:
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
