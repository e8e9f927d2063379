"""How many drops, of how many balls, and whether what was left out has a reason."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from plumbfall.findings.data import Found, RunData
from plumbfall.results import Finding
from plumbfall.run_sets.repeatability import KNOWN

__all__ = ["nothing_left", "reused_balls", "too_few_drops", "void_without_reason"]


def nothing_left(data: RunData) -> Iterator[Found]:
    """Find sets of which every row is void or excluded."""
    for run_set in np.flatnonzero(data.weights.n_drops == 0):
        yield (
            int(run_set),
            Finding(
                code="no-solution",
                severity="error",
                message="no drop of this run set can be used: all are void or excluded",
                remedy="repeat the run set, or correct the times and the status column",
            ),
        )


def too_few_drops(data: RunData) -> Iterator[Found]:
    """Find sets too short to say much of their own scatter, or anything of an outlier."""
    for run_set in np.flatnonzero(
        (data.weights.n_drops > 0) & (data.weights.n_drops < data.limits.too_few_drops)
    ):
        n = int(data.weights.n_drops[run_set])
        known = data.scatter.basis[run_set] == KNOWN
        means = (
            "the bench's known repeatability stands in"
            if known
            else "their scatter is poorly known and the bounds are wide"
            if n > 1
            else "nothing is known of their scatter but what the bench sheet declares"
        )
        outlier = "; no outlier can be told among so few" if n <= 3 else ""
        yield (
            int(run_set),
            Finding(
                code="too-few-drops",
                severity="note",
                statistic=float(n),
                message=f"{n} drop{'s' if n != 1 else ''}: {means}{outlier}",
                remedy="make at least five drops, better eight to ten, with several balls",
            ),
        )


def reused_balls(data: RunData) -> Iterator[Found]:
    """Find repeated drops of few balls, which do not average a ball's own error away."""
    several = (data.weights.n_values < data.weights.n_drops) & (data.weights.n_values > 0)
    cells = data.selection.cells
    several[cells.run_set[data.inputs.calibrated]] = False  # a tube constant is that of one ball
    reused = np.flatnonzero(several)
    for run_set in reused:
        n_balls, n_drops = data.weights.n_values[run_set], data.weights.n_drops[run_set]
        yield (
            int(run_set),
            Finding(
                code="reused-balls",
                severity="note",
                statistic=float(n_balls),
                message=f"{n_drops} drops of {n_balls} ball{'s' if n_balls > 1 else ''}: the "
                f"result is the mean of {n_balls} ball mean{'s' if n_balls > 1 else ''}, and "
                "counts as many values",
                remedy="if every row was a fresh ball of one lot, write lot = true for the ball",
            ),
        )


def void_without_reason(data: RunData) -> Iterator[Found]:
    """Find drops that were struck out without saying why."""
    table = data.timings.table
    void = np.flatnonzero((table["status"] == "void").to_numpy())
    notes = table["note"].iloc[void].astype(str).str.strip()
    silent = void[(notes == "").to_numpy()]
    for run_set in np.unique(data.row_set[silent]):
        rows = silent[data.row_set[silent] == run_set]
        numbers = tuple(int(n) for n in table["drop"].to_numpy()[rows])
        yield (
            int(run_set),
            Finding(
                code="void-without-reason",
                severity="warning",
                drops=numbers,
                message=f"drop{'s' if len(numbers) > 1 else ''} "
                f"{', '.join(map(str, numbers))} marked void without a reason",
                remedy="write the reason into the note column of the timing file",
            ),
        )
