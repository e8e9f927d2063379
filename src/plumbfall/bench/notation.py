"""A quantity as written in a bench sheet, read into an estimate in SI units.

Every form of the notation is here: text such as ``"2.0000(5) mm"``, certificates and tolerances
with ±, tables, and repeated readings. What is ambiguous is refused with what to type instead.
"""

from __future__ import annotations

import math
import numbers
import re
from collections.abc import Mapping
from decimal import Decimal
from fractions import Fraction
from typing import NamedTuple

from plumbfall.bench.digits import NUMBER, concise, decimal_of, tidy
from plumbfall.errors import InputError
from plumbfall.estimate import Estimate
from plumbfall.quantities import DIMENSIONS, ExactUnit, exact_unit

__all__ = ["BOUNDS", "read_quantity"]

BOUNDS = {"rectangular": math.sqrt(3.0), "triangular": math.sqrt(6.0), "arcsine": math.sqrt(2.0)}
"""Half-width over standard uncertainty (GUM 4.3.7, 4.3.9; JCGM 101, 6.4.6.4 for arcsine)."""

_EXPONENT = r"(?:[eE][+-]?\d+)?"
_ONE = re.compile(
    rf"(?P<value>{NUMBER})(?P<early>{_EXPONENT})\s*(?:\((?P<u>\d+(?:\.\d+)?|\.\d+)\))?"
    rf"(?P<late>{_EXPONENT})(?P<unit>(?![\d.]).*)",
    re.DOTALL,
)
_BOTH_BRACKETED = re.compile(
    rf"\(\s*(?P<value>{NUMBER}{_EXPONENT})\s*±\s*(?P<half>{NUMBER}{_EXPONENT})\s*\)"
    rf"(?P<power>{_EXPONENT})(?P<unit>(?![\d.]).*)",
    re.DOTALL,
)
_SIDE = re.compile(rf"(?P<number>{NUMBER}{_EXPONENT})(?P<unit>(?![\d.]).*)", re.DOTALL)
_COVERAGE = re.compile(rf"k\s*=\s*(?P<k>{NUMBER}{_EXPONENT})")
_QUALIFIER = re.compile(rf"[\s,;]*(?:\(\s*)?(?P<word>k\s*=\s*{NUMBER}{_EXPONENT}|limits)\s*\)?\s*$")
_COMMA = re.compile(r"\d,\d")
_THOUSANDS = re.compile(r"(?<![\d.])[1-9]\d{0,2},\d{3}(?![\d,])")


class _Reading(NamedTuple):
    """Digits as typed, in the unit as typed."""

    value: Decimal
    unit: str
    u: Decimal | None = None
    half: Decimal | None = None
    half_unit: str | None = None


def read_quantity(written: object, dimension: str) -> Estimate:
    """Return what a bench sheet says of one quantity, in SI units and without a name.

    Parameters
    ----------
    written
        Text, or a table with ``value`` and ``unit`` or with ``readings`` and ``unit``; from
        Python also anything with ``nominal_value`` and ``std_dev``, taken in the SI unit.
    dimension
        A key of :data:`plumbfall.quantities.DIMENSIONS`. An absolute temperature converts with
        its offset, its uncertainty without.

    Raises
    ------
    InputError
        Saying what is wrong and what to type instead.

    Examples
    --------
    >>> read_quantity("50.0 ± 0.2 mm, k=2", "length").u
    0.0001
    """
    if isinstance(written, str):
        return _from_text(written, dimension)
    if isinstance(written, Mapping):
        return _from_table(written, dimension)
    if hasattr(written, "nominal_value") and hasattr(written, "std_dev"):
        return _from_ufloat(written, dimension)
    if isinstance(written, numbers.Real) and not isinstance(written, bool):
        usual = DIMENSIONS[dimension].example.split(" ", 1)[1]
        raise InputError(
            f"{_shown(written)} has no unit",
            remedy=f"write it in quotes with its unit, such as '{_shown(written)} {usual}'",
        )
    raise _unreadable(written, dimension)


# --- text ---------------------------------------------------------------------------------------


