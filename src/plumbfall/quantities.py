"""One table of quantities and dimensions, and the way from a unit as typed to SI.

Units are converted where text is read and where a report is written, nowhere else. The registry
is closed: it holds the units of the bench sheet and nothing more, each with the trade's spellings.
Factors are exact fractions, so that ``"25.4 mm"`` and ``"1 in"`` give the same float.
"""

from __future__ import annotations

import math
import re
import unicodedata
from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from functools import cache, lru_cache
from types import MappingProxyType
from typing import Any, NamedTuple

from plumbfall.errors import InputError, nearest_name

__all__ = [
    "DIMENSIONS",
    "QUANTITIES",
    "Dimension",
    "ExactUnit",
    "NamedQuantity",
    "exact_unit",
    "from_si",
    "is_unit",
    "unit_to_si",
]


class Dimension(NamedTuple):
    """A kind of quantity: its SI unit, how a message calls it, an example and usual units."""

    unit: str
    called: str
    example: str
    units: tuple[str, ...]

    @property
    def unit_list(self) -> str:
        """The usual units as a phrase, such as ``m, cm, mm, um or in``."""
        *first, last = self.units
        return f"{', '.join(first)} or {last}" if first else last


DIMENSIONS: Mapping[str, Dimension] = MappingProxyType(
    {
        "time": Dimension("s", "a time", "0.10 s", ("s", "ms", "min", "h")),
        "length": Dimension("m", "a length", "50.00(2) mm", ("m", "cm", "mm", "um", "in")),
        "mass": Dimension("kg", "a mass", "32.25(1) mg", ("kg", "g", "mg")),
        "density": Dimension(
            "kg/m3", "a density", "970.2(2) kg/m3", ("kg/m3", "g/cm3", "g/mL", "kg/L")
        ),
        "viscosity": Dimension("Pa.s", "a viscosity", "950 mPa.s", ("Pa.s", "mPa.s", "P", "cP")),
        "kinematic viscosity": Dimension(
            "m2/s", "a kinematic viscosity", "1000 mm2/s", ("m2/s", "mm2/s", "St", "cSt")
        ),
        "temperature": Dimension("K", "a temperature", "25.00 degC", ("degC", "K", "degF")),
        "temperature difference": Dimension(
            "K", "a temperature difference", "0.00(5) K", ("K", "degC", "degF")
        ),
        "acceleration": Dimension("m/s2", "an acceleration", "9.8123(1) m/s2", ("m/s2",)),
        "angle": Dimension("rad", "an angle", "0.0(3) deg", ("deg", "rad")),
        "ratio": Dimension("1", "a ratio", "0.30 %", ("%", "ppm", "1")),
        "temperature coefficient": Dimension(
            "1/K", "a temperature coefficient", "10.4e-6 /K", ("/K", "%/K", "1/K", "%/degC")
        ),
        "tube constant": Dimension(
            "m2/s2", "a tube constant", "0.0123(1) mPa.s.cm3/(g.s)", ("m2/s2", "mPa.s.cm3/(g.s)")
        ),
        "speed": Dimension("m/s", "a speed", "15.8 mm/s", ("m/s", "mm/s")),
        "rate": Dimension("1/s", "a rate", "24 1/s", ("1/s",)),
        "stress": Dimension("Pa", "a stress", "20 Pa", ("Pa", "mPa")),
    }
)
"""Every dimension that is read or printed, by name."""


class NamedQuantity(NamedTuple):
    """A quantity of the trade: symbol as printed, dimension (a key of ``DIMENSIONS``), unit."""

    symbol: str
    dimension: str
    unit: str


QUANTITIES: Mapping[str, NamedQuantity] = MappingProxyType(
    {
        name: NamedQuantity(symbol, dimension, DIMENSIONS[dimension].unit)
        for name, symbol, dimension in (
            ("viscosity", "η", "viscosity"),
            ("kinematic viscosity", "ν", "kinematic viscosity"),
            ("ball diameter", "d", "length"),
            ("tube bore", "D", "length"),
            ("distance between marks", "L", "length"),
            ("ball mass", "m", "mass"),
            ("ball density", "ρb", "density"),
            ("liquid density", "ρf", "density"),
            ("fall time", "t", "time"),
            ("fall speed", "v", "speed"),
            ("gravity", "g", "acceleration"),
            ("temperature", "T", "temperature"),
            ("tilt", "θ", "angle"),
            ("viscosity slope", "β", "temperature coefficient"),
            ("linear expansion", "α", "temperature coefficient"),
            ("volumetric expansion", "γ", "temperature coefficient"),
            ("diameter ratio", "d/D", "ratio"),
            ("Reynolds number", "Re", "ratio"),
            ("drag factor", "K/K∞", "ratio"),
            ("tube constant", "K", "tube constant"),
            ("shear rate", "γ̇", "rate"),
            ("shear stress", "τ", "stress"),
        )
    }
)
"""Name, symbol, dimension and SI unit of every quantity that documents and headings name."""

