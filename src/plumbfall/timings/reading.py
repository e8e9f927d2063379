"""Reads one timing file or table after another, and keeps what comes of each."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from pathlib import PurePath

import numpy as np
import pandas as pd

from plumbfall.bench.records import Bench, TimingHints
from plumbfall.timings.decimals import Decimal, find_decimal
from plumbfall.timings.drops import FileDrops, measured_columns, read_drops
from plumbfall.timings.files import RawFile, load
from plumbfall.timings.frames import FRAME_NAME, FRAME_STEM, frame_grid, frame_sha256
from plumbfall.timings.layout import Layout, columns_read, find_layout
from plumbfall.timings.matching import match_bench
from plumbfall.timings.merging import merge_blocks
from plumbfall.timings.missed_headings import note_missed_headings
from plumbfall.timings.notices import Notices, Place
from plumbfall.timings.opening import Opened, open_file
from plumbfall.timings.records import Block, ColumnRead, TimingFile
from plumbfall.timings.sections import Section, cut_sections
from plumbfall.timings.totals import Watch
from plumbfall.timings.vocabulary import Vocabulary

__all__ = ["Reading"]


class Reading:
    """Reads files and tables; ``files``, ``drops`` and ``notices`` grow with each."""

    def __init__(self, bench: Bench | None, hints: TimingHints, vocabulary: Vocabulary) -> None:
        self.bench = bench
        self.hints = hints
        self.vocabulary = vocabulary
        self.files: list[TimingFile] = []
        self.drops: list[FileDrops] = []
        self.notices: list[Notices] = []

    def read(self, item: str | pd.DataFrame) -> None:
        """Read one file or table; what is wrong with it goes to its notices."""
        notices = Notices(FRAME_NAME if isinstance(item, pd.DataFrame) else item)
        self.notices.append(notices)
        if isinstance(item, pd.DataFrame):
            file = TimingFile(FRAME_NAME, frame_sha256(item), "", "", ".")
            opened = Opened(file, frame_grid(item, notices))
        else:
            raw = load(item, notices)
            if raw is None:
                return
            self._mind_twin(raw, notices)
            opened = open_file(raw, self.hints, self.vocabulary, notices)
        self.files.append(opened.file)
        if opened.grid is None:
            return
        notices.place = _place(opened.turned_lines, {})
        stem = FRAME_STEM if isinstance(item, pd.DataFrame) else PurePath(item).stem
        blocks = self._blocks(opened, notices)
        if blocks is None:
            return
        self._read_blocks(opened, blocks, stem, notices)

    def _blocks(self, opened: Opened, notices: Notices) -> list[tuple[Section, Layout]] | None:
        """Return the parts of a table with their layouts; ``None`` where one cannot be read."""
        grid = opened.grid
        if grid is None or note_missed_headings(grid, self.vocabulary, notices):
            return None
        blocks: list[tuple[Section, Layout]] = []
        for section in cut_sections(grid, opened.above, self.vocabulary, notices):
            notices.place = _place(opened.turned_lines, section.title_lines)
            headings = self.vocabulary.read_all(section.grid.headings)
            layout = find_layout(headings, section.grid.heading_line, notices)
            if layout is None:
                continue
            blocks.append((section, layout))
        if not blocks:
            return None
        if not any(len(section.grid) for section, _ in blocks):
            notices.error(
                "there are headings but no rows under them",
                "write one row for each drop",
                grid.heading_line,
            )
            return None
        return blocks

    def _read_blocks(
        self,
        opened: Opened,
        blocks: Sequence[tuple[Section, Layout]],
        stem: str,
        notices: Notices,
    ) -> None:
        """Read the drops of all blocks, whose numbers share one decimal mark."""
        decimal = self._decimal(blocks, notices)
        watch = Watch()
        drops: list[FileDrops] = []
        told: list[Block] = []
        for section, layout in blocks:
            notices.place = _place(opened.turned_lines, section.title_lines)
            grid = section.grid
            read = columns_read(self.vocabulary.read_all(grid.headings), layout, self.hints.units)
            columns = tuple(_of_title(one, section) for one in read)
            told.append(Block(grid.heading_line, columns, len(grid)))
            if not len(grid):
                continue
            found = read_drops(grid, layout, decimal, self.hints.units, watch, stem, notices)
            if self.bench is not None:
                match_bench(found, self.bench, notices)
            if opened.turned_lines is not None:
                lines = np.array(opened.turned_lines, dtype=np.int64)
                found.line, found.column = lines[found.column - 1], found.line
            drops.append(found)
        notices.place = _place(None, {})
        self.files[-1] = replace(
            opened.file,
            decimal=decimal.mark,
            heading_line=told[0].heading_line,
            columns=told[0].columns,
            blocks=tuple(told),
        )
        self.drops.append(merge_blocks(drops, notices))

    def _decimal(self, blocks: Sequence[tuple[Section, Layout]], notices: Notices) -> Decimal:
        grid = blocks[0][0].grid
        return find_decimal(
            [one for section, layout in blocks for one in measured_columns(section.grid, layout)],
            grid.delimiter,
            grid.decimal or self.hints.decimal,
            self.hints.thousands,
            notices,
        )

    def _mind_twin(self, raw: RawFile, notices: Notices) -> None:
        twin = next((other for other in self.files if other.sha256 == raw.sha256), None)
        if twin:
            notices.error(
                f"the file is the same, byte for byte, as {twin.path}",
                "leave one of them out; a drop counts once",
            )


def _of_title(column: ColumnRead, section: Section) -> ColumnRead:
    """Return a column that stands for a title as what it is: no column, and the title's line."""
    line = section.title_lines.get(column.column)
    if line is None:
        return column
    text = section.grid.columns[column.column - 1].text(0) if len(section.grid) else ""
    return ColumnRead(0, f"{text} (line {line})", column.meaning, column.unit)


def _place(turned_lines: Sequence[int] | None, title_lines: Mapping[int, int]) -> Place:
    """Return what turns the line and column of a table into those of the file.

    A column that a title stands for has the title's line and no column; in a transposed file a
    line of the table is a column, and a column one of ``turned_lines``.
    """

    def place(line: int | None, column: int | None) -> tuple[int | None, int | None]:
        if column is not None and column in title_lines:
            line, column = title_lines[column], None
        if turned_lines is None or line is None:
            return line, column
        return turned_lines[column - 1] if column else None, line

    return place
