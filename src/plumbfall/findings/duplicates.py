"""Rows that stand in the file twice: copied, or one fall written down two times."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray
from scipy.special import pdtrc

from plumbfall.findings.copied_sets import copied_set
from plumbfall.findings.data import Found, RunData
from plumbfall.findings.equal_readings import (
    chance_of_temperature,
    chance_of_time,
    repeats_of,
    row_keys,
)
from plumbfall.results import Finding

__all__ = ["duplicate_rows"]

BLOCK = 3
"""Rows one after the other that must all be found again for a copied block."""


def duplicate_rows(data: RunData) -> Iterator[Found]:
    """Find rows of one moment and ball, more equal rows than chance gives, and copied sets."""
    seen: set[int] = set()
    for detector in (_same_moment, copied_set, _repeated):
        for run_set, finding in detector(data):
            if run_set not in seen:
                seen.add(run_set)
                yield run_set, finding


def _finding(
    data: RunData, message: str, drops: NDArray[np.intp], p_value: float | None
) -> Finding:
    return Finding(
        code="duplicate-rows",
        severity="warning",
        drops=data.numbers(drops),
        statistic=float(len(drops)),
        p_value=p_value,
        message=message,
        remedy="look into the record: if a row was copied, take it out of the file; a fall "
        "counts once",
    )


# --- one moment ----------------------------------------------------------------------------------


def _same_moment(data: RunData) -> Iterator[Found]:
    """One ball cannot be let go twice at one moment; a moment for the whole set is none."""
    column = data.timings.table["started"].astype("category").cat
    timed = np.array([":" in str(text) for text in column.categories] + [False], dtype=bool)
    if not timed.any():
        return
    moment = column.codes.to_numpy()[data.selection.row]
    run_set = data.selection.run_set
    line = _codes(data, "line") + _codes(data, "file") * (1 << 32)
    at = np.flatnonzero(timed[moment] & ~data.inputs.lot[data.selection.cell])
    ball = data.selection.cells.ball[data.selection.cell]
    group, repeated = repeats_of(run_set[at], ball[at], moment[at])
    twice = at[repeated]
    for place in np.unique(run_set[twice]):
        drops = twice[run_set[twice] == place]
        whole = len(np.unique(moment[run_set == place])) == 1
        one_line = all(
            len(np.unique(line[at[group == g]])) == 1
            for g in np.unique(group[repeated][run_set[twice] == place])
        )
        if whole or one_line:
            continue  # the moment of the set, or of a row with several repeats
        yield (
            int(place),
            _finding(
                data,
                "started at the same moment as an earlier drop of the same ball: drop "
                f"{', '.join(map(str, data.numbers(drops)))}",
                drops,
                None,
            ),
        )


def _codes(data: RunData, name: str) -> NDArray[np.int64]:
    column = data.timings.table[name]
    if name == "file":
        column = column.astype("category").cat.codes
    return column.to_numpy()[data.selection.row].astype(np.int64)


# --- equal rows ----------------------------------------------------------------------------------


def _repeated(data: RunData) -> Iterator[Found]:
    """Count the equal rows of a set, and look for blocks of them."""
    n_sets, run_set, cell = len(data.names), data.selection.run_set, data.selection.cell
    level = data.level / 2  # two tests of one set
    key = row_keys(data)
    _, repeated = repeats_of(run_set, key)
    count = np.bincount(run_set[repeated], minlength=n_sets)
    if not count.any():
        return
    chance = chance_of_time(data) * chance_of_temperature(data)
    in_cell = np.bincount(cell, minlength=len(data.selection.cells))
    pairs = np.bincount(
        data.selection.cells.run_set, weights=in_cell * (in_cell - 1) / 2, minlength=n_sets
    )
    p_count = np.where(count > 0, pdtrc(np.maximum(count - 1, 0), pairs * chance), 1.0)
    for place in np.flatnonzero(p_count < level):
        drops = np.flatnonzero(repeated & (run_set == place))
        yield (
            int(place),
            _finding(
                data,
                f"{count[place]} row{'s' if count[place] > 1 else ''} repeat the ball, time and "
                f"temperature of another to the last digit, where chance would give about "
                f"{pairs[place] * chance[place]:.1g}",
                drops,
                float(p_count[place]),
            ),
        )
    yield from _blocks(data, key, chance, level, p_count)


def _blocks(
    data: RunData,
    key: NDArray[np.intp],
    chance: NDArray[np.float64],
    level: float,
    p_count: NDArray[np.float64],
) -> Iterator[Found]:
    run_set = data.selection.run_set
    if len(key) < BLOCK:
        return
    ends = len(key) - BLOCK + 1
    windows = np.stack([key[i : i + ends] for i in range(BLOCK)], axis=1)
    whole = run_set[:ends] == run_set[BLOCK - 1 :]
    at = np.flatnonzero(whole)
    _, repeated = repeats_of(run_set[at], *windows[at].T)
    for place in np.unique(run_set[at[repeated]]):
        if p_count[place] < level:
            continue
        drops = np.flatnonzero(run_set == place)
        first, length = _longest_block(key[drops])
        n = len(drops)
        p_value = min(1.0, n * (n - 1) / 2 * float(chance[place]) ** length)
        if p_value < level:
            copied = drops[first : first + length]
            yield (
                int(place),
                _finding(
                    data,
                    f"{length} rows one after the other repeat those before them, ball, time and "
                    "temperature to the last digit",
                    copied,
                    p_value,
                ),
            )


def _longest_block(key: NDArray[np.intp]) -> tuple[int, int]:
    """Return where the longest block that stands there a second time begins, and its length."""
    best = (0, 0)
    for lag in range(1, len(key)):
        same = np.concatenate([[False], key[lag:] == key[:-lag], [False]])
        edges = np.flatnonzero(np.diff(same.astype(np.int8)))
        starts, lengths = edges[::2], np.minimum(edges[1::2] - edges[::2], lag)
        if len(starts):
            longest = int(np.argmax(lengths))
            if lengths[longest] > best[1]:
                best = (int(starts[longest]) + lag, int(lengths[longest]))
    return best
