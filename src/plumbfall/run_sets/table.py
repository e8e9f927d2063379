"""The run-set table: one row a run set, numeric, in units that never vary."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

import numpy as np

from plumbfall.results import Finding
from plumbfall.run_sets.drawn import Drawn
from plumbfall.run_sets.result import SetColumns, status_of

if TYPE_CHECKING:
    import pandas as pd

__all__ = ["summary_table"]

CELSIUS_ZERO = 273.15


def summary_table(
    sets: SetColumns,
    found: tuple[tuple[Finding, ...], ...],
    drawn: Mapping[int, Drawn] | None = None,
) -> pd.DataFrame:
    """Return the columns of ``run_sets.csv`` for all run sets, without building their records.

    ``drawn`` holds what Monte Carlo says by place of the run set; where the linear interval is not
    validated its bounds stand, and the coverage factor is NaN.
    """
    import pandas as pd

    viscosity = sets.outputs.of("viscosity")
    u, expanded, factor = viscosity.u.copy(), viscosity.expanded.copy(), viscosity.factor.copy()
    low, high = viscosity.low, viscosity.high
    for place, of_set in (drawn or {}).items():
        if of_set.replaces("viscosity"):
            output = of_set.output("viscosity")
            if output.standard_uncertainty is not None:
                u[place] = output.standard_uncertainty
            low[place], high[place] = output.low, output.high
            expanded[place] = (output.high - output.low) / 2
            factor[place] = np.nan
    n_sets = len(sets.selection.names)
    reference = sets.bench.reference_temperature
    at_reference = sets.outputs.of("viscosity_at_reference").value
    balls = np.where(sets.inputs.lot, 0, 1)
    pairs = np.unique(
        np.stack([sets.selection.cells.run_set, sets.selection.cells.ball], axis=1)[balls == 1],
        axis=0,
    )
    fresh = np.bincount(
        sets.selection.run_set[sets.inputs.lot[sets.selection.cell]], minlength=n_sets
    )
    n_balls = np.bincount(pairs[:, 0], minlength=n_sets) + fresh
    return pd.DataFrame(
        {
            "set": list(sets.selection.names),
            "status": [status_of(findings) if findings else "valid" for findings in found],
            "viscosity_mPa_s": viscosity.value * 1e3,
            "standard_uncertainty_mPa_s": u * 1e3,
            "expanded_uncertainty_mPa_s": expanded * 1e3,
            "coverage_factor": factor,
            "coverage_probability": sets.outputs.coverage,
            "low_mPa_s": low * 1e3,
            "high_mPa_s": high * 1e3,
            "temperature_degC": sets.columns.set_temperature - CELSIUS_ZERO,
            "viscosity_at_reference_mPa_s": at_reference * 1e3,
            "reference_temperature_degC": np.nan if reference is None else reference - CELSIUS_ZERO,
            "n_drops": sets.weights.n_drops,
            "n_balls": n_balls,
            "findings": [
                " ".join(dict.fromkeys(finding.code for finding in findings)) if findings else ""
                for findings in found
            ],
        }
    )
