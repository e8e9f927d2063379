"""Rows above headings that name what holds for all the drops below them, as ``Ball: A`` does."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass

from plumbfall.timings.cell_units import part_unit
from plumbfall.timings.vocabulary import Vocabulary

__all__ = ["Title", "may_be_title", "read_title"]

_NAMED = ("set", "ball", "tube", "liquid", "timer", "thermometer", "operator")
_SHORT = ("set", "ball", "tube")
"""What a title may name without a colon, as in ``Ball A``."""
_NAME_ONLY = re.compile(r"[0-9]{1,6}[A-Za-z]?|[A-Z][0-9]{0,4}")


@dataclass(frozen=True, slots=True)
class Title:
    """What a title says: a column's name, and the text that all its cells would have."""

    field: str
    text: str


def read_title(cells: Sequence[str], vocabulary: Vocabulary) -> Title | None:
    """Return what a row names; ``None`` where it is no title that is understood.

    It is one cell, ``Ball: A`` or ``Ball A``, or two, ``Ball`` and ``A``.
    """
    texts = [cell.strip() for cell in cells if cell.strip()]
    if len(texts) == 2:
        return _title(texts[0].rstrip(":= "), texts[1], vocabulary)
    if len(texts) != 1:
        return None
    for mark in ":=":
        name, found, text = texts[0].partition(mark)
        if found:
            return _title(name.strip(), text.strip(), vocabulary)
    name, _, text = texts[0].rpartition(" ")
    title = _title(name.strip(), text.strip(), vocabulary)
    if title is None or title.field not in _SHORT:
        return None
    known = title.field == "ball" and text in vocabulary.balls
    return title if known or _NAME_ONLY.fullmatch(text) else None


def may_be_title(text: str, vocabulary: Vocabulary) -> bool:
    """Say whether a cell is a title, or the first of two cells that are one."""
    if read_title([text], vocabulary) is not None:
        return True
    meaning = vocabulary.read(text.rstrip(":= ")).meaning if text else ""
    return meaning in (*_NAMED, "temperature")


def _title(name: str, text: str, vocabulary: Vocabulary) -> Title | None:
    if not text or "[" in text or vocabulary.read(text).meaning:
        return None
    heading = vocabulary.read(name)
    if heading.meaning in _NAMED and not heading.number:
        return Title(heading.meaning, text)
    if heading.meaning == "temperature":
        if heading.unit:
            text = f"{text} {heading.unit}"
        return Title("temperature", text) if part_unit(text, "a temperature") else None
    return None