def _from_text(written: str, dimension: str) -> Estimate:
    text = tidy(written)
    _refuse_comma(text, written)
    if not text:
        raise _unreadable(written, dimension)
    body, qualifier = text, ""
    found = _QUALIFIER.search(text)
    if found:
        body, qualifier = text[: found.start()].rstrip(), found["word"]
    if "," in body or ";" in body:
        rest = re.split(r"[,;]", body, maxsplit=1)[1].strip()
        raise InputError(
            f"'{written}' says '{rest}' after the quantity",
            remedy="only ', k=2' (an expanded uncertainty) or ', limits' (a tolerance) may follow",
        )
    if "±" in body:
        reading = _split_plus_minus(body, qualifier, written, dimension)
        return _plus_minus(reading, qualifier, written, dimension)
    reading = _split_plain(body, written, dimension)
    if qualifier:
        raise _needless_qualifier(reading, qualifier, written)
    unit = exact_unit(reading.unit, dimension, written=written)
    u = Fraction(reading.u or 0) * unit.factor
    return _estimate(
        Fraction(reading.value) * unit.factor + unit.offset,
        float(u),
        "normal" if u else "exact",
        dimension=dimension,
        text=written,
    )


def _split_plain(body: str, written: str, dimension: str) -> _Reading:
    found = _ONE.fullmatch(body)
    if found is None:
        raise _unreadable(written, dimension)
    unit = found["unit"].strip()
    if found["u"] and found["early"]:
        typed = f"{found['value']}({found['u']}){found['early']} {unit}".strip()
        raise InputError(
            f"'{written}' can be read in two ways",
            remedy=f"write the power of ten last, such as '{typed}'",
        )
    power = found["early"] or found["late"]
    value = _number(found["value"] + power, written)
    u = None
    if found["u"]:
        u = _number(found["u"] + power, written)
        if "." not in found["u"]:
            u = u.scaleb(-len(found["value"].partition(".")[2]))
    _require_unit(unit, written, dimension)
    return _Reading(value, unit, u)


def _split_plus_minus(body: str, qualifier: str, written: str, dimension: str) -> _Reading:
    together = _BOTH_BRACKETED.fullmatch(body)
    if together:
        unit = together["unit"].strip()
        _require_unit(unit, written, dimension)
        value, half = (_number(together[part] + together["power"], written) for part in (1, 2))
        return _Reading(value, unit, half=half)
    sides = [_SIDE.fullmatch(side.strip()) for side in body.split("±")]
    if len(sides) != 2 or sides[0] is None or sides[1] is None:
        raise _unreadable(written, dimension)
    value, half = (_number(side["number"], written) for side in sides if side)
    unit, half_unit = sides[0]["unit"].strip(), sides[1]["unit"].strip()
    _require_unit(unit or half_unit, written, dimension)
    if unit and not half_unit:
        meant = ", ".join(part for part in (f"{body} {unit}", qualifier) if part)
        raise InputError(f"'{written}' has no unit after ±", remedy=f"write '{meant}'")
    return _Reading(value, unit or half_unit, half=half, half_unit=half_unit)


def _plus_minus(reading: _Reading, qualifier: str, written: str, dimension: str) -> Estimate:
    unit = exact_unit(reading.unit, dimension, written=written)
    half = _half_width(reading, unit, written, dimension)
    if half < 0:
        raise InputError(f"'{written}' has a negative uncertainty", remedy="write it without sign")
    if not qualifier:
        in_unit = half / unit.factor
        bracketed = concise(reading.value, _as_decimal(in_unit))
        raise InputError(
            f"'{written}' does not say what ± means",
            remedy="certificate: add ', k=2'; tolerance: add ', limits'; standard uncertainty: "
            f"write '{bracketed} {reading.unit}'",
        )
    value = Fraction(reading.value) * unit.factor + unit.offset
    if qualifier == "limits":
        u, shape = float(half) / BOUNDS["rectangular"], "rectangular"
    else:
        found = _COVERAGE.fullmatch(qualifier)
        k = _number(found["k"], written) if found else Decimal(0)
        u, shape = float(half / _coverage_factor(k, written)), "normal"
    return _estimate(value, u, shape if half else "exact", dimension=dimension, text=written)


def _half_width(reading: _Reading, unit: ExactUnit, written: str, dimension: str) -> Fraction:
    """Return what stands after ± in SI; a percentage of a value that is none is relative."""
    half = Fraction(reading.half or 0)
    if not reading.half_unit or reading.half_unit == reading.unit:
        return half * unit.factor
    if reading.half_unit in ("%", "percent", "ppm") and dimension != "ratio":
        if dimension == "temperature" or not reading.value:
            raise InputError(
                f"'{written}' has an uncertainty relative to "
                f"{'a temperature' if reading.value else 'zero'}",
                remedy=f"write the uncertainty in {reading.unit}",
            )
        relative = exact_unit(reading.half_unit, "ratio")
        return abs(Fraction(reading.value)) * unit.factor * half * relative.factor
    as_difference = "temperature difference" if dimension == "temperature" else dimension
    return half * exact_unit(reading.half_unit, as_difference, written=written).factor


