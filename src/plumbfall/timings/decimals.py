"""Whether a file writes its decimals with a point or a comma."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np

from plumbfall.timings.columns import Column
from plumbfall.timings.notices import quoted
from plumbfall.timings.values import Fault, is_thousands, looks_like_number, read_clock

__all__ = ["Decimal", "find_decimal"]

_DECLARE = 'decimal = "," under [timings] in the bench sheet'


@dataclass(frozen=True, slots=True)
class Decimal:
    """The decimal mark, and what to say of a cell with a comma where that is not certain."""

    mark: str
    uncertain: str = ""
    remedy: str = ""

    def fault(self, text: str) -> Fault | None:
        """Return what is wrong with a cell whose comma may mean two things."""
        if self.uncertain and "," in text and looks_like_number(text) and "." not in text:
            return Fault(f"{quoted(text)} {self.uncertain}", self.remedy)
        return None


def find_decimal(columns: Iterable[Column], delimiter: str, declared: str | None) -> Decimal:
    """Return the decimal mark of a file from all its columns of numbers together.

    A comma is taken as the decimal mark where the delimiter is another character, no number of
    the file has a point, and at least one comma cannot part thousands.
    """
    if declared in (".", ","):
        return Decimal(declared)
    points = False
    commas: list[str] = []
    for column in columns:
        numbers = column.numbers(".")
        points |= numbers.fractional
        rest = np.flatnonzero(~numbers.clean)
        if rest.size:
            for text in column.distinct(rest)[1]:
                if looks_like_number(text) and read_clock(text) is None:
                    points |= "." in text
                    if "," in text:
                        commas.append(text)
    if not commas:
        return Decimal(".")
    if delimiter == ",":
        return Decimal(
            ".",
            "has a comma, which also stands between the cells of this file",
            f"write a decimal point, or set {_DECLARE} where all numbers are quoted like this",
        )
    if points:
        return Decimal(
            ".",
            "has a comma, and other numbers of this file have a decimal point",
            f"write all numbers with a point, or all with a comma and set {_DECLARE}",
        )
    if all(map(is_thousands, commas)):
        thousands = commas[0].replace(",", "")
        return Decimal(
            ".",
            f"may mean {commas[0].replace(',', '.')} or {thousands}"
            if len(set(commas)) == 1
            else "may have a decimal comma or a comma that parts thousands",
            f"set {_DECLARE} if it is a decimal comma, otherwise write the number without it",
        )
    return Decimal(",")
