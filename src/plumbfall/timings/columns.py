"""A column of cells: its texts, its distinct texts, and its plain numbers, all at once."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Any, Protocol, TypeVar

import numpy as np
import pandas as pd
from numpy.typing import NDArray

__all__ = [
    "Clocks",
    "Column",
    "FloatColumn",
    "Integers",
    "Numbers",
    "TextColumn",
    "number_text",
    "rows_of",
    "unread",
]

Integers = NDArray[np.int64]
T = TypeVar("T")
_PLAIN = {
    ".": re.compile(r"-?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)"),
    ",": re.compile(r"-?(?:[0-9]+(?:,[0-9]*)?|,[0-9]+)"),
}


@dataclass(frozen=True, slots=True)
class Numbers:
    """A column's plain numbers, shape (rows,): NaN, and not ``clean``, where a cell is not one.

    ``fractional`` says whether any cell has a decimal mark.
    """

    values: NDArray[np.float64]
    clean: NDArray[np.bool_]
    fractional: bool


@dataclass(frozen=True, slots=True)
class Clocks:
    """A column's times with colons in seconds, shape (rows,); not ``clean`` where a cell is none.

    ``whole`` says where a time has hours and whole minutes only.
    """

    values: NDArray[np.float64]
    clean: NDArray[np.bool_]
    whole: NDArray[np.bool_]

    @classmethod
    def none(cls, rows: int) -> Clocks:
        """Return a column that has none."""
        no = np.zeros(rows, dtype=bool)
        return cls(np.full(rows, np.nan), no, no)


class Column(Protocol):
    """What the layout asks of a column, wherever its cells come from."""

    def __len__(self) -> int: ...

    def text(self, row: int) -> str:
        """Return one cell's text, without the spaces round it."""

    def distinct(self, rows: Integers | None = None) -> tuple[Integers, list[str]]:
        """Return codes, shape (rows,), and the distinct texts that they number."""

    def numbers(self, decimal: str = ".") -> Numbers:
        """Read every plain number, correctly rounded; nothing is guessed."""

    def clocks(self) -> Clocks:
        """Read times such as 1:03.15 or 1:02:03, as far as that is done for all rows at once."""

    def take(self, rows: Integers) -> Column:
        """Return some of the rows."""


def unread(column: Column) -> Integers:
    """Return the rows that hold neither a plain number, by point or comma, nor a clock time."""
    rest = np.flatnonzero(~column.numbers(".").clean)
    if rest.size:
        rest = rest[~column.clocks().clean[rest]]
    if rest.size:
        rest = rest[~column.numbers(",").clean[rest]]
    return rest.astype(np.int64, copy=False)


def number_text(value: float) -> str:
    """Return a number as one would type it, empty for NaN."""
    text = repr(value)
    if "e" not in text and "n" not in text:
        return text.removesuffix(".0")
    if np.isnan(value):
        return ""
    return np.format_float_positional(value, trim="-") if np.isfinite(value) else str(value)


def rows_of(codes: Integers, chosen: Mapping[int, T]) -> Iterator[tuple[int, T]]:
    """Yield every row whose code is among the chosen ones, with what the code stands for."""
    if chosen:
        among = np.zeros(int(codes.max(initial=0)) + 1, dtype=bool)
        among[list(chosen)] = True
        for row in np.flatnonzero(among[codes]):
            yield int(row), chosen[int(codes[row])]


def _coded(texts: Any) -> tuple[Integers, list[str]]:
    """Return codes and distinct texts, the spaces round them taken off."""
    codes, found = pd.factorize(texts)
    stripped = [str(text).strip() for text in found]
    if len(set(stripped)) < len(stripped):
        merged, names = pd.factorize(np.array(stripped, dtype=object))
        return merged[codes].astype(np.int64, copy=False), [str(name) for name in names]
    return codes.astype(np.int64, copy=False), stripped


class TextColumn:
    """Cells held as Python strings; for files with quotes, spreadsheets and tables."""

    def __init__(self, cells: Sequence[str] | NDArray[np.object_]) -> None:
        self._cells = np.empty(len(cells), dtype=object)
        self._cells[:] = cells
        self._distinct: tuple[Integers, list[str]] | None = None
        self._numbers: dict[str, Numbers] = {}

    def __len__(self) -> int:
        return self._cells.size

    def text(self, row: int) -> str:
        """Return one cell's text, without the spaces round it."""
        return str(self._cells[row]).strip()

    def distinct(self, rows: Integers | None = None) -> tuple[Integers, list[str]]:
        """Return codes, shape (rows,), and the distinct texts that they number."""
        if rows is not None:
            return _coded(self._cells[rows])
        if self._distinct is None:
            self._distinct = _coded(self._cells)
        return self._distinct

    def clocks(self) -> Clocks:
        """Return none: distinct texts are read one by one."""
        return Clocks.none(len(self))

    def take(self, rows: Integers) -> TextColumn:
        """Return some of the rows."""
        return TextColumn(self._cells[rows])

    def numbers(self, decimal: str = ".") -> Numbers:
        """Read every plain number, each distinct text once."""
        if decimal not in self._numbers:
            self._numbers[decimal] = self._read_numbers(decimal)
        return self._numbers[decimal]

    def _read_numbers(self, decimal: str) -> Numbers:
        codes, texts = self.distinct()
        plain = _PLAIN[decimal]
        clean = np.array([plain.fullmatch(text) is not None for text in texts], dtype=bool)
        values = np.array(
            [
                float(text.replace(decimal, ".")) if good else np.nan
                for text, good in zip(texts, clean, strict=True)
            ],
            dtype=float,
        )
        clean &= np.isfinite(values)
        fractional = any(decimal in text for text, good in zip(texts, clean, strict=True) if good)
        if not texts:
            return Numbers(np.empty(0), np.empty(0, dtype=bool), False)
        return Numbers(values[codes], clean[codes], fractional)


class FloatColumn:
    """Numbers that came as numbers, from a table in memory; NaN is an empty cell."""

    def __init__(self, values: NDArray[np.float64]) -> None:
        self._values = values

    def __len__(self) -> int:
        return self._values.size

    def text(self, row: int) -> str:
        """Return the number as one would type it, empty for NaN."""
        return number_text(float(self._values[row]))

    def distinct(self, rows: Integers | None = None) -> tuple[Integers, list[str]]:
        """Return codes, shape (rows,), and the distinct texts that they number."""
        chosen = self._values if rows is None else self._values[rows]
        codes, found = pd.factorize(chosen, use_na_sentinel=False)
        return codes.astype(np.int64), [number_text(float(value)) for value in found]

    def numbers(self, decimal: str = ".") -> Numbers:
        """Return the finite numbers as they are."""
        clean = np.isfinite(self._values)
        return Numbers(np.where(clean, self._values, np.nan), clean, True)

    def clocks(self) -> Clocks:
        """Return none."""
        return Clocks.none(len(self))

    def take(self, rows: Integers) -> FloatColumn:
        """Return some of the rows."""
        return FloatColumn(self._values[rows])
