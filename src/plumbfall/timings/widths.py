"""Rows brought to the width of their headings: short ones filled up, long ones refused."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from plumbfall.timings.grid import Grid
from plumbfall.timings.notices import Notices, quoted

__all__ = ["evened", "short_row"]


def short_row(count: int, width: int) -> str:
    """Say that a row ends before others do."""
    return f"the row has {count} of {width} cells; the others are taken as empty"


def evened(grid: Grid, notices: Notices) -> Grid:
    """Return a table whose rows are all as wide as its headings.

    Too few cells are missing ones, which is listed; a filled cell beyond the headings is a fault.
    """
    width = len(grid.headings)
    if grid.widths is None:
        return grid
    for row in np.flatnonzero(grid.widths != width):
        count, line = int(grid.widths[row]), int(grid.lines[row])
        if count < width:
            notices.repair(short_row(count, width), line)
            continue
        cells = grid.row(int(row))
        extra = next((n for n, cell in enumerate(cells[width:], width) if cell), None)
        if extra is None:
            notices.repair(f"{count - width} empty cells beyond the headings", line, width + 1)
            continue
        notices.error(
            f"the row has {count} cells under {width} headings;"
            f" the first without a heading is {quoted(cells[extra])}",
            _remedy(grid.delimiter),
            line,
            extra + 1,
        )
    return replace(grid, columns=grid.columns[:width], widths=None)


def _remedy(delimiter: str) -> str:
    if delimiter == ",":
        return (
            "quote a cell that holds a comma; if the comma is a decimal mark, write points, or"
            " save the file with semicolons between its cells"
        )
    return f"quote a cell that holds {quoted(delimiter)}, or give its column a heading"
