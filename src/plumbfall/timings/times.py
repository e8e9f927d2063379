"""Times of all rows at once: cells to seconds, and marks or intervals to fall times."""

from __future__ import annotations

import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from plumbfall.timings.cell_units import part_unit, read_with_unit
from plumbfall.timings.clocks import read_clock
from plumbfall.timings.columns import Column, Integers, rows_of
from plumbfall.timings.decimals import Decimal
from plumbfall.timings.faults import Fault
from plumbfall.timings.notices import quoted
from plumbfall.timings.units import Unit
from plumbfall.timings.values import is_missing, read_number

__all__ = ["FallTimes", "Parsed", "from_intervals", "from_marks", "parse_column"]

_WHOLE_MINUTES = re.compile(r"0*[1-9][0-9]*:[0-9]{2}:00")
Floats = NDArray[np.float64]
Flags = NDArray[np.bool_]


@dataclass(frozen=True, slots=True)
class Parsed:
    """One column in SI: NaN where ``missing`` or ``bad``; ``faults`` say why, with their rows.

    ``plain_row`` is the first row with a plain number that no unit covers, or -1. ``hours`` has
    two rows or more where all clock times of the column are whole minutes with hours.
    """

    values: Floats
    missing: Flags
    bad: Flags
    faults: list[tuple[int, Fault]]
    plain_row: int = -1
    hours: Integers | None = None


@dataclass(slots=True)
class FallTimes:
    """Fall times of all drops of a file, shape (drops,), with the marks they run between.

    ``why`` tells of rows whose time is ``missing`` for a reason beyond an empty cell;
    ``omitted`` has the (row, column number) of every point that was left out.
    """

    time: Floats
    missing: Flags
    bad: Flags
    from_mark: Integers
    to_mark: Integers
    marks: Floats | None = None
    why: dict[int, str] = field(default_factory=dict)
    omitted: list[tuple[int, int]] = field(default_factory=list)


def parse_column(
    column: Column, unit: Unit | None, decimal: Decimal, what: str, *, clock: bool
) -> Parsed:
    """Read a column of times (``clock``) or temperatures as SI.

    Clean numbers are read at once; every other distinct text is looked at by itself.
    """
    numbers = column.numbers(decimal.mark)
    scaled = unit is not None and not unit.clock
    values = unit.to_si(numbers.values) if unit is not None and scaled else numbers.values
    missing = np.zeros(len(column), dtype=bool)
    bad = np.zeros(len(column), dtype=bool)
    faults: list[tuple[int, Fault]] = []
    hours = np.zeros(0, dtype=np.int64)
    plain_row = -1 if scaled or not numbers.clean.any() else int(numbers.clean.argmax())
    rest = np.flatnonzero(~numbers.clean)
    whole_clocks = np.zeros(0, dtype=np.int64)
    any_clocks = 0
    if clock and rest.size and not (unit is not None and unit.exact.factor == 3600):
        clocks = column.clocks()
        values = np.where(clocks.clean, clocks.values, values)
        rest = rest[~clocks.clean[rest]]
        any_clocks = int(clocks.clean.sum())
        whole_clocks = np.flatnonzero(clocks.whole)
    hours = whole_clocks if whole_clocks.size == any_clocks else hours
    if rest.size:
        values = values.copy()
        codes, texts = column.distinct(rest)
        found = np.full(len(texts), np.nan)
        absent = np.zeros(len(texts), dtype=bool)
        plain = np.zeros(len(texts), dtype=bool)
        wrong: dict[int, Fault] = {}
        for code, text in enumerate(texts):
            if is_missing(text):
                absent[code] = True
                continue
            reading: float | Fault | None = read_clock(text) if clock else None
            if reading is not None and unit is not None and text.count(":") == 1:
                reading = _in_hours(text, unit) or reading
            if reading is None:
                reading, plain[code] = _number(text, unit, decimal, what)
            if isinstance(reading, Fault):
                wrong[code] = reading
            else:
                found[code] = reading
        if unit is not None and scaled:
            found = np.where(plain, unit.to_si(found), found)
        elif plain.any():
            row = int(rest[plain[codes].argmax()])
            plain_row = row if plain_row < 0 else min(row, plain_row)
        values[rest] = found[codes]
        missing[rest] = absent[codes]
        faults = [(int(rest[place]), fault) for place, fault in rows_of(codes, wrong)]
        bad[[row for row, _ in faults]] = True
        clocks_here = np.array([":" in text for text in texts], dtype=bool)
        whole = np.array([_WHOLE_MINUTES.fullmatch(text) is not None for text in texts], dtype=bool)
        if clock and whole_clocks.size == any_clocks and (whole == clocks_here).all():
            hours = np.sort(np.concatenate((whole_clocks, rest[whole[codes]])))
        else:
            hours = np.zeros(0, dtype=np.int64)
    return Parsed(values, missing, bad, faults, plain_row, hours if hours.size > 1 else None)


