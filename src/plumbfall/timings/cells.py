"""From a file's text to a grid of cells, by the quick way where the file is clean."""

from __future__ import annotations

import re
from dataclasses import replace

from plumbfall.timings.byte_columns import BREAK, QUOTE, STAND_IN, as_written
from plumbfall.timings.clean_rows import cut_clean, unquoted
from plumbfall.timings.grid import WIDEST, Grid
from plumbfall.timings.notices import Notices
from plumbfall.timings.uneven_rows import cut_any

__all__ = ["read_cells"]


def read_cells(data: bytes, delimiter: str, heading_line: int, notices: Notices) -> Grid | None:
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
    text = data[start:] if start else data
    if any(bytes((stand_in,)) in data for stand_in in (STAND_IN, BREAK, QUOTE)):
        text = b""
    elif b'"' in text:
        text = unquoted(text, delimiter)
    elif delimiter == " ":
        text = re.sub(rb" *\n *", b"\n", re.sub(rb"  +", b" ", text)).strip(b" ")
    if text and (delimiter != " " or b'"' not in data):
        heading, _, body = text.partition(b"\n")
        headings = tuple(
            as_written(cell, delimiter).strip() for cell in heading.decode("utf-8").split(delimiter)
        )
        if len(headings) <= WIDEST:
            first = heading_line + 1 + heading.count(BREAK)
            grid = cut_clean(body, delimiter, headings, first, notices)
            if grid is not None:
                return replace(grid, heading_line=heading_line)
    return cut_any(data[start:].decode("utf-8"), delimiter, heading_line, notices)
