"""What a column's heading means: its quantity, its number in a series, and its unit."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from fractions import Fraction

from plumbfall.timings.units import temperature_unit, time_unit

__all__ = [
    "FIELDS",
    "SERIES",
    "TIMES",
    "Heading",
    "known_headings",
    "normalised",
    "read_heading",
]

FIELDS = {
    "set": ("batch", "sample", "run", "run set", "runset", "run set name", "batch no", "series"),
    "drop": (
        "lap",
        "lap no",
        "drop no",
        "drop number",
        "drop nr",
        "drop #",
        "no",
        "nr",
        "n",
        "#",
        "number",
    ),
    "ball": ("sphere", "ball id", "ball name", "ball no", "ball number", "sphere id"),
    "tube": ("fall tube", "tube id", "tube name", "tube no"),
    "liquid": ("fluid", "oil", "liquid name"),
    "timer": ("stopwatch", "clock", "timer id"),
    "thermometer": ("thermometer id", "probe"),
    "operator": ("by", "analyst", "technician", "observer", "initials", "timed by"),
    "started": ("start", "start time", "started at", "timestamp", "date/time", "date time", "date"),
    "status": ("state", "used/void"),
    "note": ("notes", "comment", "comments", "remark", "remarks"),
    "temperature": ("temp", "liquid temperature", "bath temperature", "bath temp"),
    "time": (
        *("fall time", "falltime", "drop time", "time of fall", "elapsed", "elapsed time"),
        *("lap time", "laptime", "lap times", "fall times", "times"),
    ),
    "total": (
        *("total time", "running total", "stopwatch total", "cumulative", "cumulative time"),
        *("split time", "overall time", "time total", "total times", "running totals"),
    ),
}
"""Every column of its own with its synonyms; ``t`` and ``T`` are told apart by their case."""

SERIES = {
    "mark": ("gate", "ring mark"),
    "interval": ("segment",),
    "repeat": ("repetition", "replicate", "rep"),
    "time": ("fall time", "t"),
}
"""Columns that come numbered, as ``mark 1``, ``mark 2``, with their synonyms."""

TIMES = (*SERIES, "total")
"""What columns of times may mean."""

_NAMES = {name: field for field, names in FIELDS.items() for name in (field, *names)}
_SERIES_NAMES = {name: kind for kind, names in SERIES.items() for name in (kind, *names)}
_NUMBERED = re.compile(r"(.+?)\s*([0-9]{1,3})")
_BRACKETED = re.compile(r"(.*?)\s*(?:\[([^\[\]]*)\]|\(([^()]*)\))")
_QUANTITIES = (*TIMES, "temperature")
_POSITION = re.compile(
    r"(?:(?:clock|time|t)?\s*(?:at)?\s*(?:mark|gate|ring|position|line)?s?\s*(?:at)?\s*)"
    r"([0-9]{1,5}(?:[.,][0-9]{1,4})?)\s*(mm|cm|m)"
)
_METRES = {"mm": Fraction(1, 1000), "cm": Fraction(1, 100), "m": Fraction(1)}


@dataclass(frozen=True, slots=True)
class Heading:
    """A heading as read: ``meaning`` is empty where it is not known.

    ``column`` counts from 1; ``number`` is that of a series (``mark 2``), else 0; ``unit`` is
    the unit's text, empty where none is written. ``position`` is in metres, of a mark that is
    named by where it stands (``100 mm``); marks are numbered by it later.
    """

    text: str
    column: int
    meaning: str = ""
    number: int = 0
    unit: str = ""
    position: Fraction | None = None

    @property
    def label(self) -> str:
        """The canonical heading without its unit, such as ``mark 2``."""
        return f"{self.meaning} {self.number}" if self.number else self.meaning

    @property
    def unit_fits(self) -> bool:
        """Whether the unit is one of what the column holds."""
        if self.meaning == "temperature":
            return temperature_unit(self.unit) is not None
        return self.meaning in TIMES and time_unit(self.unit) is not None


def normalised(text: str) -> str:
    """Return a heading in lower case, its separators as single spaces.

    Examples
    --------
    >>> normalised(" Run_Set. ")
    'run set'
    """
    return " ".join(re.sub(r"[\s_.\-]+", " ", text.casefold()).split())


def known_headings() -> Iterable[str]:
    """Return every heading that is understood without its unit, the first of each series too."""
    yield from _NAMES
    for name in ("mark", "interval", "repeat"):
        yield f"{name} 1"
        yield f"{name} 2"


def _meaning(name: str, unit: str) -> tuple[str, int] | None:
    """Return the meaning and number of a heading freed of its unit."""
    if name.strip() in ("t", "T"):
        # a unit says which of the two it is; without one, the usual symbols do
        if temperature_unit(unit):
            return ("temperature", 0)
        return ("time", 0) if time_unit(unit) or name.strip() == "t" else ("temperature", 0)
    folded = normalised(name)
    if folded in _NAMES:
        return _NAMES[folded], 0
    if _position(name) is not None:
        return "mark", 0
    numbered = _NUMBERED.fullmatch(folded)
    if numbered and numbered[1] in _SERIES_NAMES:
        return _SERIES_NAMES[numbered[1]], int(numbered[2])
    return None


def _split(text: str) -> Iterable[tuple[str, str]]:
    """Yield every way to part a heading into a name and a unit, the likeliest first."""
    yield text, ""
    if bracketed := _BRACKETED.fullmatch(text.strip()):
        yield bracketed[1], (bracketed[2] or bracketed[3] or "").strip()
    for separator in ("/", "_", ","):
        name, found, unit = text.rpartition(separator)
        unit = unit.strip()
        if found and (time_unit(unit) or temperature_unit(unit) or separator == "/"):
            yield name, unit
    if degrees := re.fullmatch(r"(.+?)_(deg_[CFcf])", text.strip()):
        yield degrees[1], degrees[2]


def read_heading(text: str, column: int) -> Heading:
    """Return what a heading means.

    Examples
    --------
    >>> heading = read_heading("Fall time [s]", 3)
    >>> heading.meaning, heading.unit, read_heading("mark_2_ms", 4).label
    ('time', 's', 'mark 2')
    """
    for name, unit in _split(text):
        meaning = _meaning(name, unit)
        if meaning and (not unit or meaning[0] in _QUANTITIES or "[" in text or "(" in text):
            position = _position(name) if meaning == ("mark", 0) else None
            return Heading(text.strip(), column, meaning[0], meaning[1], unit, position)
    return Heading(text.strip(), column)


def _position(name: str) -> Fraction | None:
    """Return where a mark stands, in metres, that is named by its position."""
    bare = name.casefold().replace("(", " ").replace(")", " ")
    found = _POSITION.fullmatch(" ".join(bare.split()))
    return Fraction(found[1].replace(",", ".")) * _METRES[found[2]] if found else None
