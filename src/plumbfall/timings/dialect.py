"""Which character stands between cells, and in which line the headings are."""

from __future__ import annotations

import csv
import re
from collections.abc import Sequence
from itertools import islice

from plumbfall.errors import nearest_name
from plumbfall.timings.headings import has_times, read_heading
from plumbfall.timings.notices import Notices, quoted

__all__ = ["DELIMITERS", "find_delimiter", "find_headings", "first_lines", "note_lower_headings"]

DELIMITERS = {",": "comma", ";": "semicolon", "\t": "tab", "|": "pipe"}
_NAMES = {name: mark for mark, name in DELIMITERS.items()} | {"\\t": "\t"}


def first_lines(data: bytes, count: int = 60) -> list[str]:
    """Return the first lines of UTF-8 text, without their ends."""
    lines = data[: count * 2000].split(b"\n", count)
    return [line.decode("utf-8", "replace") for line in islice(lines, count)]


def find_headings(
    lines: Sequence[str], declared: int | None, notices: Notices, *, known: bool = True
) -> int | None:
    """Return the line, from 1, of the headings: the declared one, or the first with text.

    Where that line has no column of times and a later one has, it is pointed out and refused;
    not so where headings are declared in the bench sheet, and thus not ``known`` to us.
    """
    if declared is not None:
        if 1 <= declared <= len(lines) and lines[declared - 1].strip():
            passed = [n for n, line in enumerate(lines[: declared - 1], 1) if line.strip()]
            if passed:
                notices.repair(f"lines above the headings in line {declared} are not read", 1)
            return declared
        notices.error(
            f"there are no headings in line {declared}",
            "correct header_row under [timings] in the bench sheet",
            key="timings.header_row",
        )
        return None
    for number, line in enumerate(lines, 1):
        if line.strip() and not line.startswith("#"):
            lower = _lower_headings(lines, number) if known else None
            if lower is None:
                return number
            note_lower_headings(number, lower, notices)
            return None
    notices.error("the file holds comments only", "it needs headings and one row for each drop")
    return None


def _lower_headings(lines: Sequence[str], first: int) -> int | None:
    if any(has_times(_cells(lines[first - 1], mark)) for mark in DELIMITERS):
        return None
    for number, line in enumerate(lines[first:], first + 1):
        if any(mark in line and has_times(_cells(line, mark)) for mark in DELIMITERS):
            return number
    return None


def note_lower_headings(first: int, found: int, notices: Notices) -> None:
    """Point to a line further down that reads like the headings."""
    notices.error(
        f"line {found} reads like the headings, but line {first} is the first with text",
        f"set header_row = {found} under [timings] in the bench sheet, or delete the lines above",
        found,
    )


def _cells(line: str, delimiter: str) -> list[str]:
    try:
        return next(csv.reader([line], delimiter=delimiter, skipinitialspace=True), [])
    except csv.Error:
        return [line]


def _understood(line: str, delimiter: str) -> int:
    cells = _cells(line, delimiter)
    return sum(bool(read_heading(cell, 1).meaning) for cell in cells)


def find_delimiter(
    heading: str, declared: str | None, heading_line: int, notices: Notices
) -> str | None:
    """Return the delimiter: the declared one, or the one that parts the headings.

    Where several could, the one under which most headings are understood; ``None``, and an
    error in the notices, where that does not decide.
    """
    if declared is not None:
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
    # what stands in quotes or brackets belongs to a heading
    bare = re.sub(r'"[^"]*"|\[[^\]]*\]|\([^)]*\)', "", heading)
    present = [mark for mark in DELIMITERS if mark in bare]
    if len(present) < 2:
        return present[0] if present else ","
    scores = {mark: _understood(heading, mark) for mark in present}
    best = [mark for mark in present if scores[mark] == max(scores.values())]
    if len(best) == 1:
        return best[0]
    names = " or ".join(DELIMITERS[mark] for mark in best)
    notices.error(
        f"the headings could be parted by {names}",
        'say which under [timings] in the bench sheet, such as delimiter = ";"',
        heading_line,
    )
    return None
