"""Units that stand in the cells themselves, as in ``12.84 s`` or ``25.0 °C``."""

from __future__ import annotations

import re

import numpy as np

from plumbfall.timings.faults import Fault
from plumbfall.timings.notices import quoted
from plumbfall.timings.units import Unit, temperature_unit, time_unit
from plumbfall.timings.values import read_number, with_plain_minus

__all__ = ["part_unit", "read_with_unit"]

_WITH_UNIT = re.compile(r"([+-]?(?:[0-9][0-9.,'’\s]*|[.,][0-9]+))([^\d\s].*)")
_TIMES = frozenset(
    (
        *("s", "sec", "secs", "sec.", "second", "seconds", "ms"),
        *("min", "min.", "mins", "minute", "minutes", "h", "hr", "hrs", "hour", "hours"),
    )
)


def part_unit(text: str, what: str) -> tuple[str, Unit] | None:
    """Part a cell into its number and its unit; ``None`` where it has no unit of ``what``.

    A single capital S is none: it is as likely a 5.

    Examples
    --------
    >>> part_unit("12.84 s", "a time")[0], part_unit("12.8S", "a time")
    ('12.84', None)
    """
    found = _WITH_UNIT.fullmatch(with_plain_minus(text))
    if not found:
        return None
    written = found[2].strip()
    if what == "a time":
        unit = time_unit(written) if written in _TIMES else None
    else:
        unit = None if written in ("c", "k", "f") else temperature_unit(written)
    return (found[1].strip(), unit) if unit is not None else None


def read_with_unit(
    number: str, cell: Unit, heading: Unit | None, decimal: str, what: str, shown: str
) -> float | Fault:
    """Return a parted number in SI, or say what is wrong with it.

    ``heading`` is the unit of the column, which the cell's must not contradict; ``shown`` is the
    cell as written.
    """
    if heading is not None and not heading.clock and heading.exact != cell.exact:
        return Fault(
            f"{quoted(shown)} has another unit than its heading",
            "write all cells of a column in the unit of its heading",
        )
    value = read_number(number, decimal, what)
    if isinstance(value, Fault):
        return value
    return float(cell.to_si(np.array([value]))[0])
