"""Times written in parts: minutes and seconds with colons, with prime marks, or in words."""

from __future__ import annotations

import re

from plumbfall.timings.faults import Fault
from plumbfall.timings.notices import quoted

__all__ = ["read_clock"]

_COLONS = re.compile(
    r"(?:(?P<h>[0-9]{1,3}):)?(?P<m>[0-9]{1,4}):(?P<s>[0-9]{2})(?:[.,](?P<f>[0-9]+))?"
)
_PRIMES = re.compile(
    r"(?:(?P<m>[0-9]{1,4})\s*['′’´]\s*)?(?P<s>[0-9]{1,4})(?:[.,](?P<f>[0-9]+))?"
    r"\s*(?:[\"″”]|''|′′|’’)\s*(?P<g>[0-9]+)?"
)
_ONE_PRIME = re.compile(r"(?P<m>[0-9]{1,4})\s*['′’´]\s*(?P<s>[0-9]{2})(?:[.,](?P<f>[0-9]+))?")
_HOURS = r"(?:(?P<h>[0-9]{1,3})\s*(?:h|hrs?|hours?)\.?\s*)"
_MINUTES = r"(?:(?P<m>[0-9]{1,4})\s*(?:m|mins?|minutes?)\.?\s*)"
_SECONDS = r"(?:(?P<s>[0-9]{1,2})(?:[.,](?P<f>[0-9]+))?\s*(?:s|secs?|seconds?)\.?)"
_WORDS = tuple(
    re.compile(parts)
    for parts in (_HOURS + "?" + _MINUTES + _SECONDS, _HOURS + _MINUTES, _HOURS + _SECONDS)
)


def read_clock(text: str) -> float | Fault | None:
    """Read ``mm:ss.ff``, ``h:mm:ss.ff``, ``1'03"15`` or ``1 min 3.15 s`` as seconds.

    ``None`` where a cell is none of them; a plain number, with or without its unit, is none.

    Examples
    --------
    >>> read_clock("1:03.15"), read_clock("1:02:03"), read_clock("12.84")
    (63.15, 3723.0, None)
    >>> read_clock("1′03″15"), read_clock("1 min 3.15 s")
    (63.15, 63.15)
    """
    for form in (_COLONS, _PRIMES, _ONE_PRIME, *_WORDS):
        if found := form.fullmatch(text):
            return _seconds(text, found.groupdict())
    return None


def _seconds(text: str, parts: dict[str, str | None]) -> float | Fault:
    hours, minutes, seconds = (parts.get(name) for name in ("h", "m", "s"))
    fraction, after = parts.get("f"), parts.get("g")
    if fraction and after:
        return Fault(
            f"{quoted(text)} has two fractions of a second", "write minutes and seconds as 1:03.15"
        )
    larger = bool(hours or minutes)
    for name, part, checked in (("seconds", seconds, larger), ("minutes", minutes, bool(hours))):
        if checked and int(part or 0) >= 60:
            return Fault(
                f"{quoted(text)} has {part} {name}, and there are fewer than 60",
                "write minutes and seconds as 1:03.15; hundredths of a second go after a point",
            )
    whole = int(hours or 0) * 3600 + int(minutes or 0) * 60 + int(seconds or 0)
    return float(f"{whole}.{fraction or after or 0}")
