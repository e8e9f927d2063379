"""The head of a file: which row holds the headings, and what to say where none does."""

from __future__ import annotations

from collections.abc import Sequence

from plumbfall.timings.notices import Notices
from plumbfall.timings.vocabulary import Vocabulary

__all__ = ["DEEPEST", "find_heading_row"]

DEEPEST = 60
"""Lines from the top of a file among which its headings are looked for."""

Cells = Sequence[str]


def find_heading_row(
    rows: Sequence[Sequence[Cells]],
    declared: int | None,
    vocabulary: Vocabulary,
    notices: Notices,
) -> int | None:
    """Return the place, from 0, of the row of headings; ``None``, and an error noted, where none.

    Parameters
    ----------
    rows : sequence of sequences of cells
        The first rows; each is given in every way it could be cut into cells, not at all where
        it is empty or a comment.
    declared : int or None
        The row that the user names, counted from 1.
    vocabulary : Vocabulary
        What headings mean.
    notices : Notices
        Takes an error.

    Notes
    -----
    It is the first row that reads like headings, with a column of times; but a title of one cell
    that reads so, such as "Fall time", is passed over where headings follow it. Where no row
    reads like headings it is the first that has any text.
    """
    if declared is not None:
        if 1 <= declared <= len(rows) and rows[declared - 1]:
            return declared - 1
        notices.error(
            f"there are no headings in line {declared}",
            "correct header_row under [timings] in the bench sheet",
            key="timings.header_row",
        )
        return None
    filled = [place for place, ways in enumerate(rows) if ways]
    for number, place in enumerate(filled):
        if not _is_heading(rows[place], vocabulary):
            continue
        after = filled[number + 1] if number + 1 < len(filled) else None
        title = all(sum(bool(cell.strip()) for cell in cells) == 1 for cells in rows[place])
        if title and after is not None and _is_heading(rows[after], vocabulary):
            return after
        return place
    if filled:
        return filled[0]
    notices.error("the file holds comments only", "it needs headings and one row for each drop")
    return None


def _is_heading(ways: Sequence[Cells], vocabulary: Vocabulary) -> bool:
    return any(map(vocabulary.is_heading_row, ways))