def _number(
    text: str, unit: Unit | None, decimal: Decimal, what: str
) -> tuple[float | Fault, bool]:
    """Read a number, and say whether it is a plain one that still needs the heading's unit."""
    parted = part_unit(text, what)
    number = parted[0] if parted else text
    plain = decimal.fault(number) or decimal.ungrouped(number)
    if isinstance(plain, Fault):
        return plain, False
    if parted:
        return read_with_unit(plain, parted[1], unit, decimal.mark, what, text), False
    reading = read_number(plain, decimal.mark, what)
    return reading, not isinstance(reading, Fault)


def _in_hours(text: str, unit: Unit) -> Fault | None:
    """Refuse 1:03 under a heading in hours."""
    if unit.exact.factor != 3600:
        return None
    return Fault(
        f"{quoted(text)} in a column of hours may be hours and minutes or minutes and seconds",
        "write hours, minutes and seconds, such as 1:03:00 or 0:01:03",
    )


def _ends(present: Flags) -> tuple[Integers, Integers, Integers]:
    """Return count, first and last index of the points present, each of shape (rows,)."""
    count = present.sum(axis=1)
    first = present.argmax(axis=1)
    last = present.shape[1] - 1 - present[:, ::-1].argmax(axis=1)
    return count, first, last


def from_marks(
    columns: Sequence[Parsed],
    first_mark: int,
    refuse: Callable[[int, int, str, str], None],
) -> FallTimes:
    """Turn clock readings at successive marks into fall times.

    ``refuse`` takes row, column number, message and remedy of readings that cannot be.
    """
    clock = np.column_stack([column.values for column in columns])
    bad = np.any([column.bad for column in columns], axis=0)
    lead = first_mark - 1
    if lead:
        clock = np.column_stack((np.zeros((len(clock), lead)), clock))
    present = ~np.isnan(clock)
    before = np.fmax.accumulate(np.where(present, clock, -np.inf), axis=1)[:, :-1]
    negative = present & (clock < 0)
    disordered = np.zeros_like(present)
    disordered[:, 1:] = present[:, 1:] & (clock[:, 1:] <= before) & ~negative[:, 1:]
    for row, mark in np.argwhere(negative):
        refuse(int(row), int(mark) - lead, "is a negative clock reading", "correct it or void it")
    for row, mark in np.argwhere(disordered):
        refuse(
            int(row),
            int(mark) - lead,
            f"at mark {mark + 1} is not after the mark before it ({before[row, mark - 1]:g} s)"
            if not lead or mark > 1
            else f"at mark {mark + 1} is not after mark 1, where the clock starts at 0",
            "marks are passed in order, and the clock runs on; correct the reading or void the row",
        )
    bad |= negative.any(axis=1) | disordered.any(axis=1)
    count, first, last = _ends(present)
    rows = np.arange(len(clock))
    missing = (count < 2) & ~bad
    time = np.where(missing | bad, np.nan, clock[rows, last] - clock[rows, first])
    result = FallTimes(time, missing, bad, first + 1, last + 1, clock)
    for row in np.flatnonzero(missing & (count == 1)):
        if not lead:
            result.why[int(row)] = f"only mark {first[row] + 1} was read"
    omitted = ~present & ~(missing | bad)[:, None]
    result.omitted = [(int(row), int(mark) - lead) for row, mark in np.argwhere(omitted)]
    return result


def from_intervals(columns: Sequence[Parsed]) -> FallTimes:
    """Turn times between successive marks into fall times and clock readings."""
    steps = np.column_stack([column.values for column in columns])
    bad = np.any([column.bad for column in columns], axis=0)
    present = ~np.isnan(steps)
    count, first, last = _ends(present)
    broken = (count > 0) & (count != last - first + 1) & ~bad
    missing = ((count == 0) & ~bad) | broken
    clock = np.full((len(steps), steps.shape[1] + 1), np.nan)
    clock[:, 1:] = np.where(present, np.where(present, steps, 0.0).cumsum(axis=1), np.nan)
    rows = np.arange(len(steps))
    clock[rows, first] = 0.0
    clock[missing | bad] = np.nan
    time = clock[rows, last + 1]
    result = FallTimes(time, missing, bad, first + 1, last + 2, clock)
    for row in np.flatnonzero(broken):
        gap = int(np.flatnonzero(~present[row, first[row] :])[0]) + int(first[row])
        result.why[int(row)] = f"interval {gap + 1} is empty between others"
    omitted = ~present & ~(missing | bad)[:, None]
    result.omitted = [(int(row), int(column)) for row, column in np.argwhere(omitted)]
    return result
