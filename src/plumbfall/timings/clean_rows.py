"""Cells of a file, cut by looking at all its bytes at once."""

from __future__ import annotations

import re

import numpy as np
from numpy.typing import NDArray

from plumbfall.timings.byte_columns import BREAK, PADDING, QUOTE, STAND_IN, SliceColumn
from plumbfall.timings.columns import Integers
from plumbfall.timings.comments import note_comments
from plumbfall.timings.grid import WIDEST, Grid
from plumbfall.timings.line_breaks import note_breaks
from plumbfall.timings.notices import Notices

__all__ = ["cut_clean", "unquoted"]


def unquoted(text: bytes, delimiter: str) -> bytes:
    """Take off quotes that each enclose one whole cell; those within a cell, as in 1'03"15, stay.

    Within quotes a delimiter becomes :data:`STAND_IN`, a line end :data:`BREAK`, and a quote that
    is written twice :data:`QUOTE`. Returns nothing where that is not all there is to it, or where
    a ``#`` would then begin a comment.
    """
    if text.startswith(b'"#') or b'\n"#' in text:
        return b""
    if b'""' in text:
        cuts = re.escape(delimiter.encode()) + rb"\n"
        text = re.sub(rb'(?<![%b])""(?![%b]|$)' % (cuts, cuts), bytes((QUOTE,)), text)
    buffer = np.frombuffer(b"\n" + text + b"\n", dtype=np.uint8)
    cut = (buffer == 10) | (buffer == ord(delimiter))
    quote = buffer == 34
    quotes = np.flatnonzero(quote)
    if not (cut[quotes - 1] | (buffer[quotes - 1] == 32)).any():
        return text  # no cell begins with a quote
    opening, closing = quotes[::2], quotes[1::2]
    if len(opening) != len(closing) or not (cut[opening - 1].all() and cut[closing + 1].all()):
        return b""
    hidden = np.bitwise_xor.accumulate(quote.view(np.uint8)).view(bool) & cut
    stand_in = np.where(buffer == 10, np.uint8(BREAK), np.uint8(STAND_IN))
    return bytes(np.where(hidden, stand_in, buffer)[~quote][1:-1])


def cut_clean(
    body: bytes, delimiter: str, headings: tuple[str, ...], first_line: int, notices: Notices
) -> Grid | None:
    """Cut the rows below the headings by looking at all bytes at once.

    Parameters
    ----------
    body : bytes
        UTF-8 text whose rows end in a line feed, and whose quotes, if any, are no more than
        characters of their cells.
    delimiter : str
        One character of one byte.
    headings : tuple of str
        The headings.
    first_line : int
        Line of the first row, from 1.
    notices : Notices
        Takes comments that look like rows, and rows of empty cells.

    Returns
    -------
    Grid or None
        ``None`` where a row is wider than any table that is read.
    """
    if body and not body.endswith(b"\n"):
        body += b"\n"
    size = len(body)
    buffer = np.frombuffer(body + bytes(PADDING), dtype=np.uint8)
    ends = np.flatnonzero(buffer[:size] == 10)
    begins = np.concatenate(([0], ends[:-1] + 1)) if ends.size else ends
    comment = buffer[begins] == ord("#")
    breaks = np.flatnonzero(buffer[:size] == BREAK)
    line_of = first_line + np.arange(ends.size) + np.searchsorted(breaks, begins)
    note_comments(
        (
            (int(line_of[row]), body[begins[row] : ends[row]].decode("utf-8"))
            for row in np.flatnonzero(comment)[:1000]
        ),
        delimiter,
        len(headings),
        notices,
    )
    # of every row: where the byte before it is, where it ends, and its first cut among all cuts
    cuts = np.flatnonzero((buffer[:size] == ord(delimiter)) | (buffer[:size] == 10))
    last = _places(cuts, ends)
    first = np.concatenate(([0], last[:-1] + 1)) if ends.size else last
    full = _full(buffer[:size], begins, delimiter)
    kept = ~(comment | (begins == ends))
    widths = last - first + 1
    for row in np.flatnonzero(kept & ~full & (widths > 1)):
        notices.repair("a row of empty cells is left out", int(line_of[row]))
    kept &= full
    lines = line_of[kept]
    begins, ends, first, widths = begins[kept], ends[kept], first[kept], widths[kept]
    width = max(int(widths.max(initial=0)), len(headings))
    if width > WIDEST:
        return None
    space = buffer == 32
    cut = np.zeros(buffer.size, dtype=bool)
    cut[cuts] = True
    padded = bool(space[:1].any() or (space[1:] & cut[:-1]).any() or (space[:-1] & cut[1:]).any())
    even = bool((widths == width).all())
    columns = []
    before = begins - 1
    for place in range(width):
        if even:
            end = cuts[first + place]
        else:
            # a cell beyond the row's last is empty, and stands at the row's end
            end = np.where(place < widths, cuts[np.minimum(first + place, cuts.size - 1)], ends)
            before = np.where(place < widths, before, ends - 1)
        columns.append(SliceColumn(buffer, before, end, padded=padded, delimiter=delimiter))
        before = end
    grid = Grid(
        headings,
        None,
        lines,
        tuple(columns),
        delimiter,
        widths=None if even and width == len(headings) else widths,
    )
    within = np.searchsorted(breaks, ends) - np.searchsorted(breaks, begins)
    for row in np.flatnonzero(within):
        line = int(lines[row])
        cells = grid.row(int(row))
        note_breaks(cells, line, line + int(within[row]), delimiter, len(headings), notices)
    return grid


def _places(cuts: Integers, ends: Integers) -> Integers:
    """Return the place of each row's end among all cuts."""
    if ends.size and cuts.size % ends.size == 0:
        width = cuts.size // ends.size
        if (cuts[width - 1 :: width] == ends).all():
            return np.arange(width - 1, cuts.size, width)
    return np.searchsorted(cuts, ends)


def _full(text: NDArray[np.uint8], begins: Integers, delimiter: str) -> NDArray[np.bool_]:
    """Return which rows hold anything beyond spaces and delimiters."""
    first = text[begins]
    if not ((first == 32) | (first == 9) | (first == 10) | (first == ord(delimiter))).any():
        return np.ones(begins.size, dtype=bool)
    blank = (text == 32) | (text == 9) | (text == 10) | (text == ord(delimiter))
    return np.logical_or.reduceat(~blank, begins)
