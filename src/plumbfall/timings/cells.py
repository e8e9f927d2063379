"""From a file's text to a grid of cells, by the quick way where the file is clean."""

from __future__ import annotations

from plumbfall.timings.byte_columns import STAND_IN
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
    if b'"' in text:
        text = unquoted(text, delimiter)
    if text and delimiter != " " and bytes((STAND_IN,)) not in data:
        heading, _, body = text.partition(b"\n")
        headings = tuple(
            cell.replace(chr(STAND_IN), delimiter).strip()
            for cell in heading.decode("utf-8").split(delimiter)
        )
        if len(headings) <= WIDEST:
            grid = cut_clean(body, delimiter, headings, heading_line, notices)
            if grid is not None:
                return grid
    return cut_any(data[start:].decode("utf-8"), delimiter, heading_line, notices)
