"""Running totals of a stopwatch: fall times as their differences, or checked against laps."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.timings.columns import Integers
from plumbfall.timings.times import FallTimes, Parsed

__all__ = ["Watch", "check_laps", "from_totals"]

Floats = NDArray[np.float64]
Refuse = Callable[[int, str, str], None]
_NOT_READ = "the running total before it was not read"


@dataclass(slots=True)
class Watch:
    """What the stopwatch showed last, seconds, in the blocks of a file so far."""

    latest: float = 0.0


def from_totals(total: Parsed, sets: Integers, watch: Watch, refuse: Refuse) -> FallTimes:
    """Turn running totals into fall times, each less the total of the row before.

    The watch starts at zero with each run set. A total that is larger than the one before, though
    another set begins, may go on from it or not, and is refused through ``refuse``, which takes
    row, message and remedy.
    """
    values = total.values
    rows = values.size
    begins = np.ones(rows, dtype=bool)
    begins[1:] = sets[1:] != sets[:-1]
    before = np.concatenate(([watch.latest], values[:-1]))
    known = np.concatenate(([True], ~np.isnan(values[:-1])))
    bad = total.bad.copy()
    time = np.where(begins, values, values - before)
    latest = np.fmax.accumulate(before)
    for row in np.flatnonzero(begins & (values > latest) & (latest > 0)):
        bad[row] = True
        refuse(
            int(row),
            f"may go on from the total before it ({latest[row]:g} s) or start from zero",
            "give the fall times themselves under the heading time",
        )
    for row in np.flatnonzero(~begins & known & (values <= before)):
        bad[row] = True
        refuse(
            int(row),
            f"is not above the running total before it ({before[row]:g} s)",
            "correct it, or give the fall times themselves under the heading time",
        )
    for row in np.flatnonzero(begins & (values <= 0)):
        bad[row] = True
        refuse(int(row), "is not above zero", "correct it, or leave the cell empty")
    unknown = ~begins & ~known & ~np.isnan(values)
    missing = (total.missing | unknown) & ~bad
    time = np.where(missing | bad, np.nan, time)
    if np.isfinite(values).any():
        watch.latest = float(values[np.isfinite(values)][-1])
    ones = np.ones(rows, dtype=np.int64)
    why = {int(row): _NOT_READ for row in np.flatnonzero(unknown & ~bad)}
    return FallTimes(time, missing, bad, ones, ones * 0, why=why)


def check_laps(lap: Parsed, total: Parsed, sets: Integers, refuse: Refuse) -> None:
    """Check totals against laps: each total is the one before plus the row's lap.

    A watch may be set to zero between rows, and the latest lap may stand first.
    """
    values, laps = total.values, lap.values
    finite = values[np.isfinite(values)]
    falling = finite.size > 1 and bool((np.diff(finite) < 0).all())
    order = np.arange(values.size)[::-1] if falling else np.arange(values.size)
    slack = _step(values) + _step(laps) / 2 + 1e-9 * np.nanmax(np.abs(finite), initial=1.0)
    former: float | None = None
    run = -1
    for row in order:
        new = sets[row] != run
        run = int(sets[row])
        value, time = float(values[row]), float(laps[row])
        if np.isnan(value):
            former = None
            continue
        starts = new or former is None or value < former
        wrong = False
        if not np.isnan(time):
            wrong = value < time - slack if new or former is None else False
            if former is not None and not new:
                onward, afresh = abs(value - former - time), abs(value - time)
                wrong = onward > slack and not (starts and afresh <= slack)
        if wrong:
            told = "" if former is None or new else f"the total before it ({former:g} s) plus "
            refuse(
                int(row),
                f"is not {told}the time of its row ({time:g} s)",
                "correct the one that was misread, or leave the column of totals out",
            )
        former = value


def _step(values: Floats) -> float:
    """Return the last decimal place of values, in seconds, at least a microsecond."""
    finite = values[np.isfinite(values)]
    for places in range(6):
        scaled = finite * 10.0**places
        if np.allclose(scaled, np.round(scaled), rtol=1e-12, atol=1e-6):
            return float(10.0**-places)
    return 1e-6
