"""A quantity written as text: in brackets, with ± and what it means, or exact."""

from __future__ import annotations

import re
from decimal import Decimal
from fractions import Fraction
from typing import NamedTuple

from plumbfall.bench.digits import NUMBER, concise, tidy
from plumbfall.bench.readings import (
    BOUNDS,
    coverage_factor,
    estimate_of,
    number_in,
    unreadable,
)
from plumbfall.errors import InputError
from plumbfall.estimate import Estimate
from plumbfall.quantities import DIMENSIONS, ExactUnit, exact_unit

__all__ = ["quantity_from_text"]

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
_LONGEST = 200
_COMMA = re.compile(r"\d,\d")
_THOUSANDS = re.compile(r"(?<![\d.])[1-9]\d{0,2},\d{3}(?![\d,])")


class _Reading(NamedTuple):
    """Digits as typed, in the unit as typed."""

    value: Decimal
    unit: str
    u: Decimal | None = None
    half: Decimal | None = None
    half_unit: str | None = None


def quantity_from_text(written: str, dimension: str) -> Estimate:
    """Return the estimate that a text stands for; see the notation for its forms."""
    if len(written) > _LONGEST:
        raise InputError(
            f"'{written[:40]}...' is too long for a quantity",
            remedy=f"write '{DIMENSIONS[dimension].example}'",
        )
    text = tidy(written)
    _refuse_comma(text, written)
    if not text:
        raise unreadable(written, dimension)
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
    return estimate_of(
        Fraction(reading.value) * unit.factor + unit.offset,
        float(u),
        "normal" if u else "exact",
        dimension=dimension,
        text=written,
    )


def _split_plain(body: str, written: str, dimension: str) -> _Reading:
    found = _ONE.fullmatch(body)
    if found is None:
        raise unreadable(written, dimension)
    unit = found["unit"].strip()
    if found["u"] and found["early"]:
        typed = f"{found['value']}({found['u']}){found['early']} {unit}".strip()
        raise InputError(
            f"'{written}' can be read in two ways",
            remedy=f"write the power of ten last, such as '{typed}'",
        )
    power = found["early"] or found["late"]
    value = number_in(found["value"] + power, written)
    u = None
    if found["u"]:
        u = number_in(found["u"] + power, written)
        if "." not in found["u"]:
            u = u.scaleb(-len(found["value"].partition(".")[2]))
    _require_unit(unit, written, dimension)
    return _Reading(value, unit, u)


def _split_plus_minus(body: str, qualifier: str, written: str, dimension: str) -> _Reading:
    together = _BOTH_BRACKETED.fullmatch(body)
    if together:
        unit = together["unit"].strip()
        _require_unit(unit, written, dimension)
        value, half = (number_in(together[part] + together["power"], written) for part in (1, 2))
        return _Reading(value, unit, half=half)
    sides = [_SIDE.fullmatch(side.strip()) for side in body.split("±")]
    if len(sides) != 2 or sides[0] is None or sides[1] is None:
        raise unreadable(written, dimension)
    value, half = (number_in(side["number"], written) for side in sides if side)
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
        k = number_in(found["k"], written) if found else Decimal(0)
        u, shape = float(half / coverage_factor(k, f"'{written}'")), "normal"
    return estimate_of(value, u, shape if half else "exact", dimension=dimension, text=written)


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


def _as_decimal(number: Fraction) -> Decimal:
    quotient: Decimal = Decimal(number.numerator) / Decimal(number.denominator)
    return quotient
