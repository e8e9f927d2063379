"""Line breaks within quoted cells: meant as such, or the sign of a quote that was not closed."""

from __future__ import annotations

from collections.abc import Sequence

from plumbfall.timings.clocks import read_clock
from plumbfall.timings.notices import Notices
from plumbfall.timings.values import looks_like_number

__all__ = ["note_breaks"]


def note_breaks(
    cells: Sequence[str], first: int, last: int, delimiter: str, width: int, notices: Notices
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