_PI = "3.14159265358979323846264338327950288"

# name = definition, then every spelling of it; SI Brochure (9th ed.) tables 2, 4, 7 and 8, and
# NIST SP 811 (2008) appendix B for the inch, poise, stokes and degree Fahrenheit.
_UNITS = (
    ("metre = [length]", "m metre meter metres meters"),
    ("centimetre = 0.01 * metre", "cm"),
    ("millimetre = 0.001 * metre", "mm"),
    ("micrometre = 0.000001 * metre", "um micron microns"),
    ("inch = 0.0254 * metre", "in inch inches"),
    ("second = [time]", "s sec second seconds"),
    ("millisecond = 0.001 * second", "ms msec"),
    ("minute = 60 * second", "min mins minute minutes"),
    ("hour = 3600 * second", "h hr hour hours"),
    ("kilogram = [mass]", "kg"),
    ("gram = 0.001 * kilogram", "g gram grams"),
    ("milligram = 0.000001 * kilogram", "mg"),
    ("litre = 0.001 * metre ** 3", "L l litre liter"),
    ("millilitre = 0.000001 * metre ** 3", "mL ml cc ccm"),
    ("pascal = kilogram / metre / second ** 2", "Pa"),
    ("millipascal = 0.001 * pascal", "mPa"),
    ("pascalsecond = pascal * second", "Pas"),
    ("millipascalsecond = 0.001 * pascal * second", "mPas"),
    ("poise = 0.1 * pascal * second", "P poise"),
    ("centipoise = 0.001 * pascal * second", "cP cp cps centipoise"),
    ("stokes = 0.0001 * metre ** 2 / second", "St stokes"),
    ("centistokes = 0.000001 * metre ** 2 / second", "cSt cst centistokes"),
    ("kelvin = [temperature]", "K kelvin"),
    ("celsius = 1 * kelvin", "degC C celsius Celsius"),
    ("fahrenheit = 5 / 9 * kelvin", "degF F fahrenheit Fahrenheit"),
    ("radian = [angle]", "rad radian radians"),
    (f"degree = {_PI} / 180 * radian", "deg ° degree degrees"),
    ("unity = []", "1"),
    ("percent = 0.01", "% percent"),
    ("ppm = 0.000001", "ppm"),
)
_NAME_OF = {
    spelling: definition.split(" ", 1)[0]
    for definition, spellings in _UNITS
    for spelling in spellings.split()
}
_SPELLING_OF = {name: spelling for spelling, name in reversed(_NAME_OF.items())}

# Celsius: SI Brochure 2.3.1; Fahrenheit: NIST SP 811, B.8 (K = (degF + 459.67)/1.8).
_ZERO = {"celsius": Fraction("273.15"), "fahrenheit": Fraction("459.67") * Fraction(5, 9)}


_SHARES = ("percent", "ppm")
_PER_SHARE = ("kelvin", "celsius", "fahrenheit")
"""A share stands alone or per kelvin; "0.1 % mm" is no length."""


@dataclass(frozen=True, slots=True)
class ExactUnit:
    """SI value = number x ``factor`` + ``offset``; a difference takes the factor only."""

    factor: Fraction
    offset: Fraction


def unit_to_si(text: str, dimension: str) -> tuple[float, float]:
    """Return (factor, offset) that take a number in the unit ``text`` to SI.

    Parameters
    ----------
    text
        The unit as typed, such as ``mPa.s``, ``kg/m³`` or ``°C``.
    dimension
        A key of :data:`DIMENSIONS`. The offset is other than 0 for ``temperature`` only.

    Raises
    ------
    InputError
        Where the unit is unknown or of another dimension.

    Examples
    --------
    >>> unit_to_si("cP", "viscosity")
    (0.001, 0.0)
    >>> unit_to_si("degC", "temperature")
    (1.0, 273.15)
    """
    unit = exact_unit(text, dimension)
    return float(unit.factor), float(unit.offset)


def from_si(value: float, text: str, dimension: str) -> float:
    """Return an SI value as a number in the unit ``text`` (for printing).

    >>> from_si(298.15, "degC", "temperature")
    25.0
    """
    unit = exact_unit(text, dimension)
    if not math.isfinite(value):
        return value
    return float((Fraction(repr(float(value))) - unit.offset) / unit.factor)


def is_unit(text: str) -> bool:
    """Whether text is a unit of the closed registry, of whatever dimension.

    >>> is_unit("mm2/s"), is_unit("furlong")
    (True, False)
    """
    try:
        _factors(text)
    except ValueError:
        return False
    return True


