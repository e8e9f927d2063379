"""Times written down in steps coarser than the clock, and coarser than they scatter."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from plumbfall.findings.clock_steps import clock_steps
from plumbfall.findings.data import Found, RunData
from plumbfall.findings.repeats import repeats
from plumbfall.results import Finding

__all__ = ["resolution_coarse"]


def resolution_coarse(data: RunData) -> Iterator[Found]:
    """Find sets all of whose times are multiples of a step that the timer does not have.

    By chance each time is a multiple with the timer's resolution over the step as probability;
    for repeats of one ball, which lie close together, never less than their density allows.
    """
    n_sets = len(data.names)
    steps, n = clock_steps(data), data.weights.n_drops
    per_drop = np.zeros(n_sets)
    np.maximum.at(per_drop, data.selection.cells.run_set, data.inputs.per_drop)
    with np.errstate(invalid="ignore", divide="ignore"):
        total = np.bincount(data.selection.run_set, weights=data.selection.time, minlength=n_sets)
        mean = total / n
        observed = np.nan_to_num(repeats(data).sd, nan=0.0) * mean
        scatter = np.maximum(observed, per_drop)
        fine = np.where(steps.declared > 0, steps.declared, steps.found / 10)
        alone = np.minimum(fine / steps.found, 1.0)
        close = fine / (np.sqrt(2 * np.pi) * scatter)
        p_value = alone * np.clip(np.fmax(alone, close), 0.0, 1.0) ** (n - 1)
        effect = steps.found / 2 / mean
        coarse = (steps.found > data.limits.resolution_share * scatter) & (
            effect > data.limits.resolution_effect
        )
    for run_set in np.flatnonzero(coarse & (p_value < data.level)):
        step, declared = float(steps.found[run_set]), float(steps.declared[run_set])
        clock = f"the timer reads {declared:g} s" if declared else "no resolution is given"
        yield (
            int(run_set),
            Finding(
                code="resolution-coarse",
                severity="warning",
                statistic=step,
                p_value=float(p_value[run_set]),
                effect=float(effect[run_set]),
                message=f"all {n[run_set]} times are multiples of {step:g} s ({clock}); cut off "
                f"instead of rounded they would be {step / 2:g} s short, "
                f"{100 * effect[run_set]:.2g} % of viscosity",
                remedy="write down every digit that the timer shows; if it shows no more, write "
                f'resolution = "{step:g} s" into the bench sheet',
            ),
        )
