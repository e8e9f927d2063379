"""Columns of a clean file as slices of its bytes, read without making a string a cell."""

from __future__ import annotations

from functools import cached_property

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from plumbfall.timings.columns import Clocks, Integers, Numbers

__all__ = ["BREAK", "PADDING", "QUOTE", "STAND_IN", "SliceColumn", "as_written"]

PADDING = 32
"""Zero bytes that must follow the last cell of a :class:`SliceColumn`'s buffer."""
STAND_IN = 1
"""Byte that stands for a delimiter within a quoted cell; it is no text of its own."""
BREAK = 2
"""Byte that stands for a line end within a quoted cell."""
QUOTE = 3
"""Byte that stands for a quote within a quoted cell, where it is written twice."""
_DIGITS = 15  # a whole number below 10**15 and a power of ten to 10**22 are exact as floats
_LONGEST_CLOCK = 16  # 999:59:59.999999
_POWERS = 10.0 ** np.arange(_DIGITS + 5)
_WORD_MASKS = np.array([(1 << 8 * size) - 1 for size in range(9)], dtype=np.uint64)


def as_written(text: str, delimiter: str) -> str:
    """Return a cell's text with what the bytes that stand for something stand for."""
    return text.replace("\x01", delimiter).replace("\x02", "\n").replace("\x03", '"')


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
    delimiter : str
        What :data:`STAND_IN` stands for.
    """

    def __init__(
        self,
        buffer: NDArray[np.uint8],
        before: Integers,
        ends: Integers,
        *,
        padded: bool,
        delimiter: str,
    ) -> None:
        self._buffer = buffer
        self._before = before
        self._ends = ends
        self._padded = padded
        self._delimiter = delimiter
        self._numbers: dict[str, Numbers] = {}
        self._distinct: tuple[Integers, list[str]] | None = None
        self._clocks: Clocks | None = None

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
        return as_written(cell.tobytes().decode("utf-8"), self._delimiter).strip()

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
        if rows is not None:
            return self._coded(rows)
        if self._distinct is None:
            self._distinct = self._coded(None)
        return self._distinct

    def take(self, rows: Integers) -> SliceColumn:
        """Return some of the rows."""
        return SliceColumn(
            self._buffer,
            self._before[rows],
            self._ends[rows],
            padded=self._padded,
            delimiter=self._delimiter,
        )

    def _coded(self, rows: Integers | None) -> tuple[Integers, list[str]]:
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

    def clocks(self) -> Clocks:
        """Read times of minutes and seconds, or hours too, byte by byte over all rows at once.

        Rows are read whose hours have up to three digits, minutes up to four (two after hours),
        seconds two, with a point or comma and up to six more; any others are left as not clean.
        """
        if self._clocks is None:
            self._clocks = self._read_clocks()
        return self._clocks

    def _read_clocks(self) -> Clocks:
        starts, lengths = self._slices
        size = starts.size
        result = Clocks.none(size)
        longest = int(lengths.max(initial=0))
        if not size or longest < 4 or not (self._buffer == ord(":")).any():
            return result
        longest = min(longest, _LONGEST_CLOCK)
        live = np.flatnonzero((lengths >= 4) & (lengths <= longest))
        starts, lengths = starts[live], lengths[live]
        part = np.zeros(live.size)  # of the latest part, its value and its digits
        digits = np.zeros(live.size, dtype=np.int8)
        whole = np.zeros(live.size)  # minutes of the parts before it
        colons = np.zeros(live.size, dtype=np.int8)
        decimals = np.zeros(live.size, dtype=np.int8)
        marked = np.zeros(live.size, dtype=bool)
        good = np.ones(live.size, dtype=bool)
        for offset in range(0, longest, 8):
            words = self._words(starts, lengths, offset)
            for place in range(min(8, longest - offset)):
                byte = (words >> np.uint64(8 * place)).astype(np.uint8)
                digit = byte - np.uint8(48)  # wraps round for bytes below "0"
                is_digit = digit < 10
                is_colon = byte == ord(":")
                is_mark = (byte == ord(".")) | (byte == ord(","))
                good &= is_digit | is_colon | is_mark | (byte == 0)
                # a part ends: the first has one to four digits, any other two and less than 60
                ends = is_colon | is_mark
                good &= ~ends | ~marked
                good &= ~ends | np.where(colons == 0, (digits > 0) & (digits <= 4), digits == 2)
                good &= ~is_colon | (colons == 0) | (part < 60)
                good &= ~is_mark | (colons > 0)
                good &= ~is_mark | (part < 60)
                whole = np.where(is_colon, whole * 60 + part, whole)
                part = np.where(is_digit, part * 10 + digit, np.where(is_colon, 0.0, part))
                digits = np.where(is_digit, digits + np.int8(1), np.where(is_colon, 0, digits))
                digits = digits.astype(np.int8, copy=False)
                decimals += is_digit & marked
                colons += is_colon
                marked |= is_mark
        plain = part / _POWERS[decimals]
        good &= (colons == 1) | ((colons == 2) & (whole < 60 * 1000))
        good &= (digits - decimals == 2) & (plain < 60) & (~marked | (decimals > 0))
        # one division of two exact whole numbers gives the float nearest to the text
        seconds = (whole * 60 * _POWERS[decimals] + part) / _POWERS[decimals]
        rows = live[good]
        result.values[rows] = seconds[good]
        clean, hours = result.clean.copy(), result.whole.copy()
        clean[rows] = True
        hours[rows] = ((colons == 2) & ~marked & (part == 0) & (whole >= 60))[good]
        return Clocks(result.values, clean, hours)

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
