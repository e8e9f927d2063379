"""What headings mean in one reading: the user's declarations first, then our own list."""

from __future__ import annotations

from collections.abc import Collection, Iterable, Mapping, Sequence
from dataclasses import replace

from plumbfall.errors import nearest_name
from plumbfall.timings.cell_units import part_unit
from plumbfall.timings.clocks import read_clock
from plumbfall.timings.headings import TIMES, Heading, known_headings, normalised, read_heading
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.units import temperature_unit, time_unit
from plumbfall.timings.values import looks_like_number

__all__ = ["Vocabulary", "is_value", "part_heading"]


def is_value(text: str) -> bool:
    """Say whether a cell holds a number or a time, as no heading does."""
    return (
        looks_like_number(text)
        or read_clock(text) is not None
        or part_unit(text, "a time") is not None
    )


def part_heading(text: str) -> tuple[str, str]:
    """Part a heading that is not known by itself into its name and its unit."""
    for opening, closing in ("[]", "()"):
        name, found, rest = text.strip().partition(opening)
        if found and rest.endswith(closing):
            return name.strip(), rest[:-1].strip()
    for separator in ("/", "_"):
        name, found, unit = text.strip().rpartition(separator)
        if found:
            return name.strip(), unit.strip()
    return text, ""


class Vocabulary:
    """Reads headings; ``used`` takes the declarations that met one.

    Parameters
    ----------
    declared : mapping
        Meaning of headings, with or without their unit, as ``timings.columns`` has it.
    balls : collection of str
        Names of the balls of the bench sheet, which are no words for a mean or a scatter.
    """

    def __init__(self, declared: Mapping[str, str], balls: Collection[str] = ()) -> None:
        self.balls = balls
        self.used: set[str] = set()
        self._declared = {normalised(name): (name, text) for name, text in declared.items()}

    def read(self, text: str, column: int = 1) -> Heading:
        """Return what a heading means."""
        heading = read_heading(text, column)
        if not self._declared:
            return heading
        parted = part_heading(text)
        for candidate in (text, parted[0]):
            if normalised(candidate) in self._declared:
                name, meaning = self._declared[normalised(candidate)]
                self.used.add(name)
                wanted = read_heading(meaning, column)
                unit = wanted.unit or (parted[1] if candidate != text else heading.unit)
                return Heading(text.strip(), column, wanted.meaning, wanted.number, unit)
        return heading

    def read_all(self, texts: Sequence[str]) -> list[Heading]:
        """Return what every heading of a row means."""
        headings = [self.read(text, column) for column, text in enumerate(texts, 1)]
        numbers = [one for one in headings if one.meaning == "drop"]
        if len(numbers) == 2 and not any(one.meaning == "time" for one in headings):
            # beside a number of the lap, a column headed lap has its time
            for one in numbers:
                if normalised(part_heading(one.text)[0]) == "lap":
                    headings[one.column - 1] = replace(one, meaning="time")
        return headings

    def understood(self, texts: Iterable[str]) -> int:
        """Return how many cells are headings that are known."""
        return sum(bool(text.strip() and self.read(text).meaning) for text in texts)

    def has_times(self, texts: Iterable[str]) -> bool:
        """Say whether there is a heading of times among cells."""
        return any(text.strip() and self.read(text).meaning in TIMES for text in texts)

    def is_heading_row(self, cells: Sequence[str]) -> bool:
        """Say whether cells are headings: one of times among them, and no number or time."""
        texts = [cell.strip() for cell in cells if cell.strip()]
        return self.has_times(texts) and not any(map(is_value, texts))

    def note_meanings(self, notices: Notices) -> None:
        """Note declarations of something that no column can hold."""
        for name, meaning in self._declared.values():
            if not read_heading(meaning, 1).meaning:
                near = nearest_name(meaning, known_headings())
                hint = f"did you mean {quoted(near)}?" if near else "use one of the usual headings"
                notices.error(
                    f"{quoted(meaning)} is not something a column can hold",
                    hint,
                    key=f"timings.columns.{name}",
                )


def unit_of(text: str, meaning: str) -> str:
    """Return a cell of a unit row freed of its brackets; empty where it is no unit."""
    bare = text.strip()
    for opening, closing in ("[]", "()"):
        if bare.startswith(opening) and bare.endswith(closing):
            bare = bare[1:-1].strip()
    bare = bare.removeprefix("/").removeprefix("in ").strip()
    find = temperature_unit if meaning == "temperature" else time_unit
    return bare if bare and find(bare) is not None else ""
