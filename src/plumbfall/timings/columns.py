"""A column of cells: its texts, its distinct texts, and its plain numbers, all at once."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Any, Protocol, TypeVar

import numpy as np
import pandas as pd
from numpy.typing import NDArray

__all__ = ["Column", "FloatColumn", "Integers", "Numbers", "SliceColumn", "TextColumn", "rows_of"]

Integers = NDArray[np.int64]
T = TypeVar("T")
_PLAIN = {
    ".": re.compile(r"-?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)"),
    ",": re.compile(r"-?(?:[0-9]+(?:,[0-9]*)?|,[0-9]+)"),
}
_POWERS = 10.0 ** np.arange(20)
_WORD_MASKS = np.array([(1 << 8 * size) - 1 for size in range(9)], dtype=np.uint64)
_DIGITS = 15  # a whole number below 10**15 and a power of ten to 10**22 are exact as floats
PADDING = 32
"""Zero bytes that must follow the last cell of a :class:`SliceColumn`'s buffer."""


@dataclass(frozen=True, slots=True)
class Numbers:
    """A column's plain numbers, shape (rows,): NaN, and not ``clean``, where a cell is not one.

    ``fractional`` says whether any cell has a decimal mark.
    """

    values: NDArray[np.float64]
    clean: NDArray[np.bool_]
    fractional: bool


class Column(Protocol):
    """What the layout asks of a column, wherever its cells come from."""

    def __len__(self) -> int: ...

    def text(self, row: int) -> str:
        """Return one cell's text, without the spaces round it."""

    def distinct(self, rows: Integers | None = None) -> tuple[Integers, list[str]]:
        """Return codes, shape (rows,), and the distinct texts that they number."""

    def numbers(self, decimal: str = ".") -> Numbers:
        """Read every plain number, correctly rounded; nothing is guessed."""


def rows_of(codes: Integers, chosen: Mapping[int, T]) -> Iterator[tuple[int, T]]:
    """Yield every row whose code is among the chosen ones, with what the code stands for."""
    if chosen:
        among = np.zeros(int(codes.max(initial=0)) + 1, dtype=bool)
        among[list(chosen)] = True
        for row in np.flatnonzero(among[codes]):
            yield int(row), chosen[int(codes[row])]


def _coded(texts: Any) -> tuple[Integers, list[str]]:
    """Number distinct texts after stripping the spaces round them."""
    codes, found = pd.factorize(texts)
    stripped = [str(text).strip() for text in found]
    if len(set(stripped)) < len(stripped):
        merged, names = pd.factorize(np.array(stripped, dtype=object))
        return merged[codes].astype(np.int64, copy=False), [str(name) for name in names]
    return codes.astype(np.int64, copy=False), stripped


class TextColumn:
    """Cells held as Python strings; for files with quotes, spreadsheets and tables."""

    def __init__(self, cells: Sequence[str]) -> None:
        self._cells = np.empty(len(cells), dtype=object)
        self._cells[:] = cells

    def __len__(self) -> int:
        return self._cells.size

    def text(self, row: int) -> str:
        """Return one cell's text, without the spaces round it."""
        return str(self._cells[row]).strip()

    def distinct(self, rows: Integers | None = None) -> tuple[Integers, list[str]]:
        """Return codes, shape (rows,), and the distinct texts that they number."""
        return _coded(self._cells if rows is None else self._cells[rows])

    def numbers(self, decimal: str = ".") -> Numbers:
        """Read every plain number, each distinct text once."""
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
        value = float(self._values[row])
        if np.isnan(value):
            return ""
        if not np.isfinite(value):
            return str(value)
        return np.format_float_positional(value, trim="-")

    def distinct(self, rows: Integers | None = None) -> tuple[Integers, list[str]]:
        """Return codes, shape (rows,), and the distinct texts that they number."""
        chosen = self._values if rows is None else self._values[rows]
        codes, found = pd.factorize(chosen, use_na_sentinel=False)
        return codes.astype(np.int64), [FloatColumn(found).text(row) for row in range(len(found))]

    def numbers(self, decimal: str = ".") -> Numbers:
        """Return the finite numbers as they are."""
        clean = np.isfinite(self._values)
        return Numbers(np.where(clean, self._values, np.nan), clean, True)


