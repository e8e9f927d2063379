"""Drop numbers: as the file gives them, or in order within the run set."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from plumbfall.timings.columns import Column, Integers
from plumbfall.timings.labels import Labels
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.values import is_missing

__all__ = ["numbered_in_order", "read_drop_numbers"]


def numbered_in_order(sets: Integers) -> Integers:
    """Return 1, 2, 3, … in order within each set, shape (rows,)."""
    counts = pd.Series(sets).groupby(sets, sort=False).cumcount()
    return np.asarray(counts, dtype=np.int64) + 1


def read_drop_numbers(
    column: Column, number: int, lines: Integers, labels: Mapping[str, Labels], notices: Notices
) -> Integers:
    """Read a column of drop numbers; 0 everywhere where all its cells are empty.

    Numbers that begin again at 1 with each ball are told apart by the ball and renumbered, which
    is listed; any other number that comes twice in a set is an error.
    """
    numbers = column.numbers(".")
    drops = np.where(numbers.clean, numbers.values, 0.0)
    wrong = ~numbers.clean | (drops < 1) | (drops != np.floor(drops)) | (drops > 1e9)
    faulty = np.flatnonzero(wrong)
    texts = [column.text(int(row)) for row in faulty]
    if faulty.size == len(column) and all(map(is_missing, texts)):
        return np.zeros(len(column), dtype=np.int64)
    for row, text in zip(faulty, texts, strict=True):
        what = (
            "the drop number is missing"
            if is_missing(text)
            else (f"{quoted(text)} is not a drop number")
        )
        notices.error(
            what,
            "number the drops 1, 2, 3, …, or leave the column out: they are then taken in order",
            int(lines[row]),
            number,
        )
    result = np.where(wrong, 0, drops).astype(np.int64)
    return result if faulty.size else _unique(result, number, lines, labels, notices)


def _unique(
    drops: Integers, number: int, lines: Integers, labels: Mapping[str, Labels], notices: Notices
) -> Integers:
    sets = labels["set"].codes
    twice = _repeats(sets, drops)
    if not twice.any():
        return drops
    balls = labels["ball"].codes
    for code in np.unique(sets[twice]):
        rows = np.flatnonzero(sets == code)
        name = labels["set"].names[code]
        in_order = numbered_in_order(balls[rows])
        if np.unique(balls[rows]).size > 1 and (drops[rows] == in_order).all():
            drops = drops.copy()
            drops[rows] = np.arange(1, rows.size + 1)
            notices.repair(
                f"drops of set {quoted(name)} are numbered from 1 for each ball; they are numbered"
                f" 1 to {rows.size} through the set",
                int(lines[rows[0]]),
                number,
            )
            continue
        for row in rows[twice[rows]]:
            first = rows[drops[rows] == drops[row]][0]
            notices.error(
                f"drop {drops[row]} of set {quoted(name)} is also in"
                f" {notices.where(int(lines[first]))}",
                "give each drop of a set its own number, or leave the column out",
                int(lines[row]),
                number,
            )
    return drops


def _repeats(sets: Integers, drops: Integers) -> NDArray[np.bool_]:
    key = sets * (int(drops.max(initial=0)) + 1) + drops
    return np.asarray(pd.Series(key).duplicated(), dtype=bool)