def exact_unit(text: str, dimension: str, *, written: str = "") -> ExactUnit:
    """Return the exact factor and offset of a unit; ``written`` is what messages quote."""
    wanted = DIMENSIONS[dimension]
    try:
        factors = _factors(text)
    except ValueError as problem:
        raise InputError(str(problem), remedy=_unknown_remedy(problem, wanted)) from None
    factor, powers = _measure(factors)
    if powers != _powers_of(dimension):
        found = _dimension_of(powers)
        said = DIMENSIONS[found].called if found else "no quantity of a bench sheet"
        raise InputError(
            f"'{written or text}' is {said}",
            remedy=f"{wanted.called} is wanted, such as '{wanted.example}'",
        )
    alone = factors[0][0] if len(factors) == 1 else ""
    offset = _ZERO.get(alone, Fraction(0)) if dimension == "temperature" else Fraction(0)
    return ExactUnit(factor, offset)


def _unknown_remedy(problem: ValueError, wanted: Dimension) -> str:
    symbol = getattr(problem, "symbol", "")
    near = nearest_name(symbol, wanted.units) or nearest_name(symbol, _NAME_OF) if symbol else None
    usual = f"{wanted.called} is written in {wanted.unit_list}"
    return f"did you mean '{near}'? {usual}" if near and near != symbol else usual


class _UnknownSymbol(ValueError):
    """A symbol that is no unit of the closed registry."""

    def __init__(self, symbol: str) -> None:
        super().__init__(f"unknown unit '{symbol}'")
        self.symbol = symbol


_LOOKALIKE = str.maketrans(
    {**dict.fromkeys("º˚", "°"), **dict.fromkeys("·⋅•∙×", "*"), **dict.fromkeys("−–—‐‑", "-")}
)
_DEGREE = re.compile(r"(?:deg(?:rees?)?\.?|°)\s*([CFK])\b")
_TOKEN = re.compile(
    r"\s*(?:(?P<symbol>[A-Za-z°%]+|1(?!\d))(?:\^?\(?(?P<power>[+-]?\d)\)?(?!\d))?"
    r"|(?P<sign>[*./()]|-(?=[A-Za-z])))"
)


@lru_cache(maxsize=512)
def _factors(text: str) -> tuple[tuple[str, int], ...]:
    """Split a unit into (name, power) pairs; raises ValueError saying what is wrong."""
    plain = unicodedata.normalize("NFKC", text.translate(_LOOKALIKE)).translate(_LOOKALIKE)
    plain = plain.replace("μ", "u").replace("**", "^").replace("⁄", "/").replace("∕", "/").strip()
    plain = _DEGREE.sub(lambda found: "K" if found[1] == "K" else f"deg{found[1]}", plain)
    factors: list[tuple[str, int]] = []
    place, under, bracket, expects = 0, False, False, True
    while place < len(plain):
        token = _TOKEN.match(plain, place)
        if token is None:
            raise _UnknownSymbol(text.strip())
        place = token.end()
        symbol, sign = token["symbol"], token["sign"]
        if symbol:
            if symbol not in _NAME_OF:
                raise _UnknownSymbol(symbol)
            if under and not (bracket or expects):
                raise ValueError(f"the unit '{text.strip()}' can be read in two ways")
            power = int(token["power"] or 1)
            if power == 0:
                raise ValueError(f"the unit '{text.strip()}' cannot be read")
            factors.append((_NAME_OF[symbol], -power if under else power))
            expects = False
        elif sign == "/" and not bracket and (not expects or place == 1):
            under, expects = True, True
        elif sign in "*.-" and not expects:
            if under and not bracket:
                raise ValueError(f"the unit '{text.strip()}' can be read in two ways")
            expects = True
        elif sign == "(" and not bracket and expects:
            bracket = True
        elif sign == ")" and bracket and not expects:
            bracket = False
        else:
            raise ValueError(f"the unit '{text.strip()}' cannot be read")
    if expects or bracket:
        raise ValueError(f"the unit '{text.strip()}' cannot be read")
    if any(name in _SHARES for name, _ in factors) and any(
        name not in (*_SHARES, *_PER_SHARE) for name, _ in factors
    ):
        raise ValueError(f"the unit '{text.strip()}' mixes a share with a unit")
    return tuple(factors)


@cache
def _registry() -> Any:
    import pint

    registry: Any = pint.UnitRegistry(None, non_int_type=Fraction)
    for definition, _ in _UNITS:
        registry.define(definition)
    return registry


@lru_cache(maxsize=512)
def _measure(factors: tuple[tuple[str, int], ...]) -> tuple[Fraction, frozenset[Any]]:
    """Return the factor to SI and the powers of the base dimensions."""
    expression = " * ".join(f"{name} ** {power}" for name, power in factors)
    unit = _registry().Quantity(Fraction(1), expression).to_base_units()
    return Fraction(unit.magnitude), frozenset(dict(unit.dimensionality).items())


@cache
def _powers_of(dimension: str) -> frozenset[Any]:
    return _measure(_factors(DIMENSIONS[dimension].unit))[1]


def _dimension_of(powers: frozenset[Any]) -> str | None:
    return next((name for name in DIMENSIONS if _powers_of(name) == powers), None)