# --- tables -------------------------------------------------------------------------------------

_TABLE_KEYS = ("value", "unit", "u", "dof", "U", "k", "within", "shape", "readings")


def _from_table(table: Mapping[str, object], dimension: str) -> Estimate:
    text = _shown(table)
    for key in table:
        if key not in _TABLE_KEYS:
            raise InputError(
                f"'{key}' is not a key of a quantity",
                remedy=f"known keys are {', '.join(_TABLE_KEYS)}",
            )
    if "unit" not in table:
        raise InputError(
            f"{text} has no unit",
            remedy=f"add unit, one of {DIMENSIONS[dimension].unit_list}",
        )
    unit_text = table["unit"]
    if not isinstance(unit_text, str):
        raise InputError(f"unit = {_shown(unit_text)} is not text", remedy="write it in quotes")
    if "readings" in table:
        return _from_readings(table, unit_text, dimension, text)
    if "value" not in table:
        raise InputError(f"{text} has no value", remedy="add value, or readings")
    unit = exact_unit(unit_text, dimension, written=f"{_shown(table['value'])} {unit_text}")
    value = _exact(table["value"], "value") * unit.factor + unit.offset
    stated = [key for key in ("u", "U", "within") if key in table]
    if len(stated) > 1:
        raise InputError(
            f"{text} states its uncertainty more than once",
            remedy="keep one of u (standard), U with k (expanded) and within (bounds)",
        )
    _refuse_stray(table, stated[0] if stated else "", text)
    if not stated:
        return _estimate(value, 0.0, "exact", dimension=dimension, text=text)
    size = _exact(table[stated[0]], stated[0]) * unit.factor
    if size < 0:
        raise InputError(f"{stated[0]} is negative in {text}", remedy="write it without sign")
    dof = math.inf
    if "dof" in table:
        dof = float(_exact(table["dof"], "dof"))
        if dof <= 0:
            raise InputError(f"dof = {_shown(table['dof'])} is not above zero", remedy="correct it")
    if stated[0] == "within":
        shape = table.get("shape", "rectangular")
        if not isinstance(shape, str) or shape not in BOUNDS:
            raise InputError(
                f"shape = {_shown(shape)} is not known", remedy=f"use one of {', '.join(BOUNDS)}"
            )
        u = float(size) / BOUNDS[shape]
    elif stated[0] == "U":
        u = float(size / _coverage_factor(_exact(table["k"], "k"), text))
        shape = "normal"
    else:
        u, shape = float(size), "normal"
    shape = shape if size else "exact"
    return _estimate(value, u, shape, dof=dof, dimension=dimension, text=text)


def _refuse_stray(table: Mapping[str, object], stated: str, text: str) -> None:
    """Refuse a key that belongs to another way of stating the uncertainty."""
    owner = {"k": ("U",), "shape": ("within",), "dof": ("u", "U", "within")}
    for key, owners in owner.items():
        if key in table and stated not in owners:
            raise InputError(f"{text} has {key} without {owners[0]}", remedy=f"add {owners[0]}")
    if stated == "U" and "k" not in table:
        raise InputError(
            f"{text} has an expanded uncertainty U without its coverage factor",
            remedy="add k, such as k = 2, or give the standard uncertainty as u",
        )


def _from_readings(
    table: Mapping[str, object], unit_text: str, dimension: str, text: str
) -> Estimate:
    stray = [key for key in table if key not in ("readings", "unit")]
    if stray:
        raise InputError(
            f"readings stand together with {', '.join(stray)}",
            remedy="keep readings and unit only; the instrument's own error belongs in its entry",
        )
    readings = table["readings"]
    if not isinstance(readings, list | tuple):
        raise InputError(
            f"readings = {_shown(readings)} is not a list", remedy="write readings = [1.1, 1.2]"
        )
    unit = exact_unit(unit_text, dimension, written=f"{_shown(readings)} {unit_text}")
    values = [_exact(reading, "readings") for reading in readings]
    n = len(values)
    if n < 2:
        raise InputError(
            f"{'one reading shows' if n else 'no readings show'} no scatter",
            remedy="give at least two readings, or a value with its uncertainty u",
        )
    mean = sum(values, Fraction(0)) / n
    variance = sum(((value - mean) ** 2 for value in values), Fraction(0)) / (n - 1)
    u = math.sqrt(variance / n * unit.factor**2)
    return _estimate(
        mean * unit.factor + unit.offset, u, "t", dof=n - 1.0, dimension=dimension, text=text
    )


