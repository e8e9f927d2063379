"""A quantity written as a table: a value with u, U and k, or bounds; or repeated readings."""

from __future__ import annotations

import math
from collections.abc import Mapping
from fractions import Fraction

from plumbfall.bench.readings import BOUNDS, coverage_factor, estimate_of, exact, shown
from plumbfall.errors import InputError
from plumbfall.estimate import Estimate
from plumbfall.quantities import DIMENSIONS, exact_unit

__all__ = ["quantity_from_table"]

_TABLE_KEYS = ("value", "unit", "u", "dof", "U", "k", "within", "shape", "readings")


def quantity_from_table(table: Mapping[str, object], dimension: str) -> Estimate:
    """Return the estimate that a table stands for; see the notation for its forms."""
    text = shown(table)
    unit_text = _unit_text(table, dimension, text)
    if "readings" in table:
        return _from_readings(table, unit_text, dimension, text)
    if "value" not in table:
        raise InputError(f"{text} has no value", remedy="add value, or readings")
    unit = exact_unit(unit_text, dimension, written=f"{shown(table['value'])} {unit_text}")
    value = exact(table["value"], "value") * unit.factor + unit.offset
    stated = _stated(table, text)
    if not stated:
        return estimate_of(value, 0.0, "exact", dimension=dimension, text=text)
    size = exact(table[stated], stated) * unit.factor
    if size < 0:
        raise InputError(f"{stated} is negative in {text}", remedy="write it without sign")
    dof = float(exact(table["dof"], "dof")) if "dof" in table else math.inf
    if dof <= 0:
        raise InputError(f"dof = {shown(table['dof'])} is not above zero", remedy="correct it")
    u, shape = float(size), "normal"
    if stated == "within":
        shape = _shape(table)
        u = float(size) / BOUNDS[shape]
    elif stated == "U":
        u = float(size / coverage_factor(exact(table["k"], "k"), text))
    return estimate_of(value, u, shape if u else "exact", dof=dof, dimension=dimension, text=text)


def _unit_text(table: Mapping[str, object], dimension: str, text: str) -> str:
    """Return the unit of a table whose keys are all known."""
    for key in table:
        if key not in _TABLE_KEYS:
            raise InputError(
                f"'{key}' is not a key of a quantity",
                remedy=f"known keys are {', '.join(_TABLE_KEYS)}",
            )
    if "unit" not in table:
        units = DIMENSIONS[dimension].unit_list
        raise InputError(f"{text} has no unit", remedy=f"add unit, one of {units}")
    unit = table["unit"]
    if not isinstance(unit, str):
        raise InputError(f"unit = {shown(unit)} is not text", remedy="write it in quotes")
    return unit


def _shape(table: Mapping[str, object]) -> str:
    shape = table.get("shape", "rectangular")
    if isinstance(shape, str) and shape in BOUNDS:
        return shape
    raise InputError(
        f"shape = {shown(shape)} is not known", remedy=f"use one of {', '.join(BOUNDS)}"
    )


def _stated(table: Mapping[str, object], text: str) -> str:
    """Return the key that states the uncertainty, empty if none does; refuse what contradicts."""
    found = [key for key in ("u", "U", "within") if key in table]
    if len(found) > 1:
        raise InputError(
            f"{text} states its uncertainty more than once",
            remedy="keep one of u (standard), U with k (expanded) and within (bounds)",
        )
    stated = found[0] if found else ""
    owner = {"k": ("U",), "shape": ("within",), "dof": ("u", "U", "within")}
    for key, owners in owner.items():
        if key in table and stated not in owners:
            raise InputError(f"{text} has {key} without {owners[0]}", remedy=f"add {owners[0]}")
    if stated == "U" and "k" not in table:
        raise InputError(
            f"{text} has an expanded uncertainty U without its coverage factor",
            remedy="add k, such as k = 2, or give the standard uncertainty as u",
        )
    return stated


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
            f"readings = {shown(readings)} is not a list", remedy="write readings = [1.1, 1.2]"
        )
    unit = exact_unit(unit_text, dimension, written=f"{shown(readings)} {unit_text}")
    values = [exact(reading, "readings") for reading in readings]
    n = len(values)
    if n < 2:
        raise InputError(
            f"{'one reading shows' if n else 'no readings show'} no scatter",
            remedy="give at least two readings, or a value with its uncertainty u",
        )
    mean = sum(values, Fraction(0)) / n
    variance = sum(((value - mean) ** 2 for value in values), Fraction(0)) / (n - 1)
    u = math.sqrt(variance / n * unit.factor**2)
    return estimate_of(
        mean * unit.factor + unit.offset, u, "t", dof=n - 1.0, dimension=dimension, text=text
    )
