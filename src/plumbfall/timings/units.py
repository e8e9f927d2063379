"""Units of timing files: from a heading's text to how a plain number becomes SI."""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from plumbfall.errors import InputError
from plumbfall.quantities import ExactUnit, exact_unit

__all__ = ["Unit", "temperature_unit", "time_unit"]

# time [mm:ss], time [h:mm:ss.ff], time [min:s]
_CLOCK = re.compile(r"(?:h{1,2}:)?(?:m{1,2}|min):(?:s{1,2}|sec)(?:[.,][a-z0]+)?")
# Â° is what a degree sign looks like after a wrong decoding, and ᵒ or o what is typed for one
_DEGREES = re.compile(
    r"(?:(?:deg(?:rees?)?|grad|gr|Â?[°º˚])[\s_.]*(?:(?P<sign>[cfk])|(?P<name>celsius|fahrenheit))"
    r"|(?-i:[ᵒoO](?P<raised>[CF]))|(?P<word>centigrade|celsius|fahrenheit|kelvin))\.?",
    re.IGNORECASE,
)
_SECONDS = {
    **dict.fromkeys(("sek", "sekunde", "sekunden", "secs", "seconde", "secondes"), "s"),
    **dict.fromkeys(("segundo", "segundos", "secondo", "secondi"), "s"),
    **dict.fromkeys(("minute", "minuten", "minutos", "minuti"), "min"),
    **dict.fromkeys(("stunde", "stunden", "heure", "heures", "std"), "h"),
    **dict.fromkeys(("µs", "μs", "us"), "us"),
}


@dataclass(frozen=True, slots=True)
class Unit:
    """A unit of time or temperature.

    ``clock`` is true for headings such as ``time [mm:ss]``, whose plain numbers have no unit.
    """

    exact: ExactUnit
    clock: bool = False

    def to_si(self, values: NDArray[np.float64]) -> NDArray[np.float64]:
        """Convert an array of any shape to seconds or kelvin.

        The factor's numerator and denominator are applied in turn: 12840 ms is exactly 12.84 s,
        which a factor of 0.001 would miss by a rounding.
        """
        factor, offset = self.exact.factor, self.exact.offset
        if offset:
            values = values + float(offset / factor)
        if factor.numerator != 1:
            values = values * float(factor.numerator)
        return values / float(factor.denominator) if factor.denominator != 1 else values


@lru_cache(maxsize=512)
def time_unit(text: str) -> Unit | None:
    """Return the unit of time that a text names, or ``None``.

    Examples
    --------
    >>> time_unit("ms").exact.factor, time_unit("mm:ss").clock, time_unit("mm")
    (Fraction(1, 1000), True, None)
    """
    if _CLOCK.fullmatch(text.strip().casefold()):
        return Unit(ExactUnit(Fraction(1), Fraction(0)), clock=True)
    folded = text.strip().casefold().rstrip(".")
    if _SECONDS.get(folded) == "us":
        return Unit(ExactUnit(Fraction(1, 1_000_000), Fraction(0)))
    return _unit("time", text, text.casefold(), folded, _SECONDS.get(folded, ""))


@lru_cache(maxsize=512)
def temperature_unit(text: str) -> Unit | None:
    """Return the unit of temperature that a text names, or ``None``.

    Examples
    --------
    >>> float(temperature_unit("°C").exact.offset), temperature_unit("s")
    (273.15, None)
    """
    if found := _DEGREES.fullmatch(text.strip()):
        written = found["sign"] or found["name"] or found["raised"] or found["word"]
        letter = written[0].upper()
        return _unit("temperature", "K" if letter == "K" else f"deg{letter}")
    return _unit("temperature", text, text.upper(), text.casefold())


def _unit(dimension: str, *spellings: str) -> Unit | None:
    if any(character.isdigit() for character in spellings[0]):
        return None  # no unit of time or temperature has a digit, many a cell has
    for spelling in spellings:
        if spelling.strip():
            try:
                return Unit(exact_unit(spelling, dimension))
            except InputError:
                continue
    return None
