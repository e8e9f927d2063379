"""Comment lines that could have been meant as rows."""

from __future__ import annotations

from collections.abc import Iterable

from plumbfall.timings.notices import Notices

__all__ = ["note_comments"]


def note_comments(
    comments: Iterable[tuple[int, str]], delimiter: str, width: int, notices: Notices
) -> None:
    """List comment lines that could have been meant as rows."""
    for line, text in comments:
        if width > 1 and text.count(delimiter) == width - 1:
            notices.repair("begins with # and is taken as a comment, not as a row", line, 1)
