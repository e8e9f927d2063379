"""The measured columns of a file, times and temperatures, in SI units."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from plumbfall.timings.columns import Integers
from plumbfall.timings.decimals import Decimal
from plumbfall.timings.grid import Grid
from plumbfall.timings.headings import Heading
from plumbfall.timings.layout import Layout, declared_unit
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.times import FallTimes, Parsed, from_intervals, from_marks, parse_column
from plumbfall.timings.totals import Watch, check_laps, from_totals
from plumbfall.timings.units import Unit, temperature_unit, time_unit

__all__ = ["MeasuredColumns"]


@dataclass(frozen=True, slots=True)
class MeasuredColumns:
    """Reads the measured columns of one file and says what is wrong with their cells."""

    grid: Grid
    layout: Layout
    units: Mapping[str, str]
    decimal: Decimal
    void: NDArray[np.bool_]
    sets: Integers
    watch: Watch
    notices: Notices

    def fault(self, row: int, column: int, message: str, remedy: str) -> None:
        """Note a cell that is wrong; in a void row, which is not used, it is a warning."""
        self.notices.error(
            message,
            "the row is void, so the value is left out" if self.void[row] else remedy,
            int(self.grid.lines[row]),
            column,
            severity="warning" if self.void[row] else "error",
        )

    def _unit(self, heading: Heading) -> Unit | None:
        """Return the unit of a heading, or the declared one; note one that is not known."""
        find = temperature_unit if heading.meaning == "temperature" else time_unit
        what = "temperature" if heading.meaning == "temperature" else "time"
        declared = declared_unit(heading, self.units)
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
        if parsed.hours is not None:
            cell = column.text(int(parsed.hours[0]))
            self.notices.error(
                f"all clock times of {quoted(heading.text)} are whole minutes, such as {cell}",
                "if minutes and seconds were typed, a spreadsheet has made them hours and minutes:"
                " format the column as text and type them again",
                int(self.grid.lines[parsed.hours[0]]),
                heading.column,
                severity="warning",
            )
        stored = self.grid.stored_times.get(heading.column)
        if stored is not None and heading.meaning != "temperature":
            parsed = self._minutes_refused(parsed, heading, stored)
        unknown = unit is None and bool(heading.unit or declared_unit(heading, self.units))
        if parsed.plain_row >= 0 and not unknown:
            self._note_unit(heading, unit, column.text(parsed.plain_row), parsed.plain_row)
        return parsed

    def _minutes_refused(self, parsed: Parsed, heading: Heading, stored: Integers) -> Parsed:
        """Refuse whole minutes that a spreadsheet stores as a time of day.

        Where 1:03 is typed for 1 min 3 s it stores 1 h 3 min. A time with seconds is certain, and
        any is under a heading such as ``time [h:mm:ss]``.
        """
        if heading.unit.strip().casefold().startswith("h") and ":" in heading.unit:
            return parsed
        rows = stored[parsed.values[stored] % 60 == 0]
        for row in rows:
            cell = self.grid.columns[heading.column - 1].text(int(row))
            self.fault(
                int(row),
                heading.column,
                f"{quoted(cell)} is stored as a time of day; it may have been typed as minutes and"
                " seconds, and be sixty times too long",
                "format the column as text and type the times again, type seconds, or head the"
                f" column {quoted(heading.label + ' [h:mm:ss]')} if it is right",
            )
        values, bad = parsed.values.copy(), parsed.bad.copy()
        values[rows], bad[rows] = np.nan, True
        return replace(parsed, values=values, bad=bad)

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
        self.notices.offer(f"units.{kind}", '"degC"' if kind == "temperature" else '"s"')
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
        if self.layout.kind == "total":
            total = self._parsed(headings[0], "a time")
            return from_totals(total, self.sets, self.watch, self._refuse_in(headings[0]))
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
        if total_heading := self.layout.fields.get("total"):
            total = self._parsed(total_heading, "a time")
            check_laps(columns[0], total, self.sets, self._refuse_in(total_heading))
        for row, number in result.omitted:
            heading = headings[number]
            left = "the point" if self.layout.kind == "marks" else "the interval"
            self.notices.repair(
                f"{heading.label} is empty; {left} is left out",
                int(self.grid.lines[row]),
                heading.column,
            )
        return result

    def _refuse_in(self, heading: Heading) -> Callable[[int, str, str], None]:
        """Return what notes a cell of a column that cannot be."""

        def refuse(row: int, message: str, remedy: str) -> None:
            cell = self.grid.columns[heading.column - 1].text(row)
            self.fault(row, heading.column, f"{quoted(cell)} {message}", remedy)

        return refuse

    def _refuse_mark(self, row: int, number: int, message: str, remedy: str) -> None:
        self._refuse_in(self.layout.times[number])(row, message, remedy)

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
                "correct it, leave the cell empty, or write void in a status column",
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
