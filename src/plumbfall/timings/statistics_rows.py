"""Rows that a spreadsheet worked out, such as means, among the drops of a table."""

from __future__ import annotations

import re

import numpy as np

from plumbfall.timings.columns import Integers
from plumbfall.timings.grid import Grid
from plumbfall.timings.headings import TIMES, Heading
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.vocabulary import Vocabulary

__all__ = ["drop_rows"]


def _words(text: str) -> frozenset[str]:
    return frozenset(" ".join(word.split()) for word in text.split(","))


_CERTAIN = _words(
    """
    mean, mean value, mean time, arithmetic mean, average, average time, avg, median, x̄, variance,
    std, std dev, stddev, stdev, st dev, std deviation, standard deviation, rsd, cv, rel std dev,
    relative standard deviation, mittel, mittelwert, durchschnitt, standardabweichung, std abw,
    stabw, moyenne, médiane, écart type, ecart type, media, mediana, promedio, gemiddelde,
    desviación estándar, desviacion estandar, deviazione standard
    """
)
_AT_THE_FOOT = _words(
    """
    sd, s, σ, n, count, min, max, minimum, maximum, range, spread, sum, total, rsd %, cv %, s %,
    rsd (%), cv (%), summe, anzahl, somme
    """
)
_NAMES = ("set", "drop", "ball", "tube", "liquid", "timer", "thermometer", "note")
_FOOT = 30
"""Rows at the end of a table whose unused columns are looked at too."""


def drop_rows(
    grid: Grid, headings: list[Heading], vocabulary: Vocabulary, notices: Notices
) -> Integers | None:
    """Return the rows that are drops, in order; ``None`` where all are.

    A row is none where a cell that should name something says mean, standard deviation or the
    like; short words such as SD or max count only below the last drop, and not as a name of the
    bench sheet. Each row left out is listed.
    """
    rows = len(grid)
    if not rows:
        return None
    found: dict[int, tuple[int, str, bool]] = {}
    for heading in headings:
        meaning = heading.meaning
        if meaning in (*TIMES, "temperature", "status", "operator"):
            continue
        column = grid.columns[heading.column - 1]
        chosen = None
        if meaning == "drop":
            chosen = np.flatnonzero(~column.numbers(".").clean)
        elif meaning not in _NAMES:
            chosen = np.arange(max(rows - _FOOT, 0), rows)
        codes, texts = column.distinct(chosen)
        short = meaning == "drop" or not heading.text
        for code, text in enumerate(texts):
            word = _plain(text)
            certain = word in _CERTAIN
            if text in vocabulary.balls or not (certain or (short and word in _AT_THE_FOOT)):
                continue
            for place in np.flatnonzero(codes == code):
                row = int(place if chosen is None else chosen[place])
                if row not in found or (certain and not found[row][2]):
                    found[row] = (heading.column, text, certain)
    if not found:
        return None
    foot = rows
    while foot - 1 in found:
        foot -= 1
    left = {row for row, (_, _, certain) in found.items() if certain or row >= foot}
    for row in sorted(left):
        column_number, text, _ = found[row]
        notices.repair(
            f"{quoted(text)} is no drop; the row is left out", int(grid.lines[row]), column_number
        )
    kept = np.ones(rows, dtype=bool)
    kept[list(left)] = False
    return np.flatnonzero(kept).astype(np.int64)


def _plain(text: str) -> str:
    """Return a label in lower case without the marks round it."""
    return " ".join(re.sub(r"[._:=\-]+", " ", text.casefold()).split())
