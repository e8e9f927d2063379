"""A quantity as written in a bench sheet, read into an estimate in SI units.

Every form of the notation is here: text such as ``"2.0000(5) mm"``, certificates and tolerances
with ±, tables, and repeated readings. What is ambiguous is refused with what to type instead.
"""

from __future__ import annotations

import numbers
from collections.abc import Mapping

from plumbfall.bench.readings import BOUNDS, estimate_of, exact, shown, unreadable
from plumbfall.bench.table_form import quantity_from_table
from plumbfall.bench.text_form import quantity_from_text
from plumbfall.errors import InputError
from plumbfall.estimate import Estimate
from plumbfall.quantities import DIMENSIONS

__all__ = ["BOUNDS", "read_quantity"]


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
    try:
        return _read(written, dimension)
    except OverflowError:
        raise InputError(
            f"{shown(written)} is too large or too small", remedy="check the power of ten"
        ) from None


def _read(written: object, dimension: str) -> Estimate:
    if isinstance(written, str):
        return quantity_from_text(written, dimension)
    if isinstance(written, Mapping):
        return quantity_from_table(written, dimension)
    if hasattr(written, "nominal_value") and hasattr(written, "std_dev"):
        return _from_ufloat(written, dimension)
    if isinstance(written, numbers.Real) and not isinstance(written, bool):
        usual = DIMENSIONS[dimension].example.split(" ", 1)[1]
        raise InputError(
            f"{shown(written)} has no unit",
            remedy=f"write it in quotes with its unit, such as '{shown(written)} {usual}'",
        )
    raise unreadable(written, dimension)


def _from_ufloat(written: object, dimension: str) -> Estimate:
    value = exact(getattr(written, "nominal_value", None), "nominal value")
    u = exact(getattr(written, "std_dev", None), "standard deviation")
    shape = "normal" if u else "exact"
    return estimate_of(value, float(u), shape, dimension=dimension, text=str(written))
