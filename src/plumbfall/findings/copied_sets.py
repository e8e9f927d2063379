"""Run sets that are another one's times under a new name."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.data import Found, RunData
from plumbfall.findings.equal_readings import chance_of_time, repeats_of, ticks
from plumbfall.results import Finding

__all__ = ["copied_set"]

FEWEST = 3


def copied_set(data: RunData) -> Iterator[Found]:
    """Find run sets all of whose times and balls are those of an earlier one, in order."""
    n_sets = len(data.names)
    n = np.bincount(data.selection.run_set, minlength=n_sets)
    able = np.flatnonzero(n >= FEWEST)
    if len(able) < 2:
        return
    digest = _digests(data, n)
    group, again = repeats_of(n[able], digest[able])
    if not again.any():
        return
    chance = chance_of_time(data)
    for at in np.flatnonzero(again):
        later, earlier = able[at], able[np.flatnonzero(group == group[at])[0]]
        p_value = min(1.0, n_sets * float(chance[later]) ** int(n[later]))
        if p_value < data.level:
            yield (
                int(later),
                Finding(
                    code="duplicate-rows",
                    severity="warning",
                    drops=data.numbers(np.flatnonzero(data.selection.run_set == later)),
                    statistic=float(n[later]),
                    p_value=p_value,
                    message=f"all {n[later]} times are those of run set '{data.names[earlier]}', "
                    "in order and to the last digit",
                    remedy="look into the record: one of the two run sets is a copy, and tells "
                    "nothing new",
                ),
            )


def _digests(data: RunData, n: NDArray[np.intp]) -> NDArray[np.uint64]:
    """One number for the balls and times of each run set in their order, shape (run sets,)."""
    run_set = data.selection.run_set
    ball = data.selection.cells.ball[data.selection.cell]
    code = repeats_of(ball, ticks(data.selection.time))[0].astype(np.uint64)
    order = np.argsort(run_set, kind="stable")
    place = (np.arange(len(order)) - np.repeat(np.cumsum(n) - n, n)).astype(np.uint64)
    mixed = (code[order] + np.uint64(1)) * np.uint64(0x9E3779B97F4A7C15)
    mixed = (mixed ^ (mixed >> np.uint64(29))) * (2 * place + np.uint64(1))
    digest = np.zeros(len(n), dtype=np.uint64)
    np.add.at(digest, run_set[order], mixed)
    return digest
