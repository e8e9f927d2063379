"""What a cell's text means as a plain number, and what is wrong with it."""

from __future__ import annotations

import math
import re

from plumbfall.timings.clocks import read_clock
from plumbfall.timings.faults import Fault
from plumbfall.timings.notices import quoted
from plumbfall.timings.units import temperature_unit, time_unit

__all__ = [
    "MISSING",
    "is_missing",
    "is_thousands",
    "looks_like_number",
    "read_number",
    "with_plain_minus",
]

MISSING = frozenset(
    {
        "",
        "-",
        "--",
        "−",
        "–",
        "—",
        "/",
        "?",
        "n/a",
        "#n/a",
        "na",
        "n.a.",
        "nan",
        "<na>",
        "none",
        "null",
    }
    | {"nil", "missing", "void"}
)
"""Spellings, in lower case, of a value that was not taken."""

_NUMBER = re.compile(r"[+-]?(?:[0-9]+(?:[.,][0-9]*)?|[.,][0-9]+)")
# as programs print it; a stray e among digits does not look like this
_SCIENTIFIC = re.compile(r"[+-]?[0-9][.,][0-9]+[eE][+-][0-9]{2,3}")
_THOUSANDS = re.compile(r"[+-]?[1-9][0-9]{0,2},[0-9]{3}")
_MONTH = "jan|feb|mar|apr|may|jun|jul|aug|sep|oct|nov|dec|mai|okt|dez"
_DATE = re.compile(
    r"[0-9]{4}-[0-9]{1,2}-[0-9]{1,2}(?:[T ].*)?"
    r"|[0-9]{1,2}([./-])[0-9]{1,2}\1[0-9]{4}(?: .*)?|[0-9]{1,2}([/-])[0-9]{1,2}\2[0-9]{2}(?: .*)?"
    rf"|[0-9]{{1,4}}[-. /]*(?:{_MONTH})[a-z]*[-. /]*[0-9]{{0,4}}"
    rf"|(?:{_MONTH})[a-z]*[-. /]*[0-9]{{1,4}}",
    re.IGNORECASE,
)
_IN_CELL = re.compile(r"([+-]?[0-9][0-9.,:]*)\s*([A-Za-z°µ%][^0-9]*)")
_MINUSES = str.maketrans(dict.fromkeys("−–‒﹣－", "-"))
_LETTERS = str.maketrans({"O": "0", "o": "0", "l": "1", "I": "1", "|": "1"})


def is_missing(text: str) -> bool:
    """Say whether a cell holds no value, by being empty or by a usual spelling."""
    return text.casefold() in MISSING


def with_plain_minus(text: str) -> str:
    """Return a text with the minus signs and dashes of typesetters as plain ones."""
    return text if text.isascii() else text.translate(_MINUSES)


def is_thousands(text: str) -> bool:
    """Say whether a comma could as well part thousands, as in ``1,234``."""
    return _THOUSANDS.fullmatch(text) is not None


def looks_like_number(text: str) -> bool:
    """Say whether a cell is a plain number with any decimal mark or with several."""
    return re.fullmatch(r"[+-]?[0-9][0-9.,]*", with_plain_minus(text)) is not None


def read_number(text: str, decimal: str, what: str) -> float | Fault:
    """Read a plain number with the file's decimal mark, or say what is wrong with it.

    ``what`` is the name of what is expected, such as ``a time``.
    """
    plain = with_plain_minus(text)
    other = "," if decimal == "." else "."
    if (_NUMBER.fullmatch(plain) or _SCIENTIFIC.fullmatch(plain)) and other not in plain:
        value = float(plain.replace(decimal, "."))
        if math.isfinite(value):
            return value
    return _explain(text, decimal, what)


def _explain(text: str, decimal: str, what: str) -> Fault:
    """Say why a text is no number, and what to type."""
    shown = quoted(text)
    wanted = {
        "a time": "type seconds such as 12.84, or minutes and seconds such as 1:03.15",
        "a temperature": "type a plain number such as 25.0, with the unit in the heading",
    }.get(what, "type a plain number")
    if text.casefold().lstrip("+-") in ("inf", "infinity", "∞"):
        return Fault(f"{shown} is not a finite number", wanted + ", or leave the cell empty")
    if _DATE.fullmatch(text):
        return Fault(
            f"{shown} is a date where {what} is expected; spreadsheets turn entries into dates",
            "format the column as text and type the value again as it was recorded",
        )
    if time_unit(text) or temperature_unit(text):
        return Fault(
            f"{shown} is a unit where {what} is expected",
            f"write the unit in the heading, as [{'s' if what == 'a time' else 'degC'}]",
        )
    mended = text.translate(_LETTERS)
    if mended != text and (_NUMBER.fullmatch(mended) or isinstance(read_clock(mended), float)):
        return Fault(f"{shown} has a letter among its digits", f"type {mended} if that is meant")
    if looks_like_number(text) and text.count(".") + text.count(",") > 1:
        return Fault(f"{shown} has more than one decimal mark", "type it with one only")
    if decimal == "," and _NUMBER.fullmatch(text):
        return Fault(
            f"{shown} has a decimal point, and this file's decimal mark is the comma",
            "write all numbers of a file with the same decimal mark",
        )
    if "," in text and looks_like_number(text):
        return Fault(
            f"{shown} has a comma where a decimal point is expected",
            f'type {text.replace(",", ".")}, or set decimal = "," under [timings] in the bench'
            " sheet",
        )
    found = _IN_CELL.fullmatch(text)
    if found:
        return Fault(
            f"{shown} has {quoted(found[2].strip())} after the number",
            "write the unit in the heading and plain numbers in the cells",
        )
    if re.fullmatch(r"[0-9]{1,3}:[0-9](?:[.,][0-9]*)?", text):
        return Fault(f"{shown} has one digit of seconds", "write two, such as 1:03.15")
    if re.search(r"[0-9]\s+[0-9]", text):
        return Fault(f"{shown} has a space among its digits", wanted)
    return Fault(f"{shown} is not {what}", wanted)
