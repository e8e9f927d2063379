"""Which unit a number is shown in: chosen by its size, or as the bench sheet asks."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass

from plumbfall.errors import InputError
from plumbfall.report.rounding import Rounded, round_alone, round_bound, round_pair

__all__ = ["CELSIUS", "VISCOSITY_UNITS", "Scale", "pretty_unit", "scale_for", "viscosity_scale"]

VISCOSITY_UNITS = {"Pa.s": 1.0, "mPa.s": 1e3, "P": 10.0, "cP": 1e3}
"""Units a viscosity may be shown in, and how many of each make one Pa.s."""


@dataclass(frozen=True, slots=True)
class Scale:
    """A unit to show numbers in: shown value = SI value x ``factor`` + ``offset``."""

    unit: str
    factor: float = 1.0
    offset: float = 0.0

    def pair(self, value: float, u: float) -> Rounded:
        """Round value and uncertainty by GUM 7.2.6 in this unit."""
        return round_pair(value, u, factor=self.factor, offset=self.offset)

    def bound(self, value: float, place: int) -> str:
        """Round a bound to the decimal place of a pair."""
        return round_bound(value, place, factor=self.factor, offset=self.offset)

    def alone(self, value: float | None, digits: int = 4) -> str:
        """Round a number without uncertainty."""
        return round_alone(value, digits, factor=self.factor, offset=self.offset)

    def fixed(self, value: float | None, decimals: int) -> str:
        """Round a number to a fixed count of decimals."""
        return self.bound(math.nan if value is None else value, -decimals)


CELSIUS = Scale("degC", 1.0, -273.15)

_BY_SIZE: dict[str, tuple[tuple[float, Scale], ...]] = {
    "m": ((10.0, Scale("m")), (1e-4, Scale("mm", 1e3)), (0.0, Scale("um", 1e6))),
    "kg": ((1.0, Scale("kg")), (1e-3, Scale("g", 1e3)), (0.0, Scale("mg", 1e6))),
    "m/s": ((1.0, Scale("m/s")), (0.0, Scale("mm/s", 1e3))),
    "m2/s": ((0.0, Scale("mm2/s", 1e6)),),
    "m2/s2": ((0.0, Scale("mPa.s.cm3/(g.s)", 1e6)),),
    "rad": ((0.0, Scale("deg", 180.0 / math.pi)),),
    "K": ((200.0, CELSIUS), (0.0, Scale("K"))),
    "1": ((1e-3, Scale("")), (0.0, Scale("ppm", 1e6))),
}
"""By SI unit: the size from which on each unit is used. No correction reaches 200 K, no
temperature of a liquid in a tube is below it: so a kelvin shows which of the two it is."""


def viscosity_scale(value: float, unit: str | None = None) -> Scale:
    """Return mPa.s below 1 Pa.s and Pa.s from there on, unless a unit is asked for.

    Raises
    ------
    InputError
        If the unit asked for is none of :data:`VISCOSITY_UNITS`.
    """
    if unit is None:
        return Scale("Pa.s") if abs(value) >= 1.0 else Scale("mPa.s", 1e3)
    if unit not in VISCOSITY_UNITS:
        raise InputError(
            f"a viscosity cannot be shown in {unit!r}",
            key="bench.viscosity_unit",
            remedy=f"write one of {', '.join(VISCOSITY_UNITS)}",
        )
    return Scale(unit, VISCOSITY_UNITS[unit])


def scale_for(unit: str, size: float) -> Scale:
    """Return the unit for a quantity of an SI unit, by the larger of its value and uncertainty."""
    if unit == "Pa.s":
        return viscosity_scale(size)
    size = abs(size) or 0.01  # an exact zero takes the unit that is read most
    for threshold, scale in _BY_SIZE.get(unit, ()):
        if size >= threshold:
            return scale
    return Scale(unit)


_PRETTY = {
    "mPa.s": "mPa·s",
    "Pa.s": "Pa·s",
    "degC": "°C",
    "deg": "°",
    "um": "µm",
    "mm2/s": "mm²/s",
    "m2/s": "m²/s",
    "m2/s2": "m²/s²",
    "m/s2": "m/s²",
    "kg/m3": "kg/m³",
}
_LONGEST_FIRST = "|".join(sorted(map(re.escape, _PRETTY), key=len, reverse=True))
_UNIT = re.compile(rf"(?<![\w.])(?:{_LONGEST_FIRST})(?![\w.]*\w)")


def pretty_unit(text: str) -> str:
    """Return a text with the units in it as print has them: ``mPa·s``, ``°C``, ``kg/m³``.

    Examples
    --------
    >>> pretty_unit("851.3 mPa.s at 25.00 degC, degrees of freedom 9")
    '851.3 mPa·s at 25.00 °C, degrees of freedom 9'
    """
    return _UNIT.sub(lambda unit: _PRETTY[unit[0]], text)
