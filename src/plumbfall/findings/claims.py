"""Uncertainties smaller than anybody reaches: most often something was left out."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.notation import read_quantity
from plumbfall.bench.usual import USUAL
from plumbfall.findings.data import Found, RunData
from plumbfall.results import Finding

__all__ = ["uncertainty_implausible"]


def uncertainty_implausible(data: RunData) -> Iterator[Found]:
    """Find bounds narrower than those of national institutes, or than a hand on a stopwatch.

    References
    ----------
    BIPM key comparison CCM.V-K1: relative standard uncertainties of the participants at
    1300 mm2/s were 0.04 % to 0.25 %. Stopwatch: Am. J. Phys. 87, 110 (2019), as in the usual
    values of timers.
    """
    viscosity = data.outputs.of("viscosity")
    with np.errstate(invalid="ignore", divide="ignore"):
        claimed = viscosity.u / viscosity.value
    watch = _by_stopwatch(data) * data.limits.stopwatch_share
    least = np.fmax(watch, data.limits.best_uncertainty)
    for run_set in np.flatnonzero(claimed < least):
        by_watch = watch[run_set] > data.limits.best_uncertainty
        who = (
            "what a hand on a stopwatch leaves, start and stop"
            if by_watch
            else "what national institutes reach in their comparisons"
        )
        yield (
            int(run_set),
            Finding(
                code="uncertainty-implausible",
                severity="warning",
                statistic=float(claimed[run_set]),
                effect=float(least[run_set]),
                message=f"the standard uncertainty comes to {100 * claimed[run_set]:.2g} % of "
                f"viscosity, below {100 * least[run_set]:.2g} %, {who}",
                remedy="look for what the bench sheet leaves out or states too small: "
                + ("bias and per_drop of the timer" if by_watch else _CLAIMS),
            ),
        )


_CLAIMS = "temperature, bore, diameter, densities, marks, the timer's bias"


def _by_stopwatch(data: RunData) -> NDArray[np.float64]:
    """Relative uncertainty that usual hand timing gives each set's mean, 0 by other timers."""
    cells, n_sets = data.selection.cells, len(data.names)
    hand = np.array([timer.kind == "stopwatch" for timer in data.bench.timers.values()] + [False])
    if not hand.any():
        return np.zeros(n_sets)
    usual = USUAL["stopwatch"]
    per_drop = read_quantity(usual.per_drop, "time").value
    bias = read_quantity(usual.bias, "time").u
    by_hand = hand[cells.timer[data.selection.cell]]
    pull = by_hand * data.weights.weight / data.selection.time
    run_set = data.selection.run_set
    own = np.bincount(run_set, weights=(pull * per_drop) ** 2, minlength=n_sets)
    shared = np.bincount(run_set, weights=pull * bias, minlength=n_sets)
    return np.asarray(np.hypot(np.sqrt(own), shared))
