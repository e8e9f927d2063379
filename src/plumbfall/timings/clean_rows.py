"""Cells of a clean file: no quotes, and every row as wide as the headings."""

from __future__ import annotations

import numpy as np

from plumbfall.timings.byte_columns import PADDING, STAND_IN, SliceColumn
from plumbfall.timings.comments import note_comments
from plumbfall.timings.grid import Grid
from plumbfall.timings.notices import Notices

__all__ = ["cut_clean", "unquoted"]


def unquoted(text: bytes, delimiter: str) -> bytes:
    """Take off quotes that each enclose one whole cell.

    A delimiter within quotes becomes :data:`STAND_IN`. Returns nothing where that is not all
    there is to it: with line ends or quotes within quotes, or a ``#`` that would then begin a
    comment.
    """
    if text.startswith(b'"#') or b'\n"#' in text or bytes((STAND_IN,)) in text:
        return b""
    buffer = np.frombuffer(b"\n" + text + b"\n", dtype=np.uint8)
    cut = (buffer == 10) | (buffer == ord(delimiter))
    quote = buffer == 34
    quotes = np.flatnonzero(quote)
    opening, closing = quotes[::2], quotes[1::2]
    if len(opening) != len(closing) or not (cut[opening - 1].all() and cut[closing + 1].all()):
        return b""
    hidden = np.bitwise_xor.accumulate(quote.view(np.uint8)).view(bool) & cut
    if (buffer[hidden] == 10).any():
        return b""
    return bytes(np.where(hidden, np.uint8(STAND_IN), buffer)[~quote][1:-1])


def cut_clean(
    body: bytes, delimiter: str, headings: tuple[str, ...], heading_line: int, notices: Notices
) -> Grid | None:
    """Cut the rows below the headings by looking at all bytes at once.

    Parameters
    ----------
    body : bytes
        UTF-8 text without quotes whose lines end in a line feed.
    delimiter : str
        One character of one byte.
    headings, heading_line
        The headings and their line, from 1.
    notices : Notices
        Takes comments that look like rows.

    Returns
    -------
    Grid or None
        ``None`` where a row is wider or narrower than the headings, or empty.
    """
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
    places = np.flatnonzero(cut)
    if places.size != lines.size * width:
        return None
    cuts = places.reshape(-1, width)
    before = np.concatenate(([-1], cuts[:-1, -1]))  # where the line before each row ends
    if not (buffer[cuts[:, -1]] == 10).all():
        return None
    if width > 1 and (cuts[:, -1] - before == width).any():
        return None  # rows of empty cells are told apart, and listed, by the other path
    note_comments(
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
        SliceColumn(
            buffer,
            cuts[:, n - 1] if n else before,
            cuts[:, n],
            padded=padded,
            delimiter=delimiter,
        )
        for n in range(width)
    )
    return Grid(headings, heading_line, lines, columns, delimiter)
