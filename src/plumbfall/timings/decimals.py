"""Whether a file writes its decimals with a point or a comma, and what parts its thousands."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass, replace

import numpy as np

from plumbfall.timings.cell_units import part_unit
from plumbfall.timings.clocks import read_clock
from plumbfall.timings.columns import Column
from plumbfall.timings.faults import Fault
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.values import is_thousands, looks_like_number

__all__ = ["Decimal", "find_decimal"]

_DECLARE = 'decimal = "," under [timings] in the bench sheet'
_FIRST = 1000
_SPACES = re.compile(r"[\s\u00a0\u2009\u202f]")


@dataclass(frozen=True, slots=True)
class Decimal:
    """The decimal mark, and what to say of a cell with a comma where that is not certain.

    ``thousands`` is what parts thousands where the user declared it, else empty; ``grouped`` says
    that the commas may part thousands though nobody did.
    """

    mark: str
    uncertain: str = ""
    remedy: str = ""
    thousands: str = ""
    grouped: bool = False

    def fault(self, text: str) -> Fault | None:
        """Return what is wrong with a cell whose comma may mean two things."""
        if self.uncertain and "," in text and looks_like_number(text) and "." not in text:
            return Fault(f"{quoted(text)} {self.uncertain}", self.remedy)
        return None

    def ungrouped(self, text: str) -> str | Fault:
        """Return a number without the marks that part its thousands.

        Examples
        --------
        >>> Decimal(".", thousands=",").ungrouped("1,234.5")
        '1234.5'
        """
        if not self.thousands:
            return text
        plain = _SPACES.sub(" ", text) if self.thousands == " " else text.replace("’", "'")
        if self.thousands not in plain:
            return text
        part, mark = re.escape(self.thousands), re.escape(self.mark)
        if re.fullmatch(rf"[+-]?[0-9]{{1,3}}(?:{part}[0-9]{{3}})+(?:{mark}[0-9]*)?", plain):
            return plain.replace(self.thousands, "")
        name = "space" if self.thousands == " " else quoted(self.thousands)
        return Fault(
            f"{quoted(text)} does not have three digits after each {name}, which is declared to"
            " part thousands",
            "correct the cell, or thousands under [timings] in the bench sheet",
        )


def find_decimal(
    columns: Iterable[tuple[Column, str]],
    delimiter: str,
    declared: str | None,
    thousands: str | None,
    notices: Notices,
) -> Decimal:
    """Return the decimal mark of a file from all its columns of numbers together.

    A comma is taken as the decimal mark where the delimiter is another character, no number of
    the file has a point, and at least one comma cannot part thousands. ``columns`` come with what
    they hold, ``a time`` or ``a temperature``. What is declared holds; a mark that is declared to
    part thousands leaves the other one for decimals.
    """
    if declared in (".", ","):
        if thousands == declared:
            notices.error(
                f"{quoted(declared)} is declared both as decimal mark and to part thousands",
                "correct decimal or thousands under [timings] in the bench sheet",
                key="timings.thousands",
            )
            thousands = None
        return Decimal(declared, thousands=thousands or "")
    if thousands in (".", ","):
        return Decimal("," if thousands == "." else ".", thousands=thousands)
    found = _found(columns, delimiter, thousands or "")
    if found.uncertain:
        notices.offer("decimal", '","')
        if found.grouped:
            notices.offer("thousands", '","')
    return replace(found, thousands=thousands or "")


def _found(columns: Iterable[tuple[Column, str]], delimiter: str, thousands: str) -> Decimal:
    points = False
    commas: list[str] = []
    for column, what in columns:
        numbers = column.numbers(".")
        points |= numbers.fractional
        rest = np.flatnonzero(~numbers.clean)
        if not rest.size:
            continue
        by_comma = column.numbers(",").clean[rest]
        if by_comma.any():
            # what is certain in a few is certain; only where it is not are all looked at
            first = column.distinct(rest[by_comma][:_FIRST])[1]
            if all(map(is_thousands, first)):
                first = column.distinct(rest[by_comma])[1]
            commas += first
        rest = rest[~(by_comma | column.clocks().clean[rest])]
        if rest.size:
            for text in column.distinct(rest)[1]:
                parted = part_unit(text, what)
                number = parted[0] if parted else text
                if thousands:
                    number = _SPACES.sub(" ", number).replace("’", "'").replace(thousands, "")
                if looks_like_number(number) and read_clock(text) is None:
                    points |= "." in number
                    if "," in number:
                        commas.append(number)
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
        whole = commas[0].replace(",", "")
        return Decimal(
            ".",
            f"may mean {commas[0].replace(',', '.')} or {whole}"
            if len(set(commas)) == 1
            else "may have a decimal comma or a comma that parts thousands",
            f'set {_DECLARE} if it is a decimal comma, thousands = "," there if it parts thousands,'
            " or write the number without it",
            grouped=True,
        )
    return Decimal(",")
