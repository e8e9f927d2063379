"""Reading timing files: from paths or a table in memory to drops in SI units."""

from __future__ import annotations

import os
from collections.abc import Iterable
from dataclasses import replace
from pathlib import PurePath
from typing import TypeAlias

import pandas as pd

from plumbfall.bench.records import Bench, TimingHints
from plumbfall.errors import InputError, Problem
from plumbfall.timings.cells import Grid, read_cells
from plumbfall.timings.dialect import find_delimiter, find_headings, first_lines
from plumbfall.timings.drops import FileDrops, read_drops
from plumbfall.timings.files import RawFile, decode, expand, load
from plumbfall.timings.frames import FRAME_NAME, FRAME_STEM, frame_grid, frame_sha256
from plumbfall.timings.headings import known_headings, read_heading
from plumbfall.timings.joining import join_drops
from plumbfall.timings.layout import find_layout, has_times, read_headings
from plumbfall.timings.matching import match_bench
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.records import TimingFile, Timings
from plumbfall.timings.spreadsheets import spreadsheet_grid

__all__ = ["Source", "collect", "read_timings"]

Path: TypeAlias = str | os.PathLike[str]
Source: TypeAlias = Path | pd.DataFrame | Iterable[Path | pd.DataFrame]


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
    source : path, DataFrame, or list of them
        CSV, TSV, text or XLSX files; wildcards are expanded. A DataFrame has the headings of a
        file, units included; its drops come from the file ``<table>``, lines counted from 1.
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
        hints, encoding=encoding or hints.encoding, sheet=sheet if sheet is not None else hints.sheet
    )
    general = Notices("")
    all_notices = [general]
    files: list[TimingFile] = []
    drops: list[FileDrops] = []
    declared_used: set[str] = set()
    met_headings = False
    for item in _sources(source, general):
        path = FRAME_NAME if isinstance(item, pd.DataFrame) else item
        notices = Notices(path)
        all_notices.append(notices)
        if isinstance(item, pd.DataFrame):
            grid = frame_grid(item, notices)
            file = TimingFile(path, frame_sha256(item), "", "", ".")
            stem = FRAME_STEM
        else:
            raw = load(item, notices)
            if raw is None:
                continue
            twin = next((other for other in files if other.sha256 == raw.sha256), None)
            if twin:
                notices.error(
                    f"the file is the same, byte for byte, as {twin.path}",
                    "leave one of them out; no drop can have been timed twice",
                )
            grid, file = _file_grid(raw, hints, notices)
            stem = PurePath(item).stem
        files.append(file)
        if grid is None:
            continue
        headings = read_headings(grid.headings, hints.columns, notices, declared_used)
        met_headings = True
        layout = find_layout(headings, grid.heading_line, notices)
        if layout is None:
            _note_lower_headings(grid, hints, notices)
            continue
        if not grid.lines.size:
            notices.error(
                "there are headings but no rows under them",
                "write one row for each drop",
                grid.heading_line,
            )
            continue
        read, decimal = read_drops(grid, layout, hints, path, stem, notices)
        files[-1] = replace(file, decimal=decimal.mark)
        if bench is not None:
            match_bench(read, bench, notices)
        drops.append(read)
    if met_headings:
        _note_unused_declarations(hints, declared_used, bench, general)
    table, marks = join_drops(drops, general)
    problems: list[Problem] = [problem for notices in all_notices for problem in notices.problems]
    if not len(table) and not any(problem.severity == "error" for problem in problems):
        problems.append(Problem("no timing file was named", "name one or more files"))
    repairs = [repair for notices in all_notices for repair in notices.repairs]
    return Timings(table, marks, tuple(files), tuple(repairs), tuple(problems))


def _sources(source: Source, notices: Notices) -> list[str | pd.DataFrame]:
    """Return every table and every path, wildcards expanded."""
    if isinstance(source, (str, os.PathLike)):
        return list(expand([source], notices))
    if isinstance(source, pd.DataFrame):
        return [source]
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
    heading_line = find_headings(lines, hints.header_row, notices)
    if heading_line is None:
        return None, file
    delimiter = find_delimiter(lines[heading_line - 1], hints.delimiter, heading_line, notices)
    if delimiter is None:
        return None, file
    return read_cells(data, delimiter, heading_line, notices), replace(file, delimiter=delimiter)


def _note_lower_headings(grid: Grid, hints: TimingHints, notices: Notices) -> None:
    """Point to a row further down that reads like the headings."""
    if hints.header_row is not None or not grid.columns:
        return
    for row in range(min(grid.lines.size, 50)):
        texts = [column.text(row) for column in grid.columns]
        if has_times(texts):
            line = int(grid.lines[row])
            notices.error(
                f"line {line} reads like the headings, but is not the first line",
                f"set header_row = {line} under [timings] in the bench sheet, or delete the lines"
                " above it",
                line,
            )
            return


def _note_unused_declarations(
    hints: TimingHints, used: set[str], bench: Bench | None, notices: Notices
) -> None:
    """Warn of columns that the bench sheet declares and no file has."""
    for name in hints.columns:
        if name not in used:
            notices.path = bench.path if bench is not None else ""
            notices.error(
                f"no timing file has a column headed {quoted(name)}",
                "correct the heading, or leave the line out",
                key=f"timings.columns.{name}",
                severity="warning",
            )
            notices.path = ""
    for name in hints.units:
        if not read_heading(name, 1).meaning and name not in hints.columns:
            notices.error(
                f"{quoted(name)} is not something a column can hold",
                f"use one of {', '.join(list(known_headings())[:3])}, … as the key",
                key=f"timings.units.{name}",
                severity="warning",
            )
