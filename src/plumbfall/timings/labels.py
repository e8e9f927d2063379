"""Text columns as codes and names: sets, balls, tubes, status, notes and the like."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
import pandas as pd

from plumbfall.errors import nearest_name
from plumbfall.timings.columns import Column, Integers, rows_of
from plumbfall.timings.faults import Fault
from plumbfall.timings.moments import read_moment
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.records import STATUSES
from plumbfall.timings.values import is_missing

__all__ = ["LONGEST_NAME", "Labels", "read_labels", "read_status", "stacked"]

LONGEST_NAME = 120
"""Characters in the longest name of a set, ball, tube and so on."""
_LONGEST_NOTE = 2000


@dataclass(frozen=True, slots=True)
class Labels:
    """Texts of all rows: ``names[codes[row]]``; every name occurs once."""

    codes: Integers
    names: tuple[str, ...]

    @classmethod
    def constant(cls, name: str, rows: int) -> Labels:
        """Return one text for every row."""
        return cls(np.zeros(rows, dtype=np.int64), (name,))

    @classmethod
    def coded(cls, codes: Integers, texts: Iterable[str]) -> Labels:
        """Return labels from codes and texts that may be equal."""
        texts = list(texts)
        places = {name: place for place, name in enumerate(dict.fromkeys(texts))}
        if len(places) == len(texts):
            return cls(codes, tuple(texts))
        merge = np.array([places[text] for text in texts], dtype=np.int64)
        return cls(merge[codes], tuple(places))

    def replaced(self, rows: Sequence[int] | Integers, texts: Sequence[str]) -> Labels:
        """Return labels with other texts in some rows."""
        if not len(rows):
            return self
        codes = self.codes.copy()
        numbers, found = pd.factorize(np.array(texts, dtype=object))
        codes[np.asarray(rows)] = numbers + len(self.names)
        return Labels.coded(codes, [*self.names, *map(str, found)])

    def first_row(self, code: int, among: Integers | None = None) -> int:
        """Return the first row that has a code (of the rows given); -1 where none has."""
        codes = self.codes if among is None else self.codes[among]
        found = np.flatnonzero(codes == code)
        if not found.size:
            return -1
        return int(found[0] if among is None else among[found[0]])

    def repeated(self, times: int) -> Labels:
        """Return labels with every row several times over, one after the other."""
        return Labels(np.repeat(self.codes, times), self.names)

    def categorical(self) -> pd.Categorical:
        """Return the labels as pandas holds them."""
        codes = self.codes.astype(np.min_scalar_type(-len(self.names) - 1), copy=False)
        dtype = pd.CategoricalDtype(list(self.names))
        return pd.Categorical.from_codes(codes, dtype=dtype, validate=False)


def stacked(parts: Sequence[Labels]) -> Labels:
    """Return labels of several tables one after the other."""
    if len(parts) == 1:
        return parts[0]
    codes: list[Integers] = []
    names: list[str] = []
    for part in parts:
        codes.append(part.codes + len(names))
        names.extend(part.names)
    return Labels.coded(np.concatenate(codes) if codes else np.zeros(0, dtype=np.int64), names)


def read_labels(
    column: Column, meaning: str, lines: Integers, number: int, notices: Notices
) -> Labels:
    """Read a column of names, notes or moments; ``number`` is its place in the file."""
    codes, texts = column.distinct()
    names: list[str] = []
    wrong: dict[int, Fault] = {}
    for code, text in enumerate(texts):
        name: str | Fault = text
        if meaning == "started":
            name = read_moment(text)
        elif meaning == "note":
            if len(text) > _LONGEST_NOTE:
                name = Fault(
                    f"the note has {len(text)} characters", f"write at most {_LONGEST_NOTE}"
                )
        else:
            # initials may well be NA, so that an operator is taken as written
            absent = is_missing(text) and meaning != "operator"
            name = "" if absent else " ".join(text.split())
            if len(name) > LONGEST_NAME:
                name = Fault(
                    f"the {meaning} {quoted(text, 20)} has {len(text)} characters",
                    f"use names of at most {LONGEST_NAME}",
                )
            elif meaning == "set" and not name:
                name = Fault(
                    "the run set is not named in this row",
                    "name it in every row, or leave the column out for one set a file",
                )
        if isinstance(name, Fault):
            wrong[code] = name
            name = text[:LONGEST_NAME]
        names.append(name)
    _note(wrong, codes, lines, number, notices)
    return Labels.coded(codes, names)


def read_status(column: Column, lines: Integers, number: int, notices: Notices) -> Integers:
    """Return, for each row, the place of its status in :data:`STATUSES`."""
    codes, texts = column.distinct()
    places = np.zeros(max(len(texts), 1), dtype=np.int64)
    wrong: dict[int, Fault] = {}
    for code, text in enumerate(texts):
        folded = text.casefold()
        if folded in ("", "used"):
            continue
        if folded == "void":
            places[code] = 1
            continue
        near = nearest_name(folded, STATUSES[:2])
        hint = f"did you mean {quoted(near)}? " if near else ""
        wrong[code] = Fault(
            f"{quoted(text)} is not a status", hint + "leave the cell empty, or write used or void"
        )
    _note(wrong, codes, lines, number, notices)
    return places[codes]


def _note(
    wrong: dict[int, Fault], codes: Integers, lines: Integers, number: int, notices: Notices
) -> None:
    for row, fault in rows_of(codes, wrong):
        notices.error(fault.message, fault.remedy, int(lines[row]), number)
