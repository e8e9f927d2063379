"""Headings that take more than one row: two rows merged, and a row of units below them."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass, field

from plumbfall.timings.headings import TIMES, Heading
from plumbfall.timings.units import temperature_unit, time_unit
from plumbfall.timings.values import is_missing
from plumbfall.timings.vocabulary import Vocabulary, is_value, part_heading, unit_of

__all__ = ["DEPTH", "Head", "read_head"]

DEPTH = 2
"""How many rows below the first may belong to the headings."""

_ORDINAL = re.compile(
    r"(?:(?:no|nr|drop|run|trial|reading|repeat|lap)\b\.?|#)?\s*([0-9]{1,3})(?:st|nd|rd|th|\.)?",
    re.IGNORECASE,
)
Cells = Sequence[str]


@dataclass(frozen=True, slots=True)
class Head:
    """Headings as one row of texts, units included.

    ``rows`` is how many rows below the first they took; ``merged`` says that a second row was
    read with the first, or the first with the row above it; ``units`` has the (heading, unit) of
    a unit row, ``contradicted`` those whose heading has another unit.
    """

    texts: tuple[str, ...]
    rows: int = 0
    merged: bool = False
    units: tuple[tuple[Heading, str], ...] = field(default=())
    contradicted: tuple[tuple[Heading, str], ...] = field(default=())


def read_head(above: Cells, first: Cells, below: Sequence[Cells], vocabulary: Vocabulary) -> Head:
    """Return the headings that begin in a row.

    Parameters
    ----------
    above : sequence of str
        The row right above, which may hold what several headings have in common; or empty.
    first : sequence of str
        The row that reads like headings.
    below : sequence of rows
        The :data:`DEPTH` rows below it, or fewer.
    vocabulary : Vocabulary
        What headings mean.
    """
    texts = tuple(text.strip() for text in first)
    merged = False
    if above and not any(map(is_value, map(str.strip, above))):
        joined = _joined_rows(above, texts, vocabulary)
        if _gains(joined, texts, vocabulary):
            texts, merged = joined, True
    rows = 0
    if not merged and below and _is_second(texts, below[0], vocabulary):
        texts, merged, rows = _joined_rows(texts, below[0], vocabulary), True, 1
    units: list[tuple[Heading, str]] = []
    contradicted: list[tuple[Heading, str]] = []
    if len(below) > rows and (found := _units(texts, below[rows], vocabulary)):
        rows += 1
        new = list(texts)
        for heading, unit in found:
            if not heading.unit:
                new[heading.column - 1] = f"{heading.text} [{unit}]"
                units.append((heading, unit))
            elif not _same(heading, unit):
                contradicted.append((heading, unit))
        texts = tuple(new)
    return Head(texts, rows, merged, tuple(units), tuple(contradicted))


def _same(heading: Heading, unit: str) -> bool:
    find = temperature_unit if heading.meaning == "temperature" else time_unit
    return find(heading.unit) == find(unit)


def _units(texts: Cells, row: Cells, vocabulary: Vocabulary) -> list[tuple[Heading, str]]:
    """Return the headings of times and temperatures with their units; empty where it has none."""
    found = []
    for heading in vocabulary.read_all(texts):
        cell = row[heading.column - 1].strip() if heading.column <= len(row) else ""
        if heading.meaning in (*TIMES, "temperature"):
            unit = unit_of(cell, heading.meaning)
            if unit:
                found.append((heading, unit))
            elif not is_missing(cell):
                return []
        elif is_value(cell):
            return []
    return found


def _is_second(first: Cells, second: Cells, vocabulary: Vocabulary) -> bool:
    """Say whether a row below headings is part of them."""
    cells = [cell.strip() for cell in second]
    values = [column for column, cell in enumerate(cells) if is_value(cell)]
    if not any(cells) or _units(first, second, vocabulary):
        return False
    joined = _joined_rows(first, second, vocabulary)
    if not values:
        return _gains(joined, first, vocabulary)
    # numbers count repeats or marks: 1 to n below one heading that stands over all of them
    numbers = [cells[column] for column in values]
    if numbers != [str(n) for n in range(1, len(numbers) + 1)] or len(numbers) < 2:
        return False
    start, end = values[0], values[-1]
    span = [
        first[column].strip() if column < len(first) else "" for column in range(start, end + 1)
    ]
    both = any(
        cell and not start <= column <= end and column < len(first) and first[column].strip()
        for column, cell in enumerate(cells)
    )
    return (
        end - start == len(values) - 1
        and bool(span[0])
        and not any(span[1:])
        and not both
        and vocabulary.has_times(joined)
    )


def _gains(joined: Cells, alone: Cells, vocabulary: Vocabulary) -> bool:
    """Say whether two rows of headings say more than one of them."""
    if not vocabulary.has_times(joined):
        return False
    return _said(joined, vocabulary) > _said(alone, vocabulary)


def _said(texts: Cells, vocabulary: Vocabulary) -> tuple[int, int]:
    headings = [vocabulary.read(text) for text in texts if text.strip()]
    return sum(bool(one.meaning) for one in headings), sum(
        bool(one.meaning and one.unit_fits) for one in headings
    )


def _joined_rows(top: Cells, bottom: Cells, vocabulary: Vocabulary) -> tuple[str, ...]:
    """Join two rows of headings; a cell of the top row stands over the empty ones right of it."""
    width = max(len(top), len(bottom))
    joined = []
    span = ""
    for column in range(width):
        over = top[column].strip() if column < len(top) else ""
        under = bottom[column].strip() if column < len(bottom) else ""
        span = over or (span if under else "")
        joined.append(_joined(span, under, vocabulary))
    return tuple(joined)


def _joined(over: str, under: str, vocabulary: Vocabulary) -> str:
    if not over or not under:
        return over or under
    heading = vocabulary.read(over)
    name, unit = part_heading(over)
    if not (time_unit(unit) or temperature_unit(unit)):
        name, unit = over, ""
    own = vocabulary.read(under)
    if own.meaning:
        fits = unit and Heading(under, 1, own.meaning, own.number, unit).unit_fits
        return f"{under} [{unit}]" if fits and not own.unit else under
    if heading.meaning and not unit and (written := unit_of(under, heading.meaning)):
        return f"{over} [{written}]"
    end = f" [{unit}]" if unit else ""
    if number := _ORDINAL.fullmatch(under):
        return f"{name} {number[1]}{end}"
    part, own_unit = part_heading(under)
    if own_unit and (time_unit(own_unit) or temperature_unit(own_unit)):
        number = _ORDINAL.fullmatch(part)
        return f"{name} {number[1] if number else part} [{own_unit}]"
    return f"{name} {under}{end}"
