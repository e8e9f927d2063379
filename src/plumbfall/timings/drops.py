"""One file's grid and layout to its drops, in columns and in SI units."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.timings.columns import Column, Integers
from plumbfall.timings.decimals import Decimal
from plumbfall.timings.grid import Grid
from plumbfall.timings.labels import Labels, read_labels, read_status
from plumbfall.timings.layout import Layout
from plumbfall.timings.measured import MeasuredColumns
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.numbering import read_drop_numbers
from plumbfall.timings.totals import Watch

__all__ = ["TEXTS", "FileDrops", "measured_columns", "read_drops"]

TEXTS = ("set", "ball", "tube", "liquid", "timer", "thermometer", "operator", "started", "note")
"""Columns of text, in the order of the table, status apart."""


@dataclass(slots=True)
class FileDrops:
    """Drops of one file, every array of shape (drops,); ``marks`` is (drops, marks).

    ``status`` counts 0 used, 1 void, 2 excluded; ``drop`` is 0 where it is not numbered yet.
    """

    path: str
    layout: Layout
    heading_line: int | None
    line: Integers
    column: Integers
    labels: dict[str, Labels]
    drop: Integers
    status: Integers
    time: NDArray[np.float64]
    from_mark: Integers
    to_mark: Integers
    temperature: NDArray[np.float64]
    marks: NDArray[np.float64] | None
    named_sets: bool

    def __len__(self) -> int:
        return self.line.size


def measured_columns(grid: Grid, layout: Layout) -> list[tuple[Column, str]]:
    """Return the columns of numbers with what each holds, ``a time`` or ``a temperature``."""
    headings = [(heading, "a time") for heading in layout.times]
    if layout.kind != "total" and (heading := layout.fields.get("total")):
        headings.append((heading, "a time"))
    if heading := layout.fields.get("temperature"):
        headings.append((heading, "a temperature"))
    return [(grid.columns[heading.column - 1], what) for heading, what in headings]


def read_drops(
    grid: Grid,
    layout: Layout,
    decimal: Decimal,
    units: Mapping[str, str],
    watch: Watch,
    stem: str,
    notices: Notices,
) -> FileDrops:
    """Read every drop under one row of headings; whatever is wrong goes to the notices.

    ``units`` are those declared, ``watch`` what a running stopwatch showed last, and ``stem`` the
    name of the run set where no column names one.
    """
    rows = grid.lines.size
    fields = layout.fields
    status = np.zeros(rows, dtype=np.int64)
    if heading := fields.get("status"):
        status = read_status(grid.columns[heading.column - 1], grid.lines, heading.column, notices)
    labels = {
        meaning: read_labels(
            grid.columns[fields[meaning].column - 1],
            meaning,
            grid.lines,
            fields[meaning].column,
            notices,
        )
        if meaning in fields
        else Labels.constant(stem if meaning == "set" else "", rows)
        for meaning in TEXTS
    }
    reader = MeasuredColumns(
        grid, layout, units, decimal, status == 1, labels["set"].codes, watch, notices
    )
    temperature = reader.temperature(fields.get("temperature"))
    times = reader.times()
    if grid.delimiter == ",":
        reader.mind_split_decimals(fields)
    line, column = grid.lines, np.full(rows, layout.times[0].column, dtype=np.int64)
    drop = np.zeros(rows, dtype=np.int64)
    if layout.kind == "repeats":
        count = len(layout.times)
        line, status = np.repeat(line, count), np.repeat(status, count)
        temperature, drop = np.repeat(temperature, count), np.repeat(drop, count)
        column = np.tile([heading.column for heading in layout.times], rows).astype(np.int64)
        labels = {meaning: label.repeated(count) for meaning, label in labels.items()}
        if "drop" in fields:
            notices.repair(
                f"column {quoted(fields['drop'].text)} numbers rows of several drops and is not"
                " used; drops are numbered in their order",
                grid.heading_line,
                fields["drop"].column,
            )
    elif "drop" in fields:
        drop = read_drop_numbers(
            grid.columns[fields["drop"].column - 1],
            fields["drop"].column,
            line,
            labels,
            notices,
        )
    absent = np.flatnonzero(times.missing & (status == 0))
    refused = np.flatnonzero(times.bad & (status == 0))
    status = status.copy()
    status[absent] = status[refused] = 2
    labels["note"] = _reasoned(labels["note"], absent, refused, times.why)
    return FileDrops(
        path=notices.path,
        layout=layout,
        heading_line=grid.heading_line,
        line=line,
        column=column,
        labels=labels,
        drop=drop,
        status=status,
        time=times.time,
        from_mark=times.from_mark,
        to_mark=times.to_mark,
        temperature=temperature,
        marks=times.marks,
        named_sets="set" in fields,
    )


def _reasoned(note: Labels, absent: Integers, refused: Integers, why: Mapping[int, str]) -> Labels:
    """Put the rule that excludes a row before the row's own note."""
    rows = [*absent.tolist(), *refused.tolist()]
    texts = []
    for place, row in enumerate(rows):
        own = note.names[note.codes[row]]
        reason = "no-time" if place < absent.size else "refused"
        if row in why:
            reason += f": {why[row]}"
        texts.append(f"{reason}; {own}" if own else reason)
    return note.replaced(rows, texts)
