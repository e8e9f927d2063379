"""Cells of any delimited file: quotes, line breaks within them, rows of any width."""

from __future__ import annotations

import csv
import io
from collections.abc import Iterator
from itertools import zip_longest

import numpy as np

from plumbfall.timings.columns import TextColumn
from plumbfall.timings.comments import note_comments
from plumbfall.timings.grid import WIDEST, Grid
from plumbfall.timings.line_breaks import note_breaks
from plumbfall.timings.notices import Notices

__all__ = ["cut_any", "cut_rows"]

_BATCH = 250
"""Rows moved at a time: few enough that the collector of garbage never looks at them twice."""


class _Rows:
    """Hands a file's rows over as the csv reader cuts them, with the line each begins in.

    Comments are left out, and gathered; ``line`` is the latest line, ``row_line`` that in which
    the row begins that the reader is in.
    """

    def __init__(self, text: str, delimiter: str, first: int) -> None:
        self._first = first
        self._between = True
        self._commented = text.startswith("#") or "\n#" in text
        lines = self._uncommented(text) if self._commented else io.StringIO(text)
        self._reader = csv.reader(lines, delimiter=delimiter, strict=True, skipinitialspace=True)
        self._left_out = 0
        self.row_line = first
        self.comments: list[tuple[int, str]] = []

    @property
    def line(self) -> int:
        """The latest line that was read."""
        return self._first - 1 + self._reader.line_num + self._left_out

    def _uncommented(self, text: str) -> Iterator[str]:
        for line in io.StringIO(text):
            if self._between and line.startswith("#"):
                self._left_out += 1
                self.comments.append((self.line, line.rstrip("\n")))
                continue
            if self._between:
                self.row_line = self.line + 1
                self._between = False
            yield line

    def __iter__(self) -> Iterator[list[str]]:
        reader = self._reader
        if not self._commented:
            for cells in reader:
                yield cells
                self.row_line = self._first + reader.line_num
            return
        for cells in reader:
            self._between = True
            yield cells


def cut_any(text: str, delimiter: str, heading_line: int, notices: Notices) -> Grid | None:
    """Cut any file, row by row, minding quotes, line breaks within them and uneven rows.

    Parameters
    ----------
    text : str
        The file's text from the line of the headings on.
    delimiter : str
        One character.
    heading_line : int
        Line of the headings, from 1.
    notices : Notices
        Takes what is wrong and what was put right.

    Returns
    -------
    Grid or None
        ``None`` where the cells cannot be told apart; the notices then hold an error.
    """
    source = _Rows(text, delimiter, heading_line)
    headings: list[str] = []
    columns: list[list[str]] = []
    rows: list[list[str]] = []
    lines: list[int] = []
    widths: list[int] = []
    known: dict[str, str] = {}
    try:
        for cells in source:
            first = source.row_line
            if not headings:
                headings = [cell.strip() for cell in cells]
                if len(headings) > WIDEST:
                    _note_width(len(headings), "headings have", heading_line, notices)
                    return None
                columns = [[] for _ in headings]
                continue
            if len(cells) > WIDEST:
                _note_width(len(cells), "row has", first, notices)
                return None
            if source.line > first:
                note_breaks(cells, first, source.line, delimiter, len(headings), notices)
            if not cells or (not cells[0] and not any(map(str.strip, cells))):
                if len(cells) > 1:
                    notices.repair("a row of empty cells is left out", first)
                continue
            widths.append(len(cells))
            rows.append(cells)
            lines.append(first)
            if len(rows) == _BATCH:
                _move(rows, columns, known)
    except csv.Error as fault:
        _note_quote(str(fault), source, notices)
        return None
    _move(rows, columns, known)
    note_comments(source.comments, delimiter, len(headings), notices)
    return Grid(
        tuple(headings),
        heading_line,
        np.array(lines, dtype=np.int64),
        tuple(TextColumn(cells) for cells in columns),
        delimiter,
        widths=np.array(widths, dtype=np.int64),
    )


def cut_rows(
    text: str, delimiter: str, notices: Notices
) -> tuple[list[list[str]], list[int]] | None:
    """Cut all rows of a text, for sheets that are not read from their headings down.

    Returns the rows and the line of each; ``None``, and an error noted, where the cells cannot be
    told apart.
    """
    source = _Rows(text, delimiter, 1)
    rows: list[list[str]] = []
    lines: list[int] = []
    try:
        for cells in source:
            if cells:
                rows.append(cells)
                lines.append(source.row_line)
    except csv.Error as fault:
        _note_quote(str(fault), source, notices)
        return None
    return rows, lines


def _move(rows: list[list[str]], columns: list[list[str]], known: dict[str, str]) -> None:
    """Move rows into columns, equal texts as one object; memory is what takes time here."""
    done = len(columns[0]) if columns else 0
    width = max(map(len, rows), default=0)
    columns.extend([""] * done for _ in range(width - len(columns)))
    for place, cells in enumerate(zip_longest(*rows, fillvalue="")):
        columns[place].extend(map(known.setdefault, cells, cells))
    for column in columns[width:]:
        column.extend([""] * len(rows))
    rows.clear()


def _note_width(width: int, what: str, line: int, notices: Notices) -> None:
    notices.error(f"the {what} {width} cells", f"a timing file has at most {WIDEST} columns", line)


def _note_quote(fault: str, source: _Rows, notices: Notices) -> None:
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
