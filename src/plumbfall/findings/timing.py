"""Fall times too short for their clock."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from plumbfall.findings.data import Found, RunData
from plumbfall.results import Finding

__all__ = ["fall_time_short"]


def fall_time_short(data: RunData) -> Iterator[Found]:
    """Find sets whose timing alone, as the timer is described, makes their result too unsure.

    What each drop's timing scatters by averages out over the drops, what the timer's bias is
    unsure by does not. One drop by stopwatch (0.10 s) must fall for 20 s to be known to 0.5 %.
    """
    cells, n_sets = data.selection.cells, len(data.names)
    bias_u = np.append(data.inputs.u, 0.0)[data.inputs.roles["bias"].entry]
    own_variance = data.inputs.per_drop**2 + data.inputs.resolution**2 / 6
    own = np.bincount(cells.run_set, weights=data.sums.timing * own_variance, minlength=n_sets)
    shared = np.bincount(
        cells.run_set, weights=np.abs(data.sums.first["bias"]) * bias_u, minlength=n_sets
    )
    with np.errstate(invalid="ignore", divide="ignore"):
        cost = np.hypot(np.sqrt(own), shared) / data.scatter.mean
    shortest = np.full(n_sets, np.inf)
    np.minimum.at(shortest, data.selection.run_set, data.selection.time)
    for run_set in np.flatnonzero(cost > data.limits.timing_effect):
        longer = cost[run_set] / data.limits.timing_effect
        yield (
            int(run_set),
            Finding(
                code="fall-time-short",
                severity="warning",
                statistic=float(shortest[run_set]),
                effect=float(cost[run_set]),
                message=f"with falls as short as {shortest[run_set]:.3g} s the timing alone leaves "
                f"a standard uncertainty of {100 * cost[run_set]:.2g} % of viscosity; falls "
                f"{longer:.2f} times as long would make it {100 * data.limits.timing_effect:g} %",
                remedy="use a smaller or lighter ball, marks further apart, light gates, or more "
                "drops",
            ),
        )
