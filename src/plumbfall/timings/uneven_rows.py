"""Cells of any delimited file: quotes, line breaks within them, rows of uneven width."""

from __future__ import annotations

import csv
from collections.abc import Iterator

import numpy as np

from plumbfall.timings.columns import TextColumn
from plumbfall.timings.comments import note_comments
from plumbfall.timings.grid import WIDEST, Grid
from plumbfall.timings.notices import Notices, quoted

__all__ = ["cut_any"]


class _Lines:
    """Hands a file's lines to the csv reader, leaves out comments, and counts."""

    def __init__(self, text: str, first: int) -> None:
        self._lines = text.split("\n")
        if self._lines and not self._lines[-1]:
            self._lines.pop()
        self._next = 0
        self._first = first
        self.row_line = first
        self.between_rows = True
        self.comments: list[tuple[int, str]] = []

    @property
    def line(self) -> int:
        """The line handed out last."""
        return self._first + self._next - 1

    def __iter__(self) -> Iterator[str]:
        while self._next < len(self._lines):
            text = self._lines[self._next]
            self._next += 1
            if self.between_rows:
                if text.startswith("#"):
                    self.comments.append((self.line, text))
                    continue
                self.row_line = self.line
                self.between_rows = False
            yield text + "\n"


def cut_any(text: str, delimiter: str, heading_line: int, notices: Notices) -> Grid | None:
    """Cut any file, row by row, minding quotes, line breaks within them and uneven rows."""
    source = _Lines(text, heading_line)
    reader = csv.reader(iter(source), delimiter=delimiter, strict=True, skipinitialspace=True)
    rows: list[list[str]] = []
    lines: list[int] = []
    width = 0
    while True:
        source.between_rows = True
        try:
            cells = next(reader)
        except StopIteration:
            break
        except csv.Error as fault:
            _note_quote(str(fault), source, notices)
            return None
        if not width:
            width = len(cells)
            if width > WIDEST:
                notices.error(
                    f"the headings have {width} cells",
                    f"a timing file has at most {WIDEST} columns",
                    heading_line,
                )
                return None
        if source.line > source.row_line:
            _note_breaks(cells, source.row_line, source.line, delimiter, width, notices)
        if not any(map(str.strip, cells)) and rows:
            if len(cells) > 1:
                notices.repair("a row of empty cells is left out", source.row_line)
            continue
        if len(cells) != width:
            cells = _evened(cells, width, delimiter, source.row_line, notices)
        rows.append(cells)
        lines.append(source.row_line)
    note_comments(iter(source.comments), delimiter, width, notices)
    if not rows:
        return None
    columns = tuple(TextColumn(cells) for cells in zip(*rows[1:], strict=True))
    if not columns:
        columns = tuple(TextColumn(()) for _ in range(width))
    headings = tuple(cell.strip() for cell in rows[0])
    return Grid(headings, heading_line, np.array(lines[1:], dtype=np.int64), columns, delimiter)


def _note_quote(fault: str, source: _Lines, notices: Notices) -> None:
    if "expected after" in fault:
        notices.error(
            "a quoted cell goes on after its closing quote",
            'put quotes round the whole cell, and write a quote within it twice ("")',
            source.line,
        )
    else:
        notices.error(
            "a quoted cell that opens in this row is never closed",
            'close the quote, or write a quote that belongs to the text twice ("")',
            source.row_line,
        )


def _note_breaks(
    cells: list[str], first: int, last: int, delimiter: str, width: int, notices: Notices
) -> None:
    """List line breaks within quotes; refuse those that seem to have swallowed rows."""
    for number, cell in enumerate(cells, 1):
        inner = cell.split("\n")[1:-1]
        if width > 1 and any(line.count(delimiter) >= width - 1 for line in inner):
            notices.error(
                f"a quoted cell runs from line {first} to line {last} and holds whole rows",
                "look for a quote that is not closed",
                first,
                number,
            )
        elif "\n" in cell:
            notices.repair(f"a quoted cell runs on to line {last}", first, number)


def _evened(cells: list[str], width: int, delimiter: str, line: int, notices: Notices) -> list[str]:
    """Bring a row to the headings' width: too few cells are missing ones, too many a fault."""
    if len(cells) < width:
        notices.repair(
            f"the row has {len(cells)} of {width} cells; the others are taken as empty", line
        )
        return cells + [""] * (width - len(cells))
    extra = next((n for n, cell in enumerate(cells[width:], width) if cell.strip()), None)
    if extra is None:
        notices.repair(f"{len(cells) - width} empty cells beyond the headings", line, width + 1)
        return cells[:width]
    if delimiter == ",":
        remedy = (
            "quote a cell that holds a comma; if the comma is a decimal mark, write points, or"
            " save the file with semicolons between its cells"
        )
    else:
        remedy = f"quote a cell that holds {quoted(delimiter)}, or give its column a heading"
    notices.error(
        f"the row has {len(cells)} cells under {width} headings;"
        f" the first without a heading is {quoted(cells[extra])}",
        remedy,
        line,
        extra + 1,
    )
    return cells[:width]