class SliceColumn:
    """Cells as slices of the file's own bytes; for clean files of any length.

    Parameters
    ----------
    buffer : array of bytes, shape (n,)
        UTF-8 text that ends in :data:`PADDING` zeros.
    before, ends : arrays, shape (rows,)
        Where the byte before each cell is, and one past where the cell ends.
    padded : bool
        Whether cells may have spaces round them.
    """

    def __init__(
        self, buffer: NDArray[np.uint8], before: Integers, ends: Integers, *, padded: bool
    ) -> None:
        self._buffer = buffer
        self._before = before
        self._ends = ends
        self._padded = padded
        self._numbers: dict[str, Numbers] = {}

    def __len__(self) -> int:
        return self._before.size

    @cached_property
    def _slices(self) -> tuple[Integers, Integers]:
        """Where cells start, and how long they are, without the spaces round them."""
        starts, ends = self._before + 1, self._ends
        for _ in range(8 if self._padded else 0):
            space = (self._buffer[starts] == 32) & (starts < ends)
            starts = starts + space
            ends = ends - ((self._buffer[ends - 1] == 32) & (starts < ends))
        return starts, ends - starts

    def text(self, row: int) -> str:
        """Return one cell's text, without the spaces round it."""
        cell = self._buffer[self._before[row] + 1 : self._ends[row]]
        return cell.tobytes().decode("utf-8").strip()

    def _words(self, starts: Integers, lengths: Integers, offset: int) -> NDArray[np.uint64]:
        """Return eight bytes of every cell as one number, zero beyond the cell's end."""
        anywhere = np.ndarray(
            (self._buffer.size - 7,), dtype="<u8", buffer=self._buffer.data, strides=(1,)
        )
        words = anywhere[starts + offset if offset else starts]
        words &= _WORD_MASKS[np.clip(lengths - offset, 0, 8)]
        return words

    def distinct(self, rows: Integers | None = None) -> tuple[Integers, list[str]]:
        """Return codes, shape (rows,), and the distinct texts that they number.

        Eight bytes of every cell are numbered at a time, and pairs of numbers again, so that
        no string is made but for the distinct ones.
        """
        starts, lengths = self._slices
        if rows is not None:
            starts, lengths = starts[rows], lengths[rows]
        if not starts.size:
            return np.empty(0, dtype=np.int64), []
        longest = int(lengths.max())
        if not longest:
            return np.zeros(starts.size, dtype=np.int64), [""]
        codes, found = pd.factorize(self._words(starts, lengths, 0))
        codes = codes.astype(np.int64, copy=False)
        live = np.arange(starts.size)
        for offset in range(8, longest, 8):
            live = live[lengths[live] > offset]
            numbers, found = pd.factorize(self._words(starts[live], lengths[live], offset))
            pairs, _ = pd.factorize(codes[live] * len(found) + numbers)
            codes[live] = pairs + int(codes.max()) + 1
        if longest > 8:
            codes = pd.factorize(codes)[0].astype(np.int64, copy=False)
        first = np.empty(int(codes.max()) + 1, dtype=np.int64)
        first[codes[::-1]] = np.arange(starts.size - 1, -1, -1)
        where = first if rows is None else rows[first]
        names = [self.text(int(row)) for row in where]
        if len(set(names)) == len(names):
            return codes, names
        merged, _ = pd.factorize(np.array(names, dtype=object))
        return merged[codes].astype(np.int64, copy=False), list(dict.fromkeys(names))

    def numbers(self, decimal: str = ".") -> Numbers:
        """Read every plain number of up to 15 digits, digit by digit over all rows at once.

        The digits make a whole number and the decimal mark a power of ten; both are exact, so
        their quotient is the float nearest to the text, as ``float`` gives it.
        """
        if decimal not in self._numbers:
            self._numbers[decimal] = self._read_numbers(ord(decimal))
        return self._numbers[decimal]

    def _read_numbers(self, mark: int) -> Numbers:
        starts, lengths = self._slices
        longest = min(int(lengths.max(initial=0)), _DIGITS + 1)
        negative = (self._buffer[starts] == ord("-")) & (lengths > 0)
        if negative.any():
            starts, lengths = starts + negative, lengths - negative
        size = starts.size
        # whole numbers below 10**15 are exact as floats, and floats multiply faster
        whole = np.zeros(size)
        digits = np.zeros(size, dtype=np.int8)
        decimals = np.zeros(size, dtype=np.int8)
        marked = np.zeros(size, dtype=bool)
        strange = np.zeros(size, dtype=bool)
        for offset in range(0, longest, 8):
            words = self._words(starts, lengths, offset)
            for place in range(min(8, longest - offset)):
                byte = (words >> np.uint64(8 * place)).astype(np.uint8)
                digit = byte - np.uint8(48)  # wraps round for bytes below "0"
                is_digit = digit < 10
                is_mark = byte == mark
                strange |= (is_mark & marked) | ~(is_digit | is_mark | (byte == 0))
                np.multiply(whole, 10.0, out=whole, where=is_digit)
                np.add(whole, digit, out=whole, where=is_digit)
                digits += is_digit
                decimals += is_digit & marked
                marked |= is_mark
        clean = (digits > 0) & (digits <= _DIGITS) & ~strange & (lengths <= longest)
        whole /= _POWERS[decimals]
        np.negative(whole, out=whole, where=negative)
        whole[~clean] = np.nan
        return Numbers(whole, clean, bool((clean & marked).any()))
