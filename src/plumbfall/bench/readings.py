"""What the forms of a quantity share: numbers as typed, estimates, and words for errors."""

from __future__ import annotations

import math
import numbers
from collections.abc import Mapping
from decimal import Decimal
from fractions import Fraction

from plumbfall.bench.digits import decimal_of
from plumbfall.errors import InputError
from plumbfall.estimate import Estimate
from plumbfall.quantities import DIMENSIONS

__all__ = [
    "BOUNDS",
    "LARGEST_BITS",
    "coverage_factor",
    "estimate_of",
    "exact",
    "number_in",
    "shown",
    "unreadable",
]

BOUNDS = {"rectangular": math.sqrt(3.0), "triangular": math.sqrt(6.0), "arcsine": math.sqrt(2.0)}
"""Half-width over standard uncertainty (GUM 4.3.7, 4.3.9; JCGM 101, 6.4.6.4 for arcsine)."""

LARGEST_BITS = 1000
"""Length of an integer beyond which no quantity can be meant (1e301)."""


def shown(written: object) -> str:
    """Return a value much as a sheet would show it."""
    if isinstance(written, str):
        return f"'{written}'"
    if isinstance(written, bool):
        return str(written).lower()
    if isinstance(written, Mapping):
        pairs = (f"{key} = {shown(value)}" for key, value in written.items())
        return "{ " + ", ".join(pairs) + " }"
    if isinstance(written, list | tuple):
        return "[" + ", ".join(shown(item) for item in written) + "]"
    if isinstance(written, float):
        return repr(float(written))
    if isinstance(written, int) and written.bit_length() > LARGEST_BITS:
        return "a number beyond 1e300"
    return str(written)


def unreadable(written: object, dimension: str) -> InputError:
    """Return the error that says what a quantity of a dimension looks like."""
    known = DIMENSIONS[dimension]
    return InputError(
        f"{shown(written)} cannot be read as {known.called}", remedy=f"write '{known.example}'"
    )


def estimate_of(
    value: Fraction,
    u: float,
    distribution: str,
    *,
    dimension: str,
    text: str,
    dof: float = math.inf,
) -> Estimate:
    """Return an estimate, refusing a number that no float can hold."""
    number = float(value)
    if (value and not number) or not math.isfinite(u):
        raise InputError(f"'{text}' is too large or too small", remedy="check the power of ten")
    return Estimate(number, u, distribution, dof, "", DIMENSIONS[dimension].unit, text)


def exact(written: object, key: str) -> Fraction:
    """Return a table's number as the exact fraction of the digits that were typed."""
    if isinstance(written, bool) or not isinstance(written, numbers.Real | Decimal):
        remedy = "write it as a plain number in the unit of the value"
        raise InputError(f"{key} = {shown(written)} is not a number", remedy=remedy)
    number = decimal_of(str(written) if isinstance(written, Decimal) else repr(float(written)))
    if number is None:
        raise InputError(f"{key} = {shown(written)} is no finite number", remedy="correct it")
    return Fraction(number)


def number_in(text: str, written: str) -> Decimal:
    """Return digits typed in a text as a number, or refuse them."""
    number = decimal_of(text)
    if number is None:
        raise InputError(f"'{written}' is too large or too small", remedy="check the power of ten")
    return number


def coverage_factor(k: Decimal | Fraction, written: str) -> Fraction:
    """Return a coverage factor, which is above zero."""
    if k <= 0:
        raise InputError(
            f"the coverage factor in {written} is not above zero",
            remedy="write the k of the certificate, such as k=2",
        )
    return Fraction(k)
