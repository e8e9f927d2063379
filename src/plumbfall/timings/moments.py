"""When a drop was let go: dates and times of day as ISO 8601 text."""

from __future__ import annotations

import datetime as dt
import re

from plumbfall.timings.faults import Fault
from plumbfall.timings.notices import quoted
from plumbfall.timings.values import is_missing

__all__ = ["read_moment"]

_MOMENT = re.compile(
    r"([0-9]{4}-[0-9]{2}-[0-9]{2})"
    r"(?:[T ]([0-9]{2}:[0-9]{2}(?::[0-9]{2}(?:[.,][0-9]+)?)?)\s*(Z|[+-][0-9]{2}:?[0-9]{2})?)?"
)
_TIME_OF_DAY = re.compile(r"([0-9]{1,2})(:[0-9]{2}(?::[0-9]{2}(?:\.[0-9]+)?)?)")


def read_moment(text: str) -> str | Fault:
    """Return a moment as ISO 8601 text: a date, a date and time, or a time of day.

    Examples
    --------
    >>> read_moment("2026-03-02 09:15"), read_moment("9:15:30")
    ('2026-03-02T09:15', '09:15:30')
    """
    if is_missing(text):
        return ""
    try:
        if found := _MOMENT.fullmatch(text):
            date, time, zone = found.groups()
            iso = date + (f"T{time.replace(',', '.')}" if time else "") + (zone or "")
            dt.datetime.fromisoformat(iso)
            return iso
        if found := _TIME_OF_DAY.fullmatch(text):
            iso = found[1].zfill(2) + found[2]
            dt.time.fromisoformat(iso)
            return iso
    except ValueError:
        pass
    return Fault(
        f"{quoted(text)} is not a moment",
        "write 2026-03-02T09:15:30 or 09:15:30 (year, month, day)",
    )