def _from_ufloat(written: object, dimension: str) -> Estimate:
    value = _exact(getattr(written, "nominal_value", None), "nominal value")
    u = _exact(getattr(written, "std_dev", None), "standard deviation")
    shape = "normal" if u else "exact"
    return _estimate(value, float(u), shape, dimension=dimension, text=str(written))


# --- shared -------------------------------------------------------------------------------------


def _estimate(
    value: Fraction,
    u: float,
    distribution: str,
    *,
    dimension: str,
    text: str,
    dof: float = math.inf,
) -> Estimate:
    number = float(value)
    if (value and not number) or not math.isfinite(u):
        raise InputError(f"'{text}' is too large or too small", remedy="check the power of ten")
    return Estimate(number, u, distribution, dof, "", DIMENSIONS[dimension].unit, text)


def _exact(written: object, key: str) -> Fraction:
    """Return a table's number as the exact fraction of the digits that were typed."""
    if isinstance(written, Decimal | Fraction):
        return Fraction(written)
    if isinstance(written, numbers.Real) and not isinstance(written, bool):
        number = decimal_of(repr(float(written)))
        if number is not None:
            return Fraction(number)
        raise InputError(f"{key} = {_shown(written)} is no finite number", remedy="correct it")
    remedy = "write it as a plain number in the unit of the value"
    raise InputError(f"{key} = {_shown(written)} is not a number", remedy=remedy)


def _number(text: str, written: str) -> Decimal:
    number = decimal_of(text)
    if number is None:
        raise InputError(f"'{written}' is too large or too small", remedy="check the power of ten")
    return number


def _as_decimal(number: Fraction) -> Decimal:
    quotient: Decimal = Decimal(number.numerator) / Decimal(number.denominator)
    return quotient


def _coverage_factor(k: Decimal | Fraction, written: str) -> Fraction:
    if k <= 0:
        raise InputError(
            f"the coverage factor in {written!r} is not above zero".replace('"', "'"),
            remedy="write the k of the certificate, such as k=2",
        )
    return Fraction(k)


def _require_unit(unit: str, written: str, dimension: str) -> None:
    if not unit:
        known = DIMENSIONS[dimension]
        raise InputError(
            f"'{written}' has no unit", remedy=f"add one; {known.called} is in {known.unit_list}"
        )


def _needless_qualifier(reading: _Reading, qualifier: str, written: str) -> InputError:
    if reading.u is None:
        return InputError(
            f"'{written}' says '{qualifier}' but has no ±",
            remedy=f"write '{reading.value} ± ... {reading.unit}, {qualifier}'",
        )
    half = f"{reading.u:f}"
    return InputError(
        f"'{written}': digits in brackets are a standard uncertainty already",
        remedy=f"drop ', {qualifier}', or write '{reading.value} ± {half} {reading.unit}, "
        f"{qualifier}' if they were not",
    )


def _refuse_comma(text: str, written: str) -> None:
    if not _COMMA.search(text):
        return
    remedies = [f"'{text.replace(',', '.')}'"] if text.count(",") == 1 and "." not in text else []
    if not remedies and not re.search(r"\d,\d+\.", text):
        remedies = [f"'{re.sub(r'(?<=[0-9]),(?=[0-9])', '.', text)}'"]
    if _THOUSANDS.search(text):
        remedies.append(f"'{re.sub(r'(?<=[0-9]),(?=[0-9]{3})', '', text)}'")
    raise InputError(
        f"'{written}' has a comma inside a number",
        remedy=f"write {' or '.join(remedies)} (decimal point, digits not grouped)",
    )


def _unreadable(written: object, dimension: str) -> InputError:
    known = DIMENSIONS[dimension]
    return InputError(
        f"{_shown(written)} cannot be read as {known.called}", remedy=f"write '{known.example}'"
    )


def _shown(written: object) -> str:
    """Return a value much as a sheet would show it."""
    if isinstance(written, str):
        return f"'{written}'"
    if isinstance(written, bool):
        return str(written).lower()
    if isinstance(written, Mapping):
        pairs = (f"{key} = {_shown(value)}" for key, value in written.items())
        return "{ " + ", ".join(pairs) + " }"
    if isinstance(written, list | tuple):
        return "[" + ", ".join(_shown(item) for item in written) + "]"
    if isinstance(written, float):
        return repr(float(written))
    return str(written)
