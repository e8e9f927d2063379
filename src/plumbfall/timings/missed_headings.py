"""What to say of a file where no row reads like headings, though something else of it does."""

from __future__ import annotations

from collections.abc import Sequence

from plumbfall.timings.grid import Grid
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.vocabulary import Vocabulary

__all__ = ["note_commented_headings", "note_missed_headings"]

_LOOKED_AT = 60


def note_missed_headings(grid: Grid, vocabulary: Vocabulary, notices: Notices) -> bool:
    """Note headings that are parted by spaces, or that stand one below the other."""
    if vocabulary.has_times(grid.headings):
        return False
    line = grid.heading_line
    text = " ".join(grid.headings).strip()
    parted = text.split()
    if len([cell for cell in grid.headings if cell]) == 1 and vocabulary.is_heading_row(parted):
        notices.error(
            f"the headings {quoted(text)} are parted by spaces",
            'set delimiter = " " under [timings] in the bench sheet, or save the file with'
            " semicolons or tabs between cells",
            line,
        )
        notices.offer("delimiter", '" "')
        return True
    if not len(grid.columns) or len(grid.headings) < 2:
        return False
    first = [grid.headings[0]]
    first += [grid.columns[0].text(row) for row in range(min(len(grid), _LOOKED_AT))]
    if vocabulary.has_times(first):
        notices.error(
            "the headings stand one below the other, in the first column",
            "set transposed = true under [timings] in the bench sheet, or save the sheet with one"
            " row for each drop",
            line,
        )
        notices.offer("transposed", "true")
        return True
    return False


def note_commented_headings(
    comments: Sequence[tuple[int, Sequence[Sequence[str]]]],
    vocabulary: Vocabulary,
    notices: Notices,
) -> bool:
    """Note a comment that reads like headings; each comes with every way to cut it into cells."""
    for line, ways in comments:
        if any(len(cells) > 1 and vocabulary.is_heading_row(cells) for cells in ways):
            notices.error(
                "the headings begin with # and are taken for a comment",
                "take the # off; a column of numbers is headed drop",
                line,
            )
            return True
    return False
