"""From a file's text to a grid of cells, each with the line and column it stands in."""

from __future__ import annotations

import csv
from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from plumbfall.timings.columns import PADDING, Column, Integers, SliceColumn, TextColumn
from plumbfall.timings.notices import Notices, quoted

__all__ = ["LONGEST_LINE", "Grid", "read_cells"]

LONGEST_LINE = 100_000
"""Bytes in the longest line that is read; what is longer is no timing file."""
_WIDEST = 1000


@dataclass(frozen=True, slots=True)
class Grid:
    """A table of cells under headings.

    ``lines`` has the line of each row; ``decimal`` is set where the numbers came as numbers, so
    that their decimal mark is known; ``delimiter`` is empty where there is none.
    """

    headings: tuple[str, ...]
    heading_line: int | None
    lines: Integers
    columns: tuple[Column, ...]
    delimiter: str = ""
    decimal: str = ""


def read_cells(
    data: bytes, delimiter: str, heading_line: int, notices: Notices
) -> Grid | None:
    """Cut a file's text into cells.

    Parameters
    ----------
    data : bytes
        UTF-8 text whose lines end in a line feed.
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
    start = 0
    for _ in range(heading_line - 1):
        start = data.index(b"\n", start) + 1
    end = data.find(b"\n", start)
    body = end + 1 if end >= 0 else len(data)
    if b'"' not in data[start:]:
        heading = data[start : end if end >= 0 else len(data)].decode("utf-8")
        headings = [cell.strip() for cell in heading.split(delimiter)]
        if len(headings) <= _WIDEST:
            grid = _sliced(data[body:], delimiter, tuple(headings), heading_line, notices)
            if grid is not None:
                return grid
    return _quoted(data[start:].decode("utf-8"), delimiter, heading_line, notices)


def _sliced(
    body: bytes, delimiter: str, headings: tuple[str, ...], heading_line: int, notices: Notices
) -> Grid | None:
    """Cut a file without quotes whose rows are all as wide as the headings; else ``None``."""
    width = len(headings)
    if body and not body.endswith(b"\n"):
        body += b"\n"
    size = len(body)
    buffer = np.frombuffer(body + bytes(PADDING), dtype=np.uint8)
    ends = np.flatnonzero(buffer[:size] == 10)
    begins = np.concatenate(([0], ends[:-1] + 1)) if ends.size else ends
    comment = buffer[begins] == ord("#")
    dropped = comment | (begins == ends)
    lines = heading_line + 1 + np.flatnonzero(~dropped)
    if dropped.any():
        kept = np.repeat(~dropped, ends - begins + 1)
        buffer = np.concatenate((buffer[:size][kept], np.zeros(PADDING, dtype=np.uint8)))
        size = buffer.size - PADDING
    cut = (buffer == ord(delimiter)) | (buffer == 10)
    cut[size:] = False
    cuts = np.flatnonzero(cut)
    if cuts.size != lines.size * width:
        return None
    cuts = cuts.reshape(-1, width)
    before = np.concatenate(([-1], cuts[:-1, -1]))  # where the line before each row ends
    if not (buffer[cuts[:, -1]] == 10).all():
        return None
    if width > 1 and (cuts[:, -1] - before == width).any():
        return None  # rows of empty cells are told apart, and listed, by the other path
    _note_comments(
        (
            (heading_line + 1 + int(row), body[begins[row] : ends[row]].decode("utf-8"))
            for row in np.flatnonzero(comment)[:1000]
        ),
        delimiter,
        width,
        notices,
    )
    space = buffer == 32
    padded = bool(space[:1].any() or (space[1:] & cut[:-1]).any() or (space[:-1] & cut[1:]).any())
    columns = tuple(
        SliceColumn(buffer, cuts[:, n - 1] if n else before, cuts[:, n], padded=padded)
        for n in range(width)
    )
    return Grid(headings, heading_line, lines, columns, delimiter)


def _note_comments(
    comments: Iterator[tuple[int, str]], delimiter: str, width: int, notices: Notices
) -> None:
    """List comment lines that could have been meant as rows."""
    for line, text in comments:
        if width > 1 and text.count(delimiter) == width - 1:
            notices.repair("begins with # and is taken as a comment, not as a row", line, 1)


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


def _quoted(text: str, delimiter: str, heading_line: int, notices: Notices) -> Grid | None:
    """Cut any file, row by row, minding quotes, line breaks within them and uneven rows."""
    source = _Lines(text, heading_line)
    reader = csv.reader(
        iter(source), delimiter=delimiter, strict=True, skipinitialspace=True
    )
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
            if width > _WIDEST:
                notices.error(
                    f"the headings have {width} cells",
                    f"a timing file has at most {_WIDEST} columns",
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
    _note_comments(iter(source.comments), delimiter, width, notices)
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


def _evened(
    cells: list[str], width: int, delimiter: str, line: int, notices: Notices
) -> list[str]:
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
