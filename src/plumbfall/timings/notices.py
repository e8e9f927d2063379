"""What a reader has to say of one file: problems and repairs, each with its place."""

from __future__ import annotations

from collections.abc import Callable
from typing import TypeAlias

from plumbfall.errors import Problem
from plumbfall.timings.records import Repair

__all__ = ["Notices", "Place", "quoted"]

_MOST = 500
"""Problems (and repairs) listed of one file; the rest are counted, so that output is bounded."""


def quoted(text: str, most: int = 60) -> str:
    """Return a cell's text in quotes on one line, cut where it is very long."""
    shown = "".join(c if c.isprintable() else f"\\x{ord(c):02x}" for c in text[:most])
    return f"'{shown}{'…' if len(text) > most else ''}'"


Place: TypeAlias = Callable[[int | None, int | None], tuple[int | None, int | None]]
"""Turns line and column of a table into those of its file."""


def _as_it_is(line: int | None, column: int | None) -> tuple[int | None, int | None]:
    return line, column


class Notices:
    """Collects problems and repairs of one file, in the order they are found.

    ``place`` may be set where the lines and columns noted are not those of the file; ``offers``
    are lines for ``[timings]``, by key, that would settle what is ambiguous.
    """

    def __init__(self, path: str) -> None:
        self.path = path
        self._problems: list[Problem] = []
        self._repairs: list[Repair] = []
        self._errors = 0
        self.offers: dict[str, str] = {}
        self.place: Place = _as_it_is
        self._more_problems = 0
        self._more_repairs = 0

    @property
    def failed(self) -> bool:
        """Whether an error was noted."""
        return self._errors > 0

    def error(
        self,
        message: str,
        remedy: str,
        line: int | None = None,
        column: int | None = None,
        *,
        key: str = "",
        severity: str = "error",
        path: str | None = None,
    ) -> None:
        """Note one thing wrong; ``severity`` may be lowered to ``warning``."""
        self._errors += severity == "error"
        if len(self._problems) >= _MOST:
            self._more_problems += 1
            return
        line, column = self.place(line, column)
        place = self.path if path is None else path
        self._problems.append(Problem(message, remedy, place, line, column, key, severity=severity))

    def extend(self, other: Notices) -> None:
        """Take over what was noted elsewhere of the same file."""
        for one in other.problems:
            self.error(one.message, one.remedy, one.line, one.column, severity=one.severity)
        for repair in other.repairs:
            self.repair(repair.what, repair.line, repair.column)

    def where(self, line: int | None) -> str:
        """Return a line of the table as that of the file, or as its column if transposed."""
        at, column = self.place(line, None)
        return f"line {at}" if at is not None or column is None else f"column {column}"

    def offer(self, key: str, value: str) -> None:
        """Offer a line for ``[timings]`` that would settle what is ambiguous.

        ``value`` is as TOML writes it; what was offered first for a key stays.
        """
        self.offers.setdefault(key, value)

    def repair(
        self,
        what: str,
        line: int | None = None,
        column: int | None = None,
        *,
        path: str | None = None,
    ) -> None:
        """Note one thing that was put right, or that a person should know of."""
        if len(self._repairs) >= _MOST:
            self._more_repairs += 1
            return
        line, column = self.place(line, column)
        self._repairs.append(Repair(self.path if path is None else path, line, column, what))

    @property
    def problems(self) -> tuple[Problem, ...]:
        """All problems by line, and a last one that counts what is not listed."""
        listed = sorted(self._problems, key=lambda one: (one.line or 0, one.column or 0))
        if self._more_problems:
            severity = "error" if self._errors else "warning"
            text = f"and {self._more_problems} more problems of this file"
            remedy = "correct those listed first"
            listed.append(Problem(text, remedy, self.path, severity=severity))
        return tuple(listed)

    @property
    def repairs(self) -> tuple[Repair, ...]:
        """All repairs by line, and a last one that counts what is not listed."""
        listed = sorted(self._repairs, key=lambda one: (one.line or 0, one.column or 0))
        if self._more_repairs:
            text = f"and {self._more_repairs} more repairs of this file"
            listed.append(Repair(self.path, None, None, text))
        return tuple(listed)
