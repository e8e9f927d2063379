"""Every exception and warning of plumbfall, each with its place and its remedy.

A :class:`Problem` is one thing wrong with one input; an :class:`InputError` carries all the
problems of an input at once, so that a file is corrected in one go.
"""

from __future__ import annotations

import difflib
from collections.abc import Iterable
from dataclasses import dataclass

__all__ = [
    "InputError",
    "PhysicsRangeError",
    "PlumbfallError",
    "PlumbfallWarning",
    "Problem",
    "nearest_name",
]


@dataclass(frozen=True, slots=True)
class Problem:
    """One thing wrong with an input: what, where, and what to do about it.

    ``severity`` is ``"error"`` (the input is refused) or ``"warning"`` (it is read, and said).
    ``line`` and ``column`` count from 1, as an editor or a spreadsheet shows them.
    """

    message: str
    remedy: str = ""
    path: str = ""
    line: int | None = None
    column: int | None = None
    key: str = ""
    severity: str = "error"

    @property
    def place(self) -> str:
        """Where the problem is, as ``file:line:column`` and the key, as far as known."""
        place = self.path
        if self.line is not None:
            place += f":{self.line}"
            if self.column is not None:
                place += f":{self.column}"
        return ": ".join(part for part in (place, self.key) if part)

    def __str__(self) -> str:
        text = f"{self.place}: {self.message}" if self.place else self.message
        return f"{text}; {self.remedy}" if self.remedy else text


class PlumbfallError(Exception):
    """Base of every error that plumbfall raises on purpose."""


class InputError(PlumbfallError, ValueError):
    """An input cannot be used; ``problems`` lists everything wrong with it.

    The place and remedy of the first problem are attributes of the error itself.
    """

    def __init__(self, problems: Iterable[Problem] | Problem | str, **place: object) -> None:
        if isinstance(problems, str):
            problems = Problem(problems, **place)  # type: ignore[arg-type]  # checked by Problem
        self.problems: tuple[Problem, ...] = (
            (problems,) if isinstance(problems, Problem) else tuple(problems)
        )
        super().__init__("\n".join(str(problem) for problem in self.problems))

    def __reduce__(self) -> tuple[type[InputError], tuple[tuple[Problem, ...]]]:
        return type(self), (self.problems,)

    @property
    def first(self) -> Problem:
        """The first problem; an error never has none."""
        return self.problems[0]

    @property
    def path(self) -> str:
        """File of the first problem."""
        return self.first.path

    @property
    def line(self) -> int | None:
        """Line of the first problem, from 1."""
        return self.first.line

    @property
    def column(self) -> int | None:
        """Column of the first problem, from 1."""
        return self.first.column

    @property
    def key(self) -> str:
        """Bench-sheet key of the first problem."""
        return self.first.key

    @property
    def remedy(self) -> str:
        """What to do about the first problem."""
        return self.first.remedy


class PhysicsRangeError(PlumbfallError, ValueError):
    """A law of physics was asked for outside the range it is known in."""


class PlumbfallWarning(UserWarning):
    """Base of every warning that plumbfall issues from Python code."""


def nearest_name(wrong: str, known: Iterable[str]) -> str | None:
    """Return the known name nearest to a mistyped one, or ``None`` where none is near.

    Examples
    --------
    >>> nearest_name("bore_", ["bore", "marks"])
    'bore'
    """
    by_folded = {name.casefold(): name for name in known}
    near = difflib.get_close_matches(wrong.casefold(), by_folded, n=1, cutoff=0.6)
    return by_folded[near[0]] if near else None
