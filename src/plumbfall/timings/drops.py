"""One file's grid and layout to its drops, in columns and in SI units."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.records import TimingHints
from plumbfall.timings.cells import Grid
from plumbfall.timings.columns import Integers
from plumbfall.timings.decimals import Decimal, find_decimal
from plumbfall.timings.headings import Heading
from plumbfall.timings.labels import Labels, read_labels, read_status
from plumbfall.timings.layout import Layout
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.numbering import read_drop_numbers
from plumbfall.timings.times import FallTimes, Parsed, from_intervals, from_marks, parse_column
from plumbfall.timings.units import Unit, temperature_unit, time_unit

__all__ = ["TEXTS", "FileDrops", "read_drops"]

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


def read_drops(
    grid: Grid, layout: Layout, hints: TimingHints, path: str, stem: str, notices: Notices
) -> tuple[FileDrops, Decimal]:
    """Read every drop of a file; whatever is wrong goes to the notices."""
    rows = grid.lines.size
    fields = layout.fields
    temperature_heading = fields.get("temperature")
    measured = [*layout.times, *([temperature_heading] if temperature_heading else [])]
    decimal = find_decimal(
        [grid.columns[heading.column - 1] for heading in measured],
        grid.delimiter,
        grid.decimal or hints.decimal,
    )
    status = np.zeros(rows, dtype=np.int64)
    if heading := fields.get("status"):
        status = read_status(
            grid.columns[heading.column - 1], grid.lines, heading.column, notices
        )
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
    reader = _Reader(grid, layout, hints.units, decimal, status == 1, notices)
    temperature = reader.temperature(temperature_heading)
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
    drops = FileDrops(
        path=path,
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
    return drops, decimal


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


@dataclass(frozen=True, slots=True)
class _Reader:
    """Reads the measured columns of one file and says what is wrong with their cells."""

    grid: Grid
    layout: Layout
    units: Mapping[str, str]
    decimal: Decimal
    void: NDArray[np.bool_]
    notices: Notices

    def fault(self, row: int, column: int, message: str, remedy: str) -> None:
        """Note a cell that is wrong; in a void row, which is not used, it is a warning."""
        self.notices.error(
            message,
            remedy,
            int(self.grid.lines[row]),
            column,
            severity="warning" if self.void[row] else "error",
        )

    def _unit(self, heading: Heading) -> Unit | None:
        """Return the unit of a heading, or the declared one; note one that is not known."""
        find = temperature_unit if heading.meaning == "temperature" else time_unit
        what = "temperature" if heading.meaning == "temperature" else "time"
        names = (heading.text, heading.label, heading.meaning, what)
        declared = next((self.units[name] for name in names if name in self.units), "")
        text = heading.unit or declared
        unit = find(text) if text else None
        if text and unit is None:
            usual = "K, degC or degF" if what == "temperature" else "s, ms, min, h or mm:ss"
            self.notices.error(
                f"{quoted(text)} is not a unit of {what}",
                f"use {usual}, as in {quoted(self._typed(heading))}",
                self.grid.heading_line if heading.unit else None,
                heading.column if heading.unit else None,
                key="" if heading.unit else f"timings.units.{heading.meaning}",
            )
        return unit

    @staticmethod
    def _typed(heading: Heading) -> str:
        return f"{heading.label} [{'degC' if heading.meaning == 'temperature' else 's'}]"

    def _parsed(self, heading: Heading, what: str) -> Parsed:
        column = self.grid.columns[heading.column - 1]
        unit = self._unit(heading)
        parsed = parse_column(
            column, unit, self.decimal, what, clock=heading.meaning != "temperature"
        )
        for row, fault in parsed.faults:
            self.fault(row, heading.column, fault.message, fault.remedy)
        unknown = unit is None and bool(heading.unit or heading.meaning in self.units)
        if parsed.plain_row >= 0 and not unknown:
            self._note_unit(heading, unit, column.text(parsed.plain_row), parsed.plain_row)
        return parsed

    def _note_unit(self, heading: Heading, unit: Unit | None, cell: str, row: int) -> None:
        kind = "temperature" if heading.meaning == "temperature" else "time"
        if unit is not None and unit.clock:
            self.notices.error(
                f"{quoted(cell)} is a plain number under {quoted(heading.text)}",
                f"write it as 0:12.84, or write the heading as {quoted(heading.label + ' [s]')}",
                int(self.grid.lines[row]),
                heading.column,
            )
            return
        declared = f'units = {{ {kind} = "{"degC" if kind == "temperature" else "s"}" }}'
        self.notices.error(
            f"column {quoted(heading.text)} has plain numbers such as {cell} and no unit",
            f"write its heading as {quoted(self._typed(heading))} if that is the unit, or set"
            f" {declared} under [timings] in the bench sheet",
            self.grid.heading_line,
            heading.column,
        )

    def temperature(self, heading: Heading | None) -> NDArray[np.float64]:
        """Return temperatures in kelvin, NaN where none is given."""
        if heading is None:
            return np.full(self.grid.lines.size, np.nan)
        parsed = self._parsed(heading, "a temperature")
        if parsed.plain_row < 0:
            for row in np.flatnonzero(parsed.values <= 0):
                cell = self.grid.columns[heading.column - 1].text(int(row))
                self.fault(
                    int(row),
                    heading.column,
                    f"{quoted(cell)} is not above absolute zero",
                    "correct the temperature or its unit",
                )
        return parsed.values

    def times(self) -> FallTimes:
        """Return the fall time of every drop."""
        headings = self.layout.times
        columns = [self._parsed(heading, "a time") for heading in headings]
        if self.layout.kind != "marks":
            columns = [
                self._positive(parsed, heading)
                for parsed, heading in zip(columns, headings, strict=True)
            ]
        if self.layout.kind == "marks":
            result = from_marks(columns, self.layout.first_mark, self._refuse_mark)
        elif self.layout.kind == "intervals":
            result = from_intervals(columns)
        else:
            ones = np.ones(len(columns) * self.grid.lines.size, dtype=np.int64)
            result = FallTimes(
                np.column_stack([parsed.values for parsed in columns]).ravel(),
                np.column_stack([parsed.missing for parsed in columns]).ravel(),
                np.column_stack([parsed.bad for parsed in columns]).ravel(),
                ones,
                ones * 0,
            )
        for row, number in result.omitted:
            heading = headings[number]
            left = "the point" if self.layout.kind == "marks" else "the interval"
            self.notices.repair(
                f"{heading.label} is empty; {left} is left out",
                int(self.grid.lines[row]),
                heading.column,
            )
        return result

    def _refuse_mark(self, row: int, number: int, message: str, remedy: str) -> None:
        heading = self.layout.times[number]
        cell = self.grid.columns[heading.column - 1].text(row)
        self.fault(row, heading.column, f"{quoted(cell)} {message}", remedy)

    def _positive(self, parsed: Parsed, heading: Heading) -> Parsed:
        """Refuse times of zero or less."""
        wrong = parsed.values <= 0
        if not wrong.any():
            return parsed
        for row in np.flatnonzero(wrong):
            cell = self.grid.columns[heading.column - 1].text(int(row))
            self.fault(
                int(row),
                heading.column,
                f"{quoted(cell)} is not a fall time, which is above zero",
                "correct it, leave the cell empty, or void the row",
            )
        return replace(
            parsed, values=np.where(wrong, np.nan, parsed.values), bad=parsed.bad | wrong
        )

    def mind_split_decimals(self, fields: Mapping[str, Heading]) -> None:
        """Refuse rows in which a decimal comma may have been taken for a delimiter.

        That is a whole number followed, in a column that holds words, by digits alone.
        """
        measured = {heading.column: heading for heading in self.layout.times}
        if heading := fields.get("temperature"):
            measured[heading.column] = heading
        words = {fields[name].column for name in ("note", "operator") if name in fields}
        for number in sorted(measured):
            if number + 1 not in words:
                continue
            codes, texts = self.grid.columns[number].distinct()
            digits = np.array([text.isdigit() and len(text) < 4 for text in texts], dtype=bool)
            for row in np.flatnonzero(digits[codes]) if texts else ():
                whole = self.grid.columns[number - 1].text(int(row))
                if whole.isdigit():
                    after = self.grid.columns[number].text(int(row))
                    self.fault(
                        int(row),
                        number,
                        f"{quoted(whole)} followed by {quoted(after)} may be"
                        f" {whole},{after} with a decimal comma",
                        "write decimal points, or semicolons between cells; if it is right as it"
                        f" stands, write {whole}.0",
                    )
