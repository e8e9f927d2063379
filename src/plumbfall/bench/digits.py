"""Numbers as typed: digits kept as decimals, and a number with its uncertainty in brackets."""

from __future__ import annotations

import re
from decimal import Decimal, InvalidOperation

__all__ = ["NUMBER", "concise", "decimal_of", "tidy"]

NUMBER = r"[+-]?(?:\d+(?:\.\d*)?|\.\d+)"
"""A number without exponent, as a pattern."""

_SPACES = dict.fromkeys(["\t", "\u00a0", "\u202f", *map(chr, range(0x2000, 0x200B))], " ")
_NOTHING = dict.fromkeys("\u200b\u2060\ufeff", "")
_MINUS = dict.fromkeys("\u2212\u2013\u2014\u2012", "-")
_LOOKALIKE = str.maketrans({**_SPACES, **_NOTHING, **_MINUS, "\u00d7": "x", "\u22c5": "\u00b7"})
_SUPERSCRIPT = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁺", "0123456789-+")
_PLUS_MINUS = re.compile(r"\+\s*/\s*-|\+-")
_TEN_TO_THE = re.compile(
    r"(?<=[\d.)])\s*[x*·]\s*10(?:\s*(?:\^|\*\*)\s*\(?([+-]?\d{1,3})\)?|([+-]\d{1,3})|([⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁺]{1,4}))"
    r"(?![\d.])"
)
# Groups of three digits set apart by spaces (SI Brochure 5.4.4), as in 100.021 47(35) g. A last
# digit before "/" or at the end of the text is the unit 1, not a group.
_GROUPED_WHOLE = re.compile(r"(?<![\d.])\d{1,3}(?: \d{3})+(?!\d)")
_GROUPED_PART = re.compile(r"\.\d{3}(?: \d{3})*(?: \d{1,3})?(?!\d)(?!\s*/)(?!\s*$)")


def tidy(text: str) -> str:
    """Return text with one spelling of blanks, minus, ±, powers of ten and digit groups."""
    text = _PLUS_MINUS.sub("±", text.translate(_LOOKALIKE).strip())
    text = _TEN_TO_THE.sub(
        lambda found: "e" + (found[1] or found[2] or found[3].translate(_SUPERSCRIPT)), text
    )
    for pattern in (_GROUPED_WHOLE, _GROUPED_PART):
        text = pattern.sub(lambda found: found[0].replace(" ", ""), text)
    return text


def decimal_of(text: str) -> Decimal | None:
    """Return a number as typed, or ``None`` where no float can hold it."""
    try:
        number = Decimal(text)
    except InvalidOperation:
        return None
    if not number.is_finite() or (number and abs(number.adjusted()) > 300):
        return None
    return number


def concise(value: Decimal, u: Decimal) -> str:
    """Return a value with its standard uncertainty in brackets (GUM 7.2.2).

    The uncertainty keeps the digits it has; one with more than four is rounded to two.

    >>> concise(Decimal("50.0"), Decimal("0.1"))
    '50.0(1)'
    >>> concise(Decimal("1.2021"), Decimal("0.0030"))
    '1.2021(30)'
    """
    u = u.normalize() if u else u
    if len(u.as_tuple().digits) > 4:
        u = Decimal(f"{u:.1e}").normalize()
    last = min(_exponent(value), _exponent(u), 0)
    if last < -12 or abs(value) >= Decimal("1e12"):
        power = value.adjusted() if value else u.adjusted()
        head = concise(value.scaleb(-power), u.scaleb(-power))
        return f"{head}e{power}"
    digits = int(u.scaleb(-last).to_integral_value())
    return f"{value:.{-last}f}({digits})"


def _exponent(number: Decimal) -> int:
    exponent = number.as_tuple().exponent
    if not isinstance(exponent, int):
        raise ValueError(f"{number} is not finite")
    return exponent if number else max(exponent, -12)
