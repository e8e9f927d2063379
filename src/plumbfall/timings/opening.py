"""From a file's bytes to its table of cells, whatever kind of file it is."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from plumbfall.bench.records import TimingHints
from plumbfall.timings.cells import read_cells
from plumbfall.timings.dialect import (
    DELIMITERS,
    cells_of,
    declared_delimiter,
    find_delimiter,
    first_lines,
)
from plumbfall.timings.files import RawFile, decode
from plumbfall.timings.first_lines import DEEPEST, find_heading_row
from plumbfall.timings.grid import WIDEST, Grid
from plumbfall.timings.missed_headings import note_commented_headings
from plumbfall.timings.notices import Notices
from plumbfall.timings.records import TimingFile
from plumbfall.timings.sections import Above
from plumbfall.timings.spreadsheets import sheet_rows
from plumbfall.timings.turning import grid_of_rows, turned
from plumbfall.timings.uneven_rows import cut_rows
from plumbfall.timings.vocabulary import Vocabulary
from plumbfall.timings.widths import short_row

__all__ = ["Opened", "open_file"]


@dataclass(frozen=True, slots=True)
class Opened:
    """A file's table and what stands above it; no ``grid`` where an error was noted.

    ``turned_lines`` is set for a transposed sheet: the line that each column of the table was.
    """

    file: TimingFile
    grid: Grid | None = None
    above: Sequence[Above] = ()
    turned_lines: Sequence[int] | None = None


def open_file(raw: RawFile, hints: TimingHints, vocabulary: Vocabulary, notices: Notices) -> Opened:
    """Cut a file into cells; also say which dialect it was found to be written in."""
    file = TimingFile(
        raw.path, raw.sha256, "", "", hints.decimal or ".", transposed=hints.transposed
    )
    if raw.is_spreadsheet:
        rows = sheet_rows(raw, hints.sheet, notices)
        if rows is None:
            return Opened(file)
        return _from_rows(file, rows, range(1, len(rows) + 1), hints, vocabulary, notices)
    decoded = decode(raw, hints.encoding, notices)
    if decoded is None:
        return Opened(file)
    data, encoding = decoded
    file = replace(file, encoding=encoding)
    declared = declared_delimiter(hints.delimiter, notices)
    if notices.failed:
        return Opened(file)
    if hints.transposed:
        return _turned_text(file, data, declared, hints, vocabulary, notices)
    lines = first_lines(data, DEEPEST)
    marks = [declared] if declared else [*DELIMITERS]
    ways = [
        [cells_of(line, mark) for mark in marks if mark in line] or [[line]]
        if line.strip() and not line.startswith("#")
        else []
        for line in lines
    ]
    heading = find_heading_row(ways, hints.header_row, vocabulary, notices)
    if heading is None:
        return Opened(file)
    if not any(map(vocabulary.has_times, ways[heading])):
        comments = [
            (number, [cells_of(line.lstrip("# "), mark) for mark in marks if mark in line])
            for number, line in enumerate(lines[:heading], 1)
            if line.startswith("#")
        ]
        if note_commented_headings(comments, vocabulary, notices):
            return Opened(file)
    delimiter = declared or find_delimiter(lines[heading], heading + 1, vocabulary, notices)
    if delimiter is None:
        return Opened(file)
    above = [
        Above(number, line, cells_of(line, delimiter))
        for number, line in enumerate(lines[:heading], 1)
        if line.strip() and not line.startswith("#")
    ]
    grid = read_cells(data, delimiter, heading + 1, notices)
    return Opened(replace(file, delimiter=delimiter), grid, above)


def _from_rows(
    file: TimingFile,
    rows: Sequence[Sequence[str]],
    lines: Sequence[int],
    hints: TimingHints,
    vocabulary: Vocabulary,
    notices: Notices,
) -> Opened:
    """Find the headings of a table that is cut into cells already."""
    turned_lines = None
    if hints.transposed:
        turned_lines = lines
        _note_short(rows, lines, vocabulary, notices)
        rows = turned(rows)
        lines = range(1, len(rows) + 1)
    ways = [[row] if any(cell.strip() for cell in row) else [] for row in rows[:DEEPEST]]
    heading = find_heading_row(ways, hints.header_row, vocabulary, notices)
    if heading is None:
        return Opened(file)
    grid, above = grid_of_rows(rows, lines, heading, file.delimiter)
    return Opened(file, grid, above, turned_lines)


def _note_short(
    rows: Sequence[Sequence[str]], lines: Sequence[int], vocabulary: Vocabulary, notices: Notices
) -> None:
    """List the rows of a transposed sheet that end before others do, titles apart."""
    width = max(map(len, rows), default=0)
    for row, line in zip(rows, lines, strict=True):
        if 0 < len(row) < width and (len(row) > 1 or vocabulary.understood(row)):
            notices.repair(short_row(len(row), width), line)


def _turned_text(
    file: TimingFile,
    data: bytes,
    declared: str | None,
    hints: TimingHints,
    vocabulary: Vocabulary,
    notices: Notices,
) -> Opened:
    """Cut all of a text whose headings stand one below the other."""
    text = data.decode("utf-8")
    best: tuple[int, str, Notices, tuple[list[list[str]], list[int]] | None] | None = None
    for mark in [declared] if declared else [mark for mark in DELIMITERS if mark in text]:
        tried = Notices(notices.path)
        cut = cut_rows(text, mark, tried)
        score = 0
        if cut and len(cut[0]) <= WIDEST:
            score = max(map(vocabulary.understood, turned(cut[0])[:DEEPEST]), default=0)
        if best is None or score > best[0]:
            best = (score, mark, tried, cut)
    if best is None:
        notices.error(
            "the file has one column only",
            "a transposed file has one column for each drop; leave out transposed if a drop is a"
            " row",
            key="timings.transposed",
        )
        return Opened(file)
    _, delimiter, trouble, cut = best
    notices.extend(trouble)
    if cut is None:
        return Opened(file)
    rows, starts = cut
    if len(rows) > WIDEST:
        notices.error(
            f"the file has {len(rows)} rows of headings",
            f"a transposed file has at most {WIDEST}; leave out transposed if a drop is a row",
            key="timings.transposed",
        )
        return Opened(file)
    file = replace(file, delimiter=delimiter)
    return _from_rows(file, rows, starts, hints, vocabulary, notices)
