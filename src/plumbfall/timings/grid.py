"""A table of cells under headings, wherever it comes from."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from plumbfall.timings.columns import Column, Integers

__all__ = ["LONGEST_LINE", "WIDEST", "Grid"]

LONGEST_LINE = 100_000
"""Bytes in the longest line that is read; what is longer is no timing file."""
WIDEST = 1000
"""Columns of the widest table that is read."""


@dataclass(frozen=True, slots=True)
class Grid:
    """A table of cells under headings.

    ``lines`` has the line of each row; ``decimal`` is set where the numbers came as numbers, so
    that their decimal mark is known; ``delimiter`` is empty where there is none. ``stored_times``
    has, by column from 1, the rows whose cell a spreadsheet stores as a time of day.
    """

    headings: tuple[str, ...]
    heading_line: int | None
    lines: Integers
    columns: tuple[Column, ...]
    delimiter: str = ""
    decimal: str = ""
    stored_times: Mapping[int, Integers] = field(default_factory=dict)
