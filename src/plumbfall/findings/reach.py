"""What the tests of a run set would have found: the least change that each sees 4 times of 5."""

from __future__ import annotations

import math
from collections.abc import Iterator

from plumbfall.findings.data import RunData
from plumbfall.findings.significance import detectable
from plumbfall.results import Reach

__all__ = ["reach_of"]


def reach_of(data: RunData, run_set: int) -> tuple[Reach, ...]:
    """Return how small a drift and a trend with temperature would have shown.

    A test that cannot be made of the set is left out, so that its silence is not taken for news.

    Parameters
    ----------
    data : RunData
        Of the reduction.
    run_set : int
        Place of the run set.

    Returns
    -------
    tuple of Reach
        Relative changes of the viscosity at the level that warns, found with
        :data:`plumbfall.findings.significance.POWER`.
    """
    found = []
    for code, what, error, dof, level in _errors(data, run_set):
        if math.isfinite(error) and error > 0 and dof > 0:
            seen = float(detectable(standard_error=error, dof=dof, level=level))
            if math.isfinite(seen):
                found.append(Reach(code, what, seen))
    return tuple(found)


def _errors(data: RunData, run_set: int) -> Iterator[tuple[str, str, float, float, float]]:
    """Yield code, words, standard error of the change, its degrees of freedom and the level."""
    trends = data.trends
    drops = data.selection.run_set == run_set
    if not drops.any():
        return
    steps = float(data.order[drops].max())
    error, dof = float(trends.drift_error[run_set]) * steps, float(trends.drift.dof[run_set])
    # half the level: its p-value is twice the lesser of the t-test's and the ranks'
    yield "time-trend", "a drift from the first drop to the last", error, dof, data.level / 2
    span = float(data.temperature_range[run_set])
    if span > 0:
        error = float(trends.warming_error[run_set]) * span
        what = "drops that follow their temperatures otherwise than the slope says"
        yield "temperature-trend", what, error, float(trends.warming_dof[run_set]), data.level
