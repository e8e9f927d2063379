"""Which character stands between cells."""

from __future__ import annotations

import csv
import re
from itertools import islice

from plumbfall.errors import nearest_name
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.vocabulary import Vocabulary

__all__ = ["DELIMITERS", "cells_of", "declared_delimiter", "find_delimiter", "first_lines"]

DELIMITERS = {",": "comma", ";": "semicolon", "\t": "tab", "|": "pipe"}
_NAMES = {name: mark for mark, name in DELIMITERS.items()} | {"\\t": "\t"}


def first_lines(data: bytes, count: int) -> list[str]:
    """Return the first lines of UTF-8 text, without their ends."""
    lines = data[: count * 2000].split(b"\n", count)
    return [line.decode("utf-8", "replace") for line in islice(lines, count)]


def cells_of(line: str, delimiter: str) -> list[str]:
    """Cut a single line into cells, as far as its quotes allow."""
    try:
        return next(csv.reader([line], delimiter=delimiter, skipinitialspace=True), [])
    except csv.Error:
        return [line]


def declared_delimiter(declared: str | None, notices: Notices) -> str | None:
    """Return the delimiter that the user declared, ``None`` where none is or an error is noted."""
    if declared is None:
        return None
    mark = _NAMES.get(declared.strip().casefold(), declared)
    if len(mark) == 1 and mark not in '"\n\r#':
        return mark
    near = nearest_name(declared, _NAMES)
    hint = f"did you mean {quoted(near)}? " if near else ""
    notices.error(
        f"{quoted(declared)} is not a delimiter",
        hint + 'write one character, such as delimiter = ";", or "tab"',
        key="timings.delimiter",
    )
    return None


def find_delimiter(
    heading: str, heading_line: int, vocabulary: Vocabulary, notices: Notices
) -> str | None:
    """Return the delimiter that parts the headings.

    Where several could, the one under which most headings are understood; ``None``, and an
    error in the notices, where that does not decide.
    """
    # what stands in quotes or brackets belongs to a heading
    bare = re.sub(r'"[^"]*"|\[[^\]]*\]|\([^)]*\)', "", heading)
    present = [mark for mark in DELIMITERS if mark in bare]
    if len(present) < 2:
        return present[0] if present else ","
    scores = {mark: vocabulary.understood(cells_of(heading, mark)) for mark in present}
    best = [mark for mark in present if scores[mark] == max(scores.values())]
    if len(best) == 1:
        return best[0]
    names = " or ".join(DELIMITERS[mark] for mark in best)
    notices.error(
        f"the headings could be parted by {names}",
        'say which under [timings] in the bench sheet, such as delimiter = ";"',
        heading_line,
    )
    notices.offer("delimiter", '";"' if ";" in best else f'"{best[0]}"')
    return None
