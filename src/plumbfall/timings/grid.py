"""A table of cells under headings, wherever it comes from."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, replace

import numpy as np

from plumbfall.timings.columns import Column, Integers

__all__ = ["LONGEST_LINE", "WIDEST", "Grid", "StoredTime"]

LONGEST_LINE = 100_000
"""Bytes in the longest line that is read; what is longer is no timing file."""
WIDEST = 1000
"""Columns of the widest table that is read."""


class StoredTime(str):
    """Text of a cell that a spreadsheet stores as a time of day or a duration."""

    __slots__ = ()


@dataclass(frozen=True, slots=True)
class Grid:
    """A table of cells under headings.

    ``lines`` has the line of each row; ``decimal`` is set where the numbers came as numbers, so
    that their decimal mark is known; ``delimiter`` is empty where there is none. ``stored_times``
    has, by column from 1, the rows whose cell a spreadsheet stores as a time of day. ``widths``
    has how many cells each row has, where that differs; there may be more columns than headings.
    """

    headings: tuple[str, ...]
    heading_line: int | None
    lines: Integers
    columns: tuple[Column, ...]
    delimiter: str = ""
    decimal: str = ""
    stored_times: Mapping[int, Integers] = field(default_factory=dict)
    widths: Integers | None = None

    def __len__(self) -> int:
        return self.lines.size

    def row(self, row: int) -> list[str]:
        """Return the cells of one row, without the spaces round them."""
        width = len(self.columns) if self.widths is None else int(self.widths[row])
        return [column.text(row) for column in self.columns[:width]]

    def take(self, rows: Integers) -> Grid:
        """Return some of the rows."""
        places = np.full(len(self), -1, dtype=np.int64)
        places[rows] = np.arange(rows.size)
        stored = {n: places[found][places[found] >= 0] for n, found in self.stored_times.items()}
        return replace(
            self,
            lines=self.lines[rows],
            columns=tuple(column.take(rows) for column in self.columns),
            stored_times={n: found for n, found in stored.items() if found.size},
            widths=None if self.widths is None else self.widths[rows],
        )
