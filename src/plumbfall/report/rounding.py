"""The one place where numbers are rounded for people (GUM 7.2.6); nothing computes with it.

Two digits of uncertainty, the value to the same decimal. Decimal arithmetic on the shortest
spelling of a float, so that a half is a half and 0.0996 becomes 0.10, not 0.100.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, ROUND_HALF_UP, Decimal

__all__ = ["NO_VALUE", "Rounded", "round_alone", "round_bound", "round_pair"]

NO_VALUE = "–"
"""What is printed where there is no number."""

PLAIN_EXPONENTS = range(-4, 7)
"""Decimal exponents of the leading digit that are written out; others take a power of ten."""


@dataclass(frozen=True, slots=True)
class Rounded:
    """A value and its uncertainty as text, both multiplied by ten to the ``exponent``.

    ``place`` is the decimal exponent of the last digit shown; ``u`` is empty for an exact value.
    """

    value: str
    u: str
    place: int
    exponent: int = 0

    @property
    def plus_minus(self) -> str:
        """As ``100.02147 ± 0.00079``."""
        if not self.u:
            return self.value + self._power
        text = f"{self.value} ± {self.u}"
        return f"({text}){self._power}" if self.exponent else text

    @property
    def concise(self) -> str:
        """As ``100.02147(79)``: the uncertainty in the last digits of the value."""
        if not self.u:
            return self.value + self._power
        whole, point, decimals = self.u.partition(".")
        digits = self.u if point and int(whole) else (decimals or whole).lstrip("0")
        return f"{self.value}({digits}){self._power}"

    @property
    def _power(self) -> str:
        return f"e{self.exponent}" if self.exponent else ""


def round_pair(value: float, u: float, *, factor: float = 1.0, offset: float = 0.0) -> Rounded:
    """Round an uncertainty to two digits and its value to the same decimal.

    Parameters
    ----------
    value : float
        The value, in SI units. Not a number gives :data:`NO_VALUE`.
    u : float
        Its uncertainty, standard or expanded. 0 (exact) shows the value as it stands; one that
        is not finite shows the value with five digits.
    factor, offset : float
        The unit shown: ``value x factor + offset``; ``u`` takes the factor alone.

    Returns
    -------
    Rounded
        Halves of a value go to the even digit, halves of an uncertainty up.

    References
    ----------
    JCGM 100:2008, 7.2.6.

    Examples
    --------
    >>> round_pair(100.02147, 0.00079).plus_minus
    '100.02147 ± 0.00079'
    """
    if not math.isfinite(value):
        return Rounded(NO_VALUE, "", 0)
    shown = _decimal(value) * _decimal(factor) + _decimal(offset)
    if u == 0.0:
        return _as_it_stands(shown)
    if not math.isfinite(u):
        return _to_digits(shown, 5)
    spread, place = _two_digits(abs(_decimal(u) * _decimal(factor)))
    shown = shown.quantize(Decimal(1).scaleb(place), rounding=ROUND_HALF_EVEN)
    leading = max((part.adjusted() for part in (shown, spread) if part), default=0)
    exponent = 0 if leading in PLAIN_EXPONENTS else leading
    return Rounded(_plain(shown, exponent), _plain(spread, exponent), place, exponent)


def round_bound(value: float, place: int, *, factor: float = 1.0, offset: float = 0.0) -> str:
    """Round a bound of an interval to the decimal its uncertainty was rounded to.

    Examples
    --------
    >>> round_bound(0.84713, -1, factor=1000.0)
    '847.1'
    """
    if not math.isfinite(value):
        return NO_VALUE
    shown = _decimal(value) * _decimal(factor) + _decimal(offset)
    shown = shown.quantize(Decimal(1).scaleb(place), rounding=ROUND_HALF_EVEN)
    exponent = 0 if not shown or shown.adjusted() in PLAIN_EXPONENTS else shown.adjusted()
    return _plain(shown, exponent) + (f"e{exponent}" if exponent else "")


def round_alone(
    value: float | None, digits: int = 4, *, factor: float = 1.0, offset: float = 0.0
) -> str:
    """Round a number that comes without uncertainty to so many digits, never to zero.

    Examples
    --------
    >>> round_alone(0.000099999)
    '1.000e-4'
    >>> round_alone(0.0359421, 3)
    '0.0359'
    """
    if value is None or not math.isfinite(value):
        return NO_VALUE
    rounded = _to_digits(_decimal(value) * _decimal(factor) + _decimal(offset), digits)
    return rounded.plus_minus


def _decimal(number: float) -> Decimal:
    return Decimal(repr(float(number)))


def _two_digits(spread: Decimal) -> tuple[Decimal, int]:
    """Round an uncertainty to two digits; a carry (0.0996 to 0.10) does not make it three."""
    place = spread.adjusted() - 1
    rounded = spread.quantize(Decimal(1).scaleb(place), rounding=ROUND_HALF_UP)
    if rounded.adjusted() - 1 > place:
        place += 1
        rounded = rounded.quantize(Decimal(1).scaleb(place), rounding=ROUND_HALF_UP)
    return rounded, place


def _to_digits(shown: Decimal, digits: int) -> Rounded:
    if not shown:
        return Rounded("0", "", 0)
    place = shown.adjusted() - digits + 1
    rounded = shown.quantize(Decimal(1).scaleb(place), rounding=ROUND_HALF_EVEN)
    if rounded.adjusted() > shown.adjusted():
        place += 1
        rounded = rounded.quantize(Decimal(1).scaleb(place))
    exponent = 0 if rounded.adjusted() in PLAIN_EXPONENTS[1:] else rounded.adjusted()
    return Rounded(_plain(rounded, exponent), "", place, exponent)


def _as_it_stands(shown: Decimal) -> Rounded:
    """Show an exact value with the digits it was given, at most ten (beyond is float noise)."""
    if not shown:
        return Rounded("0", "", 0)
    place = max(shown.adjusted() - 9, int(shown.normalize().as_tuple().exponent))
    rounded = shown.quantize(Decimal(1).scaleb(place), rounding=ROUND_HALF_EVEN).normalize()
    exponent = 0 if rounded.adjusted() in PLAIN_EXPONENTS else rounded.adjusted()
    return Rounded(_plain(rounded, exponent), "", place, exponent)


def _plain(number: Decimal, exponent: int) -> str:
    """Spell a number out, divided by a power of ten; zero never carries a minus sign."""
    text = f"{number.scaleb(-exponent):f}"
    return text if number else text.lstrip("-")
