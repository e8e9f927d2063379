"""A table cut where headings stand again or a title names another ball, each part by itself."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field, replace

import numpy as np

from plumbfall.timings.columns import Integers, TextColumn, unread
from plumbfall.timings.grid import Grid
from plumbfall.timings.heading_rows import DEPTH, Head, read_head
from plumbfall.timings.headings import TIMES
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.statistics_rows import drop_rows
from plumbfall.timings.titles import Title, may_be_title, read_title
from plumbfall.timings.values import is_missing
from plumbfall.timings.vocabulary import Vocabulary, is_value
from plumbfall.timings.widths import evened

__all__ = ["MOST_SECTIONS", "Above", "Section", "cut_sections"]

_MOST_SHOWN = 3
MOST_SECTIONS = 500
"""Blocks with headings or titles of their own that are read of one file."""


@dataclass(frozen=True, slots=True)
class Above:
    """Lines above the headings: where each stands, its text, and its cells."""

    line: int
    text: str
    cells: Sequence[str]


@dataclass(frozen=True, slots=True)
class Section:
    """Rows under one row of headings; what a title names is a column of its own at the end.

    ``title_lines`` has the line of the title by the number of that column.
    """

    grid: Grid
    title_lines: Mapping[int, int] = field(default_factory=dict)


@dataclass(slots=True)
class _Part:
    """A section while it is found: its headings, and rows from ``start`` up to ``end``.

    ``earlier`` are rows further up under the same headings, which stand again, as on every page.
    """

    head: Head
    line: int | None
    start: int
    end: int
    titles: dict[str, tuple[Title, int]]
    earlier: tuple[tuple[int, int], ...] = ()

    @property
    def rows(self) -> Integers:
        """Every row of the section."""
        ranges = (*self.earlier, (self.start, self.end))
        return np.concatenate([np.arange(*one, dtype=np.int64) for one in ranges])


def cut_sections(
    grid: Grid, above: Sequence[Above], vocabulary: Vocabulary, notices: Notices
) -> Iterator[Section]:
    """Yield the parts of a table, each with its own headings; list what belongs to none.

    ``above`` are the lines above the headings, the last one last.
    """
    titles = _titles_above(grid, above, vocabulary, notices)
    first = _first_part(grid, above, titles, vocabulary, notices)
    for number, part in enumerate(_parts(grid, first, vocabulary, notices)):
        if number == MOST_SECTIONS:
            notices.error(
                f"the file has more than {MOST_SECTIONS} blocks under headings of their own",
                "write one row of headings, and what the blocks are for in a column",
                part.line,
            )
            return
        yield _section(grid, part, vocabulary, notices)


def _titles_above(
    grid: Grid, above: Sequence[Above], vocabulary: Vocabulary, notices: Notices
) -> dict[str, tuple[Title, int]]:
    titles: dict[str, tuple[Title, int]] = {}
    unread: list[Above] = []
    for one in above:
        if _is_top(one, grid, vocabulary):
            continue
        title = read_title(one.cells, vocabulary)
        if title is None:
            unread.append(one)
        else:
            _name(title, one.line, titles, notices)
    if unread:
        shown = ", ".join(quoted(one.text, 40) for one in unread[:_MOST_SHOWN])
        notices.repair(
            f"lines above the headings in {notices.where(grid.heading_line)} are not read: {shown}"
            + (", …" if len(unread) > _MOST_SHOWN else ""),
            unread[0].line,
        )
    return titles


def _is_top(one: Above, grid: Grid, vocabulary: Vocabulary) -> bool:
    """Say whether a line is the upper one of two rows of headings."""
    if grid.heading_line is None or one.line != grid.heading_line - 1:
        return False
    return read_head(one.cells, grid.headings, (), vocabulary).merged


def _name(title: Title, line: int, titles: dict[str, tuple[Title, int]], notices: Notices) -> None:
    titles[title.field] = (title, line)
    notices.repair(f"{title.field} {quoted(title.text)} holds for the drops below", line)


def _first_part(
    grid: Grid,
    above: Sequence[Above],
    titles: dict[str, tuple[Title, int]],
    vocabulary: Vocabulary,
    notices: Notices,
) -> _Part:
    top: Sequence[str] = ()
    if above and grid.heading_line is not None and above[-1].line == grid.heading_line - 1:
        top = above[-1].cells
    below = [grid.row(row) for row in range(min(DEPTH, len(grid)))]
    head = read_head(top, grid.headings, below, vocabulary)
    _note_head(head, grid, -1, notices)
    return _Part(head, grid.heading_line, head.rows, len(grid), titles)


def _note_head(head: Head, grid: Grid, row: int, notices: Notices) -> None:
    """List how headings were put together; ``row`` is their first, -1 that above the grid."""
    rows = row + head.rows
    line = grid.heading_line if rows < 0 else int(grid.lines[rows])
    if head.units or head.contradicted:
        for heading, unit in head.contradicted:
            notices.error(
                f"the row of units has {quoted(unit)} under {quoted(heading.text)}",
                "write the unit in one place only, or the same in both",
                line,
                heading.column,
            )
        if head.units:
            told = ", ".join(
                f"{one.text if one.position is not None else one.label} in {unit}"
                for one, unit in head.units
            )
            notices.repair(f"units are taken from this row: {told}", line)
        rows -= 1
    if head.merged:
        line = grid.heading_line if rows < 0 else int(grid.lines[rows])
        notices.repair("this row and the one above are read together as headings", line)


def _parts(grid: Grid, part: _Part, vocabulary: Vocabulary, notices: Notices) -> Iterator[_Part]:
    """Yield the parts from the first on, cut at every row that is headings or a title."""
    titles = dict(part.titles)
    named = False  # whether a title has stood since the latest headings
    unclear = -1  # the latest row without a time that is neither headings nor a title
    heading_line: int | None
    for row in _special_rows(grid, part.head, part.start, vocabulary):
        if row < part.start:
            continue
        cells = grid.row(row)
        end = row
        if vocabulary.is_heading_row(cells):
            top = grid.row(unclear) if unclear == row - 1 >= part.start else ()
            below = [grid.row(at) for at in range(row + 1, min(row + 1 + DEPTH, len(grid)))]
            head, line = read_head(top, cells, below, vocabulary), int(grid.lines[row])
            if top and head.merged and not read_head((), cells, below, vocabulary).merged:
                end = row - 1
            held = "" if named else _held(titles)
            notices.repair(
                "headings stand again in this row and hold for the rows below it" + held, line
            )
            named = False
            _note_head(head, grid, row, notices)
            start, heading_line = row + 1 + head.rows, line
        elif title := read_title(cells, vocabulary):
            _name(title, int(grid.lines[row]), titles, notices)
            named = True
            head, start, heading_line = part.head, row + 1, part.line
        else:
            unclear = row
            continue
        part.end = end
        if head.texts == part.head.texts and titles == part.titles:
            earlier = (*part.earlier, (part.start, end))
            part = _Part(head, part.line, start, len(grid), part.titles, earlier)
            continue
        if part.rows.size:
            yield part
        part = _Part(head, heading_line, start, len(grid), dict(titles))
    yield part


def _held(titles: Mapping[str, tuple[Title, int]]) -> str:
    """Say what earlier titles name, where headings stand again without one of their own."""
    told = ", ".join(
        f"{name} {quoted(title.text)} of line {line}" for name, (title, line) in titles.items()
    )
    return f"; {told} still holds" if told else ""


def _special_rows(grid: Grid, head: Head, start: int, vocabulary: Vocabulary) -> list[int]:
    """Return rows that may be headings or a title: those without a value where a time would be."""
    times = [one.column for one in vocabulary.read_all(head.texts) if one.meaning in TIMES]
    if not times or times[0] > len(grid.columns) or start >= len(grid):
        return []
    column = grid.columns[times[0] - 1]
    rest = unread(column)
    rest = rest[rest >= start]
    if not rest.size:
        return []
    codes, texts = column.distinct(rest)
    odd = np.array([is_missing(text) or not is_value(text) for text in texts], dtype=bool)
    rest = rest[odd[codes]]
    filled = np.zeros(rest.size, dtype=np.int64)
    heading = np.zeros(rest.size, dtype=bool)
    title = np.zeros(rest.size, dtype=bool)
    for one in grid.columns:
        codes, texts = one.distinct(rest)
        if texts:
            filled += np.array([bool(text) for text in texts], dtype=np.int64)[codes]
            heading |= np.array([vocabulary.has_times([text]) for text in texts])[codes]
            title |= np.array([may_be_title(text, vocabulary) for text in texts])[codes]
    return [int(row) for row in rest[heading | (title & (filled <= 2))]]


def _section(grid: Grid, part: _Part, vocabulary: Vocabulary, notices: Notices) -> Section:
    chosen = part.rows
    rows = grid if chosen.size == len(grid) else grid.take(chosen)
    rows = replace(rows, headings=part.head.texts, heading_line=part.line)
    rows = _padded(rows)
    headings = vocabulary.read_all(rows.headings)
    if (drops := drop_rows(rows, headings, vocabulary, notices)) is not None:
        rows = rows.take(drops)
    rows = evened(rows, notices)
    return _titled(rows, part.titles, {one.meaning for one in headings})


def _padded(grid: Grid) -> Grid:
    """Give every heading a column, empty where the rows are all narrower."""
    missing = len(grid.headings) - len(grid.columns)
    if missing <= 0:
        return grid
    empty = tuple(TextColumn([""] * len(grid)) for _ in range(missing))
    widths = grid.widths
    if widths is None:
        widths = np.full(len(grid), len(grid.columns), dtype=np.int64)
    return replace(grid, columns=grid.columns + empty, widths=widths)


def _titled(grid: Grid, titles: Mapping[str, tuple[Title, int]], known: set[str]) -> Section:
    """Add a column for everything that a title names and no column holds."""
    lines: dict[int, int] = {}
    headings, columns = list(grid.headings), list(grid.columns[: len(grid.headings)])
    for name, (title, line) in titles.items():
        if name not in known:
            headings.append(name)
            columns.append(TextColumn([title.text] * len(grid)))
            lines[len(headings)] = line
    return Section(replace(grid, headings=tuple(headings), columns=tuple(columns)), lines)
