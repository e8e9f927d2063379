"""Sheets that are transposed: a drop is a column, and the headings stand one below the other."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from plumbfall.timings.columns import TextColumn
from plumbfall.timings.grid import Grid, StoredTime
from plumbfall.timings.sections import Above

__all__ = ["grid_of_rows", "turned"]


def turned(rows: Sequence[Sequence[str]]) -> list[list[str]]:
    """Return the columns of a table as its rows; short rows are filled up with empty cells.

    Examples
    --------
    >>> turned([["ball", "A"], ["time [s]", "14.1", "14.2"]])
    [['ball', 'time [s]'], ['A', '14.1'], ['', '14.2']]
    """
    width = max(map(len, rows), default=0)
    return [[row[place] if place < len(row) else "" for row in rows] for place in range(width)]


def grid_of_rows(
    rows: Sequence[Sequence[str]], lines: Sequence[int], heading: int, delimiter: str = ""
) -> tuple[Grid, list[Above]]:
    """Return a table from the place of its headings on, and the rows above them.

    Rows without any text are left out; ``lines`` has the line of each row.
    """
    filled = [place for place, row in enumerate(rows) if any(cell.strip() for cell in row)]
    below = [place for place in filled if place > heading]
    width = max(_filled(rows[place]) for place in [heading, *below])
    cells = [[*rows[place][:width], *[""] * (width - len(rows[place]))] for place in below]
    headings = tuple(cell.strip() for cell in rows[heading][:width])
    stored = {
        place + 1: np.flatnonzero([isinstance(row[place], StoredTime) for row in cells])
        for place in range(width)
    }
    grid = Grid(
        headings + ("",) * (width - len(headings)),
        lines[heading],
        np.array([lines[place] for place in below], dtype=np.int64),
        tuple(TextColumn([row[place] for row in cells]) for place in range(width)),
        delimiter,
        stored_times={place: found for place, found in stored.items() if found.size},
    )
    above = [
        Above(
            lines[place],
            " ".join(cell.strip() for cell in rows[place] if cell.strip()),
            rows[place],
        )
        for place in filled
        if place < heading
    ]
    return grid, above


def _filled(row: Sequence[str]) -> int:
    """Return how many cells a row has up to the last that is filled."""
    return next((n for n in range(len(row), 0, -1) if row[n - 1].strip()), 0)
