"""Cells of any delimited file: quotes, line breaks within them, rows of any width."""

from __future__ import annotations

import csv
from collections.abc import Iterator
from itertools import zip_longest

import numpy as np

from plumbfall.timings.clocks import read_clock
from plumbfall.timings.columns import TextColumn
from plumbfall.timings.comments import note_comments
from plumbfall.timings.grid import WIDEST, Grid
from plumbfall.timings.notices import Notices
from plumbfall.timings.values import looks_like_number

__all__ = ["cut_any", "cut_rows"]

_BATCH = 4096


class _Lines:
    """Hands a file's lines to the csv reader, leaves out comments, and counts.

    ``row_line`` is the line in which the row begins that the reader is in, ``line`` the latest.
    The reader's user sets ``between_rows`` after each row: only there can a comment stand.
    """

    def __init__(self, text: str, first: int) -> None:
        self._lines = text.split("\n")
        if self._lines and not self._lines[-1]:
            self._lines.pop()
        self._first = first
        self.line = self.row_line = first
        self.between_rows = True
        self.comments: list[tuple[int, str]] = []

    def __iter__(self) -> Iterator[str]:
        for line, text in enumerate(self._lines, self._first):
            self.line = line
            if self.between_rows:
                if text.startswith("#"):
                    self.comments.append((line, text))
                    continue
                self.row_line = line
                self.between_rows = False
            yield text + "\n"


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
    source = _Lines(text, heading_line)
    reader = csv.reader(iter(source), delimiter=delimiter, strict=True, skipinitialspace=True)
    headings: list[str] = []
    columns: list[list[str]] = []
    rows: list[list[str]] = []
    lines: list[int] = []
    widths: list[int] = []
    known: dict[str, str] = {}
    try:
        for cells in reader:
            first, last = source.row_line, source.line
            source.between_rows = True
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
            if last > first:
                _note_breaks(cells, first, last, delimiter, len(headings), notices)
            if not any(map(str.strip, cells)):
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
    source = _Lines(text, 1)
    rows: list[list[str]] = []
    lines: list[int] = []
    try:
        for cells in csv.reader(
            iter(source), delimiter=delimiter, strict=True, skipinitialspace=True
        ):
            source.between_rows = True
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
        if any(_like_row(inner, delimiter, width) for inner in cell.split("\n")[1:]):
            notices.error(
                f"a quoted cell runs from line {first} to line {last} and holds whole rows",
                "look for a quote that is not closed",
                first,
                number,
            )
        elif "\n" in cell:
            notices.repair(f"a quoted cell runs on to line {last}", first, number)


def _like_row(line: str, delimiter: str, width: int) -> bool:
    cells = line.split(delimiter)
    return len(cells) >= width > 1 and any(
        looks_like_number(cell.strip()) or read_clock(cell.strip()) is not None for cell in cells
    )
